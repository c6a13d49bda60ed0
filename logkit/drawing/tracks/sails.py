"""Trend sails: a mast as tall as the package, a sail that narrows the way the grain size or the thickness does."""

from __future__ import annotations

import math

from logkit.drawing.metrics import MM_PER_POINT, width_mm
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Group, Paint, Path, Point, Shape, Text, polyline
from logkit.model import Package

NARROWING = ("fining-up", "thinning-up")
DASH = (1.0, 0.7)
STEPS = 5


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Sails in lanes from the right: packages of grain size, those nested in them, packages of thickness."""
    column, style = scene.columns["trend"], scene.style
    shapes: list[Shape] = []
    found = [package for package in scene.packages if package.trend != "no trend"]
    lanes = sorted({_lane(package) for package in found})
    label_room = 1.2 * style.fonts.label * MM_PER_POINT + 0.6
    step = (column.x1 - column.x0 - label_room) / max(1, len(lanes))
    for package in found:
        span = view.span(package.base_m, package.top_m)
        if span is None:
            continue
        if span[0] - span[1] < 1.5:
            tally.left_out["short trend sails"] += 1
            continue
        lane = lanes.index(_lane(package))
        mast = column.x1 - 0.8 - lane * step
        shapes.append(_sail(scene, package, span, mast, min(5.2, step - 1.2), tally))
        whole = package.base_m >= view.position.base_m and package.top_m <= view.position.top_m
        if whole and lane == len(lanes) - 1:
            shapes.extend(_label(scene, package, span, column.x0, tally))
    return shapes


def _lane(package: Package) -> tuple[bool, int]:
    return package.quantity == "thickness", package.level


def _sail(
    scene: Scene, package: Package, span: tuple[float, float], mast: float, wide: float, tally: Tally
) -> Group:
    """Curved for grain size, in steps for thickness; filled where significant, else hollow and dashed."""
    style = scene.style
    inset = min(0.6, (span[0] - span[1]) / 8)
    y0, y1 = span[0] - inset, span[1] + inset
    narrowing = package.trend in NARROWING
    edge: list[Point] = []
    if package.quantity == "thickness":
        for number in range(STEPS):
            share = (STEPS - number if narrowing else number + 1) / STEPS
            for u in (number / STEPS, (number + 1) / STEPS):
                edge.append((mast - wide * share, y0 + u * (y1 - y0)))
    else:
        for number in range(17):
            u = number / 16
            q = (1 - u) ** 0.62 if narrowing else u**0.62
            edge.append((mast - 0.35 - wide * q * (1 - 0.18 * math.sin(math.pi * u)), y0 + u * (y1 - y0)))
    ink = style.colours.ink
    kind = "steps" if package.quantity == "thickness" else "sail"
    tally.marks.add(kind if package.significant else f"weak {kind}")
    filled = style.colours.trend if style.ribbon.sail_fill and package.significant else None
    paint = Paint(fill=filled, stroke=ink, width=0.18, dash=() if package.significant else DASH)
    outline = polyline([(mast, y0), *edge, (mast, y1)], closed=True)
    line = polyline(((mast, y0), (mast, y1)))
    title = f"{package.trend}, beds {package.first_bed} to {package.last_bed}"
    return Group((Path(outline, paint), Path(line, Paint(stroke=ink, width=0.40))), title=title)


def _label(scene: Scene, package: Package, span: tuple[float, float], x: float, tally: Tally) -> list[Shape]:
    """tau, p and n along the sail, as much of it as the sail is long."""
    style = scene.style
    tau = f"τ\u00a0{package.tau:+.2f}".replace("-", "−")
    p = package.p_adjusted
    chance = "p\u00a0<\u00a00.001" if p < 0.001 else f"p\u00a0{p:.2g}"
    n = f"n\u00a0{package.beds}"
    size = style.fonts.label
    middle = (span[0] + span[1]) / 2
    for text in (f"{tau}, {chance}, {n}", f"{tau}, {chance}", tau):
        if width_mm(text, size) <= span[0] - span[1] - 1.0:
            at = (x + 0.8 * size * MM_PER_POINT, middle)
            return [Text(at, text, size, style.colours.ink, anchor="middle", turn=270.0)]
    tally.left_out["trend labels"] += 1
    return []
