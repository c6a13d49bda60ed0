"""Records of the beds for the html page: what a card shows, and the tags the filter knows."""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import Any

from logkit.model import Bed, PhaseEstimate, Quantiles
from logkit.report import parts_log
from logkit.report.document import Figure
from logkit.report.ledger_view import ledger_headings
from logkit.report.parts_flow import size_words
from logkit.report.parts_log import contact, label, rock, sizes
from logkit.report.settings import ReportSettings
from logkit.report.wells import Well, depth_or_height
from logkit.report.wording import Units
from logkit.words import digits


def ledger_data(wells: Sequence[Well], units: Units) -> dict[str, Any]:
    """The different ledgers of all logs, one after the other, with the headings of their columns."""
    headings = [*ledger_headings(units), ("tested range", "")]
    return {
        "columns": [f"{name} ({unit})" if unit else name for name, unit in headings],
        "ledgers": [
            [[*line.cells, line.validity] for line in ledger.lines]
            for well in wells
            for ledger in well.ledgers(units)
        ],
    }


def all_records(wells: Sequence[Well], units: Units) -> Iterator[dict[str, Any]]:
    """The records of the beds of all logs, whose ledgers are numbered as in `ledger_data`."""
    first = 0
    for well in wells:
        yield from bed_records(well, units, first)
        first += len(well.ledgers(units))


def bed_records(well: Well, units: Units, first_ledger: int = 0) -> Iterator[dict[str, Any]]:
    """One record a bed, upward: title, facts, phases with ranges, ledger and its number, original wording, tags.

    first_ledger : number of the log's first ledger among the ledgers of all logs
    """
    ledger_of = {}
    for number, ledger in enumerate(well.ledgers(units), first_ledger):
        for place in ledger.places:
            phase = well.history.estimates[place].phase
            ledger_of[phase.bed_index, phase.index] = number
    notes = defaultdict(list)
    for finding in well.log.findings:
        if finding.bed:
            notes[finding.bed].append(f"{finding.level}: {finding.message}")
    for index, bed in enumerate(well.log.beds):
        key = well.keys[index]
        found = well.estimates.get(index, ())
        yield {
            "key": key,
            "title": f"{well.name}, {'gap' if bed.is_gap else 'bed'} {bed.name}",
            "facts": [[name, text] for name, text in _facts(well, bed, units) if text],
            "phases": [_phase(e, ledger_of.get((index, e.phase.index)), units) for e in found],
            "written": [list(pair) for pair in bed.written],
            "findings": notes.get(bed.name, []),
            "tags": _tags(well, bed, found),
        }


def page_columns(well: Well, settings: ReportSettings) -> list[Figure]:
    """The column of a log for the page: bed groups named by their keys."""
    return [replace(figure, svg=_keyed(figure.svg)) for figure in parts_log.columns(well, settings)]


def _keyed(svg: str) -> str:
    """Bed groups named by their element id, which is unique, instead of the bed's name, which may not be."""

    def rename(match: re.Match[str]) -> str:
        tag = match[0]
        found = re.search(r'\bid="(b-[^"]+)"', tag)
        return re.sub(r'data-bed="[^"]*"', f'data-bed="{found[1]}"', tag) if found else tag

    return re.sub(r"<g\b[^>]*\bdata-bed=[^>]*>", rename, svg)


def _facts(well: Well, bed: Bed, units: Units) -> list[tuple[str, str]]:
    grading = well.grading(bed)
    verdict = ""
    if grading is not None:
        verdict = grading.verdict + (
            f", probability {grading.probability:.2f}" if grading.probability else ""
        )
        verdict += f" ({grading.basis})" if grading.basis else ""
    ends = [well.position(bed.base_m, units), well.position(bed.top_m, units)]
    if well.downward:
        ends.reverse()
    where = f"{depth_or_height(well)} {' to '.join(ends)} {well.position_unit(units)}"
    return [
        ("position", where),
        ("thickness", units.height_words(bed.thickness_m) + (" at least" if bed.minimum_thickness else "")),
        ("rock", rock(bed)),
        ("grain size", sizes(bed)),
        ("structures", ", ".join(label("structures", s.term) for s in bed.structures)),
        ("base contact", contact(bed, units)),
        ("grading", verdict),
        ("notes", bed.notes),
    ]


def _phase(estimate: PhaseEstimate, ledger: int | None, units: Units) -> dict[str, Any]:
    values = []
    for name, quantiles, unit, factor in (
        ("velocity", estimate.velocity, units.speed, True),
        ("flow depth", estimate.flow_depth, units.length, True),
        ("grain shear velocity", estimate.shear_velocity, units.speed, True),
        ("total shear velocity", estimate.total_shear_velocity, units.speed, True),
        ("Froude number", estimate.froude, "1", False),
    ):
        if quantiles is not None:
            values.append([name, *_three(quantiles, units if factor else None), unit])
    words = [f"Grain size {size_words(estimate)}"] if size_words(estimate) else []
    if estimate.status != "estimated":
        words.append(f"No estimate: {estimate.reason}.")
    elif estimate.bound in ("above", "below") and estimate.limit_velocity_m_s is not None:
        limit = digits(units.number(estimate.limit_velocity_m_s))
        what = "Wind 10 m above the ground" if estimate.is_wind else "Velocity"
        words.append(f"{what} {estimate.bound} {limit} {units.speed}.")
    if estimate.bed_state:
        words.append(f"Bed state: {estimate.bed_state.replace('_', ' ')}.")
    if estimate.transport_mode:
        words.append(f"Transport: {estimate.transport_mode.replace('_', ' ')}.")
    if estimate.tendency != "not determinable" and estimate.tendency_probability is not None:
        words.append(
            f"Against the phase below: {estimate.tendency}, probability {estimate.tendency_probability:.2f}."
        )
    words.extend(units.words(note) for note in estimate.notes)
    clash = estimate.clash
    structure = label("structures", estimate.phase.structure) or "no structure noted"
    return {
        "title": f"Phase {estimate.phase.index + 1}: {structure}",
        "values": values,
        "words": words,
        "conflict": units.words(f"Conflict: {clash.first_reading} against {clash.second_reading}.")
        if clash
        else "",
        "ledger": ledger,
    }


def _three(quantiles: Quantiles, units: Units | None) -> list[str]:
    values = (quantiles.p10, quantiles.p50, quantiles.p90)
    return [digits(units.number(v) if units else v) for v in values]


def _tags(well: Well, bed: Bed, found: tuple[PhaseEstimate, ...]) -> dict[str, list[str]]:
    grading = well.grading(bed)
    tendencies = {e.tendency for e in found} - {"not determinable"}
    return {
        "structure": sorted({label("structures", s.term) for s in bed.structures}),
        "grading": [grading.verdict] if grading and not bed.is_gap else [],
        "tendency": sorted(tendencies),
        "bed state": sorted({e.bed_state.replace("_", " ") for e in found if e.bed_state}),
    }
