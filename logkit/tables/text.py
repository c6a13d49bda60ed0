"""Text files into a sheet: encodings, separators, header lines. What the columns mean belongs to `headings`.

A table may be UTF-8 with or without mark, UTF-16 or Windows-1252; parted by commas, semicolons, tabs or bars.
The separator taken is the one under which most headings are known columns.
"""

from __future__ import annotations

import codecs
import csv
import io
import re

from logkit.tables.headings import heading_score
from logkit.tables.sheet import Collector, Row, Sheet

SEPARATORS = (",", ";", "\t", "|")
LONGEST_CELL = 1_000_000
_MARKS = (
    (codecs.BOM_UTF8, "utf-8-sig"),
    (codecs.BOM_UTF32_LE, "utf-32"),
    (codecs.BOM_UTF32_BE, "utf-32"),
    (codecs.BOM_UTF16_LE, "utf-16"),
    (codecs.BOM_UTF16_BE, "utf-16"),
)
_HEADER_LINE = re.compile(r"^\s*#\s*(?P<key>[^:=#]{1,60}?)\s*[:=]\s*(?P<value>.*?)\s*$", re.S)
_UNDEFINED = {0x81, 0x8D, 0x8F, 0x90, 0x9D}


def sheet_from_text(body: bytes, file: str, found: Collector, sizes: bool = False) -> Sheet:
    """A sheet from the bytes of a text file; findings about the file go to `found`.

    `sizes` looks for the headings of in-bed size readings instead of those of beds.
    """
    text = decode(body, found)
    sheet = Sheet(file=file)
    if not text.strip():
        if any(f.code == "file.binary" for f in found.found):
            return sheet
        found.add("error", "file.empty", "the file is empty", "choose the file that holds the table of beds")
        return sheet
    lines = list(io.StringIO(text, newline=""))
    separator = find_separator(lines, sizes)
    sheet.separator = separator
    first = _read_header_lines(lines, separator, sheet)
    _read_rows(lines, first, separator, sheet, found)
    return sheet


def decode(body: bytes, found: Collector) -> str:
    """Text from bytes, with a note where the encoding had to be guessed."""
    for mark, encoding in _MARKS:
        if body.startswith(mark):
            try:
                return body.decode(encoding)
            except UnicodeDecodeError:
                found.add("question", "file.encoding", f"the file is marked as {encoding} but is damaged",
                          "save it again as UTF-8",
                          choices=("damaged characters left out",))  # fmt: skip
                return body.decode(encoding, errors="ignore")
    sixteen = _utf_16_without_mark(body)
    if sixteen:
        found.add("note", "file.encoding", "the file has no mark; read as UTF-16")
        return body.decode(sixteen, errors="ignore")
    if b"\0" in body:
        body = _without_nulls(body, found)
    try:
        return body.decode("utf-8")
    except UnicodeDecodeError:
        lost = sum(body.count(code) for code in _UNDEFINED)
        extra = f"; {lost} characters mean nothing there and became ?" if lost else ""
        found.add("note", "file.encoding", f"the file is not UTF-8; read as Windows-1252{extra}",
                  "save it as UTF-8 where a character looks wrong")  # fmt: skip
        return body.decode("cp1252", errors="replace").replace("\ufffd", "?")


def _utf_16_without_mark(body: bytes) -> str | None:
    """The UTF-16 order of a file without mark: every other byte of its beginning is null."""
    head = body[:400]
    if len(head) < 8 or len(head) % 2:
        head = head[: len(head) // 2 * 2]
    pairs = len(head) // 2
    if pairs < 4:
        return None
    if head[1::2].count(0) > 0.8 * pairs and not head[::2].count(0):
        return "utf-16-le"
    if head[::2].count(0) > 0.8 * pairs and not head[1::2].count(0):
        return "utf-16-be"
    return None


def _without_nulls(body: bytes, found: Collector) -> bytes:
    nulls = body.count(0)
    if nulls > max(20, len(body) // 100):
        found.add("error", "file.binary", "the file is not text (it holds null bytes)",
                  "save the table as CSV, TSV, XLSX or ODS")  # fmt: skip
        return b""
    noun = "null byte" if nulls == 1 else "null bytes"
    found.add("question", "file.nulls", f"the file holds {nulls} {noun}, left out",
              "check the file; it may be damaged", choices=("null bytes left out",))  # fmt: skip
    return body.replace(b"\0", b"")


def find_separator(lines: list[str], sizes: bool = False) -> str:
    """The separator under which a line near the beginning has most known headings."""
    best, chosen = 0.0, ","
    shown = [line for line in lines[:80] if line.strip() and not line.lstrip().startswith(("#", '"#'))][:30]
    for line in shown:
        for separator in SEPARATORS:
            if separator not in line:
                continue
            score = heading_score(_cells(line, separator), sizes)
            if score > best:
                best, chosen = score, separator
    if best:
        return chosen
    counts = {s: sum(line.count(s) for line in shown) for s in SEPARATORS}
    return max(SEPARATORS, key=lambda s: counts[s])


def _cells(line: str, separator: str) -> list[str]:
    try:
        return next(csv.reader([line], delimiter=separator), [])
    except csv.Error:
        return line.rstrip("\r\n").split(separator)


def _read_header_lines(lines: list[str], separator: str, sheet: Sheet) -> int:
    """Take the lines `# key: value` at the beginning; the index of the first line after them."""
    for index, line in enumerate(lines):
        plain = line.strip()
        if not plain or not plain.strip(separator + ' "'):
            continue
        if plain.startswith('"#'):
            plain = _cells(plain, separator)[0]
        elif plain.startswith("#"):
            # a spreadsheet pads header lines with separators up to the width of the table
            plain = plain.rstrip(separator) if separator != "," or plain.endswith(",,") else plain
        else:
            return index
        match = _HEADER_LINE.match(plain)
        if match:
            sheet.header.append((match["key"], match["value"], index + 1))
        elif heading_score(_cells(plain.lstrip("# "), separator)) >= 2:
            return index
        elif plain.strip("# "):
            sheet.header.append(("", plain.lstrip("# "), index + 1))
    return len(lines)


def _read_rows(lines: list[str], first: int, separator: str, sheet: Sheet, found: Collector) -> None:
    csv.field_size_limit(LONGEST_CELL)
    at = first
    while at < len(lines):
        cells, count = _row_at(lines, at, separator, found)
        number, at = at + 1, at + count
        if cells is None:
            continue
        if sheet.rows and cells and cells[0].lstrip().startswith("#") and not any(map(str.strip, cells[1:])):
            found.add("note", "row.remark_line", "a line between the rows that begins with # is not a bed",
                      row=number, cell=cells[0])  # fmt: skip
            continue
        sheet.rows.append(Row(number, tuple([unescape(cell.strip()) for cell in cells])))


def _row_at(lines: list[str], at: int, separator: str, found: Collector) -> tuple[list[str] | None, int]:
    """The cells of the row that begins in a line, and how many lines it takes.

    A quotation mark that is never closed would swallow the rows below: it ends with its line, as an error.
    """
    line = lines[at]
    if '"' not in line:
        return _split(line, separator, at, found), 1
    reader = csv.reader((lines[i] for i in range(at, len(lines))), delimiter=separator)
    try:
        cells: list[str] | None = next(reader)
    except (csv.Error, StopIteration) as problem:
        found.add("error", "row.unreadable", f"the line cannot be read as a row: {problem}",
                  "check the quotation marks", row=at + 1)  # fmt: skip
        return None, 1
    count = reader.line_num
    if count == 1:
        return cells, 1
    swallowed = lines[at + 1 : at + count]
    if sum(part.count('"') for part in lines[at : at + count]) % 2:
        found.add("error", "row.open_quote", "a quotation mark is opened in this row and never closed",
                  "close it, or take it out", row=at + 1, cell=line.strip())  # fmt: skip
        return _split(line.replace('"', ""), separator, at, found), 1
    width = max(_before_quote(line).count(separator), 1)
    if count > 50 or any(_before_quote(part).count(separator) >= width for part in swallowed):
        found.add("question", "file.long_cell",
                  f"one cell runs over {count} lines; a quotation mark may be missing",
                  "close the quotation mark", row=at + 1, cell=line.strip(),
                  choices=("one long cell", "a missing quotation mark"))  # fmt: skip
    return cells, count


def _before_quote(line: str) -> str:
    return line.partition('"')[0]


def _split(line: str, separator: str, at: int, found: Collector) -> list[str] | None:
    """The cells of a line without quotation marks."""
    try:
        return next(csv.reader([line], delimiter=separator), [])
    except csv.Error as problem:
        found.add("error", "row.unreadable", f"the line cannot be read as a row: {problem}",
                  "shorten the cell", row=at + 1)  # fmt: skip
        return None


def unescape(text: str) -> str:
    """Text without the apostrophe that keeps a spreadsheet from taking it for a formula."""
    return text[1:] if len(text) > 1 and text[0] == "'" and text[1] in FORMULA_SIGNS else text


def escape(text: str) -> str:
    """Text that no spreadsheet takes for a formula when it opens the file."""
    return "'" + text if text and (text[0] in FORMULA_SIGNS) else text


FORMULA_SIGNS = "=+-@'"
"""First characters that a spreadsheet, or `unescape`, takes as more than text."""


def plain_cell(text: str) -> str:
    """Text that every kind of file gives back the same: no control characters but line ends, no spaces around."""
    if text.isprintable():
        return text.strip()
    kept = "".join(c if c.isprintable() or c == "\n" else " " for c in text)
    return kept.strip()
