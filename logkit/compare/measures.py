"""What each well holds: gross, net, beds, facies, bed states, grading, flow, packages. One function a table.

Thicknesses are those of the placed log, so that they mean the same in every well. Gaps count in gross height
where a column says so and nowhere else. Differences between wells are tested in `differences`.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from functools import cache
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from logkit.compare.placing import THICKNESS_NAMES, PlacedLog

if TYPE_CHECKING:
    import pandas as pd

    from logkit.model import Bed, PhaseEstimate, Quantiles

CUTOFFS_MM = (0.0625, 0.125, 0.25)
"""Sizes from which a bed counts as net: sand and coarser, fine sand and coarser, medium sand and coarser."""

QUANTILE_WEIGHTS = (0.175, 0.2, 0.25, 0.2, 0.175)
"""Weights of P10, P25, P50, P75, P90 of a phase when the ranges of many phases are put together (ours)."""

Row = dict[str, Any]


def bed_size_mm(bed: Bed) -> float:
    """Middle of the size as written, else of the usual range of the lithology; NaN where neither is known."""
    size = bed.size
    return size.middle_mm if size is not None else usual_size_mm(bed.lithology)


@cache
def usual_size_mm(lithology: str) -> float:
    """Geometric middle of the usual sizes of a lithology, mm; NaN for rocks that are not made of grains."""
    if not lithology:
        return math.nan
    from logkit.vocabulary import vocabulary

    term = vocabulary("lithologies").get(lithology)
    usual = getattr(term, "size_mm", None)
    return math.sqrt(usual[0] * usual[1]) if usual else math.nan


def wells_table(placed: Sequence[PlacedLog]) -> pd.DataFrame:
    """One row a well: how it is placed, gross, described and missing thickness."""
    rows = []
    for p in placed:
        gaps = sum(b.thickness_m for b in p.hung.beds if b.is_gap)
        described = sum(b.thickness_m for b in p.hung.real_beds)
        rows.append(
            {
                "section": p.name,
                "datum_found": p.datum_how,
                "datum_seen": p.datum_sure,
                "thickness_means": THICKNESS_NAMES[p.measure],
                "thickness_factor_low": round(p.factors[0], 4),
                "thickness_factor_high": round(p.factors[1], 4),
                "base_above_datum_m": round(p.hung.base_m, 3),
                "top_above_datum_m": round(p.hung.top_m, 3),
                "distance_m": p.distance_m,
                "beds": len(p.hung.real_beds),
                "gaps": len(p.hung.beds) - len(p.hung.real_beds),
                "described_m": round(described, 3),
                "gaps_m": round(gaps, 3),
                "coverage": _share(described, described + gaps),
            }
        )
    return _frame(rows)


def net_to_gross_table(placed: Sequence[PlacedLog], cutoffs_mm: Sequence[float] = CUTOFFS_MM) -> pd.DataFrame:
    """Net and net-to-gross of each well at several cut-offs, with gaps out of and in the gross."""
    rows = []
    for p in placed:
        sizes = [bed_size_mm(b) for b in p.hung.real_beds]
        described = sum(b.thickness_m for b in p.hung.real_beds)
        gross = described + sum(b.thickness_m for b in p.hung.beds if b.is_gap)
        unknown = sum(b.thickness_m for b, d in zip(p.hung.real_beds, sizes, strict=True) if math.isnan(d))
        for cutoff in cutoffs_mm:
            net = sum(b.thickness_m for b, d in zip(p.hung.real_beds, sizes, strict=True) if d >= cutoff)
            rows.append(
                {
                    "section": p.name,
                    "cutoff_mm": cutoff,
                    "net_m": round(net, 3),
                    "gross_without_gaps_m": round(described, 3),
                    "gross_with_gaps_m": round(gross, 3),
                    "net_to_gross_without_gaps": _share(net, described),
                    "net_to_gross_with_gaps": _share(net, gross),
                    "no_size_m": round(unknown, 3),
                }
            )
    return _frame(rows)


def beds_table(placed: Sequence[PlacedLog]) -> pd.DataFrame:
    """Bed counts, thickness quantiles and amalgamation; layers of counted patterns stay out."""
    rows = []
    for p in placed:
        measured = [b for b in p.hung.real_beds if b.measured]
        groups: tuple[tuple[str, list[Bed]], ...] = (
            ("all", measured),
            ("sand and coarser", [b for b in measured if bed_size_mm(b) >= CUTOFFS_MM[0]]),
        )
        for name, beds in groups:
            thick = np.array([b.thickness_m for b in beds])
            p10, p50, p90 = np.quantile(thick, (0.1, 0.5, 0.9)) if len(thick) else (math.nan,) * 3
            rows.append(
                {
                    "section": p.name,
                    "beds_are": name,
                    "count": len(beds),
                    "thickness_mean_m": round(float(thick.mean()), 3) if len(thick) else math.nan,
                    "thickness_p10_m": round(float(p10), 3),
                    "thickness_p50_m": round(float(p50), 3),
                    "thickness_p90_m": round(float(p90), 3),
                    "amalgamation": amalgamation(p) if name != "all" else math.nan,
                }
            )
    return _frame(rows)


def amalgamation(p: PlacedLog) -> float:
    """Share of sand beds lying on sand among all sand beds whose floor was seen; NaN without any."""
    on_sand = seen = 0
    for run in p.hung.runs:
        for below, bed in pairwise(run):
            if bed_size_mm(bed) >= CUTOFFS_MM[0]:
                seen += 1
                on_sand += bed_size_mm(below) >= CUTOFFS_MM[0]
    return _share(on_sand, seen)


def facies_table(placed: Sequence[PlacedLog]) -> pd.DataFrame:
    """Proportions of lithologies and of first structures, by thickness and by count."""
    kinds: tuple[tuple[str, Callable[[Bed], str]], ...] = (
        ("lithology", lambda b: b.lithology or "not given"),
        ("structure", lambda b: b.structures[0].term if b.structures else "not given"),
    )
    rows: list[Row] = []
    for p in placed:
        for kind, name_of in kinds:
            items = [(name_of(b), b.thickness_m) for b in p.hung.real_beds]
            rows.extend({"section": p.name, "kind": kind, **row} for row in _proportions(items))
    return _frame(rows)


def bed_states_table(placed: Sequence[PlacedLog], histories: Sequence[Any]) -> pd.DataFrame:
    """Proportions of bed states by thickness and by count of phases; phases without an answer are named."""
    rows: list[Row] = []
    for p, history in zip(placed, histories, strict=True):
        items = [
            (
                e.bed_state
                or (f"no estimate: {e.reason}" if e.status == "no estimate" else "not determinable"),
                t,
            )
            for e, t in _phases(p, history)
        ]
        rows.extend({"section": p.name, **row} for row in _proportions(items))
    return _frame(rows)


def grading_table(placed: Sequence[PlacedLog], trends: Sequence[Any]) -> pd.DataFrame:
    """Proportions of grading verdicts by thickness and by count of beds."""
    rows: list[Row] = []
    for p, found in zip(placed, trends, strict=True):
        if found is None:
            continue
        beds = p.hung.beds if len(found.gradings) == len(p.hung.beds) else p.hung.real_beds
        pairs = zip(beds, found.gradings, strict=False)
        items = [(grading.verdict, bed.thickness_m) for bed, grading in pairs if not bed.is_gap]
        rows.extend({"section": p.name, **row} for row in _proportions(items))
    return _frame(rows)


def packages_table(placed: Sequence[PlacedLog], trends: Sequence[Any]) -> pd.DataFrame:
    """Packages of each well: trend, heights above the datum, corrected p."""
    rows: list[Row] = []
    for p, found in zip(placed, trends, strict=True):
        for package in found.packages if found is not None else ():
            if package.trend == "no trend":
                continue
            rows.append(
                {
                    "section": p.name,
                    "trend": package.trend,
                    "quantity": package.quantity,
                    "first_bed": package.first_bed,
                    "last_bed": package.last_bed,
                    "beds": package.beds,
                    "base_above_datum_m": round(position(p, package.base_m), 3),
                    "top_above_datum_m": round(position(p, package.top_m), 3),
                    "tau": round(package.tau, 3),
                    "p_adjusted": package.p_adjusted,
                    "significant": package.significant,
                }
            )
    return _frame(rows)


def flow_table(placed: Sequence[PlacedLog], histories: Sequence[Any]) -> pd.DataFrame:
    """Velocity and flow depth of each well: the ranges of all its phases put together by thickness.

    One-sided answers and phases without an answer are counted, not mixed in.
    """
    rows: list[Row] = []
    for p, history in zip(placed, histories, strict=True):
        phases = list(_phases(p, history))
        ranges = [(e, t) for e, t in phases if e.status == "estimated" and e.bound == "range"]
        row: Row = {
            "section": p.name,
            "phases": len(phases),
            "ranges": len(ranges),
            "one_sided": sum(e.status == "estimated" and e.bound in ("above", "below") for e, _ in phases),
            "no_estimate": sum(e.status == "no estimate" for e, _ in phases),
            "thickness_with_range": _share(sum(t for _, t in ranges), sum(t for _, t in phases)),
        }
        for name, unit, quantity in (("velocity", "m_s", "velocity"), ("flow_depth", "m", "flow_depth")):
            values = mixture([(getattr(e, quantity), t) for e, t in ranges])
            for label, value in zip(("p10", "p50", "p90"), values, strict=True):
                row[f"{name}_{label}_{unit}"] = float(f"{value:.2g}") if math.isfinite(value) else math.nan
        rows.append(row)
    return _frame(rows)


def mixture(ranges: Iterable[tuple[Quantiles | None, float]]) -> tuple[float, float, float]:
    """P10, P50 and P90 of many ranges put together, weighted by thickness; NaN without any."""
    values: list[float] = []
    weights: list[float] = []
    for quantiles, thickness in ranges:
        if quantiles is None:
            continue
        points = (quantiles.p10, quantiles.p25, quantiles.p50, quantiles.p75, quantiles.p90)
        values.extend(points)
        weights.extend(w * thickness for w in QUANTILE_WEIGHTS)
    if not values:
        return (math.nan,) * 3
    order = np.argsort(values)
    share = np.cumsum(np.array(weights)[order])
    share = (share - 0.5 * np.array(weights)[order]) / share[-1]
    p10, p50, p90 = np.interp((0.1, 0.5, 0.9), share, np.array(values)[order])
    return float(p10), float(p50), float(p90)


def position(p: PlacedLog, position_m: float) -> float:
    """Height above the datum of a position in the log as read; NaN outside its beds."""
    for i, bed in enumerate(p.log.beds):
        if bed.base_m - 1e-9 <= position_m <= bed.top_m + 1e-9:
            return p.height(i, position_m)
    return math.nan


def _phases(p: PlacedLog, history: Any) -> Iterable[tuple[PhaseEstimate, float]]:
    """Estimates of real beds with the thickness of their phase in the placed log, m."""
    for estimate in history.estimates if history is not None else ():
        phase = estimate.phase
        bed, hung = p.log.beds[phase.bed_index], p.hung.beds[phase.bed_index]
        if not bed.is_gap:
            yield estimate, (phase.top_m - phase.base_m) * hung.thickness_m / bed.thickness_m


def _proportions(items: Sequence[tuple[str, float]]) -> list[Row]:
    """Share by thickness and by count of each name, most first."""
    whole = sum(t for _, t in items)
    names = dict.fromkeys(name for name, _ in items)
    rows = [
        {
            "name": name,
            "count": sum(n == name for n, _ in items),
            "thickness_m": round(sum(t for n, t in items if n == name), 3),
            "by_thickness": _share(sum(t for n, t in items if n == name), whole),
            "by_count": _share(sum(n == name for n, _ in items), len(items)),
        }
        for name in names
    ]
    return sorted(rows, key=lambda row: (-row["thickness_m"], row["name"]))


def _share(part: float, whole: float) -> float:
    return round(part / whole, 4) if whole > 0 else math.nan


def _frame(rows: list[Row]) -> pd.DataFrame:
    import pandas as pd

    return pd.DataFrame(rows)
