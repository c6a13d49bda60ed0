"""Files that lie beside a log and belong to its well: survey, depth shifts, curves.

A log `NAME.csv` may have `NAME.survey.csv`, `NAME.shifts.csv` and `NAME.las`. Reading them belongs here; what
they mean for positions belongs to `placing`.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from logkit.compare.shifts import ShiftTable
from logkit.compare.survey import Survey
from logkit.errors import ArgumentError, DataFileError, LogkitError
from logkit.units import METRES, split_suffix

if TYPE_CHECKING:
    from logkit.compare.curves import Curve
    from logkit.model import Log

SURVEY_COLUMNS = ("measured_depth", "inclination", "azimuth")
SHIFT_COLUMNS = ("from", "to", "depth", "shift")


@dataclass(frozen=True, slots=True)
class Companions:
    """What is known about a well beside its beds; None and empty where there is no file."""

    survey: Survey | None = None
    shifts: ShiftTable | None = None
    curves: tuple[Curve, ...] = ()
    notes: tuple[str, ...] = ()


def find_companions(log: Log) -> Companions:
    """Read the files beside a log.

    Raises
    ------
    LogkitError : such a file is there but cannot be used
    """
    if not log.source or log.source == "-":
        return Companions()
    beside = Path(log.source)
    stem = beside.with_suffix("")
    survey_path, shifts_path = (
        stem.with_name(f"{stem.name}.survey.csv"),
        stem.with_name(f"{stem.name}.shifts.csv"),
    )
    las_path = stem.with_suffix(".las") if not stem.suffix else stem.with_name(f"{stem.name}.las")
    survey = read_survey(survey_path) if survey_path.is_file() else None
    shifts = read_shifts(shifts_path) if shifts_path.is_file() else None
    curves: tuple[Curve, ...] = ()
    if las_path.is_file():
        from logkit.compare.curves import read_curves

        curves = read_curves(las_path)
    used = [p.name for p, got in ((survey_path, survey), (shifts_path, shifts), (las_path, curves)) if got]
    notes = (f"{log.name}: read {', '.join(used)} beside the log",) if used else ()
    return Companions(survey, shifts, curves, notes)


def read_survey(path: str | Path) -> Survey:
    """A directional survey from columns `measured_depth_m` (or _ft), `inclination_deg`, `azimuth_deg`.

    Raises
    ------
    LogkitError : no such file; a column is missing; a cell is no number (names the line)
    """
    columns, rows = _read_table(Path(path), SURVEY_COLUMNS)
    missing = [name for name in SURVEY_COLUMNS if name not in columns]
    if missing:
        raise DataFileError(
            str(path),
            None,
            f"the survey lacks {', '.join(missing)}.",
            "Name the columns measured_depth_m, …_deg.",
        )
    try:
        return Survey(*(tuple(row[name] for row in rows) for name in SURVEY_COLUMNS))
    except ArgumentError as problem:
        raise DataFileError(str(path), None, problem.what) from None


def read_shifts(path: str | Path) -> ShiftTable:
    """A shift table: `shift_m` alone, or with `from_m, to_m` (intervals) or `depth_m` (points).

    Raises
    ------
    LogkitError : no such file; a column is missing; a cell is no number (names the line)
    """
    columns, rows = _read_table(Path(path), SHIFT_COLUMNS)
    if "shift" not in columns:
        raise DataFileError(str(path), None, "the shift table lacks a column shift_m.", "Add it.")
    try:
        if {"from", "to"} <= columns:
            return ShiftTable("per interval", tuple((r["from"], r["to"], r["shift"]) for r in rows))
        if "depth" in columns:
            return ShiftTable.points(tuple(r["depth"] for r in rows), tuple(r["shift"] for r in rows))
        if len(rows) == 1:
            return ShiftTable.constant(rows[0]["shift"])
    except ArgumentError as problem:
        raise DataFileError(str(path), None, problem.what) from None
    raise DataFileError(
        str(path), None, "several shifts stand without depths.", "Add columns from_m and to_m, or depth_m."
    )


def panel_distance_m(log: Log) -> float | None:
    """Distance of a well along the panel from its header line `distance_m` (or _km, _ft); None without one.

    Raises
    ------
    ArgumentError : the header line holds no number
    """
    for key, text in log.header.extra:
        stem, _, unit = key.casefold().replace(" ", "_").rpartition("_")
        if stem != "distance" or unit not in METRES:
            continue
        number = _number(text)
        if number is None:
            raise ArgumentError(key, text, f"a number in the header of {log.name}")
        return number * METRES[unit]
    return None


def _read_table(path: Path, known: Sequence[str]) -> tuple[set[str], list[dict[str, float]]]:
    """Columns by stem and rows in metres or degrees of a small table; `#` lines are skipped."""
    if not path.is_file():
        raise LogkitError(f"There is no file {str(path)!r}.", "Check the name.")
    try:
        text = path.read_text(encoding="utf-8-sig")
    except UnicodeDecodeError:
        raise DataFileError(str(path), None, "the file is not UTF-8 text.", "Save it as UTF-8 CSV.") from None
    lines = [(n, line) for n, line in enumerate(text.splitlines(), 1) if line.strip() and line[0] != "#"]
    if len(lines) < 2:
        raise DataFileError(str(path), None, "the table has no rows.", "Write a heading line and rows.")
    separator = ";" if ";" in lines[0][1] else "\t" if "\t" in lines[0][1] else ","
    table = list(csv.reader((line for _, line in lines), delimiter=separator))
    names: list[tuple[str, float]] = []
    for heading in table[0]:
        stem, unit = split_suffix(heading.strip().casefold().replace(" ", "_"))
        factor = METRES.get(unit.symbol, 1.0) if unit else 1.0
        names.append((stem, factor) if stem in known else ("", 1.0))
    rows: list[dict[str, float]] = []
    for (number, _), cells in zip(lines[1:], table[1:], strict=False):
        row: dict[str, float] = {}
        for (name, factor), cell in zip(names, cells, strict=False):
            if not name:
                continue
            value = _number(cell)
            if value is None:
                raise DataFileError(
                    str(path), number, f"{cell!r} is no number in column {name}.", "Correct it."
                )
            row[name] = value * factor
        rows.append(row)
    columns = {name for name, _ in names if name}
    for (number, _), row in zip(lines[1:], rows, strict=False):
        if set(row) != columns:
            raise DataFileError(
                str(path), number, "the row is shorter than the heading.", "Fill every column."
            )
    return columns, rows


def _number(text: str) -> float | None:
    try:
        value = float(text.strip().replace(",", "."))
    except ValueError:
        return None
    return value if math.isfinite(value) else None
