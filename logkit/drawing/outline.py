"""The outline of a bed on the page: grain-size profile on the right, contact at the base, spine on the left.

Geometry only; what is painted inside and along it is decided in `tracks.texture`.
"""

from __future__ import annotations

import itertools
import random
from dataclasses import dataclass

from logkit.drawing.axes import PHI_SAND_COARSE, PHI_SAND_FINE, PhiAxis, PositionScale
from logkit.drawing.scene import MeasuredBed
from logkit.drawing.shapes import Point, Segment
from logkit.drawing.style import TextureStyle

LOWEST_RELIEF_MM = 1.6
"""Most relief of the lowest bed on a sheet, on paper."""

Curve = tuple[Point, tuple[tuple[float, ...], ...]]
"""Start point and cubic steps (x1, y1, x2, y2, x, y) or straight steps (x, y)."""


@dataclass(frozen=True, slots=True)
class Outline:
    """Outline of one bed on one sheet, mm.

    Attributes
    ----------
    profile : (x, y) from the base upward
    sizes : (y, phi) at the same points
    base : contact line from the spine to the right
    scoured : True when the base cuts into the bed beneath
    """

    x0: float
    y_base: float
    y_top: float
    profile: tuple[Point, ...]
    sizes: tuple[Point, ...]
    base: Curve
    scoured: bool = False

    @property
    def width(self) -> float:
        """Widest reach of the profile from the spine, mm."""
        return max(x for x, _ in self.profile) - self.x0

    @property
    def y_low(self) -> float:
        """Lowest reach of the base, mm; a scour's deepest point lies three quarters down its control points."""
        if not self.scoured:
            return self.y_base
        return max(0.25 * step[-1] + 0.75 * step[1] for step in self.base[1])

    def closed(self) -> tuple[Segment, ...]:
        """The whole outline as a closed path."""
        steps: list[Segment] = [("M", (self.x0, self.y_top))]
        steps.extend(("L", point) for point in reversed(self.profile))
        steps.extend(_reversed(self.base))
        steps.append(("Z", ()))
        return tuple(steps)

    def polygon(self) -> list[Point]:
        """The outline as a polygon, scours by a few points each."""
        points: list[Point] = [(self.x0, self.y_top), *reversed(self.profile)]
        start, steps = self.base
        sampled: list[Point] = [start]
        for step in steps:
            if len(step) == 6:
                x, y = sampled[-1]
                for t in (0.25, 0.5, 0.75):
                    a, b, c, d = (1 - t) ** 3, 3 * t * (1 - t) ** 2, 3 * t * t * (1 - t), t**3
                    sampled.append(
                        (
                            a * x + b * step[0] + c * step[2] + d * step[4],
                            a * y + b * step[1] + c * step[3] + d * step[5],
                        )
                    )
            sampled.append((step[-2], step[-1]))
        points.extend(reversed(sampled[:-1]))
        return points

    def x_at(self, y: float) -> float:
        """Right edge at a height on the page, mm; heights outside are held at base and top."""
        previous = self.profile[0]
        if y >= previous[1]:
            return previous[0]
        for point in self.profile[1:]:
            if y >= point[1]:
                share = (previous[1] - y) / (previous[1] - point[1])
                return previous[0] + share * (point[0] - previous[0])
            previous = point
        return previous[0]


def base_path(curve: Curve) -> tuple[Segment, ...]:
    """The contact line as an open path."""
    start, steps = curve
    return (("M", start), *(("C" if len(step) == 6 else "L", step) for step in steps))


def bed_outline(
    item: MeasuredBed,
    span: tuple[float, float],
    position: PositionScale,
    axis: PhiAxis,
    scale: float,
    style: TextureStyle,
    open_below: bool = False,
) -> Outline:
    """Outline of a bed on a sheet.

    Parameters
    ----------
    item, span : the bed and its (y of base, y of top)
    position : position in the section to y
    axis : grain-size axis
    scale : metres in the section a metre on paper
    style : least relief of an erosive base on paper and the widths of its scours
    open_below : nothing is known of what lies below; relief drawn into a gap would read as data
    """
    y_base, y_top = span
    sizes = _sizes(item, position)
    profile = tuple((axis.x(phi), y) for y, phi in sizes)
    right = profile[0][0]
    contact = item.bed.contact
    kind = contact.kind if contact and item.bed.base_m >= position.base_m else ""
    tall = y_base - y_top
    if kind in _SHAPED and tall >= 1.0 and right - axis.x0 > 3 and not open_below:
        logged = contact.relief_m if contact and contact.relief_m else 0.0
        relief = max(style.least_relief, logged * 1000 / scale)
        if y_base >= position.y_base:  # the axes stand close below a sheet's lowest bed
            relief = min(relief, LOWEST_RELIEF_MM)
        base = _SHAPED[kind](axis.x0, right, y_base, relief, style.scallop, random.Random(item.seed))
        return Outline(axis.x0, y_base, y_top, profile, sizes, base, scoured=kind == "erosive")
    return Outline(axis.x0, y_base, y_top, profile, sizes, ((axis.x0, y_base), ((right, y_base),)))


def _sizes(item: MeasuredBed, position: PositionScale) -> tuple[Point, ...]:
    """(y, phi) from base to top, with a knot where the axis changes its rate."""
    low = max(item.bed.base_m, position.base_m)
    high = min(item.bed.top_m, position.top_m)
    knots = item.knots
    phi = knots[0][1]
    if all(other == phi for _, other in knots):
        return ((position.y(low), phi), (position.y(high), phi))
    inner = [(m, phi) for m, phi in knots if low < m < high]
    points = [(low, item.phi_at(low)), *inner, (high, item.phi_at(high))]
    if low == item.bed.base_m:
        points[0] = (low, knots[0][1])
    if high == item.bed.top_m:
        points[-1] = (high, knots[-1][1])
    full: list[tuple[float, float]] = [points[0]]
    for (m_a, a), (m_b, b) in itertools.pairwise(points):
        crossings = [limit for limit in (PHI_SAND_FINE, PHI_SAND_COARSE) if min(a, b) < limit < max(a, b)]
        for limit in sorted(crossings, reverse=a > b):
            full.append((m_a + (m_b - m_a) * (limit - a) / (b - a), limit))
        full.append((m_b, b))
    return tuple((position.y(m), phi) for m, phi in full)


def _scours(
    x0: float, x1: float, y: float, relief: float, widths: tuple[float, ...], rng: random.Random
) -> Curve:
    """An erosive base: scours side by side, the first the deepest, with crests between them."""
    edges = _edges(x0, x1, widths, rng)
    steps = []
    level = y + 0.15 * relief
    for index, (a, b) in enumerate(itertools.pairwise(edges)):
        depth = relief * (1.0 if index == 0 else rng.uniform(0.35, 0.75))
        end = y if b == x1 else y + rng.uniform(-0.05, 0.22) * relief
        lean = rng.uniform(0.18, 0.32)
        w = b - a
        # a cubic whose lowest point lies about 0.75 of its control depth below the ends
        steps.append((a + lean * w, y + 1.33 * depth, a + (lean + 0.35) * w, y + 1.33 * depth, b, end))
    return ((x0, level), tuple(steps))


def _waves(
    x0: float, x1: float, y: float, relief: float, widths: tuple[float, ...], rng: random.Random
) -> Curve:
    """An undulose base: one gentle wave after the other, half above and half below the logged height."""
    edges = _edges(x0, x1, widths, rng)
    steps = []
    side = 1.0
    for a, b in itertools.pairwise(edges):
        swing = side * relief * rng.uniform(0.5, 0.7)
        w = b - a
        steps.append((a + 0.35 * w, y + swing, a + 0.65 * w, y + swing, b, y))
        side = -side
    return ((x0, y), tuple(steps))


def _loads(
    x0: float, x1: float, y: float, relief: float, widths: tuple[float, ...], rng: random.Random
) -> Curve:
    """A loaded base: bulges that sank into the bed beneath, with narrow flames of it between them."""
    edges = _edges(x0, x1, tuple(0.6 * w for w in widths), rng)
    steps = []
    for a, b in itertools.pairwise(edges):
        depth = relief * rng.uniform(0.8, 1.2)
        w = b - a
        steps.append(
            (
                a - 0.04 * w,
                y + 1.3 * depth,
                b + 0.04 * w,
                y + 1.3 * depth,
                b,
                y - 0.25 * relief if b < x1 else y,
            )
        )
    return ((x0, y), tuple(steps))


_SHAPED = {"erosive": _scours, "undulose": _waves, "loaded": _loads}


def _edges(x0: float, x1: float, widths: tuple[float, ...], rng: random.Random) -> list[float]:
    edges = [x0]
    while edges[-1] < x1:
        edges.append(edges[-1] + rng.uniform(widths[0], widths[1]))
    if len(edges) > 2 and edges[-1] - x1 > 0.5 * widths[0]:
        edges.pop()
    edges[-1] = x1
    return edges


def _reversed(curve: Curve) -> list[Segment]:
    """Steps that run the curve backwards, beginning with a line to its end."""
    start, steps = curve
    ends = [start, *(step[-2:] for step in steps)]
    result: list[Segment] = [("L", (ends[-1][0], ends[-1][1]))]
    for index in range(len(steps) - 1, -1, -1):
        step, target = steps[index], ends[index]
        if len(step) == 6:
            result.append(("C", (step[2], step[3], step[0], step[1], target[0], target[1])))
        else:
            result.append(("L", (target[0], target[1])))
    return result
