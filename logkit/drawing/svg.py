"""Shapes to SVG text. The only module that knows SVG: attribute names, clip paths, gradients, rounding.

One unit is 0.01 mm, so that all coordinates are whole numbers; they are checked to be finite. User text goes through
one function that escapes it, so markup in it stays text. Same shapes, same bytes.
"""

from __future__ import annotations

import re
import zlib
from collections import Counter
from collections.abc import Callable, Iterable, Sequence
from functools import lru_cache
from typing import Any
from xml.sax.saxutils import escape

import svgwrite

from logkit.drawing.metrics import MM_PER_POINT
from logkit.drawing.packed import Packed, Strokes
from logkit.drawing.shapes import Circle, Dots, Group, Lines, Paint, Path, Point, Segment, Shape, Sheet, Text
from logkit.drawing.steps import packed_data
from logkit.errors import LogkitError

FONT = "DejaVu Sans"
BODY = "sheet"
"""Id of the group that holds everything drawn."""


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
            if command == "L":
                x_end, y_end = round(values[0] * 100), round(values[1] * 100)
                dx, dy = x_end - x, y_end - y
                if dy:
                    if dx:
                        lead = "l" if last != "l" else "" if dx < 0 else " "
                        parts.append(f"{lead}{dx}{dy}" if dy < 0 else f"{lead}{dx} {dy}")
                        last = "l"
                    else:
                        parts.append(f"v{dy}")
                        last = "v"
                elif dx or last == "m":
                    parts.append(f"h{dx}")
                    last = "h"
            elif command == "M":
                x_end, y_end = round(values[0] * 100), round(values[1] * 100)
                dx, dy = (x_end - x, y_end - y) if parts else (x_end, y_end)
                lead = "m" if parts else "M"
                parts.append(f"{lead}{dx}{dy}" if dy < 0 else f"{lead}{dx} {dy}")
                x_start, y_start, last = x_end, y_end, "m"
            elif command == "Z":
                parts.append("z")
                x, y, last = x_start, y_start, "z"
                continue
            else:
                numbers = [round(value * 100) for value in values]
                x_end, y_end = numbers[-2], numbers[-1]
                steps = [n - (y if i % 2 else x) for i, n in enumerate(numbers)]
                name = command.lower()
                parts.append((name if last != name else " ") + " ".join(map(str, steps)).replace(" -", "-"))
                last = name
            x, y = x_end, y_end
    except (ValueError, OverflowError):
        units(float("nan"))
    return "".join(parts)


def lines_data(lines: Iterable[Sequence[Point]]) -> str:
    """The `d` attribute of open polylines, as steps from point to point."""
    parts: list[str] = []
    x = y = 0
    try:
        for line in lines:
            lead = "m" if parts else "M"
            for a, b in line:
                x_end, y_end = round(a * 100), round(b * 100)
                dx, dy = x_end - x, y_end - y
                if lead == " " and dx < 0:
                    parts.append(f"{dx}{dy}" if dy < 0 else f"{dx} {dy}")
                else:
                    parts.append(f"{lead}{dx}{dy}" if dy < 0 else f"{lead}{dx} {dy}")
                x, y = x_end, y_end
                lead = " " if lead in "l " else "l"
    except (ValueError, OverflowError):
        units(float("nan"))
    return "".join(parts)


def dots_data(points: Iterable[Point]) -> str:
    """Zero-length strokes at points, as steps from dot to dot."""
    parts: list[str] = []
    x = y = 0
    try:
        for a, b in points:
            x_end, y_end = round(a * 100), round(b * 100)
            dx, dy = x_end - x, y_end - y
            parts.append(f"m{dx}{dy}h0" if dy < 0 else f"m{dx} {dy}h0")
            x, y = x_end, y_end
    except (ValueError, OverflowError):
        units(float("nan"))
    return "".join(parts)


def sheet_svg(sheet: Sheet) -> str:
    """One sheet as an SVG document.

    Parameters
    ----------
    sheet : page size and shapes, mm

    Returns
    -------
    the document, page size in mm with a viewBox in 0.01 mm, text as text

    Notes
    -----
    svgwrite makes the document around an empty group; the shapes, thousands of them, are written straight
    into that group, which takes a fifth of the time.
    """
    width, height = str(units(sheet.width)), str(units(sheet.height))
    drawing = svgwrite.Drawing(
        size=(f"{sheet.width:.6g}mm", f"{sheet.height:.6g}mm"),
        viewBox=f"0 0 {width} {height}",
        debug=False,
        profile="full",
    )
    drawing.attribs["font-family"] = FONT
    drawing.elements.clear()  # the empty <defs> svgwrite starts with
    if sheet.title:
        # a picture as a whole would hide the titles of its beds from screen readers
        drawing.attribs["role"] = "graphics-document"
        drawing.set_desc(title=xml_text(sheet.title), desc=xml_text(sheet.desc) or None)
    drawing.add(drawing.rect((0, 0), (width, height), fill=sheet.background))
    drawing.add(drawing.g(id=BODY, fill="none"))
    before, _, after = drawing.tostring().partition(f'<g fill="none" id="{BODY}" />')
    writer = _Writer()
    for gradient in dict.fromkeys(sheet.gradients):
        writer.gradient(gradient.id, gradient.stops)
    writer.write_all(sheet.shapes, _PLAIN)
    definitions = f"<defs>{''.join(writer.definitions)}</defs>" if writer.definitions else ""
    writer.fill_in()
    definitions += writer.style_sheet()
    body = f'<g id="{BODY}" fill="none" stroke-linejoin="round">{"".join(writer.parts)}</g>'
    return f'<?xml version="1.0" encoding="utf-8"?>\n{before}{definitions}{body}{after}\n'


class _Writer:
    """Turns shapes into text, and collects the gradients, clip paths and classes they need."""

    def __init__(self) -> None:
        self.parts: list[str] = []
        self.definitions: list[str] = []
        self._clips = 0
        self._painted: list[int] = []
        self._packed: list[tuple[int, Packed[Any]]] = []

    def write_all(self, shapes: tuple[Shape, ...], shared: _Look) -> None:
        """Append shapes; lines of one paint that follow each other become one path."""
        line: list[Segment] = []
        paint: Paint | None = None
        for place, shape in enumerate(shapes):
            if line and not (isinstance(shape, Path) and shape.paint == paint):
                self._path(path_data(line), paint)
                line = []
            if isinstance(shape, Path) and shape.paint.fill is None and shape.paint.opacity == 1.0:
                after = shapes[place + 1] if place + 1 < len(shapes) else None
                if isinstance(shape.segments, Strokes) and not line and not _continues(after, shape.paint):
                    self._path(shape.segments, shape.paint)
                    continue
                paint = shape.paint
                line.extend(shape.segments)
            else:
                self.write(shape, shared)
        if line:
            self._path(path_data(line), paint)

    def write(self, shape: Shape, shared: _Look) -> None:
        """Append one shape; `shared` is what the groups around it say about texts."""
        if isinstance(shape, Path):
            self._path(_steps(shape.segments, path_data), shape.paint)
        elif isinstance(shape, Lines):
            self._path(_steps(shape.lines, lines_data), shape.paint)
        elif isinstance(shape, Text):
            self._text(shape, shared)
        elif isinstance(shape, Dots):
            if len(shape.points):
                paint = Paint(stroke=shape.colour, width=shape.diameter, cap="round")
                self._path(_steps(shape.points, dots_data), paint)
        elif isinstance(shape, Circle):
            x, y = shape.centre
            place = f'cx="{units(x)}" cy="{units(y)}" r="{units(shape.radius)}"'
            self.parts.append(f"<circle {place}{_paint(shape.paint)}/>")
        else:
            self._group(shape, shared)

    def fill_in(self) -> None:
        """Put the steps of packed points into their paths, all in one pass."""
        try:
            texts = packed_data([packed for _, packed in self._packed])
        except ValueError:
            units(float("nan"))
        for (place, _), steps in zip(self._packed, texts, strict=True):
            self.parts[place] = f'<path d="{steps}"'

    def _path(self, steps: str | Packed[Any], paint: Paint | None) -> None:
        if isinstance(steps, Packed):
            self._packed.append((len(self.parts), steps))
        look = _paint(paint) if paint else ""
        if len(look) > _LEAST_SHARED:
            self._painted.append(len(self.parts) + 1)
        self.parts.extend((f'<path d="{steps}"', look, "/>"))

    def style_sheet(self) -> str:
        """Rules for the paints that many paths have; those paths get a class instead.

        A class is named after what it says, so the sheets of a drawing can stand in one page.
        """
        counts = Counter(self.parts[place] for place in self._painted)
        classes = {look: f"p{zlib.crc32(look.encode()):08x}" for look, n in counts.items() if n > 2}
        for place in self._painted:
            name = classes.get(self.parts[place])
            if name:
                self.parts[place] = f' class="{name}"'
        rules = (f".{name}{{{_rule(look)}}}" for look, name in classes.items())
        return f"<style>{''.join(rules)}</style>" if classes else ""

    def _group(self, group: Group, shared: _Look) -> None:
        opening = ["<g"]
        if group.id:
            opening.append(f' id="{_quoted(group.id)}"')
        if group.layer:
            opening.append(f' data-layer="{_quoted(group.layer)}"')
        opening.extend(f' data-{name}="{_quoted(value)}"' for name, value in group.data)
        if group.clip:
            self._clips += 1
            name = f"clip{self._clips}"
            self.definitions.append(f'<clipPath id="{name}"><path d="{path_data(group.clip)}"/></clipPath>')
            opening.append(f' clip-path="url(#{name})"')
        # what texts have in common is written once, on a group that holds nothing but texts
        texts = [child for child in group.children if isinstance(child, Text)]
        if len(texts) > 1 and len(texts) == len(group.children):
            own = _look(texts[0])
            opening.append(_changed(own, shared))
            shared = own
        opening.append(">")
        if group.title:
            opening.append(f"<title>{_escaped(group.title)}</title>")
        if group.desc:
            opening.append(f"<desc>{_escaped(group.desc)}</desc>")
        self.parts.append("".join(opening))
        self.write_all(group.children, shared)
        self.parts.append("</g>")

    def _text(self, text: Text, shared: _Look) -> None:
        x, y = units(text.at[0]), units(text.at[1])
        turn = f' transform="rotate({text.turn:g} {x} {y})"' if text.turn else ""
        look = _changed(_look(text), shared)
        self.parts.append(f'<text x="{x}" y="{y}"{look}{turn}>{_escaped(text.text)}</text>')

    def gradient(self, name: str, stops: tuple[tuple[float, str], ...]) -> None:
        """A gradient from the top to the foot of the shape it fills."""
        marks = "".join(f'<stop offset="{share:.3g}" stop-color="{colour}"/>' for share, colour in stops)
        self.definitions.append(f'<linearGradient id="{name}" x2="0" y2="1">{marks}</linearGradient>')


def _steps(points: Iterable[Any], write: Callable[[Any], str]) -> str | Packed[Any]:
    """Packed points as they are, for later; text of all others."""
    return points if isinstance(points, Packed) else write(points)


def _continues(shape: Shape | None, paint: Paint) -> bool:
    """True for a path that goes on in the same paint."""
    return isinstance(shape, Path) and shape.paint == paint


_Look = tuple[str, str, str, str, str]
"""Values of `_LOOK_NAMES` for a text."""

_LOOK_NAMES = ("font-size", "fill", "text-anchor", "font-weight", "font-style")
_PLAIN: _Look = ("", "", "start", "normal", "normal")


def _look(text: Text) -> _Look:
    return (
        f"{text.size * MM_PER_POINT * 100:.4g}",
        text.colour,
        text.anchor,
        "bold" if text.bold else "normal",
        "italic" if text.italic else "normal",
    )


@lru_cache(maxsize=4096)
def _changed(own: _Look, shared: _Look) -> str:
    """Attributes for what differs from the groups around."""
    pairs = zip(_LOOK_NAMES, own, shared, strict=True)
    return "".join(f' {name}="{value}"' for name, value, other in pairs if value != other)


_LEAST_SHARED = 24
"""Attributes shorter than this are not worth a class."""


def _rule(look: str) -> str:
    """Attributes as the declarations of a style rule."""
    return ";".join(f"{name}:{value}" for name, value in re.findall(r'([\w-]+)="([^"]*)"', look))


@lru_cache(maxsize=4096)
def _paint(paint: Paint) -> str:
    """Attributes of a fill and a stroke; no fill and round corners are what the sheet's group says."""
    parts = []
    if paint.fill:
        named = paint.fill.startswith("gradient:")
        parts.append(f'fill="url(#{paint.fill[9:]})"' if named else f'fill="{paint.fill}"')
    if paint.stroke:
        parts.append(f'stroke="{paint.stroke}" stroke-width="{paint.width * 100:.3g}"')
        if paint.dash:
            parts.append(f'stroke-dasharray="{" ".join(f"{v * 100:.3g}" for v in paint.dash)}"')
        if paint.cap == "round":
            parts.append('stroke-linecap="round"')
        if paint.join == "miter":
            parts.append('stroke-linejoin="miter"')
    if paint.opacity != 1.0:
        parts.append(f'opacity="{paint.opacity:.3g}"')
    return "".join(" " + part for part in parts)


_UNFIT = re.compile("[^\t\n\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
"""Characters that XML cannot hold."""


def xml_text(text: str) -> str:
    """Text without the characters that XML cannot hold."""
    return _UNFIT.sub("", text)


_SPECIAL = re.compile(r"[^ !#-%'-;=?-~]")
"""Characters that need a closer look in text or in an attribute; most texts have none."""


def _escaped(text: str) -> str:
    return escape(_UNFIT.sub("", text)) if _SPECIAL.search(text) else text


def _quoted(text: str) -> str:
    if not _SPECIAL.search(text):
        return text
    return escape(_UNFIT.sub("", text), {'"': "&quot;", "\n": "&#10;", "\t": "&#9;"})
