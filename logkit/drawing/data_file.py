"""TOML files of the drawing (styles, motifs) read so that every complaint names file and line.

Only reading and finding lines belongs here; what a key means is decided by `style` and `motifs`.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import Any

from logkit.errors import DataFileError, nearest

_HEADER = re.compile(r"^\s*\[\[?\s*([^\]]+?)\s*\]\]?\s*(#.*)?$")
_BARE_KEY = re.compile(r"^\s*(?:\"([^\"]+)\"|([A-Za-z0-9_.-]+))\s*=")


class DataText:
    """A TOML file with its text, so that a key can be traced to its line.

    Attributes
    ----------
    name : file name for messages
    tables : the parsed content
    """

    def __init__(self, name: str, text: str) -> None:
        self.name = name
        self._lines = text.splitlines()
        try:
            self.tables: dict[str, Any] = tomllib.loads(text)
        except tomllib.TOMLDecodeError as problem:
            place = re.search(r"at line (\d+)", str(problem))
            what = re.sub(r"\s*\(at [^)]*\)", "", str(problem))
            line = int(place.group(1)) if place else len(self._lines)
            raise DataFileError(name, line, f"not valid TOML: {what}.", "Correct the line.") from None

    def line_of(self, path: Sequence[str]) -> int | None:
        """Line of the deepest part of a key path that is written in the file, counted from 1."""
        best: int | None = None
        depth = 0
        section: list[str] = []
        for number, line in enumerate(self._lines, 1):
            header = _HEADER.match(line)
            if header:
                section = [part.strip().strip('"') for part in header.group(1).split(".")]
                here = section
            else:
                key = _BARE_KEY.match(line)
                if not key:
                    continue
                here = [*section, *(key.group(1) or key.group(2)).split(".")]
            if len(here) > depth and list(path[: len(here)]) == here:
                best, depth = number, len(here)
        return best

    def fail(self, path: Sequence[str], what: str, remedy: str = "") -> DataFileError:
        """The error to raise about a key."""
        return DataFileError(self.name, self.line_of(path), what, remedy)

    def unknown(self, path: Sequence[str], known: Iterable[str]) -> DataFileError:
        """The error about a key that nothing reads, with the nearest one that is."""
        names = sorted(known)
        match = nearest(path[-1], names)
        remedy = f"Did you mean {match!r}?" if match else f"Known: {', '.join(names)}."
        place = f" in [{'.'.join(path[:-1])}]" if len(path) > 1 else ""
        return self.fail(path, f"there is no key {path[-1]!r}{place}.", remedy)


def read_data(path: Path) -> DataText:
    """Read a TOML file.

    Raises
    ------
    DataFileError : the file cannot be read or is not TOML; names the line
    """
    try:
        text = path.read_text(encoding="utf-8-sig")
    except OSError as problem:
        reason = problem.strerror or "unknown reason"
        raise DataFileError(str(path), None, f"cannot be read: {reason}.", "Check the path.") from None
    except UnicodeDecodeError:
        raise DataFileError(str(path), None, "is not UTF-8 text.", "Save it as UTF-8.") from None
    return DataText(str(path), text)
