"""One row into a draft of a bed: every cell is given to its reader, and what the readers say is collected.

Only what can be said from the row alone belongs here. Positions are settled in `positions`, comparisons between
rows in `checks`.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import replace
from typing import Any

from logkit.model import Contact, CurrentReading, GrainState, SetThickness, Structure
from logkit.tables.cells.contact import read_contact_cell
from logkit.tables.cells.core import read_core_note
from logkit.tables.cells.currents import read_currents
from logkit.tables.cells.grain import read_grain, read_largest, read_size, read_sorting
from logkit.tables.cells.lengths import Length, is_span, read_length, read_span
from logkit.tables.cells.other import (
    BioturbationCell,
    read_bioturbation_cell,
    read_colour,
    read_fossils,
    read_interval,
    read_marker,
    read_number,
    read_photos,
    read_samples,
)
from logkit.tables.cells.pattern import read_pattern
from logkit.tables.cells.reading import Reading, Remark
from logkit.tables.cells.rock import read_lithology
from logkit.tables.cells.sets import read_sets
from logkit.tables.cells.structures import read_structures
from logkit.tables.draft import Draft, Manner
from logkit.tables.gaps import find_gap, gap_with_length
from logkit.tables.refusals import refuse_cells
from logkit.tables.sheet import Collector
from logkit.vocabulary import vocabulary

ON_GAPS = frozenset({"name", "notes", "samples", "photos", "marker", "marker_sure", "confidence", "colour"})
"""Fields that a gap may have; a grain size in a gap is asked about."""

_PATTERN = re.compile(r"\d\s*[x×*]\s*\(|\d\s*[x×]\s*\[", re.I)
_CORE_WORDS = re.compile(r"\b(?:cut|rec|recov\w*|core)\b", re.I)
_BARE_SIZES = re.compile(r"^[\s\d.,;~<>=→/-]*\d[\s\d.,;~<>=→/-]*$")
_HAS_UNIT = re.compile(r"(?<![a-z])(?:mm|cm|µm|um|μm|m|in|ft|phi|φ|microns?)\b|[φ\"']", re.I)
_SIZE_UNITS = frozenset({"mm", "cm", "µm", "um", "phi", "m", "in"})


def read_row(draft: Draft, manner: Manner, found: Collector) -> Draft:
    """Fill a draft from its cells; what is remarked goes to `found` with row and column."""
    RowReader(draft, manner, found).read()
    return draft


class RowReader:
    """Reads the cells of one row. `say` places what a cell reader remarked."""

    def __init__(self, draft: Draft, manner: Manner, found: Collector) -> None:
        self.draft = draft
        self.cells = draft.cells
        self.manner = manner
        self.found = found
        self.ends: list[GrainState] = []

    def read(self) -> None:
        """Everything the row says, into the draft."""
        refuse_cells(self.draft, self.manner, self.found)
        self._position()
        self._gap()
        for column, read in _READERS.items():
            text = self.cells.get(column)
            if text:
                read(self, column, text)
        if self.ends:
            self._join_ends()
        if self.draft.gap:
            self._keep_what_a_gap_has()

    def say(self, remarks: tuple[Remark, ...], column: str, text: str) -> None:
        """Turn remarks into findings of this row."""
        for remark in remarks:
            self.found.remark(remark, row=self.draft.row, column=column, cell=text,
                              section=self.draft.section, bed=self.draft.name)  # fmt: skip

    def take(self, reading: Reading[Any], column: str, text: str) -> Any:
        """The value of a reading, its remarks said."""
        if reading.remarks:
            self.say(reading.remarks, column, text)
        return reading.value

    def add(self, level: Any, code: str, message: str, remedy: str, column: str, **more: Any) -> None:
        """A finding of this row."""
        self.found.add(level, code, message, remedy, row=self.draft.row, column=column,
                       cell=more.pop("cell", self.cells.get(column, "")), section=self.draft.section,
                       bed=self.draft.name, **more)  # fmt: skip

    def put(self, field: str, value: Any) -> None:
        """Give a field a value unless another cell gave it one already."""
        if value is not None and value != "" and value != () and not self.draft.fields.get(field):
            self.draft.fields[field] = value

    # -- positions ---------------------------------------------------------------------------------------------

    def _position(self) -> None:
        draft = self.draft
        for column, name in _POSITIONS.items():
            text = self.cells.get(column)
            if not text:
                continue
            if is_span(text):
                self._span(column, text)
            else:
                setattr(draft, name, self._length(column, text))
        text = self.cells.get("thickness")
        if text:
            self._thickness(text)
        self._core()

    def _length(self, column: str, text: str) -> Length | None:
        reading = read_length(text, self.manner.unit_of(column))
        if reading.failed:
            self.draft.unplaced = True
        self.draft.asked_unit |= any(r.code == "length.comma_unit" for r in reading.remarks)
        value: Length | None = self.take(reading, column, text)
        return value

    def _span(self, column: str, text: str) -> None:
        reading = read_span(text, self.manner.unit_of(column))
        span = self.take(reading, column, text)
        if span is None:
            self.draft.unplaced = True
        else:
            self.draft.low, self.draft.high = span.low, span.high

    def _thickness(self, text: str) -> None:
        draft, unit = self.draft, self.manner.unit_of("thickness")
        if _PATTERN.search(text):
            draft.pattern = self.take(read_pattern(text, unit, self.manner.scale), "thickness", text)
            draft.unplaced |= draft.pattern is None
            return
        if is_span(text):
            self._span("thickness", text)
            return
        reason, rest = gap_with_length(text)
        if reason:
            draft.gap, text = reason, rest
            if not text:
                return
        length = self._length("thickness", text)
        if length is not None and length.metres <= 0:
            self.add(
                "error",
                "thickness.not_positive",
                "a thickness must be above zero",
                "correct the number",
                "thickness",
            )
            draft.unplaced = True
            return
        draft.thickness = length

    def _core(self) -> None:
        """What was cut and recovered, from its own column or from the bed and notes cells of an unplaced row."""
        for column in ("core", "bed", "notes"):
            text = self.cells.get(column, "")
            if not text or not _CORE_WORDS.search(text) or not any(c.isdigit() for c in text):
                continue
            if column != "core" and not re.search(r"\bcut\b.*\brec", text, re.I | re.S):
                continue
            reading = read_core_note(text, self.manner.unit)
            if column == "core" or reading.value is not None:
                note = self.take(reading, column, text)
                if note is None:
                    return
                self.draft.core = note
                if note.span is not None and not self._has_place():
                    self.draft.low, self.draft.high = note.span.low, note.span.high
                return

    def _has_place(self) -> bool:
        d = self.draft
        return any(
            x is not None for x in (d.thickness, d.base, d.top, d.first, d.last, d.height, d.low, d.pattern)
        )

    # -- gaps --------------------------------------------------------------------------------------------------

    def _gap(self) -> None:
        draft = self.draft
        written = self.cells.get("gap")
        if draft.gap:
            return
        if not written:
            find_gap(draft)
            return
        terms = vocabulary("gaps")
        known = terms.find(written.replace("_", " "))
        draft.gap = known.id if known else ""
        if not known:
            near = terms.nearest(written) or ""
            self.add("error", "gap.unknown", "this is no known reason for a gap", "use one of the words", "gap",
                     allowed=terms.ids, nearest=near)  # fmt: skip

    def _keep_what_a_gap_has(self) -> None:
        fields = self.draft.fields
        lost = [name for name in fields if name not in ON_GAPS]
        if lost:
            words = ", ".join(name.replace("_", " ") for name in lost)
            self.add("question", "gap.with_data", f"a gap has no data, but the row gives {words}, which is left out",
                     "take out the word for the gap or the other cells", "",
                     choices=("a gap", "a bed"))  # fmt: skip
            self.draft.fields = {name: value for name, value in fields.items() if name in ON_GAPS}

    # -- what the row describes --------------------------------------------------------------------------------

    def grain(self, column: str, text: str) -> None:
        """The grain cell, with all that people write beside a size."""
        reading = read_grain(self._with_unit(column, text), self.manner.scale)
        cell = self.take(reading, column, text)
        if cell is None:
            return
        self.put("grain", cell.states)
        self.put("largest", cell.largest)
        self.put("sorting", cell.sorting)
        if len(cell.states) <= 1:
            self.put("d50_mm", cell.d50_mm)
        self._rock(cell.lithology, cell.qualifiers, column)
        self._more_structures(cell.structures)

    def grain_end(self, column: str, text: str) -> None:
        """Size at the base or at the top of the bed."""
        size = self.take(read_size(self._with_unit(column, text), self.manner.scale), column, text)
        if size is None:
            return
        self.ends.append(GrainState(0.0 if column == "grain_base" else 1.0, size))

    def _join_ends(self) -> None:
        ends = tuple(self.ends)
        if len(ends) == 1:
            ends = (replace(ends[0], fraction=0.0),)
        if len(ends) == 2 and self.draft.fields.pop("grain", None):
            self.add("note", "grain.ends_first", "sizes at base and top stand beside a size of the bed; they count",
                     "", "grain")  # fmt: skip
        self.put("grain", ends)

    def median(self, column: str, text: str) -> None:
        """A measured median; it is the size of the bed where no other is written."""
        size = self.take(read_size(self._with_unit(column, text), self.manner.scale), column, text)
        if size is None:
            return
        if size.low_mm != size.high_mm:
            self.add("error", "d50.not_measured", f"{text[:60]!r} is a class or a range, not a measured median",
                     "write one size with its unit, for example 0.25 mm, or use the column grain", column)  # fmt: skip
            return
        self.draft.fields["d50_mm"] = size.low_mm
        if not any(self.cells.get(name) for name in ("grain", "grain_base", "grain_top")):
            self.put("grain", (GrainState(0.0, size),))

    def largest(self, column: str, text: str) -> None:
        """The largest clasts."""
        self.put("largest", self.take(read_largest(self._with_unit(column, text)), column, text))

    def _with_unit(self, column: str, text: str) -> str:
        """The text with the unit of the heading, where the cell is numbers only."""
        unit = self.manner.units.get(column)
        if unit not in _SIZE_UNITS or _HAS_UNIT.search(text):
            return text
        bare = _BARE_SIZES.match(text) or (
            column == "largest" and _BARE_SIZES.match(re.sub(r"^[A-Za-z ]+", "", text))
        )
        return f"{text} {unit}" if bare else text

    def lithology(self, column: str, text: str) -> None:
        """The rock name with its qualifiers, and a size some people write there."""
        cell = self.take(read_lithology(text, self.manner.scale), column, text)
        if cell is None:
            return
        self._rock(cell.lithology, cell.qualifiers, column)
        if not self.cells.get("grain"):
            self.put("grain", cell.grain)
        self.put("largest", cell.largest)
        self._more_structures(cell.structures)

    def _rock(self, lithology: str, qualifiers: tuple[str, ...], column: str) -> None:
        fields = self.draft.fields
        had = fields.get("lithology", "")
        if (
            lithology
            and had
            and had != lithology
            and column == "grain"
            and lithology not in ("sandstone", "sand")
        ):
            self.add("question", "lithology.two", f"the row names {had} and {lithology}; {had} is taken",
                     "keep one of them", column, choices=(had, lithology))  # fmt: skip
        self.put("lithology", lithology)
        if qualifiers:
            fields["qualifiers"] = tuple(dict.fromkeys((*fields.get("qualifiers", ()), *qualifiers)))

    def structures(self, column: str, text: str) -> None:
        """Structures with all that stands beside them: sets, climb, bioturbation, a rock from a code."""
        cell = self.take(read_structures(text, self.manner.codes, self.manner.unit), column, text)
        if cell is None:
            return
        had = self.draft.fields.pop("structures", ())
        self.put("structures", cell.structures)
        self._more_structures(had)
        self.put("structures_upward", cell.upward)
        self._more_currents(cell.currents)
        for name in (
            "set_thickness",
            "climb_angle_deg",
            "ripple_wavelength_m",
            "ripple_height_m",
            "bioturbation",
            "fossils",
        ):
            self.put(name, getattr(cell, name))
        self._rock(cell.lithology, cell.qualifiers, column)

    def _more_structures(self, structures: tuple[Structure, ...]) -> None:
        if structures:
            have = self.draft.fields.get("structures", ())
            terms = {s.term for s in have}
            self.draft.fields["structures"] = have + tuple(s for s in structures if s.term not in terms)

    def sets(self, column: str, text: str) -> None:
        """Set thickness; a column of its own counts before the structures cell."""
        value = self.take(read_sets(text, self.manner.unit_of(column)), column, text)
        if value is not None:
            self.draft.fields["set_thickness"] = value

    def set_count(self, column: str, text: str) -> None:
        """Number of sets, into the set thickness."""
        count = self.take(read_number(text, 1, 100000), column, text)
        sets: SetThickness | None = self.draft.fields.get("set_thickness")
        if count is None:
            return
        if sets is None:
            self.add("note", "sets.count_alone", "a number of sets without their thickness is kept as written only",
                     "write the set thickness too", column)  # fmt: skip
        elif sets.count is None:
            self.draft.fields["set_thickness"] = replace(sets, count=int(count))

    def contact(self, column: str, text: str) -> None:
        """The base contact."""
        cell = self.take(read_contact_cell(text, self.manner.unit), column, text)
        if cell is None:
            return
        self.put("contact", cell.contact)
        self._more_structures(cell.structures)
        self._more_currents(cell.currents)

    def relief(self, column: str, text: str) -> None:
        """Relief of the base, into the contact."""
        length = self.take(read_length(text, self.manner.unit_of(column)), column, text)
        if length is None:
            return
        contact: Contact = self.draft.fields.get("contact") or Contact("erosive")
        self.draft.fields["contact"] = replace(contact, relief_m=length.metres)

    def length_field(self, column: str, text: str) -> None:
        """A length that goes straight into a field."""
        length = self.take(read_length(text, self.manner.unit_of(column)), column, text)
        if length is not None and length.metres <= 0:
            self.add(
                "error", "length.not_positive", "this length must be above zero", "correct the number", column
            )
        elif length is not None:
            self.draft.fields[f"{column}_m"] = length.metres

    def period(self, column: str, text: str) -> None:
        """Wave period, s."""
        self.put("wave_period_s", self.take(read_number(text.rstrip("s "), 0.1, 3600), column, text))

    def interval(self, column: str, text: str) -> None:
        """A known flow depth or slope as a range; a depth is in metres unless its heading or cell says else."""
        unit = (self.manner.units.get(column) or "m") if column == "flow_depth" else None
        if (
            unit
            and not self.manner.units.get(column)
            and self.manner.unit not in (None, "m")
            and text[-1:].isdigit()
        ):
            self.add("note", "flow_depth.metres", f"read in metres, though thicknesses are in {self.manner.unit}",
                     "write the unit into the heading", column)  # fmt: skip
        value = self.take(read_interval(text, unit), column, text)
        if value is None:
            return
        if not 0 < value[0] <= value[1]:
            self.add(
                "error",
                f"{column}.not_positive",
                "this must be above zero and rise",
                "correct the number",
                column,
            )
            return
        self.draft.fields["flow_depth_m" if column == "flow_depth" else "slope"] = value

    def currents(self, column: str, text: str) -> None:
        """Palaeocurrent readings as written; without a name they are on the first structure of the bed."""
        structures = self.draft.fields.get("structures", ())
        hint = structures[0].term if structures else ""
        self._more_currents(self.take(read_currents(text, hint), column, text) or ())

    def _more_currents(self, currents: tuple[CurrentReading, ...]) -> None:
        if currents:
            self.draft.fields["currents"] = self.draft.fields.get("currents", ()) + currents

    def bioturbation(self, column: str, text: str) -> None:
        """Bioturbation grade, and the fossils named beside it."""
        cell: BioturbationCell | None = self.take(read_bioturbation_cell(text), column, text)
        if cell is None:
            return
        if cell.bioturbation is not None:
            self.draft.fields["bioturbation"] = cell.bioturbation
        self.put_all("fossils", (*self.draft.fields.get("fossils", ()), *cell.fossils))

    def fossils(self, column: str, text: str) -> None:
        """Fossils, added to those of the structures cell."""
        value = self.take(read_fossils(text), column, text) or ()
        have = self.draft.fields.get("fossils", ())
        self.put_all("fossils", (*have, *value))

    def put_all(self, field: str, values: tuple[str, ...]) -> None:
        """Several ids into a field, each once."""
        if values:
            self.draft.fields[field] = tuple(dict.fromkeys(values))

    def marker(self, column: str, text: str) -> None:
        """Marker and whether it is sure."""
        value = self.take(read_marker(text), column, text)
        if value is not None:
            self.draft.fields["marker"], self.draft.fields["marker_sure"] = value

    def plain(self, column: str, text: str) -> None:
        """Text that is kept as it is."""
        self.draft.fields[column] = text

    def measured(self, column: str, text: str) -> None:
        """Whether the layer was measured or comes from a counted pattern."""
        if text.casefold() in ("no", "n", "false", "0", "counted"):
            self.draft.fields["measured"] = False


def _simple(read: Callable[[str], Reading[Any]], field: str) -> Callable[[RowReader, str, str], None]:
    def into(reader: RowReader, column: str, text: str) -> None:
        value = reader.take(read(text), column, text)
        if value is not None:
            reader.draft.fields[field] = value

    return into


_POSITIONS = {"base": "base", "top": "top", "from": "first", "to": "last", "position": "height"}
_READERS: dict[str, Callable[[RowReader, str, str], None]] = {
    "lithology": RowReader.lithology,
    "grain": RowReader.grain,
    "grain_base": RowReader.grain_end,
    "grain_top": RowReader.grain_end,
    "d50": RowReader.median,
    "largest": RowReader.largest,
    "sorting": _simple(read_sorting, "sorting"),
    "structures": RowReader.structures,
    "set_thickness": RowReader.sets,
    "set_count": RowReader.set_count,
    "ripple_wavelength": RowReader.length_field,
    "ripple_height": RowReader.length_field,
    "wave_period": RowReader.period,
    "contact": RowReader.contact,
    "relief": RowReader.relief,
    "palaeocurrent": RowReader.currents,
    "flow_depth": RowReader.interval,
    "slope": RowReader.interval,
    "bioturbation": RowReader.bioturbation,
    "colour": _simple(read_colour, "colour"),
    "fossils": RowReader.fossils,
    "samples": _simple(read_samples, "samples"),
    "photos": _simple(read_photos, "photos"),
    "marker": RowReader.marker,
    "confidence": RowReader.plain,
    "notes": RowReader.plain,
    "measured": RowReader.measured,
}
