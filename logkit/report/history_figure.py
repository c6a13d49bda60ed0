"""The flow history of a log as one figure: velocity against position, one mark a phase, ready to be linked."""

from __future__ import annotations

import math
from collections.abc import Iterator

from logkit.drawing.shapes import Group, Paint, Path, Shape, Sheet, Text, polyline
from logkit.drawing.svg import sheet_svg
from logkit.model import PhaseEstimate, Quantiles
from logkit.report.wells import Well, depth_or_height
from logkit.report.wording import FEET, Units

WIDTH, LEFT, RIGHT, TOP, FOOT = 170.0, 22.0, 164.0, 12.0, 12.0
INK, SOFT, GRID, OUTER, INNER = "#1d2430", "#575e69", "#d5d8db", "#b2dbea", "#6bb0c8"
NICE = (0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 50.0)
Y_STEPS = (0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0, 200.0, 500.0)


class _Frame:
    """Axes of the figure: velocity to x on a log scale, position to y."""

    def __init__(self, well: Well, units: Units) -> None:
        found = [e for e in well.history.estimates if _values(e)]
        values = [units.number(v) for e in found for v in _values(e)]
        self.low = max([n for n in NICE if n <= min(values)], default=NICE[0])
        self.high = min([n for n in NICE if n >= max(values)], default=NICE[-1])
        self.base, self.top = well.log.base_m, well.log.top_m
        self.height = min(210.0, max(60.0, 8.0 * (self.top - self.base)))
        self.units = units
        self.well = well
        self.moved_by = "wind 10 m above the ground" if all(e.is_wind for e in found) else "flow velocity"

    def x(self, speed_m_s: float) -> float:
        """Place of a velocity, mm."""
        share = math.log(self.units.number(speed_m_s) / self.low) / math.log(self.high / self.low)
        return LEFT + (RIGHT - LEFT) * min(max(share, 0.0), 1.0)

    def y(self, position_m: float) -> float:
        """Place of a position, mm from the top of the page."""
        return TOP + self.height * (self.top - position_m) / max(self.top - self.base, 1e-9)


def history_figure(well: Well, units: Units) -> tuple[str, float, float]:
    """SVG text, width and height in mm. The log must have at least one velocity."""
    frame = _Frame(well, units)
    shapes: list[Shape] = [*_axes(frame)]
    for estimate in well.history.estimates:
        marks = tuple(_marks(frame, estimate))
        if marks:
            shapes.append(
                Group(marks, title=f"Bed {estimate.phase.bed}", data=(("bed", well.key_of(estimate)),))
            )
    height = TOP + frame.height + FOOT
    sheet = Sheet(WIDTH, height, tuple(shapes), title=f"Flow history of {well.name}")
    return sheet_svg(sheet), WIDTH, height


def _values(estimate: PhaseEstimate) -> list[float]:
    found = [estimate.velocity, estimate.base_velocity, estimate.top_velocity]
    values = [v for q in found if q is not None for v in (q.p10, q.p90)]
    if estimate.limit_velocity_m_s:
        values.append(estimate.limit_velocity_m_s)
    return [v for v in values if v > 0]


def _marks(frame: _Frame, estimate: PhaseEstimate) -> Iterator[Shape]:
    y0, y1 = frame.y(estimate.phase.base_m), frame.y(estimate.phase.top_m)
    middle = (y0 + y1) / 2
    if estimate.velocity is not None:
        base = estimate.base_velocity or estimate.velocity
        top = estimate.top_velocity or estimate.velocity
        yield Path(_box(frame, base, top, y0, y1, "p10", "p90"), Paint(fill=OUTER, stroke=SOFT, width=0.1))
        yield Path(_box(frame, base, top, y0, y1, "p25", "p75"), Paint(fill=INNER))
        yield Path(polyline([(frame.x(base.p50), y0), (frame.x(top.p50), y1)]), Paint(stroke=INK, width=0.5))
    elif estimate.limit_velocity_m_s:
        x = frame.x(estimate.limit_velocity_m_s)
        way = 4.0 if estimate.bound == "above" else -4.0
        yield Path(polyline([(x, middle - 0.8), (x, middle + 0.8)]), Paint(stroke=INK, width=0.3))
        yield Path(polyline([(x, middle), (x + way, middle)]), Paint(stroke=INK, width=0.2))
        yield Path(
            polyline([(x + way, middle - 0.5), (x + way * 1.3, middle), (x + way, middle + 0.5)], True),
            Paint(fill=INK),
        )


def _box(frame: _Frame, base: Quantiles, top: Quantiles, y0: float, y1: float, low: str, high: str) -> tuple:
    corners = [
        (getattr(base, low), y0),
        (getattr(base, high), y0),
        (getattr(top, high), y1),
        (getattr(top, low), y1),
    ]
    return polyline([(frame.x(v), y) for v, y in corners], True)


def _axes(frame: _Frame) -> Iterator[Shape]:
    low, high = TOP, TOP + frame.height
    for speed in NICE:
        if frame.low <= speed <= frame.high:
            share = math.log(speed / frame.low) / math.log(frame.high / frame.low)
            x = LEFT + (RIGHT - LEFT) * share
            yield Path(polyline([(x, low), (x, high)]), Paint(stroke=GRID, width=0.125))
            for y in (low - 1.5, high + 3.6):
                yield Text((x, y), f"{speed:g}", 6, INK, anchor="middle")
    yield Text(
        ((LEFT + RIGHT) / 2, low - 5.0),
        f"{frame.moved_by}, {frame.units.speed}",
        7,
        INK,
        bold=True,
        anchor="middle",
    )
    unit = frame.well.position_unit(frame.units)
    metres = FEET if unit == "ft" else 1.0
    step = next((s for s in Y_STEPS if (frame.top - frame.base) / metres / s <= 12), Y_STEPS[-1])
    sign = -1 if frame.well.downward else 1
    first = math.ceil(frame.base / metres / step - 1e-9)
    last = math.floor(frame.top / metres / step + 1e-9)
    for n in range(first, last + 1):
        y = frame.y(n * step * metres)
        yield Path(polyline([(LEFT - 1.5, y), (RIGHT, y)]), Paint(stroke=GRID, width=0.125))
        yield Text((LEFT - 2.2, y + 0.8), f"{sign * n * step:g}", 6, INK, anchor="end")
    word = f"{depth_or_height(frame.well)}, {unit}"
    yield Text((7.0, (low + high) / 2), word, 7, INK, bold=True, anchor="middle", turn=-90.0)
    yield Path(
        polyline([(LEFT, low), (RIGHT, low), (RIGHT, high), (LEFT, high)], True),
        Paint(stroke=INK, width=0.25),
    )
    for bed in frame.well.log.beds:
        if bed.is_gap:
            y0, y1 = frame.y(bed.base_m), frame.y(bed.top_m)
            for y in (y0, y1):
                yield Path(polyline([(LEFT, y), (RIGHT, y)]), Paint(stroke=SOFT, width=0.15, dash=(1.2, 0.8)))
            if y0 - y1 > 3.0:
                yield Text((RIGHT - 1.0, (y0 + y1) / 2 + 0.8), "no data", 6, SOFT, anchor="end")
