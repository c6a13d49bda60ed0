"""Widths of table columns on paper, measured from what stands in them, so that no word is cut or overprinted.

Only measuring and breaking of words belong here; how a table looks is in the template of the page setter.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from logkit.drawing.metrics import width_mm
from logkit.report.document import Table

SIZES_PT = (6.6, 6.0, 5.4)
"""Type sizes that are tried, the first that fits is taken."""

CLEARLY_SHORTER = 0.85
"""A smaller type is taken only if the table has fewer than this part of the lines with it."""

TOO_TALL = 4.0
"""Lines in a row, on the average, from which a page turned sideways is tried."""

PADDING_MM = 2.7
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
    On an upright page if every word fits there and rows do not get too tall, else on a page turned sideways;
    smaller type where it makes the table clearly shorter.
    """
    for longest in LONGEST_PIECE:
        measured = _measure_table(table, longest)
        upright = _best(measured, upright_mm, longest, wide=False)
        if upright is not None and upright[0] <= TOO_TALL * len(measured.cells):
            return upright[1]
        sideways = _best(measured, sideways_mm, longest, wide=True)
        if upright is not None and (sideways is None or sideways[0] > CLEARLY_SHORTER * upright[0]):
            return upright[1]
        if sideways is not None:
            return sideways[1]
    count = len(table.columns)
    return Fit((sideways_mm / count,) * count, SIZES_PT[-1], True, LONGEST_PIECE[-1])


def _best(measured: _Measured, total: float, longest: int, wide: bool) -> tuple[int, Fit] | None:
    """Lines and widths in the type that suits a page of this width; None when no type fits."""
    best: tuple[int, Fit] | None = None
    for size in SIZES_PT:
        widths = _widths(measured, total, size)
        if widths is None:
            continue
        lines = _lines(measured, widths, size)
        if best is None or lines < CLEARLY_SHORTER * best[0]:
            best = lines, Fit(widths, size, wide, longest)
    return best


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


@dataclass(frozen=True, slots=True)
class _Measured:
    """Widths at a type of one point, mm: of the widest word of each column, and of each whole cell."""

    words: tuple[float, ...]
    heads: tuple[float, ...]
    cells: tuple[tuple[float, ...], ...]


def _measure_table(table: Table, longest: int) -> _Measured:
    known: dict[str, tuple[float, float]] = {}

    def measured(text: str) -> tuple[float, float]:
        if text not in known:
            known[text] = _measure(text, longest)
        return known[text]

    heads = [_measure(column.label, longest, bold=True) for column in table.columns]
    rows = [[measured(cell) for cell in row] for row in table.rows if len(row) == len(heads)]
    words = [max([head[0], *(row[i][0] for row in rows)]) for i, head in enumerate(heads)]
    cells = tuple(tuple(cell[1] for cell in row) for row in rows)
    return _Measured(tuple(words), tuple(head[1] for head in heads), cells)


def _widths(measured: _Measured, total: float, size: float) -> tuple[float, ...] | None:
    """Widths that hold every word, None when they do not fit."""
    count = len(measured.heads)
    columns = [[measured.heads[i], *(row[i] for row in measured.cells)] for i in range(count)]
    least = [size * word + PADDING_MM for word in measured.words]
    natural = [size * max(column) + PADDING_MM for column in columns]
    wanted = [size * sum(column) / len(column) for column in columns]
    if sum(natural) <= total:
        return tuple(natural)
    spare = total - sum(least)
    if spare < 0:
        return None
    widths = list(least)
    growing = [i for i in range(count) if natural[i] > least[i]]
    while spare > 0.01 and growing:
        share = spare / sum(wanted[i] for i in growing)
        for i in growing:
            more = min(share * wanted[i], natural[i] - widths[i])
            widths[i] += more
            spare -= more
        growing = [i for i in growing if natural[i] - widths[i] > 0.01]
    return tuple(widths)


def _lines(measured: _Measured, widths: tuple[float, ...], size: float) -> int:
    """Lines of text that the table takes, about."""
    rooms = [(width - PADDING_MM) / size + 1e-6 for width in widths]
    return sum(
        max((math.ceil(cell / room) for cell, room in zip(row, rooms, strict=True)), default=1)
        for row in measured.cells
    )


def _measure(text: str, longest: int, bold: bool = False) -> tuple[float, float]:
    """Width of the widest word and of the whole text at one point, mm; with a little air for kerning."""
    pieces = _PIECES.split(breakable(text, longest))
    widest = max((width_mm(piece.replace(JOINED_DASH, "–"), 1.0, bold) for piece in pieces), default=0.0)
    return 1.02 * widest, 1.02 * width_mm(text, 1.0, bold)
