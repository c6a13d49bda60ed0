"""Workbooks into sheets: XLSX and ODS, raw cells, merged ranges, cells that the program turned into dates.

What a sheet is for (header, sizes, beds) is told by its name; what its columns mean belongs to `headings`.
"""

from __future__ import annotations

import datetime
import io
import re
import zipfile
import zlib
from collections import Counter
from dataclasses import dataclass, field
from typing import Any

from logkit.errors import LogkitError
from logkit.tables.headings import match_heading
from logkit.tables.sheet import Collector, Row, Sheet, plain_number

HEADER_NAMES = frozenset({"header", "head", "title", "kopf"})
SIZES_NAMES = frozenset({"sizes", "size readings", "in-bed sizes", "grain sizes in beds"})
SPREAD = frozenset({
    "section", "lithology", "grain", "colour", "sorting", "structures", "fossils", "bioturbation", "confidence",
})  # fmt: skip
"""Columns in which a merged cell speaks for every row it covers; in others it belongs to its top row only."""
_MOST_CELLS = 4_000_000
_MOST_BYTES = 100_000_000
_EMPTY_FORMULA = re.compile(
    rb'<c r="([A-Z]{1,3}\d{1,7})"[^>]*><f(?:/>|[^>]*>[^<]*</f>)(?:<v\s*/>|<v></v>)?</c>'
)


@dataclass(slots=True)
class Book:
    """The sheets of a workbook by their use."""

    beds: list[Sheet] = field(default_factory=list)
    header: Sheet | None = None
    sizes: Sheet | None = None


def is_workbook(body: bytes) -> bool:
    """True for the bytes of a zip archive or an OLE container, which is what workbooks are."""
    return body.startswith((b"PK\x03\x04", b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"))


def open_workbook(body: bytes, file: str, found: Collector) -> Book:
    """The sheets of a workbook.

    Raises
    ------
    LogkitError : it is no workbook, it is damaged, or it is protected by a password
    """
    try:
        raw = _load(body)
    except Exception as problem:
        raise _cannot_open(file, body, problem) from None
    except BaseException as problem:  # the reader's own panics are no Exception
        if type(problem).__name__ != "PanicException":
            raise
        raise _cannot_open(file, body, problem) from None
    _say_empty_formulas(body, found)
    book = Book()
    for name, start, values, merged in raw:
        key = name.strip().casefold()
        sheet = _sheet(file, name, start, values, merged, found)
        if key in HEADER_NAMES:
            book.header = sheet
        elif key in SIZES_NAMES:
            book.sizes = sheet
        elif any(not row.is_blank for row in sheet.rows):
            book.beds.append(sheet)
    return book


_Raw = tuple[str, tuple[int, int], list[list[Any]], list[tuple[tuple[int, int], tuple[int, int]]]]


def _load(body: bytes) -> list[_Raw]:
    from python_calamine import CalamineWorkbook, SheetTypeEnum, SheetVisibleEnum

    book = CalamineWorkbook.from_filelike(io.BytesIO(body))
    sheets: list[_Raw] = []
    for about in book.sheets_metadata:
        if about.typ != SheetTypeEnum.WorkSheet or about.visible != SheetVisibleEnum.Visible:
            continue
        sheet = book.get_sheet_by_name(about.name)
        if sheet.total_height * sheet.total_width > _MOST_CELLS:
            raise ValueError(
                f"sheet {about.name!r} has {sheet.total_height} rows and {sheet.total_width} columns"
            )
        values = sheet.to_python(skip_empty_area=True)
        try:
            merged = list(sheet.merged_cell_ranges or ())
        except Exception:  # not every format has them
            merged = []
        sheets.append((about.name, sheet.start or (0, 0), values, merged))
    return sheets


def _say_empty_formulas(body: bytes, found: Collector) -> None:
    """Ask about formulas without a result: a program wrote the workbook and nobody has calculated it since."""
    cells: list[str] = []
    try:
        with zipfile.ZipFile(io.BytesIO(body)) as parts:
            for part in parts.infolist():
                if part.filename.startswith("xl/worksheets/") and part.file_size < _MOST_BYTES:
                    cells += [m.decode("ascii") for m in _EMPTY_FORMULA.findall(parts.read(part))]
    except (zipfile.BadZipFile, OSError, ValueError, NotImplementedError, RuntimeError, EOFError, zlib.error):
        return  # not a zip archive, or one that only the reader of workbooks understands
    if cells:
        shown = ", ".join(cells[:6]) + (" …" if len(cells) > 6 else "")
        noun = "cell holds a formula" if len(cells) == 1 else "cells hold formulas"
        found.add("question", "cell.formula", f"{len(cells)} {noun} without a result ({shown}); read as empty",
                  "open the workbook in a spreadsheet and save it, so that the results are in it", cell=cells[0],
                  choices=("empty",))  # fmt: skip


def _cannot_open(file: str, body: bytes, problem: BaseException) -> LogkitError:
    name = type(problem).__name__
    if (
        name == "PasswordError"
        or "password" in str(problem).casefold()
        or b"EncryptedPackage" in body[:65536]
        or ("E\0n\0c\0r\0y\0p\0t\0e\0d\0P".encode("latin-1") in body)
    ):
        return LogkitError(f"{file} is protected by a password.", "Save it without one and try again.")
    if not is_workbook(body):
        return LogkitError(
            f"{file} is not a workbook.", "Open it in a spreadsheet and save it as XLSX, ODS or CSV."
        )
    return LogkitError(
        f"{file} cannot be opened as a workbook: {str(problem) or name}.",
        "Open it in a spreadsheet and save it again.",
    )


def _sheet(
    file: str,
    name: str,
    start: tuple[int, int],
    values: list[list[Any]],
    merged: list[tuple[tuple[int, int], tuple[int, int]]],
    found: Collector,
) -> Sheet:
    sheet = Sheet(file=file, name=name, addressed=True)
    down, right = start
    rows: list[list[str]] = []
    for i, line in enumerate(values):
        cells = [""] * right
        for j, value in enumerate(line):
            text, dated = _text(value)
            if dated:
                sheet.dates.add((down + i + 1, right + j))
            cells.append(text)
        rows.append(cells)
    _spread(rows, down, merged, sheet, found)
    sheet.rows = [Row(down + i + 1, tuple(cells)) for i, cells in enumerate(rows)]
    return sheet


def _text(value: Any) -> tuple[str, bool]:
    """A cell as text, and whether the spreadsheet holds it as a date or time."""
    if isinstance(value, str):
        return value.strip(), False
    if isinstance(value, bool):
        return ("yes" if value else "no"), False
    if isinstance(value, float):
        return plain_number(value), False
    if isinstance(value, datetime.datetime):
        return value.isoformat(sep=" ") if value.time() != datetime.time() else value.date().isoformat(), True
    if isinstance(value, datetime.date | datetime.time):
        return value.isoformat(), True
    if isinstance(value, datetime.timedelta):
        return str(value), True
    return str(value), False


def _spread(
    rows: list[list[str]],
    down: int,
    merged: list[tuple[tuple[int, int], tuple[int, int]]],
    sheet: Sheet,
    found: Collector,
) -> None:
    """Fill the cells that a merge covers, in the columns where one word speaks for several rows."""
    filled: Counter[str] = Counter()
    first: dict[str, tuple[int, str]] = {}
    for (top, left), (bottom, _) in sorted(merged):
        if bottom <= top or not 0 <= top - down < len(rows) or left >= len(rows[top - down]):
            continue
        column = _column_name(rows, top - down, left)
        value = rows[top - down][left]
        if not value:
            continue
        key = column or "a column without a known heading"
        first.setdefault(key, (top + 1, value))
        filled[key] += 1
        if column not in SPREAD:
            continue
        for i in range(top - down + 1, min(bottom - down + 1, len(rows))):
            if left < len(rows[i]) and not rows[i][left]:
                rows[i][left] = value
                sheet.merged[(down + i + 1, left)] = top + 1
    for key, count in filled.items():
        row, value = first[key]
        ranges = "one merged cell was" if count == 1 else f"{count} merged cells were"
        text = f"{ranges} read for {'every row covered' if key in SPREAD else 'the top row only'}"
        found.sheet = sheet.name
        found.add("note", "cell.merged", f"{key}: {text}", row=row, cell=value,
                  column=key if column_known(key) else "")  # fmt: skip
        found.sheet = ""


def column_known(name: str) -> bool:
    """True for a canonical column name."""
    return bool(name) and match_heading(name)[0] == name


def _column_name(rows: list[list[str]], below: int, index: int) -> str:
    """Canonical name of the column, from the nearest known heading above a cell."""
    for i in range(below - 1, -1, -1):
        if index < len(rows[i]) and rows[i][index]:
            name = match_heading(rows[i][index])[0]
            if name:
                return name
    return ""
