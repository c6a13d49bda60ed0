"""Shapes to SVG text. The only module that knows SVG: attribute names, clip paths, gradients, rounding.

Numbers are rounded to 0.01 mm and checked to be finite; user text goes through the XML serialiser, so markup in
it stays text. Same shapes, same bytes.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any
from xml.etree import ElementTree

import svgwrite
from svgwrite.base import BaseElement

from logkit.drawing.metrics import MM_PER_POINT
from logkit.drawing.shapes import Circle, Dots, Group, Path, Segment, Shape, Sheet, Text
from logkit.errors import LogkitError

FONT = "DejaVu Sans"

_Element = ElementTree.Element
_sub = ElementTree.SubElement


class _Tree(BaseElement):
    """An element tree as an svgwrite element: big drawings are built without svgwrite's own bookkeeping."""

    elementname = "g"

    def __init__(self, root: _Element) -> None:
        super().__init__(debug=False)
        self._root = root

    def get_xml(self) -> _Element:
        return self._root


def number(value: float) -> str:
    """A coordinate in mm, rounded to 0.01.

    Raises
    ------
    LogkitError : the value is not finite (a fault of the layout, never written to a file)
    """
    if not math.isfinite(value):
        raise LogkitError(
            "The drawing holds a coordinate that is not a finite number.", "Please report this."
        )
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def path_data(segments: Iterable[Segment]) -> str:
    """The `d` attribute of a path."""
    parts: list[str] = []
    for command, values in segments:
        parts.append(command)
        for index, value in enumerate(values):
            text = number(value)
            parts.append(text if index == 0 or text[0] == "-" else " " + text)
    return "".join(parts)


def dots_data(points: tuple[tuple[float, float], ...]) -> str:
    """Zero-length strokes at points, written as steps from dot to dot because that is shortest.

    Coordinates are kept in hundredths of a millimetre, so that rounding does not add up.
    """
    parts: list[str] = []
    x_last = y_last = 0
    for x, y in points:
        x_now, y_now = round(x * 100), round(y * 100)
        dx, dy = _hundredths(x_now - x_last), _hundredths(y_now - y_last)
        parts.append(f"m{dx}{dy if dy[0] == '-' else ' ' + dy}h0")
        x_last, y_last = x_now, y_now
    return "".join(parts)


def _hundredths(value: int) -> str:
    sign, value = ("-", -value) if value < 0 else ("", value)
    whole, rest = divmod(value, 100)
    if not rest:
        return f"{sign}{whole}"
    decimals = f"{rest:02d}".rstrip("0")
    return f"{sign}{whole or ''}.{decimals}"


def sheet_svg(sheet: Sheet) -> str:
    """One sheet as an SVG document.

    Parameters
    ----------
    sheet : page size and shapes, mm

    Returns
    -------
    the document, sizes in mm with a viewBox in mm, text as text
    """
    width, height = number(sheet.width), number(sheet.height)
    drawing = svgwrite.Drawing(
        size=(f"{width}mm", f"{height}mm"), viewBox=f"0 0 {width} {height}", debug=False, profile="full"
    )
    drawing.attribs.update({"font-family": FONT, "role": "img"})
    drawing.elements.clear()  # the empty <defs> svgwrite starts with
    writer = _Writer()
    root = _Element("g", {"id": "sheet"})
    for shape in sheet.shapes:
        writer.write(root, shape)
    if sheet.title:
        drawing.set_desc(title=sheet.title, desc=sheet.desc or None)
    definitions = _Element("defs")
    for gradient in sheet.gradients:
        writer.gradient(definitions, gradient.id, gradient.stops)
    definitions.extend(writer.clips)
    if len(definitions):
        drawing.add(_Tree(definitions))
    ground = _Element("rect", {"width": width, "height": height, "fill": sheet.background})
    drawing.add(_Tree(ground))
    drawing.add(_Tree(root))
    return '<?xml version="1.0" encoding="utf-8"?>\n' + drawing.tostring() + "\n"


class _Writer:
    """Turns shapes into elements and collects the clip paths they need."""

    def __init__(self) -> None:
        self.clips: list[_Element] = []

    def write(self, parent: _Element, shape: Shape, shared: dict[str, str] | None = None) -> None:
        if isinstance(shape, Path):
            _sub(parent, "path", {"d": path_data(shape.segments), **self._paint(shape.paint)})
        elif isinstance(shape, Text):
            self._text(parent, shape, shared or {})
        elif isinstance(shape, Dots):
            if shape.points:
                _sub(parent, "path", {
                    "d": dots_data(shape.points), "stroke": shape.colour,
                    "stroke-width": number(shape.diameter), "stroke-linecap": "round", "fill": "none",
                })  # fmt: skip
        elif isinstance(shape, Circle):
            x, y = shape.centre
            _sub(parent, "circle", {
                "cx": number(x), "cy": number(y), "r": number(shape.radius), **self._paint(shape.paint)
            })  # fmt: skip
        else:
            self._group(parent, shape, shared or {})

    def _group(self, parent: _Element, group: Group, inherited: dict[str, str]) -> None:
        attributes: dict[str, str] = {}
        if group.id:
            attributes["id"] = group.id
        if group.layer:
            attributes["data-layer"] = group.layer
        for name, value in group.data:
            attributes[f"data-{name}"] = value
        if group.clip:
            clip_id = f"clip{len(self.clips) + 1}"
            clip = _Element("clipPath", {"id": clip_id})
            _sub(clip, "path", {"d": path_data(group.clip)})
            self.clips.append(clip)
            attributes["clip-path"] = f"url(#{clip_id})"
        # what several texts have in common is written once on their group
        texts = [child for child in group.children if isinstance(child, Text)]
        own = _full_style(texts[0]) if len(texts) > 1 else {}
        changed = {
            name: value for name, value in own.items() if inherited.get(name, _PLAIN.get(name)) != value
        }
        shared = {**inherited, **own}
        element = _sub(parent, "g", {**attributes, **changed})
        if group.title:
            _sub(element, "title").text = xml_text(group.title)
        if group.desc:
            _sub(element, "desc").text = xml_text(group.desc)
        for child in group.children:
            self.write(element, child, shared)

    def _text(self, parent: _Element, text: Text, shared: dict[str, str]) -> None:
        x, y = text.at
        attributes = {"x": number(x), "y": number(y)}
        for name, value in _full_style(text).items():
            if shared.get(name, _PLAIN.get(name)) != value:
                attributes[name] = value
        if text.turn:
            attributes["transform"] = f"rotate({number(text.turn)} {number(x)} {number(y)})"
        _sub(parent, "text", attributes).text = xml_text(text.text)

    def _paint(self, paint: Any) -> dict[str, str]:
        fill = paint.fill or "none"
        if fill.startswith("gradient:"):
            fill = f"url(#{fill.removeprefix('gradient:')})"
        attributes = {"fill": fill}
        if paint.stroke:
            attributes["stroke"] = paint.stroke
            attributes["stroke-width"] = number(paint.width) if paint.width >= 0.1 else f"{paint.width:.3g}"
            if paint.dash:
                attributes["stroke-dasharray"] = " ".join(number(v) for v in paint.dash)
            if paint.cap == "round":
                attributes["stroke-linecap"] = "round"
            if paint.join == "round":
                attributes["stroke-linejoin"] = "round"
        if paint.opacity != 1.0:
            attributes["opacity"] = number(paint.opacity)
        return attributes

    def gradient(self, parent: _Element, name: str, stops: tuple[tuple[float, str], ...]) -> None:
        """A vertical gradient between the first and the last stop."""
        first, last = stops[0][0], stops[-1][0]
        element = _sub(parent, "linearGradient", {
            "id": name, "gradientUnits": "userSpaceOnUse", "x1": "0", "x2": "0",
            "y1": number(first), "y2": number(last),
        })  # fmt: skip
        for y, colour in stops:
            share = (y - first) / (last - first) if last > first else 0.0
            _sub(element, "stop", {"offset": f"{share:.3g}", "stop-color": colour})


_PLAIN = {"text-anchor": "start", "font-weight": "normal", "font-style": "normal"}
"""What holds where nothing is written."""


def _full_style(text: Text) -> dict[str, str]:
    return {
        "font-size": f"{text.size * MM_PER_POINT:.3f}".rstrip("0").rstrip("."),
        "fill": text.colour,
        "text-anchor": text.anchor,
        "font-weight": "bold" if text.bold else "normal",
        "font-style": "italic" if text.italic else "normal",
    }


def xml_text(text: str) -> str:
    """Text without the characters that XML cannot hold; the serialiser escapes the rest."""
    return "".join(
        letter
        for letter in text
        if letter in "\t\n"
        or " " <= letter <= "\ud7ff"
        or "\ue000" <= letter <= "\ufffd"
        or letter > "\uffff"
    )
