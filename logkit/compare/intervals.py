"""The tables of the hand-over set: intervals, tops, points, depth shifts. One log in, rows out; no files.

Column types are declared, so that tables of many wells can be put one below the other.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from logkit.compare.codes import facies_number, lithology_link
from logkit.compare.placing import PlacedLog
from logkit.compare.survey import Survey, depth_below_head
from logkit.compare.ties import TIME_LITHOLOGIES

if TYPE_CHECKING:
    from logkit.model import Bed, PhaseEstimate

Columns = dict[str, list[Any]]
"""A table as lists of values by column."""

INTERVAL_TYPES: dict[str, str] = {
    "section": "text", "bed": "text", "kind": "text", "gap_reason": "text", "depth_reference": "text",
    "top_depth": "number", "base_depth": "number", "depth_unit": "text",
    "base_m": "number", "top_m": "number", "logged_top_depth_m": "number", "logged_base_depth_m": "number",
    "thickness_m": "number", "thickness_means": "text", "converted_thickness_m": "number", "converted_means": "text",
    "facies": "whole", "lithology": "text", "lithology_link": "text", "structures": "text",
    "grain_fine_um": "number", "grain_coarse_um": "number", "grain_middle_phi": "number",
    "grain_base_phi": "number", "grain_top_phi": "number", "largest_mm": "number", "sorting": "text",
    "grading": "text", "bioturbation_low": "number", "bioturbation_high": "number",
    "bioturbation_scheme": "text", "marker": "text", "setting": "text", "phases": "whole", "bound": "text",
    "velocity_p10_m_s": "number", "velocity_p50_m_s": "number", "velocity_p90_m_s": "number",
    "flow_depth_p10_m": "number", "flow_depth_p50_m": "number", "flow_depth_p90_m": "number",
    "conflict": "number", "flags": "text", "notes": "text",
}  # fmt: skip
"""Columns of the interval table and what they hold."""

TOP_TYPES: dict[str, str] = {
    "section": "text", "marker": "text", "sure": "text", "kind": "text", "bed": "text",
    "top_depth": "number", "base_depth": "number", "depth_unit": "text", "base_m": "number", "top_m": "number",
    "base_elevation_m": "number", "top_elevation_m": "number", "datum": "text", "base_above_datum_m": "number",
}  # fmt: skip

POINT_TYPES: dict[str, str] = {
    "section": "text", "bed": "text", "kind": "text", "position_m": "number", "depth": "number",
    "depth_unit": "text", "indicator": "text", "written": "text", "sense": "text", "azimuth_deg": "number",
    "dip_deg": "number", "declination_deg": "number", "corrected_azimuth_deg": "number",
    "corrected_dip_deg": "number", "used": "text", "remark": "text",
}  # fmt: skip

SHIFT_TYPES: dict[str, str] = {
    "section": "text", "kind": "text", "from_m": "number", "to_m": "number", "shift_m": "number",
}  # fmt: skip


def intervals_columns(p: PlacedLog, history: Any = None, trends: Any = None) -> Columns:
    """One row a bed or gap, upward, in the columns of INTERVAL_TYPES."""
    by_bed: dict[int, list[PhaseEstimate]] = {}
    for estimate in history.estimates if history is not None else ():
        by_bed.setdefault(estimate.phase.bed_index, []).append(estimate)
    verdicts = {g.bed: g.verdict for g in trends.gradings} if trends is not None else {}
    rows = [
        _interval(p, i, bed, by_bed.get(i, []), verdicts.get(bed.name, ""))
        for i, bed in enumerate(p.log.beds)
    ]
    return typed(rows, INTERVAL_TYPES)


def tops_columns(p: PlacedLog, datum: str = "") -> Columns:
    """One row a marker, upward."""
    rows = []
    header, survey = p.log.header, p.companions.survey
    for bed, hung in zip(p.log.beds, p.hung.beds, strict=True):
        if not bed.marker or bed.is_gap:
            continue
        row: dict[str, Any] = {"section": p.name, "marker": bed.marker, "bed": bed.name} | _depths(p, bed)
        row["sure"] = "yes" if bed.marker_sure else "queried"
        row["kind"] = "time" if bed.lithology in TIME_LITHOLOGIES else "lithological"
        row["base_m"], row["top_m"] = bed.base_m, bed.top_m
        if header.direction == "down" and header.kb_elevation_m is not None:
            below = depth_below_head(survey or Survey.straight(), [-bed.base_m, -bed.top_m])
            row["base_elevation_m"], row["top_elevation_m"] = (
                header.kb_elevation_m - float(d) for d in below
            )
        if datum:
            row["datum"], row["base_above_datum_m"] = datum, hung.base_m
        rows.append(row)
    return typed(rows, TOP_TYPES)


def points_columns(p: PlacedLog, trends: Any = None) -> Columns:
    """Palaeocurrents as written and corrected, samples and photos; one row each, upward."""
    rows: list[dict[str, Any]] = []
    corrected = _corrected(trends)
    for bed in p.log.beds:
        middle = 0.5 * (bed.base_m + bed.top_m)
        place = {"section": p.name, "bed": bed.name, "position_m": middle} | _middle_depth(p, bed)
        for k, reading in enumerate(bed.currents):
            row = place | {
                "kind": "palaeocurrent",
                "indicator": reading.indicator,
                "written": reading.written,
                "sense": reading.sense,
                "azimuth_deg": reading.azimuth_deg,
                "dip_deg": reading.dip_deg,
                "declination_deg": p.log.header.declination_deg,
            }
            rows.append(row | corrected.get((bed.name, k), {}))
        for kind, names in (("sample", bed.samples), ("photo", bed.photos)):
            rows.extend(place | {"kind": kind, "written": name} for name in names)
    return typed(rows, POINT_TYPES)


def shifts_columns(p: PlacedLog) -> Columns:
    """The core-to-log shifts that were applied, m; a log without any gives one row that says so."""
    table = p.companions.shifts
    if table is None:
        return typed([{"section": p.name, "kind": "none"}], SHIFT_TYPES)
    rows = [
        {"section": p.name, "kind": table.kind, "from_m": start, "to_m": end, "shift_m": shift}
        for start, end, shift in table.rows
    ]
    return typed(rows, SHIFT_TYPES)


def typed(rows: list[dict[str, Any]], types: dict[str, str]) -> Columns:
    """Rows as columns in this order, each value of its declared kind, None where there is nothing."""
    cast = {"text": _text, "number": _number, "whole": _whole}
    return {name: [cast[kind](row.get(name)) for row in rows] for name, kind in types.items()}


def _text(value: Any) -> str | None:
    return None if value is None or value == "" else str(value)


def _number(value: Any) -> float | None:
    return None if value is None or not math.isfinite(value) else round(float(value), 6)


def _whole(value: Any) -> int | None:
    return None if value is None else int(value)


def _interval(p: PlacedLog, i: int, bed: Bed, estimates: list[PhaseEstimate], verdict: str) -> dict[str, Any]:
    hung, header = p.hung.beds[i], p.log.header
    row: dict[str, Any] = {
        "section": p.name,
        "bed": bed.name,
        "kind": bed.kind,
        "gap_reason": bed.gap_reason,
        "depth_reference": header.depth_reference,
        "base_m": bed.base_m,
        "top_m": bed.top_m,
        "thickness_m": bed.thickness_m,
        "thickness_means": header.thickness_type,
        "converted_thickness_m": hung.thickness_m,
        "converted_means": p.measure,
        "notes": bed.notes,
        "flags": _flags(p, bed),
    } | _depths(p, bed)
    if p.companions.shifts is not None and header.direction == "down":
        top, base = p.companions.shifts.move(-bed.top_m, -bed.base_m)
        row["logged_top_depth_m"], row["logged_base_depth_m"] = top, base
    if bed.is_gap:
        return row
    row |= {
        "facies": facies_number(bed),
        "lithology": bed.lithology,
        "lithology_link": lithology_link(bed.lithology),
        "structures": "; ".join(s.term if s.sure else f"{s.term}?" for s in bed.structures),
        "largest_mm": bed.largest.mean_mm if bed.largest else None,
        "sorting": bed.sorting,
        "grading": verdict,
        "marker": bed.marker if bed.marker_sure or not bed.marker else f"{bed.marker}?",
        "setting": header.setting,
    }
    if bed.size is not None:
        row |= {
            "grain_fine_um": 1000 * bed.size.low_mm,
            "grain_coarse_um": 1000 * bed.size.high_mm,
            "grain_middle_phi": bed.size.middle_phi,
            "grain_base_phi": bed.grain[0].size.middle_phi,
            "grain_top_phi": bed.grain[-1].size.middle_phi,
        }
    if bed.bioturbation is not None:
        row["bioturbation_low"], row["bioturbation_high"] = bed.bioturbation.low, bed.bioturbation.high
        row["bioturbation_scheme"] = bed.bioturbation.scheme
    return row | _flow(estimates)


def _flow(estimates: list[PhaseEstimate]) -> dict[str, Any]:
    """Flow of a bed: of its only phase, or the hull of the ranges of its phases with the thickest one's middle."""
    row: dict[str, Any] = {"phases": len(estimates)}
    if not estimates:
        return row
    row["conflict"] = max(e.conflict for e in estimates)
    row["bound"] = ", ".join(dict.fromkeys(e.bound or "none" for e in estimates))
    ranges = [e for e in estimates if e.bound == "range"]
    for name, unit in (("velocity", "m_s"), ("flow_depth", "m")):
        known = [(getattr(e, name), e.phase.top_m - e.phase.base_m) for e in ranges]
        known = [(q, t) for q, t in known if q is not None]
        if known:
            row[f"{name}_p10_{unit}"] = _short(min(q.p10 for q, _ in known))
            row[f"{name}_p50_{unit}"] = _short(max(known, key=lambda pair: pair[1])[0].p50)
            row[f"{name}_p90_{unit}"] = _short(max(q.p90 for q, _ in known))
    return row


def _flags(p: PlacedLog, bed: Bed) -> str:
    flags = []
    if not bed.measured:
        flags.append("counted pattern, not measured")
    if bed.minimum_thickness:
        flags.append("minimum thickness")
    if bed.size is not None and not bed.size.sure:
        flags.append("grain size queried")
    questions = sum(f.level == "question" and f.bed == bed.name for f in p.log.findings) if bed.name else 0
    if questions:
        flags.append(f"open questions: {questions}")
    return "; ".join(flags)


def _depths(p: PlacedLog, bed: Bed) -> dict[str, Any]:
    """Depths as written, in the unit of the log; nothing for a log measured upwards."""
    if p.log.header.direction != "down":
        return {}
    if bed.depth_top is not None and bed.depth_base is not None:
        return {
            "top_depth": bed.depth_top,
            "base_depth": bed.depth_base,
            "depth_unit": p.log.header.unit or "m",
        }
    return {"top_depth": -bed.top_m, "base_depth": -bed.base_m, "depth_unit": "m"}


def _middle_depth(p: PlacedLog, bed: Bed) -> dict[str, Any]:
    depths = _depths(p, bed)
    if not depths:
        return {}
    return {"depth": 0.5 * (depths["top_depth"] + depths["base_depth"]), "depth_unit": depths["depth_unit"]}


def _corrected(trends: Any) -> dict[tuple[str, int], dict[str, Any]]:
    """Corrected readings by bed and place in the bed."""
    if trends is None:
        return {}
    found: dict[tuple[str, int], dict[str, Any]] = {}
    counts: dict[str, int] = {}
    for reading in trends.current_results.readings:
        place = counts.get(reading.bed, 0)
        counts[reading.bed] = place + 1
        found[reading.bed, place] = {
            "declination_deg": reading.declination_deg,
            "corrected_azimuth_deg": reading.azimuth_deg,
            "corrected_dip_deg": reading.restored_dip_deg,
            "used": "yes" if reading.used else "no",
            "remark": reading.remark,
        }
    return found


def _short(value: float) -> float:
    """No more digits than deserved."""
    return float(f"{value:.2g}")
