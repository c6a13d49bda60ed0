"""Columns found by their headings, in any order and case, with a unit in brackets or behind an underscore.

Only headings belong here: which canonical column each is, and which unit its cells have when they name none.
The words people write for a column are data (`columns.toml` and `size_columns.toml` of the vocabulary).
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from logkit.tables.cells.lengths import unit_symbol
from logkit.tables.sheet import Collector, Row, Sheet
from logkit.vocabulary import vocabulary
from logkit.words import counted

_PLACES = frozenset({"thickness", "base", "top", "position", "from", "to"})
_MATTER = frozenset({"grain", "lithology", "grain_base", "grain_top", "structures"})
_LONGEST_HEADING = 100
_MOST_NAMED = 12
_BRACKETS = re.compile(r"^(?P<name>.*?)\s*[\[({]\s*(?P<unit>[^\])}]*)\s*[\])}]\s*$")
_SIZE_UNITS = {"phi": "phi", "φ": "phi", "Φ": "phi", "ϕ": "phi"}
_OTHER_UNITS = {
    "s": "s",
    "sec": "s",
    "deg": "deg",
    "°": "deg",
    "degrees": "deg",
    "%": "%",
    "m/m": "1",
    "-": "1",
}


@dataclass(frozen=True, slots=True)
class Column:
    """One column of a sheet.

    Attributes
    ----------
    index : place in the row
    name : canonical name, "" for a heading nobody knows
    heading : as written
    unit : symbol of the unit in the heading, None without
    """

    index: int
    name: str
    heading: str
    unit: str | None = None


@dataclass(frozen=True, slots=True)
class Headings:
    """The columns of a sheet and the row they stand in."""

    columns: tuple[Column, ...]
    row: Row

    def get(self, name: str) -> Column | None:
        """The column with a canonical name, None when the sheet has none."""
        return next((c for c in self.columns if c.name == name), None)

    @property
    def names(self) -> frozenset[str]:
        """Canonical names present."""
        return frozenset(c.name for c in self.columns if c.name)


@lru_cache(maxsize=4096)
def match_heading(heading: str, sizes: bool = False) -> tuple[str, str | None, bool]:
    """Canonical name, unit and whether a unit was written that nobody knows, of one heading.

    Examples
    --------
    >>> match_heading("Top [ft]"), match_heading("base_m")
    (('top', 'ft', False), ('base', 'm', False))
    """
    if len(heading) > _LONGEST_HEADING:
        return "", None, False
    plain = " ".join(heading.replace("\ufeff", "").strip().strip("#:").split())
    if not plain:
        return "bed" if heading.strip() == "#" and not sizes else "", None, False
    bracket = _BRACKETS.match(plain)
    if bracket and (name := _find(bracket["name"], sizes)):
        unit = _unit(bracket["unit"])
        return name, unit, bool(bracket["unit"]) and unit is None
    for mark in ("_", " ", ",", "/"):
        stem, parted, tail = plain.rpartition(mark)
        if (
            parted
            and (unit := _unit(tail))
            and (name := _find(stem.rstrip(" ,"), sizes) or _find_before_in(stem, sizes))
        ):
            return name, unit, False
    return _find(plain, sizes), None, False


def _find_before_in(stem: str, sizes: bool) -> str:
    """The column of `Thickness in cm`, whose stem ends in the word `in`."""
    plain = stem.rstrip(" ,")
    return _find(plain[:-3], sizes) if plain.casefold().endswith(" in") else ""


def _find(text: str, sizes: bool) -> str:
    plain = " ".join(text.replace("_", " ").casefold().strip(" .:").split())
    if not plain:
        return ""
    known = vocabulary("size_columns" if sizes else "columns")
    if plain.replace(" ", "_") in known:
        return plain.replace(" ", "_")
    term = known.find(text.replace("_", " "))
    return term.id if term else ""


def _unit(text: str) -> str | None:
    plain = text.strip().strip(".").strip()
    if plain.startswith("in ") and len(plain) > 3:
        plain = plain[3:]
    low = plain.casefold()
    return unit_symbol(plain) or _SIZE_UNITS.get(low) or _OTHER_UNITS.get(low)


def heading_score(cells: Sequence[str], sizes: bool = False) -> float:
    """How much a row looks like headings: known columns, less a share for cells nobody knows."""
    names = {name for cell in cells if cell.strip() for name in [match_heading(cell, sizes)[0]] if name}
    unknown = sum(1 for cell in cells if cell.strip() and not match_heading(cell, sizes)[0])
    return len(names) - 0.2 * min(unknown, 4) if names else 0.0


def find_headings(sheet: Sheet, found: Collector, sizes: bool = False) -> Headings | None:
    """The heading row of a sheet: the row near the beginning with most known columns.

    Rows above it that hold a key and a value become header lines; others are noted. None when there is no
    heading row; the rows left in the sheet are those below it.
    """
    best, place = 0.0, -1
    for index, row in enumerate(sheet.rows[:40]):
        score = heading_score(row.cells, sizes)
        names = {match_heading(cell, sizes)[0] for cell in row.cells}
        usable = bool(names & {"d50", "bed"}) if sizes else bool(names & _PLACES or names & _MATTER)
        # one known word in a row of many cells is a bed, not its headings
        if usable and score > best and (len(names - {""}) > 1 or len(list(filter(None, row.cells))) < 3):
            best, place = score, index
    if place < 0:
        return None
    for row in sheet.rows[:place]:
        _keep_above(row, sheet, found)
    row, rest = sheet.rows[place], sheet.rows[place + 1 :]
    if rest and not sizes and (below := _with_sub_headings(row, rest[0])):
        row, rest = below, rest[1:]
    columns = _columns(row, found, sizes)
    if rest and not sizes:
        columns, rest = _with_unit_row(columns, rest)
    sheet.rows = rest
    return Headings(tuple(columns), row)


def _with_sub_headings(row: Row, below: Row) -> Row | None:
    """Headings in two rows, such as `from` and `to` under `thickness`, as one; None when the row below is a bed."""
    under = [cell for cell in below.cells if cell]
    if len(under) < 2 or not all(match_heading(cell)[0] for cell in under):
        return None
    width = max(len(row.cells), len(below.cells))
    pairs = zip(*((*cells, *[""] * (width - len(cells))) for cells in (row.cells, below.cells)), strict=True)
    return Row(row.number, tuple(lower or upper for upper, lower in pairs))


def _keep_above(row: Row, sheet: Sheet, found: Collector) -> None:
    """A row above the headings: a header line, or something to note."""
    cells = [cell for cell in row.cells if cell]
    if len(cells) == 1 and ":" in cells[0]:
        key, _, value = cells[0].lstrip("# ").partition(":")
        sheet.header.append((key.strip(), value.strip(), row.number))
    elif len(cells) == 2:
        sheet.header.append((cells[0].strip("#: "), cells[1], row.number))
    elif cells:
        found.add("note", "file.row_above_headings", "a row above the headings is not read as a bed",
                  "write header lines as # key: value", row=row.number, cell=" | ".join(cells))  # fmt: skip


def _columns(row: Row, found: Collector, sizes: bool) -> list[Column]:
    columns: list[Column] = []
    seen: dict[str, str] = {}
    own: list[str] = []
    for index, heading in enumerate(row.cells):
        name, unit, odd = match_heading(heading, sizes)
        if not heading:
            columns.append(Column(index, "", ""))
            continue
        if not name:
            near = vocabulary("size_columns" if sizes else "columns").nearest(heading)
            if near:
                found.add("question", "heading.unknown",
                          f"no column is called {heading[:60]!r}; its cells are kept as written and not read",
                          "correct the heading, or leave it if the column is your own",
                          row=row.number, cell=heading, nearest=near,
                          choices=("a column of your own", near))  # fmt: skip
            else:
                own.append(heading)
        elif name in seen:
            found.add("question", "heading.doubled",
                      f"{heading[:60]!r} and {seen[name][:60]!r} are both the column {name}; the first one is read",
                      "rename one of them", row=row.number, column=name, cell=heading,
                      choices=(seen[name][:60], heading[:60]))  # fmt: skip
            name = ""
        elif odd:
            found.add("question", "heading.unit", f"the unit in {heading[:60]!r} is not known and is left out",
                      "use m, cm, mm, ft or in", row=row.number, column=name, cell=heading,
                      choices=("the unit of the sheet",))  # fmt: skip
        if name:
            seen[name] = heading
        columns.append(Column(index, name, heading, unit))
    if own:
        shown = ", ".join(repr(heading[:60]) for heading in own[:_MOST_NAMED]) + (
            " …" if len(own) > _MOST_NAMED else ""
        )
        found.add("note", "heading.unknown",
                  f"{counted(len(own), 'column')} of your own, kept as written and not read: {shown}",
                  "correct a heading that is meant as one of logkit's", row=row.number, cell=own[0])  # fmt: skip
    return columns


def _with_unit_row(columns: list[Column], rest: list[Row]) -> tuple[list[Column], list[Row]]:
    """Columns with the units of a row of units below the headings, if there is one, and the rows after it."""
    cells = rest[0].cells
    units = {i: _unit(cell.strip("[](){} ")) for i, cell in enumerate(cells) if cell.strip("[](){} ")}
    if not units or not all(units.values()):
        return columns, rest
    filled = [
        Column(c.index, c.name, c.heading, c.unit or units.get(c.index)) if c.name else c for c in columns
    ]
    return filled, rest[1:]
