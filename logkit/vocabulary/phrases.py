"""Finding terms in running shorthand: the longest known phrase from the left, over several vocabularies at once.

What a found term means for a bed belongs to the cell readers.
"""

from __future__ import annotations

from dataclasses import dataclass
from difflib import get_close_matches
from functools import cache

from logkit.vocabulary.ambiguity import Ambiguity, ambiguities
from logkit.vocabulary.loading import load_toml
from logkit.vocabulary.terms import Term, vocabulary
from logkit.vocabulary.words import Token, normal, tokens, word

_ALIKE = 0.78
"""Likeness from which a word counts as a slip of another."""


@dataclass(frozen=True, slots=True)
class Piece:
    """A stretch of a text.

    Attributes
    ----------
    written : the words as written
    vocabulary, term : what it stands for; "" and None for words that are not known
    ambiguity : its readings when it means more than one thing
    filler : True for a word that changes nothing ("with", "some")
    """

    written: str
    vocabulary: str = ""
    term: Term | None = None
    ambiguity: Ambiguity | None = None
    filler: bool = False


class Lexicon:
    """The phrases of several vocabularies in one look-up; where two know a phrase, the first one named has it."""

    def __init__(self, names: tuple[str, ...]) -> None:
        self.names = names
        self._index: dict[str, tuple[str, Term]] = {}
        for name in names:
            terms = vocabulary(name)
            for phrase, id in terms.phrases.items():
                self._index.setdefault(phrase, (name, terms[id]))
        self._ambiguous = ambiguities()
        self._words = {w: None for phrase in self._index for w in phrase.split() if len(w) > 3}
        self._longest = max((phrase.count(" ") + 1 for phrase in self._index), default=1)

    def scan(self, text: str) -> tuple[Piece, ...]:
        """The text in pieces, from left to right."""
        parts = tokens(text)
        pieces: list[Piece] = []
        at = 0
        while at < len(parts):
            for length in range(min(self._longest, len(parts) - at), 0, -1):
                piece = self._known(parts[at : at + length], text)
                if piece:
                    break
            else:
                length = 1
                piece = Piece(parts[at].written, filler=all(w in fillers() for w in parts[at].form))
            pieces.append(piece)
            at += length
        return tuple(pieces)

    def suggest(self, text: str) -> str | None:
        """Label of the term that was probably meant: unknown words are put right one by one, None without a hint."""
        mended = []
        for token in tokens(text):
            known = token.written[0].isdigit() or all(w in self._words for w in token.form)
            near = None if known else get_close_matches(token.form[0], self._words, n=1, cutoff=_ALIKE)
            mended.append(near[0] if near else token.written)
        terms = [piece.term for piece in self.scan(" ".join(mended)) if piece.term]
        if terms and " ".join(mended) != " ".join(token.written for token in tokens(text)):
            return terms[0].label
        whole = get_close_matches(normal(text), self._index, n=1, cutoff=_ALIKE)
        return self._index[whole[0]][1].label if whole else None

    def _known(self, parts: tuple[Token, ...], text: str) -> Piece | None:
        written = text[parts[0].start : parts[-1].end]
        doubtful = self._ambiguous.get(" ".join(part.written for part in parts).casefold())
        key = " ".join(w for part in parts for w in part.form)
        name, term = self._index.get(key, ("", None))
        if doubtful:
            if self.names[0] not in doubtful.clear_in:
                return Piece(written, name, term, doubtful)
            own = next((t for m in doubtful.meanings for n, t in m.terms if n == self.names[0]), None)
            return Piece(written, self.names[0], own)
        return Piece(written, name, term) if term else None


@cache
def lexicon(*names: str) -> Lexicon:
    """The lexicon of these vocabularies; the first is the one a reader is about."""
    return Lexicon(names)


@cache
def fillers() -> frozenset[str]:
    """Compared words that change nothing."""
    return frozenset(w for written in load_toml("words.toml").data["fillers"]["words"] for w in word(written))
