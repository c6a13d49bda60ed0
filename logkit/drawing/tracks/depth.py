"""Flow depth of each phase: whisker, box and median at the middle of the phase; a bar and arrow for a bound."""

from __future__ import annotations

from logkit.drawing.palette import state_tints
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Paint, Path, Shape, gathered, polyline
from logkit.drawing.tracks.ribbon import arrow, is_conflict

BOX_MM = 1.3


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Depth marks of the phases on a sheet; none where clues conflict."""
    axis = scene.flow_depth
    if axis is None:
        return []
    style = scene.style
    ink = style.colours.ink
    found: list[list[Shape]] = []
    for item, _ in view.items():
        for estimate in scene.estimates.get(item.index, ()):
            span = view.span(estimate.phase.base_m, estimate.phase.top_m)
            if span is None or is_conflict(estimate):
                continue
            tall, y = span[0] - span[1], (span[0] + span[1]) / 2
            depth = estimate.flow_depth
            marks: list[Shape] = []
            if depth is not None:
                half = min(BOX_MM, 0.8 * tall) / 2
                left, right = axis.x(depth.p25), axis.x(depth.p75)
                inner = state_tints(estimate.bed_state, style)[1]
                whisker = polyline(((axis.x(depth.p10), y), (axis.x(depth.p90), y)))
                box = polyline(
                    ((left, y - half), (right, y - half), (right, y + half), (left, y + half)), closed=True
                )
                middle = polyline(((axis.x(depth.p50), y - half), (axis.x(depth.p50), y + half)))
                marks = [
                    Path(whisker, Paint(stroke=ink, width=0.20)),
                    Path(box, Paint(fill=inner, stroke=ink, width=style.ribbon.outline)),
                    Path(middle, Paint(stroke=ink, width=0.50)),
                ]
                tally.marks.add("whisker")
            elif estimate.limit_flow_depth_m is not None:
                above = estimate.bound != "below"
                x = axis.x(estimate.limit_flow_depth_m)
                end = min(x + 4.5, axis.x1) if above else max(x - 4.5, axis.x0)
                marks = arrow(scene, x, end, span, "", (axis.x0, axis.x1))
                tally.marks.add("bound above" if above else "bound below")
            if marks:
                found.append(marks)
    return gathered(found)
