"""Logs into files: the normalised table with its header lines and in-bed sizes, whole or not at all.

Only the forms of files belong here; the cells come from `canonical` and `frame`.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

from logkit.errors import LogkitError, UnknownNameError
from logkit.files import write_atomic
from logkit.model import Header, Log
from logkit.tables.canonical import COLUMNS
from logkit.tables.frame import columns_used, number_or_text, table_rows
from logkit.tables.header import header_lines
from logkit.tables.sheet import plain_number
from logkit.tables.text import FORMULA_SIGNS, escape, plain_cell

SIZES_HEADINGS = ("section", "bed", "position_m", "d50_mm", "d10_mm", "d90_mm", "d95_mm", "count", "method")
SEPARATED = {".csv": ",", ".tsv": "\t", ".txt": "\t"}
_LONGEST_IN_WORKBOOK = 32767

Cells = Sequence[Any]


def write_log(log: Log, path: str | Path) -> Path:
    """Write the normalised table; `read_log` gives the same log back.

    Parameters
    ----------
    log : the log; a log of depths is written as depths, from the top down
    path : `.csv`, `.tsv` or `.xlsx`; in-bed sizes go into `NAME.sizes.csv` beside it, or into a sheet of their own

    Returns
    -------
    The path written.

    Raises
    ------
    LogkitError : the ending is not known, the file cannot be written, or a text is too long for a workbook
    """
    return write_logs([log], path)


def write_logs(logs: Sequence[Log], path: str | Path) -> Path:
    """Write the sections of one table into one table again; `read_logs` gives the same logs back.

    Parameters
    ----------
    logs : logs with the same header but for the section, each with a section of its own when there are several
    path : as for `write_log`

    Raises
    ------
    LogkitError : as `write_log`, or the logs do not fit into one table
    """
    header = logs[0].header
    if len(logs) > 1:
        header = replace(header, section="")
        _check_sections(logs, header)
    rows = [row for log in logs for row in table_rows(log, depths=True)]
    names = columns_used(rows)
    lines = header_lines(header)
    unit = header.unit or "m"
    depth_heads = {"base": f"base_{unit}", "top": f"top_{unit}"} if header.direction == "down" else {}
    table = [[depth_heads.get(name, COLUMNS[name]) for name in names]]
    table += [[row.get(name, "") for name in names] for row in rows]
    sizes = [list(SIZES_HEADINGS), *(row for log in logs for row in _size_rows(log))]
    return write_tables(Path(path), lines, table, sizes)


def _check_sections(logs: Sequence[Log], header: Header) -> None:
    names = [plain_cell(log.header.section) for log in logs]
    if len(set(names)) < len(names) or not all(names):
        raise LogkitError("The logs are not told apart by a section each.", "Write them one by one.")
    other = next((log for log in logs if replace(log.header, section="") != header), None)
    if other is not None:
        raise LogkitError(
            f"{logs[0].name} and {other.name} have different headers and do not fit into one table.",
            "Choose one section.",
        )


def write_tables(
    target: Path, lines: Sequence[tuple[str, str]], table: Sequence[Cells], sizes: Sequence[Cells]
) -> Path:
    """Write header lines, a table and a table of sizes (headings first) in the form the ending asks for.

    Raises
    ------
    LogkitError : as `write_log`
    """
    ending = target.suffix.lower()
    if ending == ".xlsx":
        return write_atomic(target, _workbook(lines, table, sizes))
    if ending not in SEPARATED:
        raise UnknownNameError("form of table", ending or str(target), (*SEPARATED, ".xlsx"))
    separator = SEPARATED[ending]
    companion = target.with_suffix(".sizes" + (ending if ending != ".txt" else ".tsv"))
    if len(sizes) > 1 or companion.exists():
        # an old companion of a table that is replaced must not be taken for the new one's
        write_atomic(companion, separated(sizes, "," if ending == ".csv" else "\t"))
    head = "".join(f"# {key}: {value}\n" for key, value in lines)
    return write_atomic(target, head + separated(table, separator))


def separated(rows: Iterable[Cells], separator: str) -> str:
    """Rows as text; no cell is taken for a formula by a spreadsheet that opens it."""
    buffer = io.StringIO()
    writer = csv.writer(buffer, delimiter=separator, lineterminator="\n")
    for row in rows:
        writer.writerow([escape(cell) if isinstance(cell, str) else number_or_text(cell) for cell in row])
    return buffer.getvalue()


def _size_rows(log: Log) -> list[list[Any]]:
    sign = -1.0 if log.header.direction == "down" else 1.0
    return [
        [plain_cell(log.header.section), plain_cell(bed.name), sign * r.position_m, r.d50_mm, r.d10_mm, r.d90_mm,
         r.d95_mm, r.count, plain_cell(r.method)]
        for bed in log.beds
        for r in bed.sizes
    ]  # fmt: skip


def _workbook(lines: Sequence[tuple[str, str]], table: Sequence[Cells], sizes: Sequence[Cells]) -> bytes:
    from openpyxl import Workbook

    book = Workbook()
    header = book.active
    header.title = "header"
    _fill(header, [("key", "value"), *lines])
    header.column_dimensions["A"].width, header.column_dimensions["B"].width = 22, 60
    beds = book.create_sheet("beds")
    _fill(beds, table)
    beds.freeze_panes = "A2"
    if len(sizes) > 1:
        _fill(book.create_sheet("sizes"), sizes)
    book.active = book.index(beds)
    buffer = io.BytesIO()
    book.save(buffer)
    return buffer.getvalue()


def _fill(sheet: Any, rows: Sequence[Cells]) -> None:
    """Cells into a sheet: numbers as numbers, everything else as text, whatever it begins with."""
    from openpyxl.styles import Font

    for i, row in enumerate(rows, start=1):
        for j, value in enumerate(row, start=1):
            if value is None or value == "":
                continue
            cell = sheet.cell(row=i, column=j)
            if isinstance(value, float) and float(f"{value:.16g}") != value:
                value = plain_number(value)  # a workbook keeps 16 digits of a number, one too few for some
            if isinstance(value, str):
                if len(value) > _LONGEST_IN_WORKBOOK:
                    raise LogkitError(
                        f"A cell has {len(value)} characters, too many for a workbook.", "Write csv instead."
                    )
                cell.value = value
                cell.data_type = "s"
                cell.quotePrefix = value[0] in FORMULA_SIGNS
            else:
                cell.value = value
            if i == 1:
                cell.font = Font(bold=True)
