"""What is to be drawn, measured once: beds with their sizes and structures, phases, columns on the page.

A `Scene` belongs to a log and a style, a `View` to one stretch of the section on one sheet. Both are plain data that
every track reads; a `Tally` collects what was used (for the legend) and what had to be left out (for the margin).
"""

from __future__ import annotations

import itertools
import zlib
from bisect import bisect_right
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from math import log2
from typing import TYPE_CHECKING, Any

from logkit.drawing.axes import LogAxis, PhiAxis, PositionScale
from logkit.drawing.shapes import Gradient
from logkit.drawing.style import Style
from logkit.model import Bed, Grading, Log, Package, PhaseEstimate, Structure
from logkit.vocabulary.terms import vocabulary

if TYPE_CHECKING:
    from logkit.drawing.outline import Outline

UNKNOWN_PHI = 4.0
"""Width at which a bed without size and lithology is drawn, as an open dashed outline."""

FEET_M = 0.3048

FILLING_GROUPS = ("current", "fallout", "wave", "wind")
"""Groups of structures that make up a whole interval; all others are objects in or on a bed."""


@dataclass(frozen=True, slots=True)
class Layer:
    """Part of a bed with one filling structure ("" for none seen)."""

    base_m: float
    top_m: float
    term: str
    sure: bool = True


@dataclass(frozen=True, slots=True)
class MeasuredBed:
    """A bed with what its picture needs.

    Attributes
    ----------
    bed, index : the bed and its place in the log
    id : element id made from section, name and position
    family : texture family, "" unknown
    knots : (position m, phi) upward; the profile is straight between them
    sized : False when the size is only that usual for the lithology, or unknown
    layers : filling structures upward
    objects : other structures of the bed
    """

    bed: Bed
    index: int
    id: str
    family: str
    knots: tuple[tuple[float, float], ...]
    sized: bool
    layers: tuple[Layer, ...]
    objects: tuple[str, ...]

    @property
    def seed(self) -> int:
        """Seed of everything random in this bed's picture."""
        return zlib.crc32(self.id.encode())

    def phi_at(self, position_m: float) -> float:
        """Grain size at a position, phi."""
        knots = self.knots
        for (low, a), (high, b) in itertools.pairwise(knots):
            if position_m <= high:
                return a if high == low else a + (b - a) * max(0.0, position_m - low) / (high - low)
        return knots[-1][1]


@dataclass(frozen=True, slots=True)
class Column:
    """A track's place on the page: left and right edge, mm."""

    name: str
    title: str
    x0: float
    x1: float

    @property
    def middle(self) -> float:
        """Centre line, mm."""
        return (self.x0 + self.x1) / 2


@dataclass(frozen=True)
class Scene:
    """Everything that stays the same from sheet to sheet.

    Attributes
    ----------
    estimates : estimates of the phases of each bed, by the bed's index
    gradings : grading of each bed, by the bed's index
    azimuths : (azimuth of the mean, "direction" or "axis") of each bed's readings, by the bed's index
    columns : tracks from left to right
    scale : metres in the section a metre on paper
    phi, velocity, flow_depth : horizontal axes; the last two None without a track
    curves : (mnemonic, unit, positions m, values) of point curves
    """

    log: Log
    style: Style
    beds: tuple[MeasuredBed, ...]
    estimates: Mapping[int, tuple[PhaseEstimate, ...]]
    columns: Mapping[str, Column]
    scale: float
    phi: PhiAxis | None
    velocity: LogAxis | None
    flow_depth: LogAxis | None
    gradings: Mapping[int, Grading] = field(default_factory=dict)
    packages: tuple[Package, ...] = ()
    currents: tuple[Any, ...] = ()
    azimuths: Mapping[int, tuple[float, str]] = field(default_factory=dict)
    curves: tuple[tuple[str, str, Sequence[float], Sequence[float]], ...] = ()

    @property
    def downward(self) -> bool:
        """True when positions are shown as depths."""
        return self.log.header.direction == "down"


@dataclass(frozen=True)
class View:
    """A stretch of the section on one sheet.

    Attributes
    ----------
    position : position in the section to y
    beds : beds that show, upward
    spans : (y of base, y of top) of each of them as far as it is on this sheet, mm
    number, of : sheet number among the sheets with a column
    outlines : outline of each real bed on the page, by the bed's index
    floor : lowest y that notes may reach, mm; below the section where that is short
    """

    position: PositionScale
    beds: tuple[MeasuredBed, ...]
    spans: tuple[tuple[float, float], ...]
    number: int = 1
    of: int = 1
    outlines: Mapping[int, Outline] = field(default_factory=dict)
    floor: float = 0.0

    def items(self) -> zip[tuple[MeasuredBed, tuple[float, float]]]:
        """Beds with their (y of base, y of top), upward."""
        return zip(self.beds, self.spans, strict=True)

    def span(self, base_m: float, top_m: float) -> tuple[float, float] | None:
        """(y of base, y of top) of an interval as far as it is on this sheet; None when it is not."""
        low, high = max(base_m, self.position.base_m), min(top_m, self.position.top_m)
        if high <= low:
            return None
        return self.position.y(low), self.position.y(high)

    def shows(self, position_m: float) -> bool:
        """True when a position is on this sheet; the lower edge belongs to it, the upper to the next."""
        last = self.number == self.of
        above = position_m <= self.position.top_m if last else position_m < self.position.top_m
        return self.position.base_m <= position_m and above


@dataclass
class Tally:
    """What the tracks used and left out, filled while drawing.

    Attributes
    ----------
    left_out : what was dropped or moved for want of room -> how often
    families, structures, fossils, states, marks : what the legend must explain
    moved_notes : notes for the note table, as (bed name, text, strong) in order
    gradients : gradients of the sheet in work
    lowest : how far the notes of the sheet in work reach down, mm
    """

    left_out: Counter[str] = field(default_factory=Counter)
    families: set[str] = field(default_factory=set)
    structures: dict[str, int] = field(default_factory=dict)
    fossils: dict[str, int] = field(default_factory=dict)
    states: set[str] = field(default_factory=set)
    marks: set[str] = field(default_factory=set)
    moved_notes: list[tuple[str, str, bool]] = field(default_factory=list)
    gradients: list[Gradient] = field(default_factory=list)
    lowest: float = 0.0


def measure_beds(log: Log, estimates: Mapping[int, tuple[PhaseEstimate, ...]]) -> tuple[MeasuredBed, ...]:
    """Sizes, families and layers of every bed of a log, upward."""
    measured: list[MeasuredBed] = []
    taken: Counter[str] = Counter()
    raw = [_own_knots(bed) for bed in log.beds]
    for index, bed in enumerate(log.beds):
        content = f"{log.header.section}|{bed.name}|{bed.base_m:.4f}|{bed.top_m:.4f}"
        name = f"b-{zlib.crc32(content.encode()):08x}"
        taken[name] += 1
        if taken[name] > 1:
            name = f"{name}-{taken[name]}"
        knots, sized = raw[index]
        below = raw[index - 1][0] if index and not log.beds[index - 1].is_gap else None
        above = raw[index + 1][0] if index + 1 < len(raw) and not log.beds[index + 1].is_gap else None
        knots = _blend(log.beds, index, knots, below, above)
        layers, objects = _layers(bed, estimates.get(index, ()))
        measured.append(MeasuredBed(bed, index, name, family_of(bed), knots, sized, layers, objects))
    return tuple(measured)


def family_of(bed: Bed) -> str:
    """Texture family from the lithology, or from the grain size alone; "" when neither is known."""
    lithologies = vocabulary("lithologies")
    if bed.lithology in lithologies:
        return lithologies[bed.lithology].family
    if bed.size is None:
        return ""
    phi = bed.size.middle_phi
    return "gravel" if phi <= -1 else "quartz" if phi <= 4 else "mud"


def structure_label(term: str) -> str:
    """Words for a structure id; an unknown id is shown as it is, without underscores."""
    known = vocabulary("structures")
    return known[term].label if term in known else term.replace("_", " ")


def match_estimates(log: Log, estimates: Sequence[PhaseEstimate]) -> dict[int, tuple[PhaseEstimate, ...]]:
    """Estimates of each bed by its index, found by position, upward within a bed."""
    bases = [bed.base_m for bed in log.beds]
    found: dict[int, list[PhaseEstimate]] = {}
    for estimate in estimates:
        phase = estimate.phase
        index = bisect_right(bases, (phase.base_m + phase.top_m) / 2) - 1
        if index >= 0 and log.beds[index].top_m >= phase.base_m:
            found.setdefault(index, []).append(estimate)
    return {index: tuple(sorted(part, key=lambda e: e.phase.base_m)) for index, part in found.items()}


def position_unit(scene: Scene) -> tuple[str, float]:
    """Unit of the position axis and its length in metres: feet for a log measured in feet, else metres."""
    if scene.log.header.unit.strip().lower() in ("ft", "feet", "foot", "'"):
        return "ft", FEET_M
    return "m", 1.0


Knots = tuple[tuple[float, float], ...]


def _own_knots(bed: Bed) -> tuple[Knots, bool]:
    """The profile of a bed by itself: in-bed readings, else written states, else the usual size."""
    if bed.is_gap:
        return ((bed.base_m, UNKNOWN_PHI), (bed.top_m, UNKNOWN_PHI)), False
    if len(bed.sizes) > 1:
        readings = [(r.position_m, -log2(r.d50_mm)) for r in bed.sizes]
        inner = [(m, phi) for m, phi in readings if bed.base_m < m < bed.top_m]
        return ((bed.base_m, readings[0][1]), *inner, (bed.top_m, readings[-1][1])), True
    if bed.grain:
        states = [
            (bed.base_m + state.fraction * bed.thickness_m, state.size.middle_phi) for state in bed.grain
        ]
        inner = [(m, phi) for m, phi in states if bed.base_m < m < bed.top_m]
        return ((bed.base_m, states[0][1]), *inner, (bed.top_m, states[-1][1])), True
    lithologies = vocabulary("lithologies")
    usual = lithologies[bed.lithology].size_mm if bed.lithology in lithologies else None
    phi = -0.5 * log2(usual[0] * usual[1]) if usual else UNKNOWN_PHI
    return ((bed.base_m, phi), (bed.top_m, phi)), False


def _blend(beds: Sequence[Bed], index: int, knots: Knots, below: Knots | None, above: Knots | None) -> Knots:
    """Let the size pass over into the neighbour's where the contact is gradational."""
    bed = beds[index]
    points = list(knots)
    if below is not None and _gradational(bed):
        half = half_zone_m(bed, beds[index - 1])
        own, other = points[0][1], below[-1][1]
        inner = [p for p in points if p[0] > bed.base_m + half]
        points = [(bed.base_m, (own + other) / 2), (bed.base_m + half, own), *inner]
    if above is not None and _gradational(beds[index + 1]):
        half = half_zone_m(beds[index + 1], bed)
        own, other = points[-1][1], above[0][1]
        inner = [p for p in points if p[0] < bed.top_m - half]
        points = [*inner, (bed.top_m - half, own), (bed.top_m, (own + other) / 2)]
    return tuple(points)


def _gradational(bed: Bed) -> bool:
    return bed.contact is not None and bed.contact.kind == "gradational"


def half_zone_m(bed: Bed, below: Bed) -> float:
    """Half the height over which a gradational base passes, m: as logged, else a fifth of the thinner bed."""
    thinner = min(bed.thickness_m, below.thickness_m)
    zone = bed.contact.zone_m if bed.contact and bed.contact.zone_m else 0.2 * thinner
    return min(zone / 2, 0.45 * thinner)


def _layers(bed: Bed, estimates: Sequence[PhaseEstimate]) -> tuple[tuple[Layer, ...], tuple[str, ...]]:
    """Filling structures with their extent, and the objects."""
    known = vocabulary("structures")
    filling: list[Structure] = []
    objects: list[Structure] = []
    for structure in bed.structures:
        group = known[structure.term].group if structure.term in known else ""
        (filling if group in FILLING_GROUPS else objects).append(structure)
    names = tuple(dict.fromkeys(structure.term for structure in objects))
    base, thickness = bed.base_m, bed.thickness_m
    placed = [s for s in filling if s.base_fraction is not None and s.top_fraction is not None]
    if filling and len(placed) == len(filling):
        layers = [
            Layer(base + s.base_fraction * thickness, base + s.top_fraction * thickness, s.term, s.sure)  # type: ignore[operator]
            for s in placed
        ]
        return tuple(sorted(layers, key=lambda layer: layer.base_m)), names
    if len(estimates) > 1 and any(e.phase.structure for e in estimates):
        return tuple(
            Layer(e.phase.base_m, e.phase.top_m, e.phase.structure, e.phase.structure_sure) for e in estimates
        ), names
    if len(filling) > 1 and bed.structures_upward:
        step = thickness / len(filling)
        return tuple(
            Layer(base + i * step, base + (i + 1) * step, s.term, s.sure) for i, s in enumerate(filling)
        ), names
    if filling:
        extra = tuple(dict.fromkeys(s.term for s in filling[1:] if s.term != filling[0].term))
        return (Layer(base, bed.top_m, filling[0].term, filling[0].sure),), extra + names
    return (Layer(base, bed.top_m, ""),), names
