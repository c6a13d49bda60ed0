"""Plain shapes in millimetres on the page, y downwards. Layout makes them; only `svg` knows how to write them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from typing import Literal

from logkit.drawing.packed import Points, Polylines, Strokes

Point = tuple[float, float]
Segment = tuple[str, tuple[float, ...]]
"""A path step: ("M", (x, y)), ("L", (x, y)), ("C", (x1, y1, x2, y2, x, y)), ("Q", …) or ("Z", ())."""


@dataclass(frozen=True, slots=True)
class Paint:
    """Fill and stroke: sRGB hex colours or None, widths and dashes in mm.

    `fill` may name a gradient of the drawing as "gradient:ID".
    """

    fill: str | None = None
    stroke: str | None = None
    width: float = 0.25
    dash: tuple[float, ...] = ()
    cap: Literal["butt", "round"] = "butt"
    join: Literal["miter", "round"] = "round"
    opacity: float = 1.0


@dataclass(frozen=True, slots=True)
class Path:
    """An open or closed path."""

    segments: tuple[Segment, ...] | Strokes
    paint: Paint


@dataclass(frozen=True, slots=True)
class Lines:
    """Open polylines of one paint, each of two points or more."""

    lines: tuple[tuple[Point, ...], ...] | Polylines
    paint: Paint


@dataclass(frozen=True, slots=True)
class Dots:
    """Round dots of one diameter and colour, written as a single path of zero-length strokes."""

    points: tuple[Point, ...] | Points
    diameter: float
    colour: str


@dataclass(frozen=True, slots=True)
class Circle:
    """A circle."""

    centre: Point
    radius: float
    paint: Paint


@dataclass(frozen=True, slots=True)
class Text:
    """One line of text. `at` is the anchor on the base line; size in points; `turn` in degrees clockwise."""

    at: Point
    text: str
    size: float
    colour: str
    bold: bool = False
    italic: bool = False
    anchor: Literal["start", "middle", "end"] = "start"
    turn: float = 0.0


@dataclass(frozen=True, slots=True)
class Gradient:
    """A gradient down the shape it fills: stops of (share of the shape's height, colour) from its top to its foot.

    Gradients of one content have one id, so that beds share them.
    """

    id: str
    stops: tuple[tuple[float, str], ...]


@dataclass(frozen=True, slots=True)
class Group:
    """Shapes that belong together.

    Attributes
    ----------
    id : element id, unique in the drawing, "" for none
    layer : name shown by vector editors, "" for none
    title, desc : text for screen readers and tooltips
    data : (name, value) pairs written as `data-name`
    clip : closed path outside of which nothing of the group shows
    """

    children: tuple[Shape, ...]
    id: str = ""
    layer: str = ""
    title: str = ""
    desc: str = ""
    data: tuple[tuple[str, str], ...] = ()
    clip: tuple[Segment, ...] = ()


Shape = Path | Lines | Dots | Circle | Text | Group


@dataclass(frozen=True, slots=True)
class Sheet:
    """One page: size in mm, shapes in painting order, gradients they use."""

    width: float
    height: float
    shapes: tuple[Shape, ...]
    gradients: tuple[Gradient, ...] = ()
    title: str = ""
    desc: str = ""
    number: int = 1
    of: int = 1
    background: str = field(default="#ffffff")


def polyline(points: tuple[Point, ...] | list[Point], closed: bool = False) -> tuple[Segment, ...]:
    """Path segments through points."""
    steps: list[Segment] = [("M" if i == 0 else "L", point) for i, point in enumerate(points)]
    if closed:
        steps.append(("Z", ()))
    return tuple(steps)


def walk(shapes: tuple[Shape, ...]) -> Iterator[Shape]:
    """All shapes, groups before their children."""
    for shape in shapes:
        yield shape
        if isinstance(shape, Group):
            yield from walk(shape.children)


def shifted(shape: Path | Circle, dx: float, dy: float) -> Path | Circle:
    """The same shape elsewhere on the page."""
    if isinstance(shape, Circle):
        return Circle((shape.centre[0] + dx, shape.centre[1] + dy), shape.radius, shape.paint)
    steps: list[Segment] = []
    for command, values in shape.segments:
        if len(values) == 2:
            steps.append((command, (values[0] + dx, values[1] + dy)))
        else:
            steps.append((command, tuple(v + (dy if i % 2 else dx) for i, v in enumerate(values))))
    return Path(tuple(steps), shape.paint)


def gathered(marks: Iterable[Sequence[Shape]]) -> list[Shape]:
    """Marks that do not touch each other, what they have in common written once.

    Paths of one paint that come at the same place in their marks become one path, texts one group: a column of a
    thousand marks is then a handful of shapes. The order within each mark is kept.
    """
    layers: dict[tuple[int, Paint], list[Segment]] = {}
    others: dict[int, list[Shape]] = {}
    texts: list[Shape] = []
    for mark in marks:
        for place, shape in enumerate(mark):
            if isinstance(shape, Path):
                layers.setdefault((place, shape.paint), []).extend(shape.segments)
            elif isinstance(shape, Text):
                texts.append(shape)
            else:
                others.setdefault(place, []).append(shape)
    found: list[tuple[int, Shape]] = [(place, Path(tuple(s), paint)) for (place, paint), s in layers.items()]
    found += [(place, shape) for place, shapes in others.items() for shape in shapes]
    shapes = [shape for _, shape in sorted(found, key=lambda pair: pair[0])]
    return [*shapes, Group(tuple(texts))] if texts else shapes
