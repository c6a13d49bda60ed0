"""Splits beds into phases: parts with one grain-size state and one structure, from base to top.

Only what was recorded is used. Boundaries that nobody wrote down divide the bed evenly and are marked
"unknown"; structures whose order was not recorded stay together in one phase.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from logkit.model import Bed, GrainState, Log, Phase, SizeInterval, Structure
from logkit.vocabulary.terms import Term, vocabulary

READING_GROUPS = ("current", "fallout", "wave", "wind")
"""Groups of structures that say something about the flow that laid the bed down."""

SAND_MM = 0.0625
"""Finest sand, mm."""

NEW_STATE_PHI = 0.5
"""In-bed readings closer than this are one state: half a class, the usual error of a reading."""


@dataclass(frozen=True, slots=True)
class _Segment:
    base: float
    top: float
    recorded: bool
    structure: Structure | None


def structure_term(structure: str) -> Term | None:
    """The vocabulary's term for a structure id; None for "" and for an id it does not know."""
    terms = vocabulary("structures")
    return terms[structure] if structure and structure in terms else None


def speaks(structure: Structure) -> bool:
    """True when a structure says something about the flow that laid the bed down."""
    term = structure_term(structure.term)
    return bool(bouma_letter(structure)) or (term is not None and term.group in READING_GROUPS)


def bouma_letter(structure: Structure) -> str:
    """The Bouma letter a structure was written with ("Tb"), "" when it was written otherwise."""
    return structure.code if structure.code.startswith("T") and len(structure.code) == 2 else ""


def split_phases(log: Log, setting: str | None = None) -> tuple[Phase, ...]:
    """All phases of a log, upward; a gap is one phase without size and structure.

    Parameters
    ----------
    log : the log
    setting : replaces the setting of the log's header
    """
    chosen = setting or log.header.setting or "unknown"
    return tuple(
        phase
        for index, bed in enumerate(log.beds)
        for phase in split_bed(bed, log.name, chosen, bed_index=index)
    )


def split_bed(bed: Bed, section: str, setting: str, bed_index: int = 0) -> tuple[Phase, ...]:
    """The phases of one bed, upward.

    Parameters
    ----------
    bed : the bed or gap
    section, setting : written into the phases
    bed_index : index of the bed in its log
    """
    states = () if bed.is_gap else grain_states(bed)
    structures = () if bed.is_gap else tuple(s for s in bed.structures if speaks(s))
    segments = _structure_segments(structures, bed.structures_upward)
    by_state = len(segments) == 1 and len(states) > 1
    if by_state:
        segments = _state_segments(states, segments[0].structure)
    coarsest = _coarsest(segments, states, by_state)
    whole = len(segments) == 1
    phases = []
    for index, part in enumerate(segments):
        if by_state:
            base_size: SizeInterval | None = states[index].size
            top_size = base_size
        else:
            base_size, top_size = _size_at(states, part.base), _size_at(states, part.top)
        term = structure_term(part.structure.term) if part.structure else None
        makes_dunes = term is not None and term.bed_state == "dune"
        phases.append(
            Phase(
                section=section,
                bed=bed.name,
                index=index,
                base_m=bed.base_m + part.base * bed.thickness_m,
                top_m=bed.base_m + part.top * bed.thickness_m,
                boundary="bed" if whole else ("recorded" if part.recorded else "unknown"),
                setting=_phase_setting(setting, part.structure, term),
                structure=part.structure.term if part.structure else "",
                structure_sure=part.structure.sure if part.structure else True,
                base_size=base_size,
                top_size=top_size,
                largest_mm=bed.largest.mean_mm if bed.largest and index == coarsest else None,
                set_thickness=bed.set_thickness if makes_dunes else None,
                contact=bed.contact if index == 0 else None,
                bed_index=bed_index,
                structure_code=bouma_letter(part.structure) if part.structure else "",
            )
        )
    return tuple(phases)


def grain_states(bed: Bed) -> tuple[GrainState, ...]:
    """Grain-size states of a bed, upward: as many as its in-bed readings support, else as written."""
    readings = sorted(bed.sizes, key=lambda r: r.position_m)
    if len(readings) < 2 or bed.thickness_m <= 0:
        if readings and not bed.grain:
            return (GrainState(0.5, _interval([-math.log2(readings[0].d50_mm)])),)
        return bed.grain
    groups: list[list[tuple[float, float]]] = []
    for reading in readings:
        fraction = min(max((reading.position_m - bed.base_m) / bed.thickness_m, 0.0), 1.0)
        phi = -math.log2(reading.d50_mm)
        mean = sum(p for _, p in groups[-1]) / len(groups[-1]) if groups else math.inf
        if abs(phi - mean) >= NEW_STATE_PHI:
            groups.append([])
        groups[-1].append((fraction, phi))
    states = []
    for group in groups:
        fractions, phis = [f for f, _ in group], [p for _, p in group]
        states.append(GrainState(sum(fractions) / len(fractions), _interval(phis)))
    return tuple(states)


def _interval(phis: Sequence[float]) -> SizeInterval:
    """Size of a state from readings: their mean, a quarter phi to each side."""
    middle = sum(phis) / len(phis)
    return SizeInterval(2.0 ** -(middle + 0.25), 2.0 ** -(middle - 0.25), label=f"{2.0**-middle:.2g} mm")


def _structure_segments(structures: tuple[Structure, ...], upward: bool) -> list[_Segment]:
    placed = [s for s in structures if s.base_fraction is not None or s.top_fraction is not None]
    if placed and len(placed) == len(structures):
        return _placed_segments(placed)
    if upward and len(structures) > 1:
        count = len(structures)
        return [_Segment(i / count, (i + 1) / count, False, s) for i, s in enumerate(structures)]
    return [_Segment(0.0, 1.0, True, primary(structures))]


def primary(structures: tuple[Structure, ...]) -> Structure | None:
    """The structure that stands for a bed of several without recorded places: the first that names a state."""
    for structure in structures:
        term = structure_term(structure.term)
        if term is not None and term.bed_state:
            return structure
    return structures[0] if structures else None


def _placed_segments(structures: list[Structure]) -> list[_Segment]:
    """Segments of structures with recorded extents; what lies between has no structure."""
    segments: list[_Segment] = []
    reached = 0.0
    for structure in sorted(structures, key=lambda s: s.base_fraction or 0.0):
        base = max(structure.base_fraction or 0.0, reached)
        top = min(structure.top_fraction if structure.top_fraction is not None else 1.0, 1.0)
        if top - base < 1e-6:
            continue
        if base - reached > 1e-6:
            segments.append(_Segment(reached, base, True, None))
        segments.append(_Segment(base, top, True, structure))
        reached = top
    if 1.0 - reached > 1e-6:
        segments.append(_Segment(reached, 1.0, True, None))
    return segments


def _state_segments(states: tuple[GrainState, ...], structure: Structure | None) -> list[_Segment]:
    """One segment a state, divided half-way between states; only inner states give a recorded division."""
    cuts = [0.0, *(0.5 * (a.fraction + b.fraction) for a, b in pairwise(states)), 1.0]
    if any(b - a < 1e-6 for a, b in pairwise(cuts)):
        cuts = [i / len(states) for i in range(len(states) + 1)]
    recorded = len(states) > 2
    return [_Segment(a, b, recorded, structure) for a, b in pairwise(cuts)]


def _size_at(states: tuple[GrainState, ...], fraction: float) -> SizeInterval | None:
    """Size at a height in the bed, linear in phi between the written states."""
    if not states:
        return None
    if len(states) == 1 or fraction <= states[0].fraction:
        return states[0].size
    for below, above in pairwise(states):
        if fraction <= above.fraction:
            if fraction == above.fraction or above.fraction <= below.fraction:
                return above.size
            share = (fraction - below.fraction) / (above.fraction - below.fraction)
            low = below.size.low_mm ** (1 - share) * above.size.low_mm**share
            high = below.size.high_mm ** (1 - share) * above.size.high_mm**share
            return SizeInterval(low, high, sure=below.size.sure and above.size.sure)
    return states[-1].size


def _coarsest(segments: list[_Segment], states: tuple[GrainState, ...], by_state: bool) -> int:
    """Index of the phase to which the largest clasts belong: the coarsest one, the lowest of equals."""
    sizes = []
    for index, part in enumerate(segments):
        size = states[index].size if by_state else _size_at(states, 0.5 * (part.base + part.top))
        sizes.append(size.middle_mm if size else 0.0)
    return sizes.index(max(sizes))


def _phase_setting(setting: str, structure: Structure | None, term: Term | None) -> str:
    """Setting of a phase; where the log names none, a structure that only one setting makes names it."""
    if setting != "unknown" or structure is None:
        return setting
    if bouma_letter(structure):
        return "turbidity"
    group = term.group if term else ""
    return {"wave": "waves", "wind": "wind"}.get(group, setting)
