"""The reference list: one TOML file, one record a key. Docstrings and formula records cite by key."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

from logkit.errors import DataFileError, UnknownNameError

FILE = "data/references.toml"


@dataclass(frozen=True, slots=True)
class Reference:
    """One published work.

    Attributes
    ----------
    key : how the code cites it, `soulsby_1997`
    authors, year, title, where : the printed reference; `where` is journal, volume, pages or publisher
    status : "seen" (primary or agency text), "secondary", or "memory" (details to be checked before print)
    """

    key: str
    authors: str
    year: int
    title: str
    where: str
    status: str

    def __str__(self) -> str:
        title = f" {self.title}." if self.title else ""
        return f"{self.authors} ({self.year}).{title} {self.where}".strip()

    @property
    def short(self) -> str:
        """Author and year as cited in running text."""
        return f"{self.authors_short} {self.year}"

    @property
    def authors_short(self) -> str:
        """Family names only, shortened to `et al.` from three authors on."""
        names = [part.split(",")[0].strip() for part in self.authors.replace(" & ", "; ").split(";")]
        if len(names) > 2:
            return f"{names[0]} et al."
        return " & ".join(names)


@cache
def all_references() -> dict[str, Reference]:
    """Every reference by key, read once from the data file.

    Raises
    ------
    DataFileError : a record lacks a field or has one that is not known
    """
    text = files("logkit").joinpath(FILE).read_text(encoding="utf-8")
    records = tomllib.loads(text)
    result = {}
    for key, fields in records.items():
        try:
            result[key] = Reference(key=key, **fields)
        except TypeError as problem:
            line = next((i for i, t in enumerate(text.splitlines(), 1) if t.strip() == f"[{key}]"), None)
            raise DataFileError(FILE, line, f"record {key!r}: {problem}") from None
    return result


def reference(key: str) -> Reference:
    """The reference with this key.

    Raises
    ------
    UnknownNameError : no such key; names the nearest one
    """
    try:
        return all_references()[key]
    except KeyError:
        raise UnknownNameError("reference", key, all_references()) from None


NOT_WORKS = ("ours", "definition", "")
"""Source entries of records that name no published work."""


def cited(source: str) -> str:
    """Reference keys, parted by commas, as authors and years; what is no work is called own construction.

    Raises
    ------
    UnknownNameError : a key that the list does not have
    """
    keys = [key.strip() for key in source.split(",")]
    return "; ".join("own construction" if key in NOT_WORKS else reference(key).short for key in keys)
