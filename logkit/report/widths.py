"""Widths of table columns on paper, measured from what stands in them, so that no word is cut or overprinted.

Only measuring and breaking of words belong here; how a table looks is in the template of the page setter.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from logkit.drawing.metrics import width_mm
from logkit.report.document import Table

SIZES_PT = (6.6, 6.0, 5.4)
"""Type sizes that are tried, the first that fits is taken."""

PADDING_MM = 2.6
"""Room between the texts of two columns."""

LONGEST_PIECE = (24, 12, 6)
"""Letters after which a word without a natural break may be broken, from gentle to desperate."""

BREAK = "\u200b"
JOINED_DASH = "\u2060–\u2060"
_AFTER = re.compile(r"(?<=[_/(),=*+^|;:])(?=\w)|(?<=\.)(?=[^\W\d])|(?<=\w)(?=[(\[=*+^|])")
_RANGE = re.compile(r"(?<=\d)–(?=\d)")
_PIECES = re.compile(r"[ \u200b]+|(?<=[-–])(?!\u2060)")


@dataclass(frozen=True, slots=True)
class Fit:
    """How a table is set.

    widths_mm : of the columns
    size_pt : of the type
    wide : on a page turned sideways
    longest : letters that stay together
    """

    widths_mm: tuple[float, ...]
    size_pt: float
    wide: bool
    longest: int


def fit(table: Table, upright_mm: float, sideways_mm: float) -> Fit:
    """The widths of a table's columns.

    Parameters
    ----------
    upright_mm, sideways_mm : width of the text on a page and on a page turned sideways

    Returns
    -------
    The largest type on an upright page in which every word fits, else on a page turned sideways.
    """
    for longest in LONGEST_PIECE:
        for wide in (False, True):
            for size in SIZES_PT:
                widths = _widths(table, sideways_mm if wide else upright_mm, size, longest)
                if widths is not None:
                    return Fit(widths, size, wide, longest)
    count = len(table.columns)
    return Fit((sideways_mm / count,) * count, SIZES_PT[-1], True, LONGEST_PIECE[-1])


def breakable(text: str, longest: int) -> str:
    """Text whose long words may be broken after signs, or after so many letters where there is none.

    A range of numbers stays together.
    """
    text = _RANGE.sub(JOINED_DASH, text)
    if len(text) <= longest:
        return text
    words = []
    for word in text.split(" "):
        if len(word) > 12:
            word = _AFTER.sub(BREAK, word)
            word = BREAK.join(
                BREAK.join(piece[i : i + longest] for i in range(0, max(len(piece), 1), longest))
                for piece in word.split(BREAK)
            )
        words.append(word)
    return " ".join(words)


def _widths(table: Table, total: float, size: float, longest: int) -> tuple[float, ...] | None:
    """Widths that hold every word, None when they do not fit."""
    least, natural, wanted = [], [], []
    for place, column in enumerate(table.columns):
        cells = {row[place] for row in table.rows if len(row) > 1}
        lines = [_measure(cell, size, longest) for cell in cells]
        lines.append(_measure(column.label, size, longest, bold=True))
        least.append(max(word for word, _ in lines) + PADDING_MM)
        natural.append(max(whole for _, whole in lines) + PADDING_MM)
        wanted.append(sum(whole for _, whole in lines) / len(lines))
    if sum(natural) <= total:
        return tuple(natural)
    spare = total - sum(least)
    if spare < 0:
        return None
    widths = list(least)
    growing = [i for i in range(len(widths)) if natural[i] > least[i]]
    while spare > 0.01 and growing:
        share = spare / sum(wanted[i] for i in growing)
        for i in growing:
            more = min(share * wanted[i], natural[i] - widths[i])
            widths[i] += more
            spare -= more
        growing = [i for i in growing if natural[i] - widths[i] > 0.01]
    return tuple(widths)


def _measure(text: str, size: float, longest: int, bold: bool = False) -> tuple[float, float]:
    """Width of the widest word and of the whole text, mm; with a little air for kerning."""
    pieces = _PIECES.split(breakable(text, longest))
    widest = max((width_mm(piece.replace(JOINED_DASH, "–"), size, bold) for piece in pieces), default=0.0)
    return 1.02 * widest, 1.02 * width_mm(text, size, bold)
