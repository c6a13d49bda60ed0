"""Narrow strips beside the profile: colour as written in the field, and the grade of bioturbation."""

from __future__ import annotations

import re
import tomllib
from functools import cache, lru_cache
from importlib.resources import files

from logkit.drawing.colour import oklch_hex
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Paint, Path, Segment, Shape, polyline
from logkit.model import Colour

MUNSELL_HUES = {
    "R": 22,
    "YR": 58,
    "Y": 98,
    "GY": 125,
    "G": 155,
    "BG": 190,
    "B": 235,
    "PB": 275,
    "P": 310,
    "RP": 350,
}
"""OKLCH hue of the middle (5) of each Munsell hue, degrees; close enough for a strip 3 mm wide."""

HIGHEST_GRADE = 6.0
_MUNSELL = re.compile(
    r"(\d+(?:\.\d+)?)?\s*(RP|YR|GY|BG|PB|R|Y|G|B|P|N)\s*(\d+(?:\.\d+)?)(?:\s*/\s*(\d+(?:\.\d+)?))?"
)


def draw_colour(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """A block of the bed's colour; a bed whose words name no colour stays open and is counted."""
    column = scene.columns["colour"]
    shapes: list[Shape] = []
    frame: list[Segment] = []
    for item, span in view.items():
        if item.bed.colour is None:
            continue
        box = polyline(
            ((column.x0, span[0]), (column.x1, span[0]), (column.x1, span[1]), (column.x0, span[1])),
            closed=True,
        )
        seen = colour_hex(item.bed.colour)
        if seen is None:
            tally.left_out["colours not recognised"] += 1
        else:
            tally.marks.add("colour")
            shapes.append(Path(box, Paint(fill=seen)))
        if span[0] - span[1] >= 0.5:
            frame.extend(box)
    if frame:
        shapes.append(
            Path(tuple(frame), Paint(stroke=scene.style.colours.ink2, width=scene.style.lines.hairline))
        )
    return shapes


def draw_bioturbation(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """A bar whose length is the grade; a written range adds an open part."""
    column, style = scene.columns["bioturbation"], scene.style
    full: list[Segment] = []
    open_part: list[Segment] = []
    rate = (column.x1 - column.x0) / HIGHEST_GRADE
    for item, (y_base, y_top) in view.items():
        grade = item.bed.bioturbation
        if grade is None:
            continue
        tally.marks.add("bioturbation")
        inset = min(0.2, (y_base - y_top) / 6)
        low, high = (
            column.x0 + min(grade.low, HIGHEST_GRADE) * rate,
            column.x0 + min(grade.high, HIGHEST_GRADE) * rate,
        )
        y0, y1 = y_base - inset, y_top + inset
        if low > column.x0:
            full.extend(polyline(((column.x0, y0), (low, y0), (low, y1), (column.x0, y1)), closed=True))
        if high > low:
            open_part.extend(polyline(((low, y0), (high, y0), (high, y1), (low, y1)), closed=True))
    shapes: list[Shape] = []
    edge = polyline(((column.x0, view.position.y_base), (column.x0, view.position.y_top)))
    shapes.append(Path(edge, Paint(stroke=style.colours.grid, width=style.lines.hairline)))
    if full:
        shapes.append(Path(tuple(full), Paint(fill=style.colours.chip)))
    if open_part:
        shapes.append(Path(tuple(open_part), Paint(stroke=style.colours.chip, width=style.lines.hairline)))
    return shapes


def colour_hex(colour: Colour) -> str | None:
    """sRGB of a colour as written: its Munsell notation when it has one, else its words; None when neither helps."""
    return _from_munsell(colour.munsell) or _from_words(colour.text)


@cache
def _words() -> dict:
    return tomllib.loads(files("logkit.drawing").joinpath("data/colours.toml").read_text(encoding="utf-8"))


@lru_cache(maxsize=1024)
def _from_munsell(text: str) -> str | None:
    found = _MUNSELL.fullmatch(text.strip().upper())
    if not found:
        return None
    step, hue, value, chroma = found.groups()
    lightness = 0.12 + 0.085 * min(10.0, float(value))
    if hue == "N":
        return oklch_hex(lightness, 0.0, 0.0)
    offset = (float(step) - 5.0) * 3.6 if step else 0.0
    return oklch_hex(lightness, 0.0125 * float(chroma or 2), (MUNSELL_HUES[hue] + offset) % 360)


@lru_cache(maxsize=1024)
def _from_words(text: str) -> str | None:
    table = _words()
    lightness_shift = chroma_shift = 0.0
    parts = []
    for word in re.findall(r"[a-z]+", text.lower()):
        word = table["forms"].get(word, word)
        if word in table["names"]:
            parts.append(table["names"][word])
        elif word in table["modifiers"]:
            lightness_shift += table["modifiers"][word]["lightness"]
            chroma_shift += table["modifiers"][word]["chroma"]
    if not parts:
        return None
    # the last word is the colour, the one before it only tints it: "red brown" is a brown
    main, tint = parts[-1], parts[-2] if len(parts) > 1 else parts[-1]
    lightness = 0.7 * main["lightness"] + 0.3 * tint["lightness"] + lightness_shift
    chroma = 0.7 * main["chroma"] + 0.3 * tint["chroma"] + chroma_shift
    turn = (tint["hue"] - main["hue"] + 180) % 360 - 180
    return oklch_hex(min(max(lightness, 0.1), 0.97), max(0.0, chroma), (main["hue"] + 0.3 * turn) % 360)
