"""Facies codes and divisions: named, versioned tables of code -> structures, admitted sizes, lithology.

A table may include others; which table is used is the user's choice. How a cell with codes is taken apart
belongs to the readers.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from logkit.errors import UnknownNameError, nearest
from logkit.vocabulary.loading import DataFile, load_toml
from logkit.vocabulary.terms import vocabulary

FILE = "facies_codes.toml"
_TABLE_FIELDS = {"title", "source", "includes", "codes"}
_CODE_FIELDS = {"words", "structures", "alternatives", "size_mm", "lithology"}


@dataclass(frozen=True, slots=True)
class FaciesCode:
    """One code.

    Attributes
    ----------
    code : as written, case counts
    words : the published description in short
    structures : structure ids, upward where there are several
    alternatives : structure ids the code may mean as well
    size_mm : grain sizes the code admits, None when it admits all
    lithology : lithology id, "" when the code does not tell
    table : the table it is from
    source : reference key of the table
    """

    code: str
    words: str
    structures: tuple[str, ...]
    alternatives: tuple[str, ...]
    size_mm: tuple[float, float] | None
    lithology: str
    table: str
    source: str

    def admits(self, low_mm: float, high_mm: float) -> bool:
        """True when a grain-size interval (mm) overlaps the admitted sizes."""
        return self.size_mm is None or (low_mm <= self.size_mm[1] and high_mm >= self.size_mm[0])


@dataclass(frozen=True, slots=True)
class CodeTable:
    """A table of codes by code, with its title and source."""

    name: str
    title: str
    source: str
    codes: Mapping[str, FaciesCode]

    def nearest(self, code: str) -> str | None:
        """The known code most like the one written, None when nothing is near."""
        return nearest(code, self.codes)


@cache
def code_tables() -> dict[str, CodeTable]:
    """All tables by name, read and checked once.

    Raises
    ------
    DataFileError : an unknown field, structure or lithology, or an include that does not exist
    """
    return build_tables(load_toml(FILE))


@cache
def code_table(name: str) -> CodeTable:
    """A table by name.

    Raises
    ------
    UnknownNameError : no such table; names the nearest
    """
    try:
        return code_tables()[name]
    except KeyError:
        raise UnknownNameError("table of facies codes", name, code_tables()) from None


def build_tables(file: DataFile) -> dict[str, CodeTable]:
    """The tables of a parsed file. Raises as `code_tables`."""
    tables: dict[str, CodeTable] = {}
    for name, entry in file.data.items():
        unknown = set(entry) - _TABLE_FIELDS
        if unknown or not {"title", "source"} <= set(entry):
            what = f"unknown field {min(unknown)!r}" if unknown else "title or source is missing"
            raise file.fail(f"{name}: {what}.", name)
        codes: dict[str, FaciesCode] = {}
        for included in entry.get("includes", ()):
            if included not in tables:
                raise file.fail(f"{name}: includes {included!r}, which is not above it.", name, "includes")
            codes.update(tables[included].codes)
        for code, fields in entry.get("codes", {}).items():
            codes[code] = _code(code, fields, name, entry["source"], file)
        tables[name] = CodeTable(name, entry["title"], entry["source"], codes)
    return tables


def _code(code: str, fields: dict, table: str, source: str, file: DataFile) -> FaciesCode:
    place = f"{table}.codes.{code}"
    unknown = set(fields) - _CODE_FIELDS
    if unknown:
        raise file.fail(f"{place}: unknown field {min(unknown)!r}.", f"{table}.codes", code)
    wrong = [
        id for id in (*fields.get("structures", ()), *fields.get("alternatives", ()))
        if id not in vocabulary("structures")
    ]  # fmt: skip
    lithology = fields.get("lithology", "")
    if wrong or (lithology and lithology not in vocabulary("lithologies")):
        raise file.fail(f"{place}: there is no term {(wrong or [lithology])[0]!r}.", f"{table}.codes", code)
    size = fields.get("size_mm")
    return FaciesCode(
        code, fields.get("words", ""), tuple(fields.get("structures", ())), tuple(fields.get("alternatives", ())),
        (float(size[0]), float(size[1])) if size else None, lithology, table, source,
    )  # fmt: skip
