"""Where the beds of a well stand in a panel: core shift, thickness along the hole, datum.

A placed log keeps the log as it was read and carries the same beds on heights above the datum. Nothing is
drawn or counted here.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

import numpy as np

from logkit.compare.companions import Companions, panel_distance_m
from logkit.compare.survey import Survey, depth_below_head, stratigraphic_depth
from logkit.errors import ArgumentError, LogkitError, UnknownNameError

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from logkit.compare.curves import Curve
    from logkit.model import Bed, Log

Thickness = Literal["true", "vertical", "measured"]
THICKNESS_NAMES: dict[str, str] = {
    "true": "true stratigraphic thickness (TST)",
    "vertical": "true vertical thickness (TVT)",
    "measured": "thickness as measured (MD in a hole)",
    "elevation": "elevation above sea level from vertical depth (TVDSS)",
    "depth": "vertical depth below the depth reference (TVD)",
}
STRUCTURAL = ("elevation", "depth")
"""Datums that put wells at their place in space instead of hanging them."""


@dataclass(frozen=True, slots=True)
class PlacedLog:
    """A log on its place in a panel.

    Attributes
    ----------
    log : as read
    hung : the same beds on heights above the datum, m
    datum_m : position of the datum before hanging, on the converted scale, m
    datum_how : how the datum was found in this log, in words
    datum_sure : False when it was not seen but worked out from other markers
    measure : key of THICKNESS_NAMES, what a height difference means
    factors : smallest and largest ratio of converted to logged thickness
    distance_m : along the panel, None when not given
    curves : measured curves on heights above the datum
    """

    log: Log
    hung: Log
    datum_m: float
    datum_how: str
    datum_sure: bool
    measure: str
    factors: tuple[float, float]
    companions: Companions
    distance_m: float | None = None
    curves: tuple[Curve, ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def name(self) -> str:
        """Name of the log."""
        return self.log.name

    def height(self, bed: int, position_m: float) -> float:
        """Height above the datum of a position inside a bed, given by its place in `log.beds`."""
        return _inside(self.log.beds[bed], self.hung.beds[bed], position_m)


@dataclass(frozen=True, slots=True)
class _Converted:
    """A log on its converted scale, before it is hung."""

    log: Log
    beds: tuple[Bed, ...]
    measure: str
    companions: Companions
    notes: tuple[str, ...]
    convert: Callable[[NDArray[np.float64]], NDArray[np.float64]]


def place_logs(
    logs: Sequence[Log],
    datum: str | float | None,
    thickness: Thickness,
    companions: Sequence[Companions],
) -> tuple[tuple[PlacedLog, ...], str]:
    """Hang logs on a datum.

    Parameters
    ----------
    datum : a marker; "base", "top"; "elevation", "depth" (wells at their place in space); a number: depth
        of downward and height of upward logs, m. None takes the marker most logs share, else "base"
    thickness : what a height difference shall mean for a marker, base, top or number

    Returns
    -------
    placed logs in the order given; the datum used

    Raises
    ------
    UnknownNameError : no log has the marker
    LogkitError : a well climbs up through its beds, or elevation is asked for without a reference
    """
    if thickness not in ("true", "vertical", "measured"):
        raise ArgumentError("thickness", thickness, "true, vertical or measured")
    chosen = _chosen_datum(logs, datum)
    measure = chosen if chosen in STRUCTURAL else thickness
    converted = [_convert(log, measure, beside) for log, beside in zip(logs, companions, strict=True)]
    heights = _datum_heights(converted, chosen)
    placed = tuple(_hang(c, *found) for c, found in zip(converted, heights, strict=True))
    return placed, _as_written(logs, chosen)


def marker_key(name: str) -> str:
    """A marker's name without case and doubled blanks."""
    return " ".join(name.casefold().split())


def markers(log: Log) -> dict[str, list[int]]:
    """Places in `log.beds` of each marker, upward, by key; gaps carry none."""
    found: dict[str, list[int]] = {}
    for i, bed in enumerate(log.beds):
        if bed.marker and not bed.is_gap:
            found.setdefault(marker_key(bed.marker), []).append(i)
    return found


def _as_written(logs: Sequence[Log], datum: str) -> str:
    """A marker as the first log that has it writes it; any other datum as it is."""
    for log in logs:
        at = markers(log).get(datum)
        if at:
            return log.beds[at[0]].marker
    return datum


def _chosen_datum(logs: Sequence[Log], datum: str | float | None) -> str:
    if datum is None:
        counts: dict[str, int] = {}
        for log in logs:
            for key in markers(log):
                counts[key] = counts.get(key, 0) + 1
        best = max(counts.items(), key=lambda item: item[1], default=("", 0))
        return best[0] if best[1] > 1 else "base"
    if isinstance(datum, int | float):
        return repr(float(datum))
    text = marker_key(datum)
    known = {key for log in logs for key in markers(log)}
    if text in known or text in (*STRUCTURAL, "base", "top"):
        return text
    try:
        return repr(float(text.removesuffix("m").strip()))
    except ValueError:
        words = [*known, *STRUCTURAL, "base", "top"]
        raise UnknownNameError("marker or datum", datum, words, where="in these logs") from None


def _convert(log: Log, measure: str, beside: Companions) -> _Converted:
    """Beds after core shift, on the scale the panel shall show (upward, m)."""
    notes = list(beside.notes)
    beds = log.beds
    if beside.shifts is not None:
        beds = _shifted(log, beside, notes)
    convert = _scale(log, measure, beside.survey, notes)
    moved = []
    bases = convert(np.array([bed.base_m for bed in beds], dtype=float)).tolist()
    tops = convert(np.array([bed.top_m for bed in beds], dtype=float)).tolist()
    for bed, base, top in zip(beds, bases, tops, strict=True):
        if not top > base:
            raise LogkitError(
                f"{log.name}: bed {bed.name} has no positive thickness across the beds ({top - base:.2f} m): "
                "the hole runs up through them there.",
                "Compare with thickness='measured', or check survey and bedding.",
            )
        moved.append(_moved(bed, base, top))
    return _Converted(log, tuple(moved), measure, beside, tuple(notes), convert)


def _shifted(log: Log, beside: Companions, notes: list[str]) -> tuple[Bed, ...]:
    """Beds at logged depths."""
    table = beside.shifts
    if table is None:
        return log.beds
    if log.header.direction != "down":
        notes.append(f"{log.name}: a depth-shift table was not used, the log is not measured downwards")
        return log.beds
    beds: list[Bed] = []
    for bed in log.beds:
        top, base = table.move(-bed.top_m, -bed.base_m)
        if beds and -base < beds[-1].top_m - 1e-6:
            raise LogkitError(
                f"{log.name}: after the depth shift bed {bed.name} overlaps bed {beds[-1].name}.",
                "Put the boundary of the shift intervals into a gap, or shift point by point.",
            )
        beds.append(_moved(bed, -base, -top))
    inside = table.covers(np.array([-b.base_m for b in log.beds]))
    if not inside.all():
        notes.append(
            f"{log.name}: {int((~inside).sum())} beds lie outside the shift intervals and stay unshifted"
        )
    notes.append(f"{log.name}: core depths moved to logged depths ({table.kind})")
    return tuple(beds)


def _scale(
    log: Log, measure: str, survey: Survey | None, notes: list[str]
) -> Callable[[NDArray[np.float64]], NDArray[np.float64]]:
    """Function from logged positions to the positions shown, both upward in m."""
    header, name = log.header, log.name
    if measure in STRUCTURAL:
        if header.direction != "down":
            raise LogkitError(
                f"{name} is measured upwards and has no depth.", "Hang outcrops on a marker, base or height."
            )
        if survey is None:
            notes.append(f"{name}: no survey, the hole is taken as vertical")
        hole = survey or Survey.straight()
        if measure == "depth":
            return lambda up: -depth_below_head(hole, -up)
        kelly = header.kb_elevation_m
        if kelly is None:
            raise LogkitError(
                f"{name} gives no elevation of its depth reference.", "Add a header line kb_elevation."
            )
        return lambda up: kelly - depth_below_head(hole, -up)
    if measure == "measured" or (measure == header.thickness_type):
        return lambda up: up
    direction, dip = header.bedding or (0.0, 0.0)
    if header.bedding is None:
        notes.append(f"{name}: no bedding in the header, beds are taken as level")
    cosine = math.cos(math.radians(dip))
    if cosine < 1e-6:
        raise LogkitError(f"{name}: the beds stand upright, vertical thickness has no meaning.")
    if header.thickness_type == "measured":
        if header.direction != "down":
            notes.append(
                f"{name}: measured along an outcrop, which cannot be turned into {measure} thickness"
            )
            return lambda up: up
        if survey is None:
            notes.append(f"{name}: no survey, the hole is taken as vertical")
        hole = survey or Survey.straight()
        share = 1.0 if measure == "true" else 1.0 / cosine
        return lambda up: -share * stratigraphic_depth(hole, -up, direction, dip)
    factor = cosine if measure == "true" else 1.0 / cosine
    return lambda up: factor * up


def _datum_heights(converted: Sequence[_Converted], datum: str) -> list[tuple[float, str, bool]]:
    """Position of the datum on each converted scale, how it was found, and whether it was seen."""
    if datum in STRUCTURAL:
        return [(0.0, THICKNESS_NAMES[datum], True)] * len(converted)
    if datum in ("base", "top"):
        return [
            (c.beds[0].base_m if datum == "base" else c.beds[-1].top_m, f"{datum} of the log", True)
            if c.beds
            else (0.0, "no beds", False)
            for c in converted
        ]
    try:
        number = float(datum)
    except ValueError:
        return _marker_heights(converted, datum)
    found = []
    for c in converted:
        down = c.log.header.direction == "down"
        position = float(c.convert(np.array([-number if down else number]))[0])
        found.append((position, f"{'depth' if down else 'height'} {number:g} m", True))
    return found


def _marker_heights(converted: Sequence[_Converted], datum: str) -> list[tuple[float, str, bool]]:
    bases = [{key: c.beds[at[0]].base_m for key, at in markers(c.log).items()} for c in converted]
    found = []
    for c, own in zip(converted, bases, strict=True):
        if datum in own:
            at = markers(c.log)[datum]
            several = f", the lowest of {len(at)} beds with that name" if len(at) > 1 else ""
            found.append((own[datum], f"base of bed {c.beds[at[0]].name}{several}", True))
            continue
        others = [b for b in bases if datum in b]
        found.append(_from_neighbours(c, own, others, datum))
    return found


def _from_neighbours(
    c: _Converted, own: dict[str, float], others: Sequence[dict[str, float]], datum: str
) -> tuple[float, str, bool]:
    """Where a marker that was not seen would lie, from the markers around it in the other wells."""
    offsets = {
        key: float(np.median([b[datum] - b[key] for b in others if key in b]))
        for key in own
        if any(key in b for b in others)
    }
    if not offsets:
        base = c.beds[0].base_m if c.beds else 0.0
        return base, "not seen and no other marker shared: hung by its base", False
    below = [k for k in offsets if offsets[k] > 0]
    above = [k for k in offsets if offsets[k] <= 0]
    written = {key: c.beds[at[0]].marker for key, at in markers(c.log).items()}
    lower = min(below, key=lambda k: offsets[k], default=None)
    upper = max(above, key=lambda k: offsets[k], default=None)
    if lower and upper and own[upper] > own[lower]:
        share = offsets[lower] / (offsets[lower] - offsets[upper])
        position = own[lower] + share * (own[upper] - own[lower])
        how = f"not seen: placed between {written[lower]} and {written[upper]} in the proportion of the other wells"
    else:
        nearest = min(offsets, key=lambda k: abs(offsets[k]))
        position = own[nearest] + offsets[nearest]
        how = f"not seen: placed by its median distance from {written[nearest]} in the other wells"
    hidden = next((b for b in c.beds if b.is_gap and b.base_m <= position <= b.top_m), None)
    return position, how + (f", inside {hidden.name}" if hidden else ""), False


def _hang(c: _Converted, datum_m: float, how: str, sure: bool) -> PlacedLog:
    beds = tuple(_moved(bed, bed.base_m - datum_m, bed.top_m - datum_m) for bed in c.beds)
    ratios = [
        hung.thickness_m / bed.thickness_m
        for hung, bed in zip(beds, c.log.beds, strict=True)
        if bed.thickness_m
    ]
    notes = c.notes if sure else (*c.notes, f"{c.log.name}: datum {how}")
    curves = tuple(curve.moved(c.convert(-curve.depth_m) - datum_m) for curve in c.companions.curves)
    return PlacedLog(
        c.log,
        replace(c.log, beds=beds),
        datum_m,
        how,
        sure,
        c.measure,
        (min(ratios, default=1.0), max(ratios, default=1.0)),
        c.companions,
        panel_distance_m(c.log),
        curves,
        notes,
    )


def _moved(bed: Bed, base_m: float, top_m: float) -> Bed:
    """A bed on other heights, its in-bed readings with it."""
    scale = (top_m - base_m) / bed.thickness_m
    sizes = tuple(replace(s, position_m=base_m + scale * (s.position_m - bed.base_m)) for s in bed.sizes)
    return replace(bed, base_m=base_m, top_m=top_m, sizes=sizes)


def _inside(bed: Bed, hung: Bed, position_m: float) -> float:
    share = (position_m - bed.base_m) / bed.thickness_m
    return hung.base_m + share * hung.thickness_m
