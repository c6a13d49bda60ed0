"""Checks across rows and columns of one section: what no single cell can show.

Each check looks at beds (or drafts) and adds findings; none changes a value except where its docstring says so.
Positions are checked where they are settled, in `positions`.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import replace
from itertools import combinations, pairwise

from logkit.model import Bed, CurrentReading, GrainState, Header, Level
from logkit.tables.draft import Draft
from logkit.tables.sheet import Collector
from logkit.tables.slips import find_slips
from logkit.vocabulary import CodeTable, code_table, vocabulary
from logkit.words import counted

_NUMBERED = re.compile(r"^\D{0,12}?(\d+)\s*([a-z]?)(?:\.\d+)?$", re.I)
_TREND = re.compile(
    r"\b(?:fin(?:es|ing)|coarsen(?:s|ing))[\s-]*up(?:wards?)?\b|\b(?:normal|inverse|reverse)(?:ly)? grad(?:ed|ing)\b",
    re.I,
)
_METRIC = frozenset({"m", "cm", "mm"})
_IMPERIAL = frozenset({"ft", "in"})
_OPPOSED_DEG = 120.0
_REJECTED = 2.0
"""Times its bed's thickness from which a set is refused; below that it is asked about."""


def check_drafts(drafts: Sequence[Draft], found: Collector) -> None:
    """Checks that need the rows as written: names, units, slips."""
    _names(drafts, found)
    _unit_changes(drafts, found)
    _slips(drafts, found)
    _trend_words(drafts, found)
    _matter(drafts, found)


def check_beds(beds: list[Bed], header: Header, codes: str, found: Collector) -> list[Bed]:
    """Checks that need finished beds.

    Returns
    -------
    The beds, with sets that cannot be taken out and beds cut from above marked as minimum thickness.
    """
    beds = mark_minimum(_sets(beds, found))
    _relief(beds, found)
    _sizes(beds, codes, found)
    _currents(beds, header, found)
    _opposed(beds, header, found)
    return beds


def mark_minimum(beds: Sequence[Bed]) -> list[Bed]:
    """Beds upward, with `minimum_thickness` set where the bed above has an erosive base."""
    marked = list(beds)
    for i, bed in enumerate(beds[:-1]):
        contact = beds[i + 1].contact
        cut = contact is not None and (contact.kind == "erosive" or bool(contact.relief_m))
        if cut and not bed.is_gap and not beds[i + 1].is_gap and not bed.minimum_thickness:
            marked[i] = replace(bed, minimum_thickness=True)
    return marked


def _at(bed: Bed, found: Collector, level: Level, code: str, message: str, remedy: str, column: str,
        **more: tuple[str, ...] | str) -> None:  # fmt: skip
    found.add(level, code, message, remedy, row=bed.row, column=column, cell=bed.written_in(column),
              bed=bed.name, **more)  # type: ignore[arg-type]  # fmt: skip


# -- rows as written -------------------------------------------------------------------------------------------


def _names(drafts: Sequence[Draft], found: Collector) -> None:
    """Bed numbers skipped, doubled or out of order."""
    seen: dict[str, Draft] = {}
    numbers: list[tuple[int, str, Draft]] = []
    for d in drafts:
        if not d.name or d.row is None or (d.gap and d.name.startswith("gap ")):
            continue
        if d.name in seen:
            found.add("question", "bed.doubled", f"bed {d.name} stands in row {seen[d.name].row} already",
                      "rename one of the two, or delete the row if it was entered twice", row=d.row, column="bed",
                      cell=d.name, choices=("two beds of one name", "one bed entered twice"),
                      section=d.section, bed=d.name)  # fmt: skip
            continue
        seen[d.name] = d
        match = _NUMBERED.match(d.name)
        if match and len(match[1]) < 9:
            numbers.append((int(match[1]), match[2], d))
    steps = [after[0] - here[0] for here, after in pairwise(numbers)]
    if not steps:
        return
    sign = 1 if sum(s > 0 for s in steps) >= sum(s < 0 for s in steps) else -1
    odd = [(i, s * sign) for i, s in enumerate(steps) if not 0 <= s * sign <= 1]
    if len(odd) > max(5, 0.2 * len(steps)):
        found.add(
            "note",
            "bed.numbering",
            "the bed numbers do not run on; they are taken as names",
            "",
            row=numbers[0][2].row,
            column="bed",
            cell=numbers[0][2].name,
            section=numbers[0][2].section,
        )
        return
    for i, step in odd:
        here, after = numbers[i], numbers[i + 1]
        if step > 1:
            missing = sorted(n for n in range(min(here[0], after[0]) + 1, max(here[0], after[0])))
            listed = (
                f"bed {missing[0]} is" if len(missing) == 1 else f"beds {missing[0]} to {missing[-1]} are"
            )
            _ask_number(after[2], found, "bed.skipped", f"{listed} missing between {here[2].name} and {after[2].name}",
                        "add the row, or leave it if the number was never used",
                        ("a number never used", "a row left out"))  # fmt: skip
        else:
            _ask_number(
                after[2],
                found,
                "bed.order",
                f"bed {after[2].name} follows bed {here[2].name}",
                "check the order of the rows",
                ("the order of the rows", "the order of the numbers"),
            )


def _ask_number(
    d: Draft, found: Collector, code: str, message: str, remedy: str, choices: tuple[str, ...]
) -> None:
    found.add("question", code, message, remedy, row=d.row, column="bed", cell=d.name, choices=choices,
              section=d.section, bed=d.name)  # fmt: skip


def _unit_changes(drafts: Sequence[Draft], found: Collector) -> None:
    """A bare number right below a thickness in feet and inches on a metric sheet, or the other way round."""
    for before, d in pairwise(drafts):
        here, above = d.thickness, before.thickness
        if here is None or above is None or here.unit_written or not above.unit_written or d.asked_unit:
            continue
        other = _IMPERIAL if here.unit in _METRIC else _METRIC
        if above.unit not in other:
            continue
        text = d.cells.get("thickness", "")
        guess = "in" if other is _IMPERIAL else "cm"
        found.add("question", "thickness.unit_before",
                  f"{text} is read in {here.unit}, the unit of the sheet, but the row before is in {above.unit}",
                  "write the unit into the cell", row=d.row, column="thickness", cell=text,
                  choices=(f"{text} {here.unit}", f"{text} {guess}"), section=d.section, bed=d.name)  # fmt: skip
        d.asked_unit = True


def _slips(drafts: Sequence[Draft], found: Collector) -> None:
    """Thicknesses 10 or 100 times their neighbours."""
    rows = [d for d in drafts if d.placed and not d.gap and d.pattern is None]
    lengths = [d.thickness for d in rows]
    for index, slip in find_slips(lengths).items():
        d = rows[index]
        if d.asked_unit or d.thickness is None:
            continue
        times = slip.factor if slip.factor >= 1 else 1 / slip.factor
        noun = "thicker" if slip.factor >= 1 else "thinner"
        text = d.cells.get("thickness", "")
        found.add("question", "thickness.unit_slip",
                  f"{d.thickness.metres:.4g} m is about {times:.2g} times {noun} than the beds around it",
                  "write the unit into the cell, or correct the number; a bed that is so stays as it is",
                  row=d.row, column="thickness", cell=text, choices=(f"{text} as read", slip.words),
                  section=d.section, bed=d.name)  # fmt: skip


def _matter(drafts: Sequence[Draft], found: Collector) -> None:
    """Rows with a place but neither a grain size nor a lithology."""
    for d in drafts:
        if d.row is None or d.gap or d.pattern is not None:
            continue
        if (
            d.fields.get("grain")
            or d.fields.get("lithology")
            or d.cells.get("grain")
            or d.cells.get("lithology")
        ):
            continue
        if d.cells.get("details"):
            continue
        found.add("question", "bed.empty", "the bed has neither a grain size nor a lithology",
                  "add one of them, or a word for a gap such as covered", row=d.row, column="lithology",
                  choices=("a bed not described", "a gap"), section=d.section, bed=d.name)  # fmt: skip


# -- beds ------------------------------------------------------------------------------------------------------


def _sets(beds: Sequence[Bed], found: Collector) -> list[Bed]:
    """Sets thicker than their bed: refused from twice its thickness on, asked about below that."""
    kept: list[Bed] = []
    for bed in beds:
        sets = bed.set_thickness
        limit = bed.thickness_m * (1 + 1e-9)
        if sets is None or max(sets.mean_m or 0.0, sets.high_m) <= limit:
            kept.append(bed)
            continue
        column = next(
            (c for c in ("set_thickness", "structures", "grain") if bed.written_in(c)), "set_thickness"
        )
        size = sets.central_m
        said = f"a set of {size:.3g} m in a bed of {bed.thickness_m:.3g} m"
        if size > _REJECTED * limit:
            _at(bed, found, "error", "sets.thicker_than_bed", f"{said} is not possible",
                "correct the set, the bed or the unit of one of them", column)  # fmt: skip
            bed = replace(bed, set_thickness=None)
        elif size > limit:
            _at(bed, found, "question", "sets.thicker_than_bed", f"{said} is thicker than its bed",
                "check both, or say in the notes where the set was measured", column,
                choices=("as written", "a slip in one of the two"))  # fmt: skip
        else:
            _at(bed, found, "question", "sets.thicker_than_bed",
                f"the thickest set, {sets.high_m:.3g} m, is thicker than its bed of {bed.thickness_m:.3g} m",
                "check both", column, choices=("as written", "a slip in one of the two"))  # fmt: skip
        kept.append(bed)
    return kept


def _relief(beds: Sequence[Bed], found: Collector) -> None:
    """Relief larger than the bed, and what an erosive base says about the bed beneath."""
    for below, bed in zip((None, *beds), beds, strict=False):
        relief = bed.contact.relief_m if bed.contact is not None else None
        if not relief:
            continue
        if relief > bed.thickness_m * (1 + 1e-9):
            _at(bed, found, "question", "contact.relief",
                f"a relief of {relief:.3g} m is larger than the bed of {bed.thickness_m:.3g} m",
                "check the unit of the relief", "relief" if bed.written_in("relief") else "contact",
                choices=("as written", "a slip of unit"))  # fmt: skip
        elif below is not None and not below.is_gap:
            _at(
                bed,
                found,
                "note",
                "contact.minimum_below",
                f"the base cuts {relief:.3g} m down, so bed {below.name} has a minimum thickness",
                "",
                "contact",
            )


def _sizes(beds: Sequence[Bed], codes: str, found: Collector) -> None:
    """Sizes that the lithology or a facies code does not admit; readings outside their bed."""
    rocks = vocabulary("lithologies")
    tables = [code_table(codes), code_table("turbidity")]
    for bed in beds:
        size = bed.size
        if size is None:
            continue
        usual = rocks[bed.lithology].size_mm if bed.lithology in rocks else None
        if usual and (size.low_mm > usual[1] * 1.001 or size.high_mm < usual[0] * 0.999):
            _at(bed, found, "question", "grain.lithology",
                f"{size.label or 'the size'} ({_mm(size.low_mm, size.high_mm)}) is not usual for "
                f"{rocks[bed.lithology].label} ({_mm(*usual)})",
                "check both", "grain" if bed.written_in("grain") else "lithology",
                choices=("as written", "a slip in one of the two"))  # fmt: skip
        _code_sizes(bed, tables, found)
        _structure_sizes(bed, found)


def _structure_sizes(bed: Bed, found: Collector) -> None:
    """The only structure of a bed, written in words, that does not form in its sizes.

    With several structures one of them may sit in a part whose size nobody wrote down.
    """
    terms = vocabulary("structures")
    if len(bed.structures) != 1 or bed.structures[0].code or bed.structures[0].term not in terms:
        return
    term = terms[bed.structures[0].term]
    limits = term.size_mm
    if limits is None or any(s.size.low_mm < limits[1] and s.size.high_mm > limits[0] for s in bed.grain):
        return
    size = bed.size
    label = size.label if size is not None and size.label else "the size written"
    _at(bed, found, "question", "structures.size", f"{term.label}: known from {_mm(*limits)}, not from {label}",
        "check the structure and the size", "structures",
        choices=("as written", "a slip in one of the two"))  # fmt: skip


def _code_sizes(bed: Bed, tables: Sequence[CodeTable], found: Collector) -> None:
    """A facies code that does not admit the size; divisions of a sequence are not asked one by one."""
    codes = list(dict.fromkeys(s.code for s in bed.structures if s.code))
    if len(codes) > 1 and codes[0].startswith(("T", "S1", "S2", "S3", "R")):
        return
    for name in codes:
        code = next((t.codes[name] for t in tables if name in t.codes), None)
        if (
            code is None
            or code.size_mm is None
            or any(code.admits(s.size.low_mm, s.size.high_mm) for s in bed.grain)
        ):
            continue
        size = bed.size
        label = size.label if size is not None and size.label else "the size written"
        _at(bed, found, "question", "structures.code_size",
            f"code {name} ({code.words}) admits {_mm(*code.size_mm)}, not {label}",
            "check the code and the size", "structures", choices=("as written", "another code"))  # fmt: skip


def _trend_words(drafts: Sequence[Draft], found: Collector) -> None:
    """A range of sizes where grading may have been meant: the coarse end first, or a trend in the notes."""
    for d in drafts:
        states: tuple[GrainState, ...] = d.fields.get("grain", ())
        text = d.cells.get("grain", "")
        if len(states) != 1 or "-" not in states[0].size.label:
            continue
        fine, _, coarse = states[0].size.label.partition("-")
        match = _TREND.search(d.cells.get("notes", ""))
        if match:
            pair = (coarse, fine) if match[0].casefold().startswith(("f", "n")) else (fine, coarse)
            message = f"the notes say {match[0]!r}, but {text!r} is written as a range"
        elif "/" not in text and _coarse_first(text, fine, coarse):
            pair = (coarse, fine)
            message = f"the range {text!r} is written with the coarse end first"
        else:
            continue
        found.add("question", "grain.range_or_grading", f"{message}; it is read as a range, not graded",
                  f"write {pair[0]}→{pair[1]} if grading was meant", row=d.row, column="grain", cell=text,
                  choices=(f"range {fine}-{coarse}", f"grading {pair[0]}→{pair[1]}"),
                  section=d.section, bed=d.name)  # fmt: skip


def _coarse_first(text: str, fine: str, coarse: str) -> bool:
    first, second = text.find(coarse), text.find(fine)
    return first >= 0 and second > first


def _mm(low: float, high: float) -> str:
    return f"{low:.3g}-{high:.3g} mm"


def _currents(beds: Sequence[Bed], header: Header, found: Collector) -> None:
    """Palaeocurrents as read, without declination or bedding to correct them."""
    rows = sorted((bed for bed in beds if bed.currents), key=lambda bed: bed.row or 0)
    if not rows:
        return
    count = counted(sum(len(bed.currents) for bed in rows), "palaeocurrent reading")
    tilted = any(c.nature != "azimuth" for bed in rows for c in bed.currents)
    lacking = []
    if header.declination_deg is None:
        lacking.append("declination")
    if header.bedding is None:
        lacking.append("bedding (for the tilt correction)")
    if not lacking:
        _at(
            rows[0],
            found,
            "note",
            "currents.as_read",
            f"{count} as read; declination and tilt are taken off where directions are used",
            "",
            "palaeocurrent",
        )
        return
    missing = " and no ".join(lacking)
    _at(rows[0], found, "question", "currents.correction",
        f"{count} taken as read, since the header gives no {missing}; they may be corrected already",
        "add the header lines; write declination: 0 and bedding: 0/0 when they are corrected", "palaeocurrent",
        choices=("as read, to be corrected" if tilted else "as read", "corrected already"))  # fmt: skip


def _opposed(beds: Sequence[Bed], header: Header, found: Collector) -> None:
    """Directions in one bed that point against each other, where no reversing flow explains it."""
    if header.setting in ("tidal", "waves", "combined"):
        return
    for bed in beds:
        azimuths = [_flow_azimuth(c) for c in bed.currents if c.sense == "direction"]
        if len(azimuths) < 2 or any(s.term == "herringbone_cross_bedding" for s in bed.structures):
            continue
        apart = max(abs((a - b + 180.0) % 360.0 - 180.0) for a, b in combinations(azimuths, 2))
        if apart < _OPPOSED_DEG:
            continue
        east = sum(math.sin(math.radians(a)) for a in azimuths) / len(azimuths)
        north = sum(math.cos(math.radians(a)) for a in azimuths) / len(azimuths)
        length = math.hypot(east, north)
        mean = f"vector mean {math.degrees(math.atan2(east, north)) % 360.0:.0f}, " if length > 0.05 else ""
        _at(bed, found, "question", "currents.opposed",
            f"directions up to {apart:.0f} degrees apart ({mean}R {length:.2f}, N {len(azimuths)}, as read)",
            "check the reading that points the other way", "palaeocurrent",
            choices=("as written", "a slip of 180 degrees"))  # fmt: skip


def _flow_azimuth(current: CurrentReading) -> float:
    """Azimuth towards which the water went, before tilt is removed."""
    indicators = vocabulary("indicators")
    upstream = current.indicator in indicators and indicators[current.indicator].upstream
    return (
        (current.azimuth_deg + 180.0) % 360.0
        if upstream and current.nature == "plane"
        else current.azimuth_deg
    )
