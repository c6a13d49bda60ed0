"""Terms and vocabularies: ids with labels and the words people write for them, checked when loaded.

Terms are data (`data/*.toml`); what a column does with a term belongs to the readers. A vocabulary knows
nothing of the others: words that belong to several are declared in `ambiguity`.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType
from typing import Any

from logkit.errors import UnknownNameError, nearest
from logkit.vocabulary.loading import DataFile, load_toml
from logkit.vocabulary.words import normal


@dataclass(frozen=True, slots=True)
class Term:
    """One entry of a vocabulary. Fields that a vocabulary does not use stay empty.

    Attributes
    ----------
    id : stable name used in logs and code
    label : words on drawings and in reports
    source : where the usage is from
    synonyms : other words people write
    group : what kind of structure, contact, fossil … it is
    family : texture family of a lithology
    size_mm : usual grain-size range of a lithology; range of sizes in which a structure can form
    bed_state : state of the bed that makes a structure, where there is exactly one
    limit_phi : upper limit of a sorting class
    sense, nature, rank : of a palaeocurrent indicator: "direction" or "axis"; "plane" or "line"; "high" …
    upstream : True for an indicator that dips against the flow
    structures : structure ids an indicator is measured on
    unit : kind of unit a column may have: "length", "size", "angle", "time" or ""
    """

    id: str
    label: str
    source: str
    synonyms: tuple[str, ...] = ()
    group: str = ""
    family: str = ""
    size_mm: tuple[float, float] | None = None
    bed_state: str = ""
    limit_phi: float | None = None
    sense: str = ""
    nature: str = ""
    rank: str = ""
    upstream: bool = False
    structures: tuple[str, ...] = ()
    unit: str = ""


FILES: dict[str, tuple[str, ...]] = {
    "structures": ("group", "bed_state", "size_mm"),
    "lithologies": ("family", "size_mm"),
    "qualifiers": ("group",),
    "contacts": (),
    "gaps": (),
    "indicators": ("sense", "nature", "rank", "upstream", "structures"),
    "fossils": ("group",),
    "sorting": ("limit_phi",),
    "rounding": (),
    "settings": (),
    "colours": (),
    "columns": ("unit",),
    "size_columns": ("unit",),
}
"""Vocabulary -> the fields its terms may have beside label, synonyms and source."""

_COMMON = ("label", "synonyms", "source")
_TYPES = {
    "synonyms": "list of words", "structures": "list of words", "size_mm": "pair of numbers, small first",
    "limit_phi": "number", "upstream": "true or false",
}  # fmt: skip


class Vocabulary(Mapping[str, Term]):
    """The terms of one kind by id; finds a term from what a person wrote.

    Parameters
    ----------
    name : what the terms are ("structures")
    terms : by id, in the order of the file
    """

    def __init__(self, name: str, terms: Mapping[str, Term], phrases: Mapping[str, str]) -> None:
        self.name = name
        self._terms = MappingProxyType(dict(terms))
        self._phrases = MappingProxyType(dict(phrases))

    def __getitem__(self, id: str) -> Term:
        try:
            return self._terms[id]
        except KeyError:
            raise UnknownNameError(f"term in {self.name}", id, self._terms) from None

    def __contains__(self, id: object) -> bool:
        return id in self._terms

    def __iter__(self) -> Iterator[str]:
        return iter(self._terms)

    def __len__(self) -> int:
        return len(self._terms)

    @property
    def ids(self) -> tuple[str, ...]:
        """All ids in the order of the file."""
        return tuple(self._terms)

    @property
    def phrases(self) -> Mapping[str, str]:
        """Compared form of every label, id and synonym -> id."""
        return self._phrases

    def find(self, text: str) -> Term | None:
        """The term a whole text stands for, None when it is not one."""
        id = self._phrases.get(normal(text))
        return self._terms[id] if id else None

    def nearest(self, text: str) -> str | None:
        """Label of the term most like the text, None when nothing is near."""
        match = nearest(normal(text), self._phrases)
        return self._terms[self._phrases[match]].label if match else None


@cache
def vocabulary(name: str) -> Vocabulary:
    """A vocabulary by name, read and checked once.

    Raises
    ------
    UnknownNameError : there is no such vocabulary
    DataFileError : its file has a mistake; names file and line
    """
    if name not in FILES:
        raise UnknownNameError("vocabulary", name, FILES)
    return build_vocabulary(name, load_toml(f"{name}.toml"))


def build_vocabulary(name: str, file: DataFile) -> Vocabulary:
    """A vocabulary from a parsed file, checked field by field.

    Raises
    ------
    DataFileError : a field is missing, unknown or of the wrong kind, or two terms share a word
    """
    terms = {id: _term(id, entry, FILES[name], file) for id, entry in file.data.items()}
    phrases: dict[str, str] = {}
    for id, term in terms.items():
        for words in (id.replace("_", " "), term.label, *term.synonyms):
            key = normal(words)
            taken = phrases.setdefault(key, id)
            if taken != id:
                raise file.fail(f"{words!r} stands for {taken!r} and for {id!r}.", id, "synonyms",
                                "Keep it in one of the two.")  # fmt: skip
    return Vocabulary(name, terms, phrases)


def _term(id: str, entry: Any, extra: tuple[str, ...], file: DataFile) -> Term:
    if not isinstance(entry, dict):
        raise file.fail(f"{id!r} must be a table.", id)
    known = (*_COMMON, *extra)
    for name, value in entry.items():
        if name not in known:
            near = nearest(name, known)
            hint = f"Did you mean {near!r}?" if near else f"Known: {', '.join(known)}."
            raise file.fail(f"{id}: unknown field {name!r}.", id, name, hint)
        if not _fits(name, value):
            raise file.fail(f"{id}: {name} must be a {_TYPES.get(name, 'text')}.", id, name)
    for name in ("label", "source"):
        if not entry.get(name):
            raise file.fail(f"{id}: {name} is missing.", id)
    values: dict[str, Any] = {k: tuple(v) if isinstance(v, list) else v for k, v in entry.items()}
    return Term(id=id, **values)


def _fits(name: str, value: Any) -> bool:
    if name in ("synonyms", "structures"):
        return isinstance(value, list) and all(isinstance(v, str) and v for v in value)
    if name == "size_mm":
        numbers = isinstance(value, list) and all(isinstance(v, int | float) for v in value)
        return bool(numbers and len(value) == 2 and 0 < value[0] <= value[1])
    if name == "limit_phi":
        return isinstance(value, int | float) and not isinstance(value, bool)
    if name == "upstream":
        return isinstance(value, bool)
    return isinstance(value, str)
