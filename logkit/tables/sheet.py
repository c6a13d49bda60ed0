"""A sheet: rows of text with their numbers as the person sees them, whatever file they came from.

Only the neutral form between files and columns belongs here, and the collecting of findings with their place.
What headings and cells mean is decided in `headings` and `rows`.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace
from decimal import Decimal

from logkit.model import Finding, Level
from logkit.tables.cells.reading import Remark

_MANY = 4
_SHOWN_ROWS = 12
LONGEST_SHOWN = 120
"""Characters of a cell that a finding quotes."""


@dataclass(frozen=True, slots=True)
class Row:
    """One row: its number in the file (1 is the first line) and its cells as text."""

    number: int | None
    cells: tuple[str, ...]

    @property
    def is_blank(self) -> bool:
        """True when no cell holds anything."""
        return not any(self.cells)


@dataclass(slots=True)
class Sheet:
    """A sheet of a workbook, or a whole text file.

    Attributes
    ----------
    file : name of the file, "" when the table came from memory
    name : name of the sheet, "" for a text file
    rows : rows below any header lines, blank ones included
    header : header lines as (key, value, row number)
    dates : (row number, column index) of cells that the spreadsheet holds as dates or times
    merged : (row number, column index) of a cell filled from the merge above it -> row number of its top
    separator : what parts the cells of a text file, "" else
    addressed : True for a sheet of a spreadsheet, whose cells have addresses such as D14
    """

    file: str = ""
    name: str = ""
    rows: list[Row] = field(default_factory=list)
    header: list[tuple[str, str, int | None]] = field(default_factory=list)
    dates: set[tuple[int, int]] = field(default_factory=set)
    merged: dict[tuple[int, int], int] = field(default_factory=dict)
    separator: str = ""
    addressed: bool = False


@dataclass(slots=True)
class Collector:
    """Gathers findings; knows file, sheet and section, so that each finding gets its place.

    Attributes
    ----------
    file, sheet : where
    found : the findings so far
    """

    file: str = ""
    sheet: str = ""
    found: list[Finding] = field(default_factory=list)

    def add(
        self,
        level: Level,
        code: str,
        message: str,
        remedy: str = "",
        *,
        row: int | None = None,
        column: str = "",
        cell: str = "",
        allowed: Iterable[str] = (),
        nearest: str = "",
        choices: Iterable[str] = (),
        section: str = "",
        bed: str = "",
    ) -> None:
        """Add one finding."""
        self.found.append(
            Finding(
                level=level,
                message=message,
                remedy=remedy,
                code=code,
                file=self.file,
                sheet=self.sheet,
                row=row,
                column=column,
                cell=cell if len(cell) <= LONGEST_SHOWN else cell[: LONGEST_SHOWN - 1] + "…",
                allowed=tuple(allowed),
                nearest=nearest,
                choices=tuple(choices),
                section=section,
                bed=bed,
            )
        )

    def remark(
        self, remark: Remark, *, row: int | None, column: str, cell: str, section: str = "", bed: str = ""
    ) -> None:
        """Add what a cell reader remarked."""
        self.add(
            remark.level,
            remark.code,
            remark.message,
            remark.remedy,
            row=row,
            column=remark.column or column,
            cell=cell,
            allowed=remark.allowed,
            nearest=remark.nearest,
            choices=remark.choices,
            section=section,
            bed=bed,
        )


def gathered(findings: Sequence[Finding]) -> tuple[Finding, ...]:
    """Findings with those that say the same of the same cell text put together, the other rows named.

    A word that is ambiguous in thirty rows is one question, not thirty; notes of one kind are put together from
    the fourth on, whatever their cells hold.
    """
    many = Counter((f.code, f.section, f.column) for f in findings if f.level == "note")
    rows: dict[tuple[str, ...], list[int]] = {}
    first: dict[tuple[str, ...], int] = {}
    kept: list[Finding] = []
    for finding in findings:
        key: tuple[str, ...] = (finding.level, finding.code, finding.section, finding.column)
        if finding.level != "note" or many[finding.code, finding.section, finding.column] < _MANY:
            key = (*key, finding.cell, finding.message)
        if finding.level == "error" or finding.row is None or not finding.cell:
            kept.append(finding)
        elif key in rows:
            rows[key].append(finding.row)
        else:
            rows[key] = []
            first[key] = len(kept)
            kept.append(finding)
    for key, others in rows.items():
        if others:
            shown = ", ".join(str(row) for row in others[:_SHOWN_ROWS]) + (
                " …" if len(others) > _SHOWN_ROWS else ""
            )
            noun = "row" if len(others) == 1 else "rows"
            finding = kept[first[key]]
            kept[first[key]] = replace(finding, message=f"{finding.message}; likewise in {noun} {shown}")
    return tuple(kept)


def column_letters(index: int) -> str:
    """Letters of a spreadsheet column.

    Examples
    --------
    >>> column_letters(0), column_letters(3), column_letters(26)
    ('A', 'D', 'AA')
    """
    letters = ""
    index += 1
    while index:
        index, rest = divmod(index - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters


def plain_number(value: float) -> str:
    """The shortest text that reads back as the same number, without an exponent and without needless decimals.

    Examples
    --------
    >>> plain_number(45.0), plain_number(1e-05), plain_number(2.25)
    ('45', '0.00001', '2.25')
    """
    text = repr(float(value))
    if "e" in text or "E" in text:
        text = format(Decimal(text), "f")
    return text.removesuffix(".0")
