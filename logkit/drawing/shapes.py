"""Plain shapes in millimetres on the page, y downwards. Layout makes them; only `svg` knows how to write them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Literal

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

    segments: tuple[Segment, ...]
    paint: Paint


@dataclass(frozen=True, slots=True)
class Dots:
    """Round dots of one diameter and colour, written as a single path of zero-length strokes."""

    points: tuple[Point, ...]
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
    """A vertical gradient between two heights on the page: (y, colour) stops from top to bottom."""

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


Shape = Path | Dots | Circle | Text | Group


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
