"""Widths of text in millimetres, and the breaking of lines, from the advance widths of the shipped font.

Only measuring belongs here: where a text goes is decided in `placement` and by the tracks.
"""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache, lru_cache
from importlib.resources import files

MM_PER_POINT = 25.4 / 72
ASCENT_EM = 0.76
"""Height of capitals and ascenders above the base line, em."""
DESCENT_EM = 0.24
"""Depth of descenders below the base line, em."""
FALLBACK_EM = 1.0
"""Width taken for a character the font does not have; a viewer replaces it by one of its own fonts."""


@dataclass(frozen=True, slots=True)
class Box:
    """A rectangle on the page, mm, y downwards."""

    x0: float
    y0: float
    x1: float
    y1: float

    def overlaps(self, other: Box, slack: float = 0.0) -> bool:
        """True when the two share more than `slack` mm in both directions."""
        return (
            self.x0 < other.x1 - slack
            and other.x0 < self.x1 - slack
            and self.y0 < other.y1 - slack
            and other.y0 < self.y1 - slack
        )


@cache
def _advances(bold: bool) -> dict[str, float]:
    table = tomllib.loads(files("logkit.drawing").joinpath("data/advances.toml").read_text(encoding="utf-8"))
    per_em = float(table["units_per_em"])
    widths: dict[str, float] = {}
    for first, run in table["bold" if bold else "regular"].items():
        for offset, units in enumerate(run.split()):
            if units != "0":
                widths[chr(int(first, 16) + offset)] = int(units) / per_em
    return widths


@lru_cache(maxsize=20_000)
def width_mm(text: str, size_pt: float, bold: bool = False) -> float:
    """Width of one line of text.

    Parameters
    ----------
    text : the line
    size_pt : font size, points
    bold : bold face

    Returns
    -------
    width, mm
    """
    advances = _advances(bold)
    return sum(advances.get(letter, FALLBACK_EM) for letter in text) * size_pt * MM_PER_POINT


def text_box(at: tuple[float, float], text: str, size_pt: float, bold: bool, anchor: str, turn: float) -> Box:
    """The box a line of text covers on the page.

    Parameters
    ----------
    at : anchor on the base line, mm
    anchor : "start", "middle" or "end"
    turn : clockwise rotation about the anchor in degrees; only multiples of 90 are measured exactly
    """
    width = width_mm(text, size_pt, bold)
    em = size_pt * MM_PER_POINT
    shift = {"start": 0.0, "middle": -width / 2, "end": -width}[anchor]
    left, right, up, down = shift, shift + width, ASCENT_EM * em, DESCENT_EM * em
    x, y = at
    if turn % 360 == 270:
        return Box(x - up, y - right, x + down, y - left)
    if turn % 360 == 90:
        return Box(x - down, y + left, x + up, y + right)
    return Box(x + left, y - up, x + right, y + down)


def clean(text: str) -> str:
    """Text a page can carry: control characters and runs of white space become single spaces."""
    visible = text
    if not text.isprintable():
        visible = "".join(c if c.isprintable() or c in "\u00a0\u202f" else " " for c in text)
    return " ".join(filter(None, visible.split(" ")))


def wrap(text: str, width: float, size_pt: float, bold: bool = False) -> tuple[str, ...]:
    """Break a text into lines no wider than `width` mm; a word wider than that is broken inside.

    No-break spaces are kept, so that a number stays with its unit.
    """
    lines: list[str] = []
    line = ""
    for word in clean(text).split(" "):
        candidate = f"{line} {word}" if line else word
        if width_mm(candidate, size_pt, bold) <= width:
            line = candidate
            continue
        if line:
            lines.append(line)
        line = word
        while width_mm(line, size_pt, bold) > width and len(line) > 1:
            head = _longest_head(line, width, size_pt, bold)
            lines.append(line[:head])
            line = line[head:]
    if line:
        lines.append(line)
    return tuple(lines)


def shorten(text: str, width: float, size_pt: float, bold: bool = False) -> str:
    """The text, or as much of it as fits before an ellipsis; "" when not even one letter fits."""
    text = clean(text)
    if width_mm(text, size_pt, bold) <= width:
        return text
    while text and width_mm(text + "…", size_pt, bold) > width:
        text = text[:-1].rstrip()
    return text + "…" if text else ""


def _longest_head(word: str, width: float, size_pt: float, bold: bool) -> int:
    for cut in range(len(word) - 1, 1, -1):
        if width_mm(word[:cut], size_pt, bold) <= width:
            return cut
    return 1
