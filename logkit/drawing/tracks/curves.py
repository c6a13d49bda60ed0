"""Point curves beside the column, such as a gamma-ray log: a line that stops where readings are missing."""

from __future__ import annotations

import math
from collections.abc import Sequence

from logkit.drawing.axes import round_series
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Paint, Path, Segment, Shape

LEAST_STEP_MM = 0.05


def curve_range(values: Sequence[float]) -> tuple[float, float]:
    """Round ends of the axis of a curve: zero, when all readings are positive, to the next round number."""
    finite = [v for v in values if math.isfinite(v)]
    if not finite:
        return 0.0, 1.0
    top = max(max(finite), 1e-9)
    high = next(v for v in round_series(top / 10, top * 1.5) if v >= top)
    low = 0.0
    if min(finite) < 0:
        low = -next(v for v in round_series(-min(finite) / 10, -min(finite) * 1.5) if v >= -min(finite))
    return low, high


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """The first curve of the log."""
    column, style = scene.columns["gamma"], scene.style
    _, _, positions, values = scene.curves[0]
    low, high = curve_range(values)
    steps: list[Segment] = []
    pen_down = False
    for position, value in sorted(zip(positions, values, strict=True)):
        if not view.position.base_m <= position <= view.position.top_m:
            pen_down = False
            continue
        if not (math.isfinite(position) and math.isfinite(value)):
            pen_down = False
            continue
        x = column.x0 + (column.x1 - column.x0) * min(1.0, max(0.0, (value - low) / (high - low)))
        y = view.position.y(position)
        if pen_down and abs(steps[-1][1][1] - y) < LEAST_STEP_MM:
            continue
        steps.append(("L" if pen_down else "M", (x, y)))
        pen_down = True
    if len(scene.curves) > 1:
        tally.left_out["further curves"] += len(scene.curves) - 1
    if not steps:
        return []
    return [Path(tuple(steps), Paint(stroke=style.colours.ink, width=style.lines.set))]
