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

REST = "all other wells"
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
    names = list(wells)
    found: list[_Tested] = []
    for measure in MEASURES:
        values = [np.asarray(wells[name].get(measure.id, np.empty(0)), dtype=float) for name in names]
        if len(names) <= PAIRS_UP_TO:
            pairs = combinations(range(len(names)), 2)
            found += [_pair(measure, names[i], names[j], values[i], values[j]) for i, j in pairs]
        else:
            found += _against_the_rest(measure, names, values)
    adjusted = _adjusted([p for t in found for p in (t.p_rank, t.p_ks)])
    return tuple(_difference(t, adjusted[2 * k], adjusted[2 * k + 1]) for k, t in enumerate(found))


def differences_frame(found: Sequence[Difference]) -> pd.DataFrame:
    """One row a test."""
    import pandas as pd

    return pd.DataFrame([{n: getattr(d, n) for n in Difference.__slots__} for d in found])


@dataclass(frozen=True, slots=True)
class _Tested:
    """One test before correction; NaN where there are too few values."""

    measure: Measure
    first: str
    second: str
    counts: tuple[int, int]
    medians: tuple[float, float]
    delta: float = math.nan
    ks_d: float = math.nan
    p_rank: float = math.nan
    p_ks: float = math.nan


def _pair(
    measure: Measure, first: str, second: str, x: NDArray[np.float64], y: NDArray[np.float64]
) -> _Tested:
    """Two wells against each other."""
    counts = (len(x), len(y))
    medians = tuple(float(np.median(v)) if len(v) else math.nan for v in (x, y))
    if min(counts) < LEAST:
        return _Tested(measure, first, second, counts, medians)  # type: ignore[arg-type]
    from scipy import stats

    rank = stats.mannwhitneyu(x, y, alternative="two-sided")
    delta = 2 * float(rank.statistic) / (len(x) * len(y)) - 1
    ks = stats.ks_2samp(x, y, method="exact" if len(x) + len(y) <= 40 else "asymp")
    p_rank, p_ks = float(rank.pvalue), float(ks.pvalue)
    return _Tested(measure, first, second, counts, medians, delta, float(ks.statistic), p_rank, p_ks)  # type: ignore[arg-type]


def _against_the_rest(
    measure: Measure, names: Sequence[str], values: Sequence[NDArray[np.float64]]
) -> list[_Tested]:
    """Each well against all others together: the same tests, from one sorting of all values."""
    from scipy import stats

    owner = np.concatenate([np.full(len(v), i) for i, v in enumerate(values)])
    pooled = np.concatenate(list(values))
    order = np.argsort(pooled, kind="stable")
    pooled, owner = pooled[order], owner[order]
    total = len(pooled)
    ties = np.unique(pooled, return_counts=True)[1].astype(float)
    tie_term = float((ties**3 - ties).sum())
    found = []
    for i, name in enumerate(names):
        own = owner == i
        x, rest = pooled[own], pooled[~own]
        m, n = len(x), len(rest)
        medians = (_middle(x), _middle(rest))
        if min(m, n) < LEAST:
            found.append(_Tested(measure, name, REST, (m, n), medians))
            continue
        below = np.searchsorted(pooled, x, side="left")
        up_to = np.searchsorted(pooled, x, side="right")
        u = float((0.5 * (below + up_to + 1)).sum()) - m * (m + 1) / 2
        spread = math.sqrt(m * n / 12 * ((total + 1) - tie_term / (total * (total - 1))))
        z = (abs(u - m * n / 2) - 0.5) / spread if spread > 0 else 0.0
        own_below, own_up_to = np.searchsorted(x, x, side="left"), np.searchsorted(x, x, side="right")
        above = (own_up_to / m - (up_to - own_up_to) / n).max()
        beneath = ((below - own_below) / n - own_below / m).max()
        ks_d = float(max(above, beneath, 0.0))
        found.append(
            _Tested(
                measure,
                name,
                REST,
                (m, n),
                medians,
                2 * u / (m * n) - 1,
                ks_d,
                min(1.0, 2 * float(stats.norm.sf(z))),
                float(stats.kstwo.sf(ks_d, round(m * n / (m + n)))),
            )
        )
    return found


def _middle(ordered: NDArray[np.float64]) -> float:
    """Median of sorted values; NaN without any."""
    count = len(ordered)
    if not count:
        return math.nan
    return float(0.5 * (ordered[(count - 1) // 2] + ordered[count // 2]))


def _adjusted(p: list[float]) -> list[float]:
    from scipy.stats import false_discovery_control

    values = np.array(p)
    known = np.isfinite(values)
    result = np.full(len(values), math.nan)
    if known.any():
        result[known] = false_discovery_control(np.clip(values[known], 0.0, 1.0))
    return [float(v) for v in result]


def _difference(tested: _Tested, p_rank_adjusted: float, p_ks_adjusted: float) -> Difference:
    medians = [2.0**-m if tested.measure.from_phi else m for m in tested.medians]
    shown = [float(f"{m:.2g}") if math.isfinite(m) else m for m in medians]
    return Difference(
        tested.measure.id,
        tested.measure.unit,
        tested.first,
        tested.second,
        *tested.counts,
        shown[0],
        shown[1],
        _rounded(tested.delta),
        _rounded(tested.ks_d),
        tested.p_rank,
        tested.p_ks,
        p_rank_adjusted,
        p_ks_adjusted,
        _reading(tested, shown, p_rank_adjusted, p_ks_adjusted),
    )


def _reading(tested: _Tested, medians: list[float], p_rank: float, p_ks: float) -> str:
    """The test in words."""
    measure, first, second, delta = tested.measure, tested.first, tested.second, tested.delta
    if math.isnan(p_rank):
        pairs = zip((first, second), tested.counts, strict=True)
        short = [f"{name} has {n}" for name, n in pairs if n < LEAST]
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
