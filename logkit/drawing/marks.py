"""Small drawings made of steps written as text, so that a geologist can add one without programming.

A step is a word and coordinates in a box from -1 to 1, x along the bed, y upward: `"line -1 0 1 0"`,
`"thin curve …"`, `"bold loop …"`. Which mark stands for which term is data in motifs.toml.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from logkit.drawing.shapes import Circle, Paint, Path, Point, Segment, polyline
from logkit.drawing.style import Style

STEP_WORDS: dict[str, str] = {
    "line": "straight lines through points",
    "loop": "closed outline through points",
    "solid": "area in ink",
    "cut": "area in the colour of clasts, outlined",
    "curve": "smooth curve through points",
    "blob": "smooth closed outline",
    "pebble": "smooth closed area in the colour of clasts, outlined",
    "chip": "smooth closed area in the colour of mud chips",
    "bean": "smooth closed area in ink",
    "ring": "circle: x y radius",
    "hole": "circle in the colour of clasts, outlined: x y radius",
    "dot": "filled circle: x y radius",
}
"""First word of a step -> what it draws."""

WEIGHT_WORDS = {"thin": 0.6, "bold": 1.5}
"""A step may start with one of these: factor on the line weight."""

_LEAST_POINTS = {"line": 2, "curve": 2}


@dataclass(frozen=True, slots=True)
class Step:
    """One step: its word, coordinates and factor on the line weight."""

    word: str
    numbers: tuple[float, ...]
    weight: float = 1.0

    @property
    def points(self) -> list[Point]:
        """Coordinates in pairs."""
        return list(zip(self.numbers[::2], self.numbers[1::2], strict=True))


Mark = tuple[Step, ...]
Place = Callable[[float, float], Point]


def parse_step(text: str) -> Step:
    """Read one step.

    Raises
    ------
    ValueError : the word is not known or the coordinates do not fit it; the message says what is allowed
    """
    words = text.split()
    weight = WEIGHT_WORDS.get(words[0], 0.0) if words else 0.0
    if weight:
        words = words[1:]
    if not words or words[0] not in STEP_WORDS:
        raise ValueError(
            f"a step starts with {', '.join(WEIGHT_WORDS)} or {', '.join(STEP_WORDS)}, not {text!r}"
        )
    word = words[0]
    try:
        numbers = tuple(float(n) for n in words[1:])
    except ValueError:
        raise ValueError(f"the coordinates of {text!r} must be numbers") from None
    if not all(math.isfinite(n) and abs(n) <= 4 for n in numbers):
        raise ValueError(f"the coordinates of {text!r} must lie between -4 and 4")
    if word in ("ring", "hole", "dot"):
        if len(numbers) != 3 or numbers[2] <= 0:
            raise ValueError(f"{word!r} takes x, y and a radius above zero, not {text!r}")
    elif len(numbers) % 2 or len(numbers) < 2 * _LEAST_POINTS.get(word, 3):
        raise ValueError(
            f"{word!r} takes pairs of coordinates for at least {_LEAST_POINTS.get(word, 3)} points"
        )
    return Step(word, numbers, weight or 1.0)


def draw_mark(
    mark: Mark, place: Place, unit: float, style: Style, ink: str, width: float
) -> tuple[Path | Circle, ...]:
    """Shapes of a mark.

    Parameters
    ----------
    mark : its steps
    place : page position of a point of the unit box
    unit : length of 1 on the page, mm, for radii
    style, ink, width : colours, ink of lines and filled areas, line weight in mm
    """
    return tuple(_draw(step, place, unit, style, ink, width * step.weight) for step in mark)


def _paint(word: str, style: Style, ink: str, width: float) -> Paint:
    if word in ("solid", "bean", "dot"):
        return Paint(fill=ink)
    if word in ("cut", "pebble", "hole"):
        return Paint(fill=style.colours.clast, stroke=ink, width=width, join="round")
    if word == "chip":
        return Paint(fill=style.colours.chip, stroke=ink, width=0.5 * width)
    return Paint(stroke=ink, width=width, cap="round", join="round")


def _draw(step: Step, place: Place, unit: float, style: Style, ink: str, width: float) -> Path | Circle:
    paint = _paint(step.word, style, ink, width)
    if step.word in ("ring", "hole", "dot"):
        x, y, radius = step.numbers
        return Circle(place(x, y), radius * unit, paint)
    points = [place(x, y) for x, y in step.points]
    if step.word == "curve":
        return Path(smooth(points), paint)
    if step.word in ("blob", "pebble", "chip", "bean"):
        return Path(smooth(points, closed=True), paint)
    return Path(polyline(points, closed=step.word != "line"), paint)


def smooth(points: Sequence[Point], closed: bool = False) -> tuple[Segment, ...]:
    """A smooth path through points (cubic pieces whose tangents follow the neighbours)."""
    count = len(points)
    if count < 3:
        return tuple(("M" if i == 0 else "L", p) for i, p in enumerate(points))
    steps: list[Segment] = [("M", points[0])]
    for i in range(count if closed else count - 1):
        before = points[i - 1] if closed or i > 0 else points[i]
        start, end = points[i], points[(i + 1) % count]
        after = points[(i + 2) % count] if closed or i + 2 < count else end
        first = (start[0] + (end[0] - before[0]) / 6, start[1] + (end[1] - before[1]) / 6)
        second = (end[0] - (after[0] - start[0]) / 6, end[1] - (after[1] - start[1]) / 6)
        steps.append(("C", (*first, *second, *end)))
    if closed:
        steps.append(("Z", ()))
    return tuple(steps)


def mark_outline(mark: Mark, place: Place, unit: float) -> list[list[Point]]:
    """Polylines that follow a mark, for keeping other marks clear of it."""
    lines = []
    for step in mark:
        if step.word in ("ring", "hole", "dot"):
            x, y, radius = step.numbers
            cx, cy = place(x, y)
            turns = [i * math.pi / 4 for i in range(9)]
            lines.append(
                [(cx + radius * unit * math.cos(t), cy + radius * unit * math.sin(t)) for t in turns]
            )
            continue
        points = [place(x, y) for x, y in step.points]
        lines.append(points if step.word in ("line", "curve") else [*points, points[0]])
    return lines
