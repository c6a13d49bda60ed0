"""What every sheet must fulfil, as functions that list the offences."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from io import BytesIO

import numpy as np
from PIL import Image

from logkit.drawing import Drawing
from logkit.drawing.metrics import Box, text_box
from logkit.drawing.shapes import Circle, Dots, Group, Lines, Path, Shape, Sheet, Text, walk

TOUCH_MM = 0.15
DARK = 140
"""Grey below which ink is dark."""
MOST_DARK = 0.02
"""Part of a text's box that dark ink may cover: a crossing hairline is below it."""


def texts_of(sheet: Sheet) -> list[tuple[Text, Box]]:
    """Texts of a sheet with their boxes."""
    found = [shape for shape in walk(sheet.shapes) if isinstance(shape, Text)]
    return [(t, text_box(t.at, t.text, t.size, t.bold, t.anchor, t.turn)) for t in found]


def overlaps(sheet: Sheet) -> list[str]:
    """Pairs of texts whose boxes share more than a hair."""
    boxes = sorted(texts_of(sheet), key=lambda pair: pair[1].y0)
    found = []
    for place, (first, box) in enumerate(boxes):
        for second, other in boxes[place + 1 :]:
            if other.y0 > box.y1:
                break
            if box.overlaps(other, TOUCH_MM):
                found.append(f"{first.text!r} at {first.at} meets {second.text!r} at {second.at}")
    return found


def outside(sheet: Sheet) -> list[str]:
    """Texts and points that lie off the page."""
    found = []
    for text, box in texts_of(sheet):
        if box.x0 < 0 or box.y0 < 0 or box.x1 > sheet.width or box.y1 > sheet.height:
            found.append(f"{text.text!r} at {text.at}")
    for x, y in points_of(sheet):
        if not (-0.01 <= x <= sheet.width + 0.01 and -0.01 <= y <= sheet.height + 0.01):
            found.append(f"point {x:.2f}, {y:.2f}")
    return found


def points_of(sheet: Sheet) -> Iterator[tuple[float, float]]:
    """End points of all paths, dots and circles."""
    for shape in walk(sheet.shapes):
        if isinstance(shape, Path):
            for _, values in shape.segments:
                if values:
                    yield values[-2], values[-1]
        elif isinstance(shape, Lines):
            for line in shape.lines:
                yield from line
        elif isinstance(shape, Dots):
            yield from shape.points
        elif isinstance(shape, Circle):
            yield shape.centre


def bed_ids(sheet: Sheet) -> list[str]:
    """Ids of the bed groups."""
    for shape in walk(sheet.shapes):
        if isinstance(shape, Group) and shape.id == "beds":
            return [child.id for child in shape.children if isinstance(child, Group)]
    return []


def inked_texts(drawing: Drawing, number: int, dpi: float = 150.0) -> list[str]:
    """Texts that stand on dark ink: the sheet is rendered without texts and looked at under every box."""
    sheet = drawing.sheets[number - 1]
    bare = replace(drawing, sheets=(replace(sheet, shapes=tuple(_without_text(s) for s in sheet.shapes)),))
    picture = np.asarray(Image.open(BytesIO(bare.png(1, dpi=dpi))).convert("L"))
    rate = dpi / 25.4
    found = []
    for text, box in texts_of(sheet):
        part = picture[
            int((box.y0 + 0.1) * rate) : int((box.y1 - 0.3) * rate) + 1,
            int(box.x0 * rate) : int(box.x1 * rate) + 1,
        ]
        share = float((part < DARK).mean()) if part.size else 0.0
        if share > MOST_DARK:
            found.append(f"{text.text!r} at {text.at}: {share:.1%} dark")
    return found


def _without_text(shape: Shape) -> Shape:
    if isinstance(shape, Group):
        kept = tuple(_without_text(child) for child in shape.children if not isinstance(child, Text))
        return replace(shape, children=kept)
    return shape
