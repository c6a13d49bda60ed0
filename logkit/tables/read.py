"""A file of beds into logs: opening, sections, directions, the steps from rows to beds, and all findings at once.

This module holds the order of the steps; each step lives in a module of its own beside it.
"""

from __future__ import annotations

import sys
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any, Literal

from logkit.errors import ArgumentError, LogErrors, LogkitError
from logkit.files import read_bytes, read_stream
from logkit.model import Bed, Finding, Header, Log
from logkit.tables.build import build_beds, name_rows
from logkit.tables.checks import check_beds, check_drafts
from logkit.tables.direction import find_direction, settle_units
from logkit.tables.draft import Draft, Manner
from logkit.tables.header import KEYS, read_header, with_options
from logkit.tables.headings import Headings, find_headings
from logkit.tables.positions import Placer
from logkit.tables.refusals import PLACES
from logkit.tables.rows import read_row
from logkit.tables.sections import rows_to_drafts, split_sections
from logkit.tables.sheet import Collector, Sheet, gathered
from logkit.tables.sizes import SizeRows, add_sizes, read_sizes
from logkit.tables.text import sheet_from_text
from logkit.tables.totals import leave_out_sum
from logkit.tables.workbook import is_workbook, open_workbook
from logkit.units import METRES
from logkit.vocabulary import code_table

if TYPE_CHECKING:
    import pandas as pd

OnErrors = Literal["raise", "keep"]
WORKBOOKS = (".xlsx", ".xlsm", ".xls", ".xlsb", ".ods")


@dataclass(frozen=True, slots=True)
class Options:
    """How a file is to be read; header keys given by the caller stand in `header`."""

    header: Mapping[str, Any] = field(default_factory=dict)
    codes: str = "fluvial"
    on_errors: OnErrors = "raise"
    strict: bool = False
    sizes: str | Path | None = None


def read_log(path: str | Path, **options: Any) -> Log:
    """Read one log from a table of beds.

    Parameters
    ----------
    path : CSV, TSV, XLSX or ODS; "-" for standard input
    section : the section wanted from a file with several, or the name of the only one
    codes : table of facies codes, "fluvial" by default
    on_errors : "raise" (a log with errors raises `LogErrors`) or "keep" (the log carries its findings)
    strict : questions count as errors
    sizes : file of in-bed size readings; `NAME.sizes.csv` beside the table is found without being named
    **options : header keys that count before those of the file (`setting`, `unit`, `direction`, `bedding` …)

    Returns
    -------
    The log, beds upward, with all findings.

    Raises
    ------
    LogErrors : the log has errors; carries every finding of the file and what could be read
    LogkitError : the file cannot be opened, or holds several sections and none was chosen
    ArgumentError : an option that is not known

    Examples
    --------
    >>> log = read_log("examples/river/tarrow_bend.csv", on_errors="keep")     # doctest: +SKIP
    """
    wanted = str(options.get("section") or "")
    logs = read_logs(path, **options)
    if len(logs) == 1:
        return logs[0]
    names = [log.header.section for log in logs]
    if not wanted:
        raise LogkitError(
            f"{path} holds {len(logs)} sections: {', '.join(names)}.",
            "Choose one with section=, or use read_logs.",
        )
    return logs[names.index(wanted)]


def read_logs(path: str | Path | Iterable[str | Path], **options: Any) -> list[Log]:
    """Read every log of one file or of several.

    Parameters
    ----------
    path : a file, "-", or several of them
    **options : as for `read_log`; `section` keeps only the logs of that name

    Raises
    ------
    LogErrors, LogkitError, ArgumentError : as `read_log`; errors of all files come together
    """
    chosen = take_options(options)
    paths = [path] if isinstance(path, str | Path) else list(path)
    logs: list[Log] = []
    findings: list[Finding] = []
    for one in paths:
        read, found = _read_file(one, chosen)
        logs += read
        findings += found
    return _give(logs, findings, chosen)


def log_from_frame(frame: pd.DataFrame, **header: Any) -> Log:
    """A log from a data frame with one row a bed, as `Log.to_frame` gives it or with columns as people name them.

    Parameters
    ----------
    frame : columns as the headings of a file; missing values are empty cells
    **header : header keys and the options of `read_log`

    Raises
    ------
    LogErrors, LogkitError, ArgumentError : as `read_log`; rows are counted from 1 without the headings
    """
    from logkit.tables.frame import sheet_from_frame

    chosen = take_options(header)
    found = Collector()
    logs = _logs_of_sheet(sheet_from_frame(frame), (), chosen, found, "")
    logs = _chosen(logs, str(chosen.header.get("section") or ""), "")
    logs = _give(logs, [f for log in logs for f in log.findings], chosen)
    if len(logs) > 1:
        names = ", ".join(log.header.section for log in logs)
        raise LogkitError(f"The frame holds {len(logs)} sections: {names}.", "Choose one with section=.")
    return logs[0]


def take_options(options: Mapping[str, Any]) -> Options:
    """Options of reading apart from header keys.

    Raises
    ------
    ArgumentError : a value that is not allowed; unknown header keys are refused later, with the nearest
    """
    rest = dict(options)
    on_errors = rest.pop("on_errors", "raise")
    if on_errors not in ("raise", "keep"):
        raise ArgumentError("on_errors", on_errors, '"raise" or "keep"')
    codes = rest.pop("codes", None) or "fluvial"
    code_table(codes)
    with_options(Header(), {key: value for key, value in rest.items() if key not in ("strict", "sizes")})
    return Options(
        header={k: v for k, v in rest.items() if k not in ("strict", "sizes") and v is not None},
        codes=codes, on_errors=on_errors, strict=bool(rest.get("strict")), sizes=rest.get("sizes"),
    )  # fmt: skip


def _give(logs: list[Log], findings: Sequence[Finding], options: Options) -> list[Log]:
    """The logs, or the error that carries all findings."""
    logs = [replace(log, findings=gathered(log.findings)) for log in logs]
    findings = gathered(findings)
    if options.strict:
        findings = [replace(f, level="error") if f.level == "question" else f for f in findings]
        logs = [
            replace(
                log,
                findings=tuple(
                    replace(f, level="error") if f.level == "question" else f for f in log.findings
                ),
            )
            for log in logs
        ]
    failed = any(f.level == "error" for f in findings)
    if failed and options.on_errors == "raise":
        ranked = sorted(findings, key=lambda f: f.level != "error")
        raise LogErrors(ranked, logs[0] if len(logs) == 1 else None)
    return logs


def _read_file(path: str | Path, options: Options) -> tuple[list[Log], list[Finding]]:
    """Logs and findings of one file."""
    name = "standard input" if str(path) == "-" else Path(path).name
    body = _standard_input() if str(path) == "-" else read_bytes(path)
    found = Collector(file=name)
    source = "" if str(path) == "-" else str(path)
    if is_workbook(body) or Path(name).suffix.lower() in WORKBOOKS:
        logs, sizes = _logs_of_book(body, name, source, options, found)
    else:
        sheet = sheet_from_text(body, name, found)
        sizes = _sizes_beside(path, options, found)
        if any(f.level == "error" and f.code.startswith("file.") for f in found.found):
            logs = [Log(findings=tuple(found.found), source=source)]
        else:
            logs = _logs_of_sheet(sheet, (), options, found, source)
    if sizes is not None:
        logs = add_sizes(logs, sizes)
    logs = _chosen(logs, str(options.header.get("section") or ""), source)
    return logs, list(dict.fromkeys(f for log in logs for f in log.findings))


def _standard_input() -> bytes:
    try:
        return read_stream(sys.stdin.buffer)
    except (OSError, ValueError, AttributeError) as problem:
        raise LogkitError(f"Cannot read standard input: {problem}.", "Give the name of a file.") from None


def _sizes_beside(path: str | Path, options: Options, found: Collector) -> SizeRows | None:
    """In-bed size readings from the file named, or from the companion `NAME.sizes.csv`."""
    place: Path | None = None
    if options.sizes is not None:
        place = Path(options.sizes)
    elif str(path) != "-":
        stem = Path(path).with_suffix("")
        place = next((p for e in (".csv", ".tsv") if (p := Path(f"{stem}.sizes{e}")).is_file()), None)
    if place is None:
        return None
    body = read_bytes(place)
    own = Collector(file=place.name)
    rows = read_sizes(sheet_from_text(body, place.name, own, sizes=True), own)
    found.found += own.found
    return rows


def _logs_of_book(
    body: bytes, name: str, source: str, options: Options, found: Collector
) -> tuple[list[Log], SizeRows | None]:
    """The logs of a workbook, and the in-bed sizes that it holds or that the caller named."""
    book = open_workbook(body, name, found)
    lines = []
    if book.header is not None:
        lines = [
            (row.cells[0], next((c for c in row.cells[1:] if c), ""), row.number)
            for row in book.header.rows
            if row.cells and row.cells[0] and row.cells[0].casefold() not in ("key", "field")
        ]
    sizes = None
    if options.sizes is not None:
        sizes = _sizes_beside(source, options, found)
    elif book.sizes is not None:
        own = Collector(file=name, sheet=book.sizes.name)
        sizes = read_sizes(book.sizes, own)
        found.found += own.found
    if not book.beds:
        found.add(
            "error",
            "file.empty",
            "the workbook has no sheet with a table",
            "put the beds on a sheet of their own",
        )
        return [Log(findings=tuple(found.found), source=source)], None
    return _logs_of_sheets(book.beds, lines, options, found, source), sizes


def _logs_of_sheets(
    sheets: Sequence[Sheet],
    lines: Sequence[tuple[str, str, int | None]],
    options: Options,
    found: Collector,
    source: str,
) -> list[Log]:
    """The logs of all sheets of a workbook; of several sheets those that hold no table of beds are noted."""
    shared = tuple(found.found)
    several = len(sheets) > 1
    logs: list[Log] = []
    others: list[Finding] = []
    for sheet in sheets:
        own = Collector(file=found.file, sheet=sheet.name)
        for log in _logs_of_sheet(sheet, lines, options, own, source):
            if not log.beds and any(f.code in _NO_TABLE for f in own.found):
                others += own.found
                continue
            if several and not log.header.section:
                log = replace(log, header=replace(log.header, section=sheet.name.strip()))
            logs.append(replace(log, findings=(*shared, *log.findings)))
    if not logs:
        return [Log(findings=(*shared, *others), source=source)]
    notes = tuple(
        replace(f, level="note", message=f"the sheet is not read as a table of beds: {f.message}", remedy="")
        for f in others
        if f.code in _NO_TABLE
    )
    return [replace(log, findings=(*log.findings, *notes)) for log in logs]


_NO_TABLE = frozenset({"file.no_table", "heading.missing"})
"""Findings that a sheet is no table of beds at all."""
_NEEDED = (
    "give a position (thickness, or base and top, or heights) and a grain size or a lithology, "
    "each under a heading"
)


def _logs_of_sheet(
    sheet: Sheet,
    lines: Sequence[tuple[str, str, int | None]],
    options: Options,
    found: Collector,
    source: str,
) -> list[Log]:
    """The logs of one sheet, one a section."""
    headings = find_headings(sheet, found)
    if headings is None or not _complete(headings, sheet, found):
        if headings is None:
            first = next((row for row in sheet.rows if not row.is_blank), None)
            found.add("error", "file.no_table", "there is no row of headings that is known", _NEEDED,
                      row=first.number if first else None,
                      cell=" | ".join(c for c in first.cells if c) if first else "")  # fmt: skip
        return [Log(findings=tuple(found.found), source=source)]
    header = read_header([*lines, *sheet.header], found)
    header = replace(
        header, **with_options(header, {k: v for k, v in options.header.items() if k != "section"})
    )
    manner = Manner(
        unit=header.unit or None,
        units={c.name: c.unit for c in headings.columns if c.name},
        scale=header.size_scale,
        codes=options.codes,
        dates=frozenset(sheet.dates),
        places={c.name: c.index for c in headings.columns if c.name},
        addressed=sheet.addressed,
    )
    drafts = rows_to_drafts(sheet, headings, found)
    if not drafts:
        found.add(
            "error", "file.no_beds", "there are headings but no rows below them", "type one row for each bed"
        )
        return [Log(header=header, findings=tuple(found.found), source=source)]
    groups = split_sections(drafts, header.section, found)
    manner = settle_units(drafts, manner, header, found)
    for draft in drafts:
        read_row(draft, manner, found)
    depths = any(c.name in PLACES and "depth" in c.heading.casefold() for c in headings.columns)
    stated = "direction" in options.header or any(
        key.strip().casefold() == "direction" for key, _, _ in (*lines, *sheet.header)
    )
    logs = [
        _one_log(replace(header, section=name), rows, manner, stated, depths, found, source)
        for name, rows in groups
    ]
    shared = [f for f in found.found if not f.section]
    if len(logs) == 1:
        return [replace(logs[0], findings=tuple(found.found))]
    return [
        replace(log, findings=(*shared, *(f for f in found.found if f.section == log.header.section)))
        for log in logs
    ]


def _chosen(logs: list[Log], wanted: str, source: str) -> list[Log]:
    """The logs of the section wanted; the only log of a file that names none gets the name asked for."""
    if not wanted:
        return logs
    names = [log.header.section for log in logs]
    if wanted in names:
        return [log for log in logs if log.header.section == wanted]
    if names == [""]:
        return [replace(logs[0], header=replace(logs[0].header, section=wanted))]
    raise ArgumentError(
        "section", wanted, f"one of the sections of {source or 'the table'}: {', '.join(map(repr, names))}"
    )


def _complete(headings: Headings, sheet: Sheet, found: Collector) -> bool:
    """True when the columns a log needs are there; else an error that says what is needed."""
    names = headings.names
    lacking = []
    if not names & {"thickness", "base", "top", "position", "from", "to", "core"}:
        lacking.append("a position (thickness, or base and top, or heights)")
    if not names & {"grain", "grain_base", "grain_top", "lithology", "structures", "thickness"}:
        lacking.append("a grain size or a lithology")
    if not lacking:
        return True
    have = ", ".join(c.heading for c in headings.columns if c.heading)[:200]
    found.add("error", "heading.missing", f"the table has no column for {' and none for '.join(lacking)}",
              "add the column; a heading may carry its unit, for example thickness (cm)",
              row=headings.row.number, cell=have)  # fmt: skip
    return False


def _one_log(
    header: Header,
    drafts: list[Draft],
    manner: Manner,
    stated: bool,
    depths: bool,
    found: Collector,
    source: str,
) -> Log:
    """One section from its drafts: direction, places, names, beds, checks."""
    leave_out_sum(drafts, found)
    direction = find_direction(drafts, header, stated, depths, found)
    unit = header.unit
    if direction == "down" and not unit:
        unit = next(
            (
                u
                for u in (manner.units.get(c) for c in ("base", "top", "from", "to", "position", "thickness"))
                if u
            ),
            "m",
        )
    header = replace(header, direction=direction, unit=unit)
    down = direction == "down"
    name_rows(drafts, found)
    placer = Placer(drafts, down, found, unit if unit in METRES else "m")
    placer.place()
    drafts = placer.drafts
    name_rows(drafts, found)  # gaps that fill holes
    check_drafts(drafts, found)
    beds: list[Bed] = build_beds(drafts, down, unit if unit in METRES else "m", found)
    beds = check_beds(beds, header, manner.codes, found)
    if not beds and not any(f.level == "error" for f in found.found):
        found.add("error", "file.no_beds", "no row can be used as a bed", "type one row for each bed")
    return Log(header=header, beds=tuple(beds), source=source)


__all__ = ["KEYS", "log_from_frame", "read_log", "read_logs"]
