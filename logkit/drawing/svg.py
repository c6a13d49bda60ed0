"""Shapes to SVG text. The only module that knows SVG: attribute names, clip paths, gradients, rounding.

One unit is 0.01 mm, so that all coordinates are whole numbers; they are checked to be finite. User text goes through
the XML serialiser, so markup in it stays text. Same shapes, same bytes.
"""

from __future__ import annotations

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


def units(length: float) -> int:
    """A length in mm as a whole number of the drawing's units, 0.01 mm.

    Raises
    ------
    LogkitError : the length is not finite (a fault of the layout, never written to a file)
    """
    try:
        return round(length * 100)
    except (ValueError, OverflowError):
        raise LogkitError(
            "The drawing holds a coordinate that is not a finite number.", "Please report this."
        ) from None


def path_data(segments: Iterable[Segment]) -> str:
    """The `d` attribute of a path, written as steps from point to point because that is shortest.

    Steps are differences of rounded positions, so that rounding does not add up.
    """
    parts: list[str] = []
    x = y = x_start = y_start = 0
    last = ""
    try:
        for command, values in segments:
            if command == "Z":
                parts.append("z")
                x, y, last = x_start, y_start, "z"
                continue
            numbers = [round(value * 100) for value in values]
            x_end, y_end = numbers[-2], numbers[-1]
            if command == "L":
                dx, dy = x_end - x, y_end - y
                if dy == 0:
                    parts.append(f"h{dx}")
                    last = "h"
                elif dx == 0:
                    parts.append(f"v{dy}")
                    last = "v"
                else:
                    lead = "l" if last != "l" else "" if dx < 0 else " "
                    parts.append(f"{lead}{dx}{dy}" if dy < 0 else f"{lead}{dx} {dy}")
                    last = "l"
            elif command == "M":
                parts.append(f"M{x_end} {y_end}" if not parts else f"m{x_end - x} {y_end - y}")
                x_start, y_start, last = x_end, y_end, "m"
            else:
                steps = [n - (y if i % 2 else x) for i, n in enumerate(numbers)]
                name = command.lower()
                parts.append((name if last != name else " ") + " ".join(map(str, steps)).replace(" -", "-"))
                last = name
            x, y = x_end, y_end
    except (ValueError, OverflowError):
        units(float("nan"))
    return "".join(parts)


def dots_data(points: tuple[tuple[float, float], ...]) -> str:
    """Zero-length strokes at points, as steps from dot to dot."""
    parts: list[str] = []
    x = y = 0
    for x_end, y_end in ((units(a), units(b)) for a, b in points):
        dx, dy = x_end - x, y_end - y
        parts.append(f"m{dx}{dy}h0" if dy < 0 else f"m{dx} {dy}h0")
        x, y = x_end, y_end
    return "".join(parts)


def sheet_svg(sheet: Sheet) -> str:
    """One sheet as an SVG document.

    Parameters
    ----------
    sheet : page size and shapes, mm

    Returns
    -------
    the document, page size in mm with a viewBox in 0.01 mm, text as text
    """
    width, height = str(units(sheet.width)), str(units(sheet.height))
    drawing = svgwrite.Drawing(
        size=(f"{sheet.width:.6g}mm", f"{sheet.height:.6g}mm"),
        viewBox=f"0 0 {width} {height}",
        debug=False,
        profile="full",
    )
    drawing.attribs.update({"font-family": FONT, "role": "img"})
    drawing.elements.clear()  # the empty <defs> svgwrite starts with
    writer = _Writer()
    root = _Element("g", {"id": "sheet"})
    for shape in sheet.shapes:
        writer.write(root, shape)
    if sheet.title:
        drawing.set_desc(title=xml_text(sheet.title), desc=xml_text(sheet.desc) or None)
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
                    "stroke-width": str(units(shape.diameter)), "stroke-linecap": "round", "fill": "none",
                })  # fmt: skip
        elif isinstance(shape, Circle):
            x, y = shape.centre
            _sub(parent, "circle", {
                "cx": str(units(x)), "cy": str(units(y)), "r": str(units(shape.radius)), **self._paint(shape.paint)
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
            attributes[f"data-{name}"] = xml_text(value)
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
        attributes = {"x": str(units(x)), "y": str(units(y))}
        for name, value in _full_style(text).items():
            if shared.get(name, _PLAIN.get(name)) != value:
                attributes[name] = value
        if text.turn:
            attributes["transform"] = f"rotate({text.turn:g} {units(x)} {units(y)})"
        _sub(parent, "text", attributes).text = xml_text(text.text)

    def _paint(self, paint: Any) -> dict[str, str]:
        fill = paint.fill or "none"
        if fill.startswith("gradient:"):
            fill = f"url(#{fill.removeprefix('gradient:')})"
        attributes = {"fill": fill}
        if paint.stroke:
            attributes["stroke"] = paint.stroke
            attributes["stroke-width"] = f"{paint.width * 100:.3g}"
            if paint.dash:
                attributes["stroke-dasharray"] = " ".join(f"{v * 100:.3g}" for v in paint.dash)
            if paint.cap == "round":
                attributes["stroke-linecap"] = "round"
            if paint.join == "round":
                attributes["stroke-linejoin"] = "round"
        if paint.opacity != 1.0:
            attributes["opacity"] = f"{paint.opacity:.3g}"
        return attributes

    def gradient(self, parent: _Element, name: str, stops: tuple[tuple[float, str], ...]) -> None:
        """A vertical gradient between the first and the last stop."""
        first, last = stops[0][0], stops[-1][0]
        element = _sub(parent, "linearGradient", {
            "id": name, "gradientUnits": "userSpaceOnUse", "x1": "0", "x2": "0",
            "y1": str(units(first)), "y2": str(units(last)),
        })  # fmt: skip
        for y, colour in stops:
            share = (y - first) / (last - first) if last > first else 0.0
            _sub(element, "stop", {"offset": f"{share:.3g}", "stop-color": colour})


_PLAIN = {"text-anchor": "start", "font-weight": "normal", "font-style": "normal"}
"""What holds where nothing is written."""


def _full_style(text: Text) -> dict[str, str]:
    return {
        "font-size": f"{text.size * MM_PER_POINT * 100:.4g}",
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
