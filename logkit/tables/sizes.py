"""In-bed size readings: the sheet `sizes` or the file `NAME.sizes.csv`, and their place in the beds.

Reading and placing belong here; grading is found elsewhere.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from logkit.errors import nearest
from logkit.model import Bed, Header, Log, SizeReading
from logkit.tables.cells.lengths import number, read_length
from logkit.tables.headings import Headings, find_headings
from logkit.tables.sheet import Collector, Row, Sheet
from logkit.tables.text import plain_cell

_TOLERANCE_M = 1e-6
_LONGEST_CELL = 100
_SMALLEST_MM, _LARGEST_MM = 1e-5, 2e4


@dataclass(frozen=True, slots=True)
class SizeRow:
    """One reading as written: which bed, where in it, what was measured."""

    row: int | None
    section: str
    bed: str
    above_base_m: float | None
    position_m: float | None
    reading: SizeReading
    cell: str


@dataclass(frozen=True, slots=True)
class SizeRows:
    """All readings of a sheet or file."""

    file: str
    sheet: str
    rows: tuple[SizeRow, ...]


def read_sizes(sheet: Sheet, found: Collector) -> SizeRows:
    """The readings of a sheet; rows that cannot be read are found and left out."""
    headings = find_headings(sheet, found, sizes=True)
    empty = SizeRows(sheet.file, sheet.name, ())
    if headings is None:
        found.add("error", "sizes.no_headings", "the table of sizes has no headings that are known",
                  "use section, bed, height_in_bed (cm) and d50 (mm)")  # fmt: skip
        return empty
    lacking = [words for names, words in _NEEDED if not headings.names & names]
    if lacking:
        found.add("error", "sizes.missing", f"the table of sizes has no column for {' and none for '.join(lacking)}",
                  "add the column", row=headings.row.number)  # fmt: skip
        return empty
    rows = [_row(row, headings, found) for row in sheet.rows if not row.is_blank]
    return SizeRows(sheet.file, sheet.name, tuple(row for row in rows if row is not None))


_NEEDED = (
    (frozenset({"d50"}), "the median d50"),
    (frozenset({"bed", "position_m"}), "the bed"),
    (frozenset({"height_in_bed", "position_m"}), "the height in the bed"),
)


def _row(row: Row, headings: Headings, found: Collector) -> SizeRow | None:
    cells = {c.name: row.cells[c.index] for c in headings.columns if c.name and c.index < len(row.cells)}
    units = {c.name: c.unit for c in headings.columns if c.name}
    failed = len(found.found)
    for name, text in cells.items():
        if len(text) > _LONGEST_CELL and name not in ("method", "bed", "section"):
            found.add("error", "cell.too_long", f"the cell has {len(text)} characters", "write one number",
                      row=row.number, column=name, cell=text)  # fmt: skip
            return None
    sizes = {
        name: _size(name, cells.get(name, ""), units.get(name), row, found)
        for name in ("d50", "d10", "d90", "d95")
    }
    above = _length("height_in_bed", cells, units, row, found)
    position = _length("position_m", cells, units, row, found)
    count = _count(cells.get("count", ""), row, found)
    if any(f.level == "error" for f in found.found[failed:]):
        return None
    d50 = sizes["d50"]
    if d50 is None or (above is None and position is None):
        found.add("error", "sizes.incomplete", "a reading needs a median and a height in the bed", "fill both cells",
                  row=row.number, column="d50" if d50 is None else "height_in_bed")  # fmt: skip
        return None
    d10, d90, d95 = sizes["d10"], sizes["d90"], sizes["d95"]
    ordered = [v for v in (d10, d50, d90, d95) if v is not None]
    if ordered != sorted(ordered):
        found.add("question", "sizes.order", "the percentiles do not rise from d10 to d95 (d10 is the finest)",
                  "check the columns; d10 is the size than which 10 % is finer", row=row.number, column="d50",
                  choices=("as written", "columns exchanged"))  # fmt: skip
    reading = SizeReading(
        position if position is not None else 0.0, d50, d10, d90, d95, count, cells.get("method", "")
    )
    return SizeRow(row.number, cells.get("section", ""), cells.get("bed", ""), above, position, reading,
                   cells.get("position_m") or cells.get("height_in_bed", ""))  # fmt: skip


def _size(name: str, text: str, unit: str | None, row: Row, found: Collector) -> float | None:
    """A grain size in mm; bare numbers are in the unit of the heading, mm without one."""
    if not text:
        return None
    if unit == "phi":
        value = number(text)[0]
        size = 2.0**-value if value is not None and abs(value) < 20 else None
    else:
        reading = read_length(text, unit or "mm")
        exact = number(text)[0]
        size = reading.value.metres * 1000 if reading.value is not None else None
        if size is not None and exact is not None and unit in (None, "mm"):
            size = exact  # a number of mm stays the number that was written
        elif size is not None:
            size = float(f"{size:.12g}")
    if size is None or not _SMALLEST_MM <= size <= _LARGEST_MM or not math.isfinite(size):
        found.add("error", "sizes.unreadable", f"{text[:40]!r} is not a grain size", "write a number in mm",
                  row=row.number, column=name, cell=text)  # fmt: skip
        return None
    return size


def _length(
    name: str, cells: dict[str, str], units: dict[str, str | None], row: Row, found: Collector
) -> float | None:
    text = cells.get(name, "")
    if not text:
        return None
    unit = units.get(name)
    if unit is None and number(text)[0] is not None:
        unit = "cm" if name == "height_in_bed" else "m"
        asked = any(f.code == "sizes.unit" and f.column == name for f in found.found)
        if not asked:
            found.add("question", "sizes.unit", f"no unit is given for {name}; read in {unit}",
                      "add the unit to the heading", row=row.number, column=name, cell=text,
                      choices=tuple(dict.fromkeys((unit, "m", "cm"))))  # fmt: skip
    reading = read_length(text, unit)
    if reading.value is None:
        for remark in reading.remarks:
            found.remark(remark, row=row.number, column=name, cell=text)
        return None
    return reading.value.metres


def _count(text: str, row: Row, found: Collector) -> int | None:
    if not text:
        return None
    value = number(text)[0]
    if value is None or value < 1 or value != int(value) or value > 1e9:
        found.add("question", "sizes.count", f"{text[:40]!r} is no number of grains; left out", "write a whole number",
                  row=row.number, column="count", cell=text, choices=("no count",))  # fmt: skip
        return None
    return int(value)


def add_sizes(logs: Sequence[Log], sizes: SizeRows) -> list[Log]:
    """All logs of a file with the readings that belong to their beds, and with what was found on the way.

    A reading without a section belongs to the only log that has its bed.
    """
    if not any(log.beds for log in logs):
        return list(logs)
    own = Collector(file=sizes.file, sheet=sizes.sheet)
    tables = [_Beds(log) for log in logs]
    for row in sizes.rows:
        table = _table_of(row, tables, own)
        if table is not None:
            table.take(row, own)
    result = []
    for table in tables:
        section = table.log.header.section
        said = [f for f in own.found if len(logs) == 1 or not f.section or f.section == section]
        result.append(replace(table.log, beds=table.filled(), findings=(*table.log.findings, *said)))
    return result


def _table_of(row: SizeRow, tables: Sequence[_Beds], found: Collector) -> _Beds | None:
    """The log a reading belongs to; None, with an error, when it cannot be told."""
    owners = [t for t in tables if not row.section or not t.section or t.section == row.section]
    if not owners:
        names = [t.section for t in tables]
        found.add("error", "sizes.no_section", f"{row.section!r} is no section of the table", "correct the section",
                  row=row.row, column="section", cell=row.section, allowed=names,
                  nearest=nearest(row.section, names) or "")  # fmt: skip
        return None
    if len(owners) == 1:
        return owners[0]
    having = [t for t in owners if row.bed in t.by_name]
    if len(having) == 1:
        return having[0]
    names = [t.section for t in having or owners]
    what = (
        f"bed {row.bed!r} is in {len(having) or 'none'} of the sections" if row.bed else "no section is named"
    )
    found.add("error", "sizes.which_section", what, "write the section into a column section",
              row=row.row, column="section", cell=row.bed, allowed=names)  # fmt: skip
    return None


class _Beds:
    """The beds of one log with the readings placed in them so far."""

    def __init__(self, log: Log) -> None:
        self.log = log
        self.section = plain_cell(log.header.section)
        self.by_name: dict[str, int] = {}
        for index, bed in enumerate(log.beds):
            self.by_name.setdefault(plain_cell(bed.name), index)
        self.placed: dict[int, list[SizeReading]] = {}

    def take(self, row: SizeRow, found: Collector) -> None:
        """Place a reading, or say why it has no place."""
        header = self.log.header
        owner = _bed_of(row, self.log.beds, self.by_name, header, found)
        if owner is None:
            return
        bed = self.log.beds[owner]
        position = _position(row, bed, header)
        if not bed.base_m - _TOLERANCE_M <= position <= bed.top_m + _TOLERANCE_M:
            found.add("error", "sizes.outside_bed",
                      f"the reading lies outside bed {bed.name}, which is {bed.thickness_m:.4g} m thick",
                      "correct the height or the bed", row=row.row, column="height_in_bed", cell=row.cell,
                      section=header.section, bed=bed.name)  # fmt: skip
            return
        self.placed.setdefault(owner, []).append(replace(row.reading, position_m=position))

    def filled(self) -> tuple[Bed, ...]:
        """The beds with their readings, each upward."""
        beds = list(self.log.beds)
        for index, readings in self.placed.items():
            beds[index] = replace(beds[index], sizes=tuple(sorted(readings, key=lambda r: r.position_m)))
        return tuple(beds)


def _position(row: SizeRow, bed: Bed, header: Header) -> float:
    if row.position_m is not None:
        return -row.position_m if header.direction == "down" else row.position_m
    return round(bed.base_m + (row.above_base_m or 0.0), 9)


def _bed_of(
    row: SizeRow, beds: Sequence[Bed], by_name: dict[str, int], header: Header, found: Collector
) -> int | None:
    """Index of the bed of a reading: by its name, else by its position."""
    # names are compared as cells hold them
    if row.position_m is not None:
        height = -row.position_m if header.direction == "down" else row.position_m
        inside = [
            i for i, bed in enumerate(beds)
            if not bed.is_gap and bed.base_m - _TOLERANCE_M <= height <= bed.top_m + _TOLERANCE_M
            and (not row.bed or plain_cell(bed.name) == row.bed)
        ]  # fmt: skip
        if inside:
            return inside[0]
    index = by_name.get(row.bed)
    if index is not None and not beds[index].is_gap:
        return index
    what = "a gap" if index is not None else "no bed of the table"
    found.add("error", "sizes.no_bed", f"{row.bed!r} is {what}" if row.bed else "no bed lies at this position",
              "correct the bed", row=row.row, column="bed", cell=row.bed, section=header.section)  # fmt: skip
    return None
