"""Words that mean more than one thing, with the readings a question offers. Which is taken depends on the reader."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from logkit.errors import UnknownNameError
from logkit.vocabulary.loading import DataFile, load_toml
from logkit.vocabulary.terms import FILES, Term, vocabulary

FILE = "ambiguous.toml"
_FIELDS = {"written", "readings", "clear_in", "source"}


@dataclass(frozen=True, slots=True)
class Meaning:
    """One reading of an ambiguous word: the words of the choice, and its terms as (vocabulary, term)."""

    words: str
    terms: tuple[tuple[str, Term], ...]


@dataclass(frozen=True, slots=True)
class Ambiguity:
    """An ambiguous word.

    Attributes
    ----------
    id : its name in the data file
    meanings : the readings, in the order of the file
    clear_in : vocabularies whose readers take their own reading without a question
    """

    id: str
    meanings: tuple[Meaning, ...]
    clear_in: tuple[str, ...]

    def ranked(self, preferred: tuple[str, ...]) -> tuple[Meaning, ...]:
        """The readings with the ones of the preferred vocabularies first."""

        def rank(meaning: Meaning) -> int:
            if not meaning.terms:
                return len(preferred) + 1
            name = meaning.terms[0][0]
            return preferred.index(name) if name in preferred else len(preferred)

        return tuple(sorted(self.meanings, key=rank))


@cache
def ambiguities() -> dict[str, Ambiguity]:
    """Written word (lower case) -> its ambiguity; read and checked once.

    Raises
    ------
    DataFileError : the data file names a term that does not exist, or has an unknown field
    """
    return build_ambiguities(load_toml(FILE))


def build_ambiguities(file: DataFile) -> dict[str, Ambiguity]:
    """The ambiguities of a parsed file.

    Raises
    ------
    DataFileError : as `ambiguities`
    """
    result: dict[str, Ambiguity] = {}
    for id, entry in file.data.items():
        unknown = set(entry) - _FIELDS
        if unknown or not entry.get("written") or len(entry.get("readings", ())) < 2:
            what = f"unknown field {min(unknown)!r}" if unknown else "needs `written` and two readings"
            raise file.fail(f"{id}: {what}.", id)
        clear_in = tuple(entry.get("clear_in", ()))
        if not set(clear_in) <= set(FILES):
            raise file.fail(f"{id}: clear_in names no vocabulary: {clear_in}.", id, "clear_in")
        meanings = []
        for reading in entry["readings"]:
            terms = tuple(_term(reference, id, file) for reference in reading.get("terms", ()))
            meanings.append(Meaning(reading["words"], terms))
        found = Ambiguity(id, tuple(meanings), clear_in)
        for written in entry["written"]:
            result[" ".join(written.casefold().replace(".", " ").split())] = found
    return result


def _term(reference: str, id: str, file: DataFile) -> tuple[str, Term]:
    name, _, term = reference.partition(":")
    if name not in FILES:
        raise file.fail(f"{id}: there is no vocabulary {name!r}.", id, "readings")
    try:
        return name, vocabulary(name)[term]
    except UnknownNameError as problem:
        raise file.fail(f"{id}: {problem.what}", id, "readings", problem.remedy) from None
