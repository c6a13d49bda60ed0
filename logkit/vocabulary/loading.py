"""Reading of the data files of the vocabulary, so that a mistake in one is named with file and line."""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from logkit.errors import DataFileError


@dataclass(frozen=True, slots=True)
class DataFile:
    """A parsed TOML file with its text, which is needed to find lines.

    Attributes
    ----------
    name : file name as shown in errors
    data : the tables
    text : the file as it stands
    """

    name: str
    data: dict[str, Any]
    text: str

    def line_of(self, table: str, field: str = "") -> int | None:
        """Line of a table's heading, or of one of its fields; None when it is not found."""
        heading = re.compile(rf"^\s*\[+\s*\"?{re.escape(table)}\"?\s*\]+")
        wanted = re.compile(rf"^\s*\"?{re.escape(field)}\"?\s*=") if field else None
        found = None
        for number, line in enumerate(self.text.splitlines(), 1):
            if found is None:
                if heading.match(line):
                    found = number
            elif wanted is None or line.lstrip().startswith("["):
                break
            elif wanted.match(line):
                return number
        return found

    def fail(self, what: str, table: str, field: str = "", remedy: str = "") -> DataFileError:
        """The error for something wrong in a table, ready to be raised."""
        return DataFileError(self.name, self.line_of(table, field), what, remedy)


@cache
def load_toml(name: str) -> DataFile:
    """A data file of the vocabulary by its name.

    Raises
    ------
    DataFileError : the file is missing or is not TOML
    """
    place = files("logkit.vocabulary").joinpath("data", name)
    shown = f"vocabulary/data/{name}"
    try:
        return parse_toml(place.read_text(encoding="utf-8"), shown)
    except FileNotFoundError:
        raise DataFileError(shown, None, "the file is missing.", "Install logkit again.") from None


def parse_toml(text: str, name: str) -> DataFile:
    """A data file from its text.

    Raises
    ------
    DataFileError : the text is not TOML; names the line
    """
    try:
        return DataFile(name, tomllib.loads(text), text)
    except tomllib.TOMLDecodeError as problem:
        line = re.search(r"line (\d+)", str(problem))
        raise DataFileError(name, int(line[1]) if line else None, f"not TOML: {problem}.") from None
