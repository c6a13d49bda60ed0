"""Palaeocurrents: a needle for the mean of each bed's readings, north up, with its azimuth."""

from __future__ import annotations

import math

from logkit.drawing.metrics import MM_PER_POINT
from logkit.drawing.placement import keep_clear
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Paint, Path, Point, Shape, Text, gathered, polyline

NEEDLE_MM = 3.6
PITCH_MM = 2.4


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Needles that stand clear of each other, thick beds first; the rest is counted."""
    column, style = scene.columns["current"], scene.style
    candidates = [
        ((span[0] + span[1]) / 2, scene.azimuths[item.index])
        for item, span in reversed(list(view.items()))
        if item.index in scene.azimuths
    ]
    kept = keep_clear([c[0] for c in candidates], [PITCH_MM] * len(candidates))
    if len(kept) < len(candidates):
        tally.left_out["current needles"] += len(candidates) - len(kept)
    found: list[list[Shape]] = []
    size = style.fonts.label
    for number in kept:
        y, (azimuth, sense) = candidates[number]
        parts = needle((column.x0 + NEEDLE_MM / 2, y), azimuth, sense, scene)
        text = f"{round(azimuth) % 360:03d}°"
        if sense == "axis":
            tally.marks.add("axis")
            text = f"{round(azimuth) % 180:03d}°\u200a↔"
        at = (column.x0 + NEEDLE_MM + 1.2, y + 0.36 * size * MM_PER_POINT)
        parts.append(Text(at, text, size, style.colours.ink))
        found.append(parts)
    if kept:
        tally.marks.add("needle")
    return gathered(found)


def needle(centre: Point, azimuth_deg: float, sense: str, scene: Scene) -> list[Shape]:
    """A kite, head filled and tail hollow; an axis without a sense is hollow at both ends."""
    ink = scene.style.colours.ink
    angle = math.radians(azimuth_deg)
    along = (math.sin(angle), -math.cos(angle))
    across = (-along[1], along[0])
    x, y = centre

    def at(forward: float, side: float) -> Point:
        return (x + forward * along[0] + side * across[0], y + forward * along[1] + side * across[1])

    half, wide = NEEDLE_MM / 2, 0.62
    head = polyline((at(half, 0), at(0, wide), at(0, -wide)), closed=True)
    tail = polyline((at(-half, 0), at(0, wide), at(0, -wide)), closed=True)
    hollow = Paint(fill=scene.style.colours.paper, stroke=ink, width=0.14)
    filled = Paint(fill=ink, stroke=ink, width=0.14)
    return [Path(tail, hollow), Path(head, hollow if sense == "axis" else filled)]


def mean_azimuth(azimuths: list[float], axis: bool) -> float | None:
    """Circular mean, degrees; axes are doubled. None when the readings cancel out."""
    factor = 2.0 if axis else 1.0
    east = sum(math.sin(math.radians(factor * a)) for a in azimuths)
    north = sum(math.cos(math.radians(factor * a)) for a in azimuths)
    if math.hypot(east, north) < 1e-6 * len(azimuths):
        return None
    mean = math.degrees(math.atan2(east, north)) / factor
    return mean % (180.0 if axis else 360.0)
