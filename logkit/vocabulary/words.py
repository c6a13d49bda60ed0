"""How words are compared: one form for the many ways of writing the same word. No terms belong here.

`tr. X-beds`, `trough cross-bedded` and `trough xb` come out alike. The single words that are brought together
are data (`data/words.toml`); phrases and their terms are in the vocabularies.
"""

from __future__ import annotations

import re
from functools import cache, lru_cache
from typing import NamedTuple

from logkit.vocabulary.loading import load_toml

_PARTS = re.compile(r"//|\d+[.,]\d+[^\W\d_]*|[^\W_]+(?:'[^\W_]+)?|[&?%+]", re.UNICODE)


class Token(NamedTuple):
    """A word as written, the words it is compared as, and its place in the text."""

    written: str
    form: tuple[str, ...]
    start: int
    end: int


@cache
def word_forms() -> dict[str, tuple[str, ...]]:
    """Variant of a word -> the words it stands for, from the data file."""
    forms: dict[str, tuple[str, ...]] = {}
    for target, variants in load_toml("words.toml").data["forms"].items():
        for variant in variants:
            forms[variant] = tuple(target.split())
    return forms


@lru_cache(maxsize=16384)
def word(text: str) -> tuple[str, ...]:
    """The compared form of one written word; a variant may stand for several words.

    Examples
    --------
    >>> word("Xbeds"), word("ripples")
    (('cross', 'bedding'), ('ripple',))
    """
    folded = text.casefold()
    forms = word_forms()
    if folded in forms:
        return forms[folded]
    single = _singular(folded)
    return forms.get(single, (single,))


def _singular(text: str) -> str:
    if len(text) > 3 and text.endswith("s") and not text.endswith("ss"):
        return text[:-1]
    return text


@lru_cache(maxsize=16384)
def tokens(text: str) -> tuple[Token, ...]:
    """Written words of a text, each with its compared form and its place, in order."""
    return tuple(Token(m[0], word(m[0]), m.start(), m.end()) for m in _PARTS.finditer(text))


@lru_cache(maxsize=16384)
def normal(text: str) -> str:
    """The compared form of a phrase: words joined by one space, `and` and marks left out."""
    return " ".join(w for token in tokens(text) for w in token.form if w not in _LEFT_OUT)


_LEFT_OUT = frozenset("?%+")
