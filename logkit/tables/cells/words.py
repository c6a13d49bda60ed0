"""What the readers share when they look for terms: settling ambiguous words, collecting terms, words left over."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

from logkit.tables.cells.reading import Remark, note, question, quoted
from logkit.vocabulary import Lexicon, Piece, Term
from logkit.vocabulary.words import word


@dataclass
class Collected:
    """Terms found in a text by vocabulary, with what was said on the way and the words nobody knew.

    Attributes
    ----------
    terms : vocabulary -> (term, written, sure), in the order written
    remarks, unknown : remarks; words that are neither terms nor fillers
    """

    terms: dict[str, list[tuple[Term, str, bool]]] = field(default_factory=dict)
    remarks: list[Remark] = field(default_factory=list)
    unknown: list[str] = field(default_factory=list)

    def first(self, name: str) -> str:
        """Id of the first term of a vocabulary, "" when there is none."""
        found = self.terms.get(name)
        return found[0][0].id if found else ""

    def ids(self, name: str) -> tuple[str, ...]:
        """Ids of the terms of a vocabulary without doubles, in the order written."""
        return tuple(dict.fromkeys(term.id for term, _, _ in self.terms.get(name, ())))


def collect(text: str, lexicon: Lexicon, sure: bool = True) -> Collected:
    """All terms in a text. Ambiguous words are read in the lexicon's order of preference, and asked about.

    Parameters
    ----------
    text : running shorthand
    lexicon : the vocabularies to look in, the one the cell is about first
    sure : False when the whole text is in doubt
    """
    result = Collected()
    add_pieces(result, lexicon.scan(text), lexicon.names, sure)
    return result


def add_pieces(result: Collected, pieces: Iterable[Piece], preferred: tuple[str, ...], sure: bool) -> None:
    """Sort pieces into a collection; a word of doubt makes the terms after it unsure."""
    doubt = not sure
    for piece in pieces:
        if piece.filler:
            doubt = doubt or word(piece.written) == ("possibly",)
        elif piece.ambiguity:
            meanings = piece.ambiguity.ranked(preferred)
            for name, term in meanings[0].terms:
                result.terms.setdefault(name, []).append((term, piece.written, False))
            result.remarks.append(
                question("word.ambiguous", f"{quoted(piece.written)} may be {_either(m.words for m in meanings)}",
                         f"write {meanings[0].words} in full", (m.words for m in meanings))
            )  # fmt: skip
        elif piece.term:
            result.terms.setdefault(piece.vocabulary, []).append((piece.term, piece.written, not doubt))
        else:
            result.unknown.append(piece.written)


def unread(words: Iterable[str], column: str = "") -> Remark | None:
    """The note on words that were kept as written but not read, None when there are none."""
    kept = [w for w in words if any(c.isalnum() for c in w)]
    if not kept:
        return None
    shown = ", ".join(quoted(w, 30) for w in kept[:6]) + (" …" if len(kept) > 6 else "")
    return note(
        "cell.words_not_read", f"not read, kept as written: {shown}", "move remarks to the notes column"
    )


def _either(words: Iterable[str]) -> str:
    listed = tuple(words)
    return ", ".join(listed[:-1]) + " or " + listed[-1] if len(listed) > 1 else listed[0]
