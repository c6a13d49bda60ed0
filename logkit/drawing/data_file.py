"""TOML files of the drawing (styles, motifs) read so that every complaint names file and line.

Only reading and finding lines belongs here; what a key means is decided by `style` and `motifs`.
"""

from __future__ import annotations

import dataclasses
import re
import tomllib
import types
import typing
from collections.abc import Iterable, Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Any

from logkit.errors import DataFileError, nearest

_COLOUR = re.compile(r"#[0-9a-f]{6}", re.IGNORECASE)
_HEADER = re.compile(r"^\s*\[\[?\s*([^\]]+?)\s*\]\]?\s*(#.*)?$")
_BARE_KEY = re.compile(r"^\s*(?:\"([^\"]+)\"|([A-Za-z0-9_.-]+))\s*=")


class HexColour(str):
    """An sRGB colour as "#rrggbb"."""

    __slots__ = ()


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


Origin = dict[tuple[str, ...], DataText]
"""Which file a key came from, for messages."""


class Reader:
    """Turns parsed TOML into records; a problem names the file and line the value came from."""

    def __init__(self, origin: Origin, name: str) -> None:
        self._origin = origin
        self._name = name

    def at(self, path: tuple[str, ...]) -> DataText:
        """The file a key came from."""
        for depth in range(len(path), 0, -1):
            if path[:depth] in self._origin:
                return self._origin[path[:depth]]
        return DataText(self._name, "")

    def keys(self, table: Mapping[str, Any], known: tuple[str, ...], path: tuple[str, ...]) -> None:
        for key in table:
            if key not in known:
                raise self.at((*path, key)).unknown((*path, key), known)

    def table(self, value: Any, path: tuple[str, ...]) -> dict[str, Any]:
        if not isinstance(value, dict):
            raise self.at(path).fail(path, f"{'.'.join(path)} must be a table, not {value!r}.")
        return value

    def record(self, cls: Any, value: Any, path: tuple[str, ...]) -> Any:
        table = self.table(value, path)
        hints = field_types(cls)
        self.keys(table, tuple(key_of(name) for name in hints), path)
        defaults = {f.name for f in dataclasses.fields(cls) if f.default is not dataclasses.MISSING}
        made = {}
        for name, hint in hints.items():
            here = (*path, key_of(name))
            if key_of(name) not in table:
                if name in defaults:
                    continue
                raise self.at(path).fail(path, f"{'.'.join(here)} is missing.", "Give it a value.")
            made[name] = self.value(hint, table[key_of(name)], here)
        return cls(**made)

    def value(self, hint: Any, value: Any, path: tuple[str, ...]) -> Any:
        name, wrong = ".".join(path), f"not {value!r}"
        if typing.get_origin(hint) is types.UnionType:
            hint = str if isinstance(value, str) else tuple[float, ...]
        if typing.get_origin(hint) is not None and issubclass(typing.get_origin(hint), Mapping):
            kind = typing.get_args(hint)[1]
            table = self.table(value, path)
            return types.MappingProxyType({k: self.record(kind, v, (*path, k)) for k, v in table.items()})
        if typing.get_origin(hint) is tuple:
            kind = typing.get_args(hint)[0]
            if not isinstance(value, list | tuple):
                raise self.at(path).fail(path, f"{name} must be a list, {wrong}.")
            return tuple(self.value(kind, item, path) for item in value)
        if hint is HexColour:
            if not isinstance(value, str) or not _COLOUR.fullmatch(value):
                raise self.at(path).fail(path, f'{name} must be a colour like "#1d2430", {wrong}.')
            return HexColour(value.lower())
        if hint is float and isinstance(value, int | float) and not isinstance(value, bool):
            if not abs(value) < 1e9:
                raise self.at(path).fail(path, f"{name} must be a finite number, {wrong}.")
            return float(value)
        if hint is not float and isinstance(value, hint) and isinstance(value, bool) == (hint is bool):
            return value
        words = {float: "a number", int: "a whole number", bool: "true or false", str: "text in quotes"}[hint]
        raise self.at(path).fail(path, f"{name} must be {words}, {wrong}.")


@cache
def field_types(cls: Any) -> dict[str, Any]:
    """Fields of a record class with their types."""
    return typing.get_type_hints(cls)


def key_of(name: str) -> str:
    """Key in the file of a field; a Python keyword carries an underscore in the class only."""
    return name.rstrip("_")
