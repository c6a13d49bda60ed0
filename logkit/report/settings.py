"""What a person can choose about a report: sections, style, units, logo, organisation; TOML or options."""

from __future__ import annotations

import math
import tomllib
from dataclasses import dataclass, fields, replace
from pathlib import Path
from typing import Any, Literal

from logkit.errors import ArgumentError, DataFileError, LogkitError, nearest

SECTIONS = {
    "summary": "Summary",
    "columns": "Columns",
    "panel": "Wells side by side",
    "comparison": "Comparison of the wells",
    "history": "Flow history",
    "beds": "Beds",
    "grading": "Grading and packages",
    "currents": "Palaeocurrents",
    "states": "Bed states and grain sizes",
    "findings": "Findings and assumptions",
    "methods": "Methods",
    "references": "References",
    "limits": "Limits and cautions",
    "ledger": "Ledgers",
}


@dataclass(frozen=True, slots=True)
class ReportSettings:
    """Choices of one report.

    sections : ids in the order wanted; `SECTIONS` names them
    units : "si" or "feet" (lengths in feet, velocities in ft/s)
    style, scale : of the columns, 50 for 1:50; the scale of the style by default, less for a log of many sheets
    page, datum : paper of text and columns; datum of the panel
    organisation, logo : line and picture (svg or png file) of the title page
    archive : PDF/A
    """

    title: str = ""
    sections: tuple[str, ...] = tuple(SECTIONS)
    units: Literal["si", "feet"] = "si"
    style: str = "report"
    scale: float | None = None
    page: str = "A4"
    datum: str = ""
    organisation: str = ""
    logo: str = ""
    archive: bool = False


def make_settings(file: str | Path | None, **options: Any) -> ReportSettings:
    """Settings from a TOML file, with options above it.

    Raises
    ------
    DataFileError : the file has an unknown key or a wrong value; names file, line and the nearest key
    ArgumentError : an option is wrong
    """
    settings = ReportSettings()
    if file is not None:
        settings = _checked(settings, _read(Path(file)), str(file), Path(file).read_text(encoding="utf-8"))
    given = {key: value for key, value in options.items() if value is not None}
    return _checked(settings, given, "", "")


def _read(path: Path) -> dict[str, Any]:
    try:
        return tomllib.loads(path.read_text(encoding="utf-8"))
    except OSError as problem:
        raise LogkitError(f"{path}: {problem.strerror}.", "Give the path of a TOML file.") from None
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as problem:
        raise DataFileError(str(path), None, f"not TOML: {problem}") from None


def _checked(settings: ReportSettings, given: dict[str, Any], file: str, text: str) -> ReportSettings:
    known = {f.name: f for f in fields(ReportSettings)}
    values: dict[str, Any] = {}
    for key, value in given.items():
        if key not in known:
            hint = nearest(key, known)
            raise _problem(
                file, text, key, f"unknown key {key!r}.", f"Did you mean {hint!r}?" if hint else _list(known)
            )
        default = known[key].default
        if key == "sections":
            value = tuple([value] if isinstance(value, str) else value)
            for name in value:
                if name not in SECTIONS:
                    hint = nearest(str(name), SECTIONS)
                    what = f"there is no section {name!r}."
                    raise _problem(
                        file, text, key, what, f"Did you mean {hint!r}?" if hint else _list(SECTIONS)
                    )
        elif key == "scale":
            if isinstance(value, bool) or not isinstance(value, int | float) or not 0 < value < math.inf:
                raise _problem(file, text, key, f"{key} is {value!r}, but it must be a number above zero.")
            value = float(value)
        elif isinstance(default, bool) != isinstance(value, bool):
            raise _problem(file, text, key, f"{key} is {value!r}, but it must be true or false.")
        elif isinstance(default, str) and not isinstance(value, str):
            raise _problem(file, text, key, f"{key} is {value!r}, but it must be text.")
        if key == "units" and value not in ("si", "feet"):
            raise _problem(file, text, key, f"units is {value!r}, but it must be 'si' or 'feet'.")
        values[key] = value
    return replace(settings, **values)


def _problem(file: str, text: str, key: str, what: str, remedy: str = "") -> LogkitError:
    if not file:
        return ArgumentError(key, what, remedy or "one of the settings of a report")
    line = next((i for i, row in enumerate(text.splitlines(), 1) if row.split("=")[0].strip() == key), None)
    return DataFileError(file, line, what, remedy)


def _list(names: Any) -> str:
    return f"Known: {', '.join(names)}."
