"""Differences between wells: rank test, effect size, Kolmogorov-Smirnov, correction for many tests, in words.

Takes plain series of numbers; which numbers a well gives is decided in `gather`.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING, Any

import numpy as np

from logkit.compare.measures import bed_size_mm
from logkit.compare.placing import PlacedLog

if TYPE_CHECKING:
    import pandas as pd
    from numpy.typing import NDArray

LEAST = 5
"""Fewest values a well must have to be tested."""

PAIRS_UP_TO = 8
"""With more wells than this each is set against all others together instead of against each."""

LEVEL = 0.05


@dataclass(frozen=True, slots=True)
class Measure:
    """One quantity that wells are compared by."""

    id: str
    label: str
    unit: str
    more: str
    less: str
    from_phi: bool = False


MEASURES = (
    Measure("bed_thickness", "bed thickness", "m", "thicker", "thinner"),
    Measure("grain_size", "grain size", "mm", "finer", "coarser", from_phi=True),
    Measure("velocity", "velocity in the middle of each range", "m/s", "faster", "slower"),
    Measure("flow_depth", "flow depth in the middle of each range", "m", "deeper", "shallower"),
)


@dataclass(frozen=True, slots=True)
class Difference:
    """One test of a well against another, or against all others.

    n_first, n_second : numbers of values
    median_first, median_second : medians in `unit`
    delta : Cliff's delta, -1 … 1; above zero when the first well has the larger values (for grain size:
        the finer grains, as phi grows)
    ks_d : largest distance between the two distributions, 0 … 1
    p_rank, p_ks : two-sided, uncorrected; NaN when not tested
    p_rank_adjusted, p_ks_adjusted : after Benjamini-Hochberg over all tests of the table
    """

    quantity: str
    unit: str
    first: str
    second: str
    n_first: int
    n_second: int
    median_first: float
    median_second: float
    delta: float
    ks_d: float
    p_rank: float
    p_ks: float
    p_rank_adjusted: float
    p_ks_adjusted: float
    reading: str


def gather(p: PlacedLog, history: Any) -> dict[str, NDArray[np.float64]]:
    """The values of one well for each quantity."""
    beds = [b for b in p.hung.real_beds if b.measured]
    sizes = np.array([bed_size_mm(b) for b in p.hung.real_beds], dtype=float)
    estimates = [e for e in (history.estimates if history is not None else ()) if e.bound == "range"]
    return {
        "bed_thickness": np.array([b.thickness_m for b in beds], dtype=float),
        "grain_size": -np.log2(sizes[np.isfinite(sizes)]),
        "velocity": np.array([e.velocity.p50 for e in estimates if e.velocity is not None], dtype=float),
        "flow_depth": np.array(
            [e.flow_depth.p50 for e in estimates if e.flow_depth is not None], dtype=float
        ),
    }


def compare_values(wells: Mapping[str, Mapping[str, NDArray[np.float64]]]) -> tuple[Difference, ...]:
    """Test every pair of wells, or each against the others when there are many.

    Parameters
    ----------
    wells : values of each well by quantity

    References
    ----------
    mann_whitney_1947, cliff_1993, romano_2006, benjamini_hochberg_1995
    """
    raw: list[tuple[Measure, str, str, NDArray[np.float64], NDArray[np.float64]]] = []
    names = list(wells)
    for measure in MEASURES:
        values = {name: wells[name].get(measure.id, np.empty(0)) for name in names}
        if len(names) <= PAIRS_UP_TO:
            pairs = [(a, b, values[a], values[b]) for a, b in combinations(names, 2)]
        else:
            pairs = [
                (a, "all other wells", values[a], np.concatenate([values[b] for b in names if b != a]))
                for a in names
            ]
        raw.extend((measure, *pair) for pair in pairs)
    tested = [_tests(x, y) for _, _, _, x, y in raw]
    adjusted = _adjusted([p for t in tested for p in (t[2], t[3])])
    return tuple(
        _difference(measure, a, b, x, y, t, adjusted[2 * k], adjusted[2 * k + 1])
        for k, ((measure, a, b, x, y), t) in enumerate(zip(raw, tested, strict=True))
    )


def differences_frame(found: Sequence[Difference]) -> pd.DataFrame:
    """One row a test."""
    import pandas as pd

    return pd.DataFrame([{n: getattr(d, n) for n in Difference.__slots__} for d in found])


def _tests(x: NDArray[np.float64], y: NDArray[np.float64]) -> tuple[float, float, float, float]:
    """Cliff's delta, KS distance, rank p, KS p."""
    if len(x) < LEAST or len(y) < LEAST:
        return (math.nan,) * 4
    from scipy import stats

    rank = stats.mannwhitneyu(x, y, alternative="two-sided")
    delta = 2 * float(rank.statistic) / (len(x) * len(y)) - 1
    exact = len(x) + len(y) <= 40
    ks = stats.ks_2samp(x, y, method="exact" if exact else "asymp")
    return delta, float(ks.statistic), float(rank.pvalue), float(ks.pvalue)


def _adjusted(p: list[float]) -> list[float]:
    from scipy.stats import false_discovery_control

    values = np.array(p)
    known = np.isfinite(values)
    result = np.full(len(values), math.nan)
    if known.any():
        result[known] = false_discovery_control(np.clip(values[known], 0.0, 1.0))
    return [float(v) for v in result]


def _difference(
    measure: Measure,
    first: str,
    second: str,
    x: NDArray[np.float64],
    y: NDArray[np.float64],
    tests: tuple[float, float, float, float],
    p_rank_adjusted: float,
    p_ks_adjusted: float,
) -> Difference:
    delta, ks_d, p_rank, p_ks = tests
    medians = [float(np.median(v)) if len(v) else math.nan for v in (x, y)]
    if measure.from_phi:
        medians = [2.0**-m for m in medians]
    shown = [float(f"{m:.2g}") if math.isfinite(m) else m for m in medians]
    reading = _reading(measure, first, second, len(x), len(y), shown, delta, p_rank_adjusted, p_ks_adjusted)
    return Difference(
        measure.id,
        measure.unit,
        first,
        second,
        len(x),
        len(y),
        shown[0],
        shown[1],
        _rounded(delta),
        _rounded(ks_d),
        p_rank,
        p_ks,
        p_rank_adjusted,
        p_ks_adjusted,
        reading,
    )


def _reading(
    measure: Measure,
    first: str,
    second: str,
    n_first: int,
    n_second: int,
    medians: list[float],
    delta: float,
    p_rank: float,
    p_ks: float,
) -> str:
    """The test in words."""
    if math.isnan(p_rank):
        short = [f"{name} has {n}" for name, n in ((first, n_first), (second, n_second)) if n < LEAST]
        return f"{measure.label}: too few values to compare ({', '.join(short)}; {LEAST} are needed)"
    numbers = f"medians {medians[0]:g} and {medians[1]:g} {measure.unit}"
    if p_rank < LEVEL:
        word = measure.more if delta > 0 else measure.less
        return (
            f"{measure.label}: {first} is {word} than {second} ({numbers}; {_effect(delta)} effect, "
            f"delta {delta:.2f}, corrected p {_p(p_rank)})"
        )
    if p_ks < LEVEL:
        return (
            f"{measure.label}: {first} and {second} have like middles but unlike spreads ({numbers}; "
            f"corrected KS p {_p(p_ks)})"
        )
    return (
        f"{measure.label}: {first} and {second} are not distinguished ({numbers}; corrected p {_p(p_rank)})"
    )


def _effect(delta: float) -> str:
    """Size of an effect in words, by the limits of romano_2006."""
    size = abs(delta)
    return "negligible" if size < 0.147 else "small" if size < 0.33 else "medium" if size < 0.474 else "large"


def _p(p: float) -> str:
    return "below 0.001" if p < 0.001 else f"{p:.3f}" if p < 0.1 else f"{p:.2f}"


def _rounded(value: float) -> float:
    return round(value, 3) if math.isfinite(value) else value
