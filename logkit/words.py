"""Numbers and lists in words, the same on screen, on paper and in messages. Knows nothing of geology."""

from __future__ import annotations

import math

NO_BREAK = "\u00a0"


def digits(value: float, significant: int = 2) -> str:
    """A number with so many significant digits; exponent form only below 0.0001.

    Examples
    --------
    >>> digits(1.2345), digits(0.0456), digits(234.0), digits(3e-6)
    ('1.2', '0.046', '230', '3.0e-06')
    """
    if not math.isfinite(value):
        return "not determinable"
    if value == 0:
        return "0"
    places = significant - 1 - math.floor(math.log10(abs(value)))
    rounded = round(value, places)
    return f"{rounded:.{max(places, 0)}f}" if abs(rounded) >= 1e-4 else f"{rounded:.{significant - 1}e}"


def counted(number: int, noun: str, plural: str = "") -> str:
    """A number with its noun.

    Examples
    --------
    >>> counted(1, "bed"), counted(2, "bed"), counted(3, "ledger entry", "ledger entries")
    ('1 bed', '2 beds', '3 ledger entries')
    """
    return f"{number} {noun if number == 1 else plural or noun + 's'}"


def joined(words: list[str]) -> str:
    """A list in running text.

    Examples
    --------
    >>> joined(["sand", "silt", "clay"])
    'sand, silt and clay'
    """
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"


def one_line(text: str) -> str:
    """Text on one line, control characters as spaces."""
    return " ".join("".join(c if c.isprintable() else " " for c in text).split())
