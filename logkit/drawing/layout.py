"""Which tracks a log shows and where on the page they stand; the axes that go with them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from logkit.drawing.axes import LogAxis, PhiAxis, round_ends
from logkit.drawing.metrics import width_mm
from logkit.drawing.scene import Column, Scene, match_estimates, measure_beds
from logkit.drawing.style import Style
from logkit.drawing.tracks import TRACKS, Material
from logkit.drawing.tracks.current import mean_azimuth
from logkit.drawing.tracks.ribbon import is_conflict
from logkit.errors import ArgumentError
from logkit.model import CurrentSummary, Grading, Log, PhaseEstimate

LEAST_SHARE = {"notes": 0.62, "texture": 0.55, "velocity": 0.55, "depth": 0.7, "trend": 0.85}
"""How far tracks may shrink where the page is narrow, as a part of their width in the style."""

MOST_NOTES_MM = 70.0
"""Widest column of notes; longer lines are hard to read."""


GROWING = ("texture", "velocity", "depth")
"""Tracks that take what is left over beside the notes, up to `MOST_GROWTH` times their width."""

MOST_GROWTH = 1.4
MOST_NAMES_MM = 12.0
"""Widest column of bed names."""

WIND_TITLE = "Wind 10 m up"
"""Heading of the velocity track where all of it is wind."""


def lay_out(
    log: Log,
    history: Any,
    trends: Any,
    style: Style,
    scale: float,
    curves: tuple[tuple[str, str, Sequence[float], Sequence[float]], ...],
    left: float | None = None,
    width: float | None = None,
    tracks: Sequence[str] | None = None,
    velocity_range: tuple[float, float] | None = None,
    depth_range: tuple[float, float] | None = None,
) -> Scene:
    """Measure a log and place its tracks.

    Parameters
    ----------
    left, width : where the tracks begin and how much room they have, mm; the page inside its margins by default
    tracks : names to choose from; those of the style by default
    velocity_range, depth_range : common ends of the flow axes of several columns, m/s and m

    Raises
    ------
    ArgumentError : a track is not known, or the page is too narrow for the tracks
    """
    estimates = tuple(history.estimates) if history is not None else ()
    packages = tuple(trends.packages) if trends is not None else ()
    currents = _ranked(trends.currents) if trends is not None else ()
    azimuths = bed_azimuths(log)
    material = Material(
        log, estimates, sum(p.trend != "no trend" for p in packages), len(azimuths), len(curves)
    )
    wanted = tracks if tracks is not None else style.order
    names = [name for name in wanted if TRACKS[name].shown(material)]
    if style.palette.chroma == 0:  # a strip of colours says nothing in a style without colour
        names = [name for name in names if name != "colour"]
    start = style.page.margin if left is None else left
    room = style.page_size_mm()[0] - 2 * style.page.margin if width is None else width
    columns = _columns(style, names, start, room, _name_width(log, style))
    by_bed = match_estimates(log, estimates)
    velocity = flow_depth = None
    if "velocity" in columns:
        column = columns["velocity"]
        if all(e.is_wind for e in estimates if e.status == "estimated"):
            columns["velocity"] = replace(column, title=WIND_TITLE)
        ends = velocity_range or velocity_ends(estimates, style)
        velocity = LogAxis(column.x0, column.x1, *ends)
    if "depth" in columns:
        column = columns["depth"]
        ends = depth_range or depth_ends(estimates, style)
        flow_depth = LogAxis(column.x0, column.x1, *ends)
    phi = None
    if "texture" in columns:
        column = columns["texture"]
        phi = PhiAxis(column.x0, column.x1 - column.x0)
    gradings = _gradings(log, trends.gradings) if trends is not None else {}
    return Scene(
        log, style, measure_beds(log, by_bed), by_bed, columns, scale, phi, velocity, flow_depth,
        gradings, packages, currents, azimuths, curves,
    )  # fmt: skip


def _name_width(log: Log, style: Style) -> float:
    """Width that the bed names need, mm; a few very long ones are cut instead."""
    widths = sorted(width_mm(bed.name, style.fonts.label) for bed in log.real_beds)
    usual = widths[int(0.98 * (len(widths) - 1))] if widths else 0.0
    return min(usual + 0.2, MOST_NAMES_MM)


def _columns(
    style: Style, names: Sequence[str], left: float, room: float, name_mm: float
) -> dict[str, Column]:
    """Places of the tracks: notes take what is left over; where the page is narrow, the wide tracks shrink."""
    widths = {name: style.tracks[name].width for name in names}
    if "names" in widths:
        widths["names"] = max(widths["names"], name_mm)
    gaps = {name: style.tracks[name].gap for name in names}
    if names:
        gaps[names[0]] = 0.0
    spare = room - sum(widths.values()) - sum(gaps.values())
    if spare < 0:
        most = {name: (1 - LEAST_SHARE.get(name, 1.0)) * width for name, width in widths.items()}
        total = sum(most.values())
        if total < -spare - 1e-6:
            needed = room - spare - total
            raise ArgumentError(
                "page", f"{room:.0f} mm inside its margins", f"at least {needed:.0f} mm wide there"
            )
        for name in widths:
            widths[name] += most[name] * spare / total
    else:
        if "notes" in widths:
            grown = min(spare, max(0.0, MOST_NOTES_MM - widths["notes"]))
            widths["notes"] += grown
            spare -= grown
        wide = [name for name in GROWING if name in widths]
        total = sum(widths[name] for name in wide)
        share = min(MOST_GROWTH - 1, spare / total) if total else 0.0
        for name in wide:
            widths[name] *= 1 + share
    columns: dict[str, Column] = {}
    x = left
    for name in names:
        x += gaps[name]
        columns[name] = Column(name, style.tracks[name].title, x, x + widths[name])
        x += widths[name]
    return columns


def velocity_ends(estimates: Sequence[PhaseEstimate], style: Style) -> tuple[float, float]:
    """Round ends of the velocity axis for all that is drawn on it, inside the widest axis of the style, m/s."""
    values: list[float] = []
    for estimate in estimates:
        if is_conflict(estimate) and estimate.clash is not None:
            pair = (estimate.clash.first_velocity, estimate.clash.second_velocity)
            values += [v for q in pair if q is not None for v in (q.p10, q.p90)]
        for quantiles in (estimate.velocity, estimate.base_velocity, estimate.top_velocity):
            if quantiles is not None:
                values += [quantiles.p10, quantiles.p90]
        if estimate.limit_velocity_m_s is not None:
            values += [estimate.limit_velocity_m_s, 2 * estimate.limit_velocity_m_s]
    return _ends(values, style.ribbon.velocity, style.ribbon.fit_axis)


def depth_ends(estimates: Sequence[PhaseEstimate], style: Style) -> tuple[float, float]:
    """Round ends of the flow-depth axis, m."""
    values: list[float] = []
    for estimate in estimates:
        if estimate.flow_depth is not None:
            values += [estimate.flow_depth.p10, estimate.flow_depth.p90]
        elif estimate.limit_flow_depth_m is not None:
            values += [estimate.limit_flow_depth_m, 2 * estimate.limit_flow_depth_m]
    return _ends(values, style.ribbon.flow_depth, style.ribbon.fit_axis)


def _ends(values: Sequence[float], widest: Sequence[float], fit: bool) -> tuple[float, float]:
    low, high = widest
    inside = [value for value in values if value > 0]
    if not inside:
        return low, high
    if not fit:
        return round_ends(min(low, *inside), max(high, *inside))
    return round_ends(min(inside), max(inside))


def bed_azimuths(log: Log) -> dict[int, tuple[float, str]]:
    """(azimuth of the mean, sense) of each bed's readings, tilt and declination removed, by the bed's index.

    A bed with directions and lines shows the directions: a line adds no sense.
    """
    from logkit.trends.currents import correct_reading

    header = log.header
    found: dict[int, tuple[float, str]] = {}
    for index, bed in enumerate(log.beds):
        if not bed.currents:
            continue
        corrected = [correct_reading(bed, r, header.bedding, header.declination_deg) for r in bed.currents]
        used = [r for r in corrected if r.used and r.azimuth_deg is not None]
        senses = {r.sense for r in used}
        sense = "direction" if "direction" in senses else "axis"
        azimuths = [r.azimuth_deg for r in used if r.sense == sense and r.azimuth_deg is not None]
        mean = mean_azimuth(azimuths, sense == "axis") if azimuths else None
        if mean is not None:
            found[index] = (mean, sense)
    return found


def _gradings(log: Log, gradings: Sequence[Grading]) -> dict[int, Grading]:
    """Gradings by the bed's index: one a bed in the order of the log, else by name."""
    if len(gradings) == len(log.beds):
        return dict(enumerate(gradings))
    by_name = {grading.bed: grading for grading in gradings}
    return {i: by_name[bed.name] for i, bed in enumerate(log.beds) if bed.name in by_name}


def _ranked(currents: Sequence[CurrentSummary]) -> tuple[CurrentSummary, ...]:
    """Summaries that have readings: directions before lines, most readings first."""
    filled = [summary for summary in currents if summary.azimuths_deg]
    return tuple(sorted(filled, key=lambda summary: (summary.sense != "direction", -summary.n)))
