"""Samples and markers: a triangle or a lozenge touching the profile at its height, with its name."""

from __future__ import annotations

from bisect import bisect_right

from logkit.drawing.metrics import MM_PER_POINT, clean, width_mm
from logkit.drawing.outline import Outline
from logkit.drawing.placement import keep_clear
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Group, Paint, Path, Segment, Shape, Text, polyline

PITCH_MM = 2.6


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Labels where they stand clear of each other and of the profile; the others go into the notes."""
    placed = placed_labels(scene, view)
    texts: list[Shape] = []
    triangles: list[Segment] = []
    lozenges: list[Segment] = []
    size = scene.style.fonts.label
    for x, y, text, marker in placed.values():
        if marker:
            tally.marks.add("marker")
            lozenges.extend(
                polyline(((x, y), (x + 0.9, y - 0.9), (x + 1.8, y), (x + 0.9, y + 0.9)), closed=True)
            )
        else:
            tally.marks.add("sample")
            triangles.extend(polyline(((x, y), (x + 1.6, y - 0.9), (x + 1.6, y + 0.9)), closed=True))
        at = (x + 2.3, y + 0.36 * size * MM_PER_POINT)
        texts.append(Text(at, text, size, scene.style.colours.ink, bold=marker))
    shapes: list[Shape] = []
    for steps in (triangles, lozenges):
        if steps:
            shapes.append(Path(tuple(steps), Paint(fill=scene.style.colours.ink)))
    if texts:
        shapes.append(Group(tuple(texts)))
    return shapes


def placed_labels(scene: Scene, view: View) -> dict[int, tuple[float, float, str, bool]]:
    """(x, y, text, is marker) of the labels that find room, by the bed's index."""
    outlines = view.outlines
    candidates = []
    for item, (y_base, y_top) in reversed(list(view.items())):
        bed = item.bed
        if item.index in outlines and (bed.samples or bed.marker):
            text = clean(bed.marker or ", ".join(bed.samples))
            candidates.append((item.index, (y_base + y_top) / 2, text, bool(bed.marker)))
    kept = keep_clear([c[1] for c in candidates], [PITCH_MM] * len(candidates))
    right = scene.columns["texture"].x1
    reach = sorted(outlines.values(), key=lambda outline: outline.y_top)
    tops = [outline.y_top for outline in reach]
    placed = {}
    for number in kept:
        index, y, text, marker = candidates[number]
        own = outlines[index]
        x = max(own.x_at(y), _widest(reach, tops, y)) + 0.4
        width = width_mm(text, scene.style.fonts.label, marker)
        if x + 2.3 + width <= right + 1.0 and own.x_at(y) + 3.5 >= x:
            placed[index] = (x, y, text, marker)
    return placed


def _widest(outlines: list[Outline], tops: list[float], y: float) -> float:
    """Widest reach of the profiles that a label at this height could meet; outlines run downward."""
    low, high = y - PITCH_MM / 2, y + PITCH_MM / 2
    first = max(0, bisect_right(tops, low) - 3)  # a scoured base may reach down from a bed above
    last = bisect_right(tops, high)
    return max((o.x0 + o.width for o in outlines[first:last] if o.y_low > low), default=0.0)
