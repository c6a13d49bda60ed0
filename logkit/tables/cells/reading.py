"""What a cell reader gives back: a value and remarks. A remark is a finding that does not know its place yet.

Only the two records and the small helpers every reader shares belong here: how text is cleaned before it is
read, and how it is quoted in a message. What a cell means is decided in the modules beside this one.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Generic, TypeVar

from logkit.model import Level

T = TypeVar("T")

CACHE_SIZE = 4096
"""Whole-cell readings kept per reader: a log repeats its cells, and readers are pure functions of text."""


@dataclass(frozen=True, slots=True)
class Remark:
    """A finding without its place; the sheet code adds file, row and column.

    Attributes
    ----------
    level, message, remedy, code, allowed, nearest, choices : as in `logkit.model.Finding`
    column : canonical column, only where the remark is about another column than the one read
    """

    level: Level
    message: str
    remedy: str = ""
    code: str = ""
    allowed: tuple[str, ...] = ()
    nearest: str = ""
    choices: tuple[str, ...] = ()
    column: str = ""


@dataclass(frozen=True, slots=True)
class Reading(Generic[T]):
    """The value of a cell and what must be said about it.

    Attributes
    ----------
    value : None when the cell was empty or cannot be used; in the second case there is an error remark
    remarks : in the order they were found
    """

    value: T | None
    remarks: tuple[Remark, ...] = ()

    @property
    def failed(self) -> bool:
        """True when there is an error among the remarks."""
        return any(remark.level == "error" for remark in self.remarks)


def error(
    code: str, message: str, remedy: str = "", *, allowed: Iterable[str] = (), nearest: str | None = None
) -> Remark:
    """A remark on a cell that cannot be used."""
    return Remark("error", message, remedy, code, allowed=tuple(allowed), nearest=nearest or "")


def question(code: str, message: str, remedy: str, choices: Iterable[str]) -> Remark:
    """A remark on a cell that was read one way and could be another; the reading taken stands first."""
    return Remark("question", message, remedy, code, choices=tuple(choices))


def note(code: str, message: str, remedy: str = "") -> Remark:
    """A remark on a normalisation."""
    return Remark("note", message, remedy, code)


_FOLDS = str.maketrans(
    {
        "–": "-", "—": "-", "−": "-", "‐": "-", "‑": "-", "‒": "-", "’": "'", "‘": "'", "′": "'", "´": "'",
        "“": '"', "”": '"', "″": '"', "μ": "µ", "×": "x", "\u00a0": " ", "\u202f": " ", "\u2009": " ",
        "º": "°", "˚": "°", "⇒": "→", "➔": "→", "⟶": "→", "∕": "/", "⁄": "/", "½": " 1/2", "¼": " 1/4", "¾": " 3/4",
        "≈": "~", "∼": "~", "ϕ": "φ", "ø": "φ", "Φ": "φ", "Ø": "φ", "\ufeff": "", "\u200b": "",
    }
)  # fmt: skip
_NOTHING = frozenset(("-", "--", "---", "?", "??", "n/a", "n.a.", "."))
_SPACES = re.compile(r"\s+")


def clean(text: str) -> str:
    """Text as the readers compare it: one kind of dash, quote, arrow and space, no control characters.

    Marks people put into a cell with nothing to say (`-`, `?`, `n/a`) come out as an empty text.
    """
    if text.isascii() and text.isprintable() and "  " not in text:
        plain = text.strip()
    else:
        folded = text.translate(_FOLDS)
        kept = "".join(c if unicodedata.category(c)[0] != "C" else " " for c in folded)
        plain = _SPACES.sub(" ", kept).strip()
    return "" if plain.casefold() in _NOTHING else plain


def quoted(text: str, longest: int = 60) -> str:
    """Text as it is quoted inside a message: printable, on one line, shortened in the middle of long cells."""
    plain = clean(text)
    return repr(plain if len(plain) <= longest else plain[: longest - 1] + "…")
