"""Thickness of beds: quantiles by class, net to gross, candidate distributions, amalgamation.

Layers of a written pattern are not measured thicknesses and stay out of quantiles and distributions; gaps
count in the gross only where it says so.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from logkit.model import Bed, Log, SizeInterval
from logkit.trends.geometry import net_to_gross
from logkit.trends.series import bed_size, seed_of, size_class

if TYPE_CHECKING:
    import pandas as pd

Array = npt.NDArray[np.float64]

CUT_OFFS_MM = (0.0625, 0.125, 0.25, 0.5, 2.0)
"""Net-to-gross cut-offs by default, mm: the limits of sand, fine, medium and coarse sand, and gravel."""

FEWEST = 10
"""Fewest beds of a class for which distributions are compared."""

COPIES = 99
MOST = 400
"""Simulated copies for the goodness of a distribution, and most beds in one."""


@dataclass(frozen=True, slots=True)
class ClassThickness:
    """Thickness of the beds of one class, m."""

    name: str
    beds: int
    total_m: float
    mean_m: float
    p10_m: float
    p50_m: float
    p90_m: float
    max_m: float


@dataclass(frozen=True, slots=True)
class NetToGross:
    """Share of the log at and above a grain size.

    net_m : by the middle of each bed's size; net_low_m only beds wholly above, net_high_m also those partly
    ratio_without_gaps, ratio_with_gaps : net over described thickness, and over the whole height
    """

    cut_off_mm: float
    net_m: float
    net_low_m: float
    net_high_m: float
    described_m: float
    height_m: float
    ratio_without_gaps: float
    ratio_with_gaps: float


@dataclass(frozen=True, slots=True)
class Candidate:
    """One distribution fitted to the thicknesses of a class.

    parameters : (name, value): mu and sigma of ln(m); mean_m; exponent
    distance : Kolmogorov-Smirnov distance; p : share of simulated copies, fitted anew, that are as far off
    weight : Akaike weight among the candidates
    """

    class_name: str
    distribution: str
    beds: int
    limit_m: float
    parameters: tuple[tuple[str, float], ...]
    log_likelihood: float
    aic: float
    weight: float
    distance: float
    p: float


@dataclass(frozen=True, slots=True)
class Amalgamation:
    """Contacts of sand and gravel beds with what lies directly below, in unbroken runs.

    amalgamated : contacts of a sand or gravel bed on another one; ratio None without contacts
    """

    contacts: int
    amalgamated: int
    ratio: float | None


@dataclass(frozen=True, slots=True)
class Thickness:
    """All thickness statistics of a log."""

    classes: tuple[ClassThickness, ...]
    net_to_gross: tuple[NetToGross, ...]
    distributions: tuple[Candidate, ...]
    amalgamation: Amalgamation
    left_out: int
    minimum_beds: int
    notes: tuple[str, ...] = ()

    def to_frame(self) -> pd.DataFrame:
        """Quantiles, one row a class."""
        return _frame(ClassThickness, self.classes)

    def net_to_gross_frame(self) -> pd.DataFrame:
        """Net to gross, one row a cut-off."""
        return _frame(NetToGross, self.net_to_gross)

    def distributions_frame(self) -> pd.DataFrame:
        """Candidate distributions, one row each."""
        return _frame(Candidate, self.distributions)

    def best(self, class_name: str) -> Candidate | None:
        """The candidate with the largest weight in a class, None without."""
        own = [c for c in self.distributions if c.class_name == class_name]
        return max(own, key=lambda c: c.weight, default=None)

    def sentences(self) -> list[str]:
        """The results in words."""
        lines = []
        if self.net_to_gross:
            ng = self.net_to_gross[0]
            lines.append(
                f"Net to gross at {ng.cut_off_mm:g} mm: {ng.ratio_without_gaps:.2f} of the described thickness, "
                f"{ng.ratio_with_gaps:.2f} of the whole height."
            )
        if self.amalgamation.ratio is not None:
            lines.append(
                f"{self.amalgamation.amalgamated} of {self.amalgamation.contacts} sand and gravel beds lie "
                "directly on another one (amalgamated)."
            )
        for name in dict.fromkeys(c.class_name for c in self.distributions):
            best = self.best(name)
            if best is not None:
                fit = "fits" if best.p > 0.05 else "is the least bad, but does not fit"
                lines.append(
                    f"Thickness of {name} ({best.beds} beds): {best.distribution} {fit} "
                    f"(weight {best.weight:.2f}, goodness p = {best.p:.2g})."
                )
        return [*lines, *self.notes]


def _frame(kind: type, rows: tuple[object, ...]) -> pd.DataFrame:
    import pandas as pd

    columns = [c for c in kind.__dataclass_fields__ if c != "parameters"]  # type: ignore[attr-defined]
    frame = pd.DataFrame([[getattr(row, c) for c in columns] for row in rows], columns=columns)
    if "parameters" in kind.__dataclass_fields__:  # type: ignore[attr-defined]
        frame["parameters"] = ["; ".join(f"{k} {v:.3g}" for k, v in row.parameters) for row in rows]  # type: ignore[attr-defined]
    return frame


def find_thickness(log: Log, cut_offs_mm: tuple[float, ...] = CUT_OFFS_MM) -> Thickness:
    """Thickness statistics of a log.

    Parameters
    ----------
    log : the log
    cut_offs_mm : grain sizes for net to gross, mm
    """
    beds = [bed for bed in log.real_beds if bed.thickness_m > 0]
    sizes = {id(bed): bed_size(bed) for bed in beds}
    classes = {id(bed): size_class(sizes[id(bed)]) for bed in beds}
    measured = [bed for bed in beds if bed.measured]
    groups: dict[str, list[float]] = {"all beds": []}
    for bed in measured:
        groups["all beds"].append(bed.thickness_m)
        groups.setdefault(classes[id(bed)], []).append(bed.thickness_m)
    arrays = {name: np.array(values) for name, values in groups.items() if values}
    minimum = sum(bed.minimum_thickness for bed in measured)
    notes = []
    if minimum:
        notes.append(f"{minimum} beds are cut by an erosive base above: their thickness is a minimum.")
    if len(beds) > len(measured):
        notes.append(
            f"{len(beds) - len(measured)} layers of written patterns are left out of thickness statistics."
        )
    return Thickness(
        tuple(_class_row(name, values) for name, values in arrays.items()),
        _net_rows(log, beds, [sizes[id(bed)] for bed in beds], cut_offs_mm),
        tuple(c for name, values in arrays.items() for c in candidates(name, values)),
        _amalgamation(log, classes),
        len(beds) - len(measured),
        minimum,
        tuple(notes),
    )


def _class_row(name: str, values: Array) -> ClassThickness:
    p10, p50, p90 = (float(q) for q in np.quantile(values, (0.1, 0.5, 0.9)))
    return ClassThickness(
        name, values.size, float(values.sum()), float(values.mean()), p10, p50, p90, float(values.max())
    )


def _net_rows(
    log: Log, beds: list[Bed], sizes: list[SizeInterval | None], cut_offs_mm: tuple[float, ...]
) -> tuple[NetToGross, ...]:
    """Net to gross at each cut-off; a bed without a size may be net and is not counted as such."""
    if not beds:
        return ()
    thickness = np.array([bed.thickness_m for bed in beds])
    low, middle, high = (
        np.array([nothing if size is None else getattr(size, name) for size in sizes])
        for name, nothing in (("low_mm", 0.0), ("middle_mm", 0.0), ("high_mm", math.inf))
    )
    described = float(thickness.sum())
    height = described + sum(max(bed.thickness_m, 0.0) for bed in log.beds if bed.is_gap)
    rows = []
    for cut in cut_offs_mm:
        net = float(thickness[middle >= cut].sum())
        rows.append(
            NetToGross(
                cut,
                net,
                float(thickness[low >= cut * (1 - 1e-9)].sum()),
                float(thickness[high > cut * (1 + 1e-9)].sum()),
                described,
                height,
                net_to_gross(net, described),
                net_to_gross(net, height),
            )
        )
    return tuple(rows)


def _amalgamation(log: Log, classes: Mapping[int, str]) -> Amalgamation:
    contacts = amalgamated = 0
    for run in log.runs:
        sandy = [classes.get(id(bed), "unknown") not in ("mud", "unknown") for bed in run]
        contacts += sum(sandy[1:])
        amalgamated += sum(one and two for one, two in pairwise(sandy))
    return Amalgamation(contacts, amalgamated, amalgamated / contacts if contacts else None)


def candidates(name: str, thickness_m: npt.ArrayLike) -> tuple[Candidate, ...]:
    """Lognormal, exponential and power law fitted to thicknesses above their smallest.

    Parameters
    ----------
    name : class the beds are of
    thickness_m : (n,) thicknesses, m; fewer than 10 or all alike give nothing

    Notes
    -----
    Exponential and power law start at the smallest thickness, the lower measuring limit; the lognormal
    does not. The goodness is the share of 99 copies, drawn from the fit and fitted anew, whose
    Kolmogorov-Smirnov distance is at least as large; the seed comes from the values. Above 400 beds the
    copies and the distance use 400 beds evenly spread over the sorted ones.
    """
    values = np.sort(np.asarray(thickness_m, dtype=float))
    if values.size < FEWEST or values[0] <= 0 or values[-1] <= values[0] * (1 + 1e-9):
        return ()
    fits = [(kind, *fit(values[None, :])) for kind, fit in FITS.items()]
    aic = np.array([2 * p.shape[0] - 2 * ll[0] for _, p, ll in fits])
    weights = np.exp(-0.5 * (aic - aic.min()))
    weights /= weights.sum()
    generator = np.random.default_rng(seed_of(values))
    picked = values
    if values.size > MOST:
        picked = values[np.round(np.linspace(0, values.size - 1, MOST)).astype(int)]
    result = []
    for k, (kind, parameters, likelihood) in enumerate(fits):
        own = FITS[kind](picked[None, :])[0]
        distance = float(_distance(kind, picked[None, :], own)[0])
        copies = np.sort(_draw(kind, own, generator.random((COPIES, picked.size))), axis=1)
        far = _distance(kind, copies, FITS[kind](copies)[0])
        p = (1 + int(np.sum(far >= distance))) / (COPIES + 1)
        named = tuple(zip(NAMES[kind], (float(v) for v in parameters[:, 0]), strict=True))
        result.append(
            Candidate(
                name,
                kind,
                values.size,
                float(values[0]),
                named,
                float(likelihood[0]),
                float(aic[k]),
                float(weights[k]),
                distance,
                p,
            )
        )
    return tuple(result)


def _fit_lognormal(rows: Array) -> tuple[Array, Array]:
    logs = np.log(rows)
    mu, sigma = logs.mean(axis=1), np.maximum(logs.std(axis=1), 1e-9)
    n = rows.shape[1]
    likelihood = -logs.sum(axis=1) - n * np.log(sigma) - 0.5 * n * (1 + math.log(2 * math.pi))
    return np.stack([mu, sigma]), likelihood


def _fit_exponential(rows: Array) -> tuple[Array, Array]:
    low = rows.min(axis=1)
    mean = np.maximum(rows.mean(axis=1) - low, 1e-12)
    return np.stack([low, mean]), -rows.shape[1] * (np.log(mean) + 1)


def _fit_power(rows: Array) -> tuple[Array, Array]:
    low = rows.min(axis=1)
    logs = np.log(rows / low[:, None]).sum(axis=1)
    exponent = rows.shape[1] / np.maximum(logs, 1e-12)
    likelihood = rows.shape[1] * (np.log(exponent) - np.log(low)) - (exponent + 1) * logs
    return np.stack([low, exponent]), likelihood


FITS = {"lognormal": _fit_lognormal, "exponential": _fit_exponential, "power law": _fit_power}
NAMES = {
    "lognormal": ("mu of ln(m)", "sigma of ln(m)"),
    "exponential": ("lower limit m", "mean above it m"),
    "power law": ("lower limit m", "exponent of exceedance"),
}


def cumulative(kind: str, rows: Array, parameters: Array) -> Array:
    """Share at or below each thickness of a fitted distribution.

    Parameters
    ----------
    kind : key of `FITS`
    rows : (m, n) thicknesses, m
    parameters : (2, m) parameters in the order of `NAMES`
    """
    first, second = parameters[0][:, None], parameters[1][:, None]
    if kind == "lognormal":
        from scipy.special import ndtr

        result: Array = ndtr((np.log(rows) - first) / second)
        return result
    if kind == "exponential":
        return -np.expm1(-np.maximum(rows - first, 0) / second)
    return -np.expm1(-second * np.log(np.maximum(rows / first, 1.0)))


def _draw(kind: str, parameters: Array, chances: Array) -> Array:
    first, second = float(parameters[0, 0]), float(parameters[1, 0])
    if kind == "lognormal":
        from scipy.special import ndtri

        return np.exp(first + second * ndtri(chances))
    if kind == "exponential":
        return first - second * np.log1p(-chances)
    return first * np.exp(-np.log1p(-chances) / second)


def _distance(kind: str, rows: Array, parameters: Array) -> Array:
    """Kolmogorov-Smirnov distance of sorted rows from a fitted distribution."""
    n = rows.shape[1]
    below = cumulative(kind, rows, parameters)
    steps = np.arange(n + 1) / n
    result: Array = np.maximum(below - steps[:-1], steps[1:] - below).max(axis=1)
    return result
