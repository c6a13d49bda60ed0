"""The hand-over set: everything another program or person needs from logs, as files with their own explanation.

What stands in the tables is decided in `intervals`, `las` and `codes`; here it is written. Tables of many wells
are written well by well, so that memory does not grow with their number.
"""

from __future__ import annotations

import csv
import io
import json
import math
import os
import re
import tempfile
from collections.abc import Callable, Sequence
from dataclasses import dataclass, fields, is_dataclass
from functools import cache
from pathlib import Path
from typing import IO, TYPE_CHECKING, Any

import logkit
from logkit.compare.codes import codes_table
from logkit.compare.companions import find_companions
from logkit.compare.intervals import (
    INTERVAL_TYPES,
    POINT_TYPES,
    SHIFT_TYPES,
    TOP_TYPES,
    Columns,
    intervals_columns,
    points_columns,
    shifts_columns,
    tops_columns,
    typed,
)
from logkit.compare.las import las_text
from logkit.compare.placing import PlacedLog, Thickness, place_logs
from logkit.errors import ArgumentError, LogkitError
from logkit.files import write_atomic, write_problem
from logkit.model.caution import CAUTION

if TYPE_CHECKING:
    import pandas as pd
    import pyarrow as pa

    from logkit.model import Log

ROW_GROUP = 5000
"""Rows of the Parquet file that are written at a time."""

FILE_ENDINGS = (".csv", ".las", ".json", ".parquet")

TABLES: dict[str, dict[str, str]] = {
    "intervals": INTERVAL_TYPES,
    "tops": TOP_TYPES,
    "points": POINT_TYPES,
    "depth_shifts": SHIFT_TYPES,
    "findings": {
        "section": "text", "level": "text", "row": "whole", "column": "text", "cell": "text", "message": "text",
        "remedy": "text", "code": "text",
    },
}  # fmt: skip
"""Tables of the set that grow by one part a well."""

_AS_IT_IS = frozenset({str, int, bool, type(None)})
_LIKE_FORMULA = ("=", "+", "-", "@", "\t", "\r")

LIMITS = f"""Limits of this hand-over set

{CAUTION}

Positions: base_m and top_m are metres, upward; a well has its depths as minus metres there and as written in
top_depth and base_depth with their unit. logged_top_depth_m and logged_base_depth_m are core depths after the
shifts in depth_shifts.csv. converted_thickness_m is what converted_means says, from survey and bedding where they
are given; a hole without survey is taken as vertical, beds without bedding as level.
Gaps are rows of the kind "gap": nothing is known there, and they are never filled.
Grain sizes are the limits of the class that was written, not measurements, unless the log says otherwise.
Where a bed has several phases its velocity and depth span all their ranges; the middle is that of the thickest.
"bound" says whether an answer is a range or one-sided; a one-sided answer has no numbers here.
Curves in LAS files are samples at equal steps and miss beds thinner than a step; intervals.csv has every bed.
A facies number is 1000 x lithology + structure; codes.csv and the parameter section of each LAS file explain it.
JSON files hold the logs and results in full; a field that is missing there was empty.
findings.csv lists what was asked, assumed or normalised when the logs were read.
"""


@dataclass(frozen=True, slots=True)
class WellFiles:
    """The hand-over of one well before it is written: CSV parts of the tables, intervals, LAS and JSON text."""

    name: str
    parts: dict[str, str]
    intervals: Columns
    las: str
    json: str
    notes: tuple[str, ...]


def export(
    logs: Log | Sequence[Log],
    path: str | Path,
    *,
    histories: Sequence[Any] | None = None,
    trends: Sequence[Any] | None = None,
    step_m: float | None = None,
    datum: str | None = None,
    thickness: Thickness = "true",
) -> tuple[Path, ...]:
    """Write the hand-over set, or one file of it.

    Parameters
    ----------
    logs : one log or several
    path : a folder for the whole set; or a file: `.csv` (intervals), `.parquet` (intervals), `.json` (logs
        and results), `.las` (curves of one log)
    histories, trends : results of each log in the same order; None leaves their columns empty
    step_m : step of LAS curves, m; by default 0.1 m, or 0.25 ft for a log in feet
    datum : marker that heights in the tops table refer to
    thickness : what converted thicknesses mean: "true", "vertical" or "measured"

    Returns
    -------
    the files written

    Raises
    ------
    ArgumentError : no log, an ending that is not known, several logs for one LAS file
    UnknownNameError : no log has the marker
    LogkitError : the folder cannot be written
    """
    from logkit.model import Log

    chosen = (logs,) if isinstance(logs, Log) else tuple(logs)
    _check(chosen, histories, trends)
    target = Path(path)
    ending = target.suffix.lower()
    if ending and ending not in FILE_ENDINGS:
        raise ArgumentError("path", str(path), f"a folder, or a file that ends in {', '.join(FILE_ENDINGS)}")
    placed, _ = place_logs(chosen, datum or "base", thickness, [find_companions(log) for log in chosen])
    results = list(
        zip(placed, histories or [None] * len(placed), trends or [None] * len(placed), strict=True)
    )
    if not ending:
        with HandoverWriter(target) as writer:
            for p, history, found in results:
                writer.add(well_files(p, history, found, step_m, datum or ""))
        return writer.written
    if ending == ".las":
        if len(chosen) != 1:
            raise ArgumentError("path", str(path), "a folder when there are several logs: LAS holds one well")
        return (_written(target, las_text(chosen[0], results[0][1], step_m)),)
    if ending == ".json":
        return (_written(target, _json([_well_record(*result) for result in results])),)
    return (_write_intervals(target, results, ending),)


class HandoverWriter:
    """Writes the set into a folder, well by well; the files take their names when all is written.

    Use it in a `with` block: an error inside leaves an earlier set as it was.
    """

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.written: tuple[Path, ...] = ()
        self._singles: list[Path] = []
        self._names: set[str] = set()
        self._open: dict[str, IO[str]] = {}
        self._waiting: Columns = typed([], INTERVAL_TYPES)
        self._parquet: Any = None
        self._parquet_path: Path | None = None
        self._notes: list[str] = []

    def __enter__(self) -> HandoverWriter:
        try:
            self.folder.mkdir(parents=True, exist_ok=True)
            for name, types in TABLES.items():
                self._open[name] = tempfile.NamedTemporaryFile(
                    "w",
                    encoding="utf-8",
                    newline="",
                    dir=self.folder,
                    prefix=f".{name}.",
                    suffix=".tmp",
                    delete=False,
                )
                self._open[name].write(_csv(typed([], types)))
        except OSError as problem:
            self._drop()
            raise write_problem(self.folder, problem) from None
        return self

    def add(self, well: WellFiles) -> None:
        """Write one well: its parts of the tables, its LAS and JSON file."""
        name = self._free_name(well.name)
        try:
            for table, part in well.parts.items():
                self._open[table].write(part)
            for column, values in well.intervals.items():
                self._waiting[column].extend(values)
            if len(self._waiting["bed"]) >= ROW_GROUP:
                self._write_waiting()
        except OSError as problem:
            raise write_problem(self.folder, problem) from None
        if well.las:
            self._singles.append(_written(self.folder / "las" / f"{name}.las", well.las))
        self._singles.append(_written(self.folder / "json" / f"{name}.json", well.json))
        self._notes.extend(well.notes)

    def __exit__(self, kind: object, problem: object, trace: object) -> None:
        if kind is not None:
            self._drop()
            return
        try:
            self._write_waiting()
        except OSError as failed:
            self._drop()
            raise write_problem(self.folder, failed) from None
        written = []
        for name, file in self._open.items():
            written.append(_renamed(file, self.folder / f"{name}.csv"))
        if self._parquet is not None and self._parquet_path is not None:
            self._parquet.close()
            target = self.folder / "intervals.parquet"
            os.chmod(self._parquet_path, 0o644)
            os.replace(self._parquet_path, target)
            written.append(target)
        written.append(_written(self.folder / "codes.csv", _csv(_columns_of(codes_table()))))
        notes = "".join(f"- {note}\n" for note in dict.fromkeys(self._notes))
        limits = (
            f"{LIMITS}\n{'Said about single wells:' if notes else ''}\n{notes}\nlogkit {logkit.__version__}\n"
        )
        written.append(_written(self.folder / "limits.txt", limits))
        self.written = (*written, *self._singles)

    def _write_waiting(self) -> None:
        """Write the intervals that wait, as one row group: many small ones would make the file slow to read."""
        import pyarrow.parquet as pq

        rows = _arrow(self._waiting)
        if self._parquet is None:
            handle, temporary = tempfile.mkstemp(dir=self.folder, prefix=".intervals.", suffix=".tmp")
            os.close(handle)
            self._parquet_path = Path(temporary)
            self._parquet = pq.ParquetWriter(self._parquet_path, rows.schema)
        self._parquet.write_table(rows)
        for values in self._waiting.values():
            values.clear()

    def _free_name(self, name: str) -> str:
        """A file name for a well that is not taken yet."""
        plain = re.sub(r"[^\w.-]+", "_", name).strip("._")[:80] or "log"
        free, number = plain, 2
        while free.casefold() in self._names:
            free, number = f"{plain}_{number}", number + 1
        self._names.add(free.casefold())
        return free

    def _drop(self) -> None:
        """Remove everything that has no name yet."""
        if self._parquet is not None:
            self._parquet.close()
        for file in self._open.values():
            file.close()
            Path(file.name).unlink(missing_ok=True)
        if self._parquet_path is not None:
            self._parquet_path.unlink(missing_ok=True)


def well_files(
    p: PlacedLog, history: Any = None, trends: Any = None, step_m: float | None = None, datum: str = ""
) -> WellFiles:
    """Everything the set says about one well, in memory."""
    notes = list(p.notes)
    las = ""
    try:
        las = las_text(p.log, history, step_m)
    except ArgumentError:
        raise
    except LogkitError as problem:
        notes.append(f"{p.name}: no LAS file. {problem}")
    findings = [
        {name: getattr(f, name) for name in ("level", "row", "column", "cell", "message", "remedy", "code")}
        | {"section": p.name}
        for f in p.log.findings
    ]
    columns = {
        "intervals": intervals_columns(p, history, trends),
        "tops": tops_columns(p, datum),
        "points": points_columns(p, trends),
        "depth_shifts": shifts_columns(p),
        "findings": typed(findings, TABLES["findings"]),
    }
    parts = {name: _csv(table, header=False) for name, table in columns.items()}
    record = _json(_well_record(p, history, trends))
    return WellFiles(p.name, parts, columns["intervals"], las, record, tuple(notes))


def _check(logs: tuple[Log, ...], histories: Sequence[Any] | None, trends: Sequence[Any] | None) -> None:
    if not logs:
        raise ArgumentError("logs", "an empty list", "one log or more")
    for name, values in (("histories", histories), ("trends", trends)):
        if values is not None and len(values) != len(logs):
            raise ArgumentError(name, f"{len(values)} items", f"a list of {len(logs)}, one a log")


def _write_intervals(target: Path, results: Sequence[tuple[PlacedLog, Any, Any]], ending: str) -> Path:
    parts = [intervals_columns(*result) for result in results]
    whole = {name: [value for part in parts for value in part[name]] for name in INTERVAL_TYPES}
    if ending == ".csv":
        return _written(target, _csv(whole))
    import pyarrow.parquet as pq

    buffer = io.BytesIO()
    pq.write_table(_arrow(whole), buffer)
    return _written(target, buffer.getvalue())


def _arrow(columns: Columns) -> pa.Table:
    """The interval table with its declared types."""
    import pyarrow as pa

    types = {"text": pa.string(), "number": pa.float64(), "whole": pa.int64()}
    return pa.table({name: pa.array(columns[name], types[kind]) for name, kind in INTERVAL_TYPES.items()})


def _columns_of(frame: pd.DataFrame) -> Columns:
    return {str(name): frame[name].tolist() for name in frame.columns}


def _well_record(p: PlacedLog, history: Any, trends: Any) -> dict[str, Any]:
    """Log, flow, grading and packages of a well as plain data."""
    return {
        "made_by": f"logkit {logkit.__version__}",
        "limits": CAUTION,
        "section": p.name,
        "header": p.log.header,
        "beds": p.log.beds,
        "flow": history.estimates if history is not None else (),
        "grading": trends.gradings if trends is not None else (),
        "packages": trends.packages if trends is not None else (),
        "findings": p.log.findings,
    }


def _json(content: Any) -> str:
    return json.dumps(_plain(content), ensure_ascii=False, separators=(",", ":"), allow_nan=False) + "\n"


def _plain(value: Any) -> Any:
    """Data that JSON can hold. Numbers that are none become null; empty fields of records are left out."""
    kind = type(value)
    if kind in _AS_IT_IS:
        return value
    if kind is float:
        return value if math.isfinite(value) else None
    if kind is tuple or kind is list:
        return [v if type(v) in _AS_IT_IS else _plain(v) for v in value]
    if kind is dict:
        return {str(k): _plain(v) for k, v in value.items()}
    if is_dataclass(kind):
        plain = {}
        for name in _field_names(kind):
            v = getattr(value, name)
            if v is not None and v != "" and v != ():
                plain[name] = v if type(v) in _AS_IT_IS else _plain(v)
        return plain
    item: Callable[[], Any] | None = getattr(value, "item", None)
    return _plain(item()) if item is not None else str(value)


@cache
def _field_names(record: type) -> tuple[str, ...]:
    return tuple(f.name for f in fields(record))


def _csv(columns: Columns, header: bool = True) -> str:
    """A table as CSV; text that a spreadsheet would take for a formula is kept text by a leading apostrophe."""
    file = io.StringIO()
    writer = csv.writer(file, lineterminator="\n")
    if header:
        writer.writerow(columns)
    safe = ([_cell(value) for value in values] for values in columns.values())
    writer.writerows(zip(*safe, strict=True))
    return file.getvalue()


def _cell(value: Any) -> Any:
    return f"'{value}" if isinstance(value, str) and value.startswith(_LIKE_FORMULA) else value


def _renamed(file: IO[str], target: Path) -> Path:
    file.flush()
    os.fsync(file.fileno())
    file.close()
    os.chmod(file.name, 0o644)
    os.replace(file.name, target)
    return target


def _written(target: Path, content: str | bytes) -> Path:
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
    except OSError as problem:
        raise write_problem(target.parent, problem) from None
    write_atomic(target, content)
    return target
