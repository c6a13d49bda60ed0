"""Trend sails: a mast as tall as the package, a sail that narrows the way the grain size or the thickness does."""

from __future__ import annotations

import math

from logkit.drawing.metrics import MM_PER_POINT, width_mm
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Group, Paint, Path, Shape, Text, polyline
from logkit.model import Package

NARROWING = ("fining-up", "thinning-up")
DASH = (1.0, 0.7)


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Sails of the outermost packages; nested ones inside them are narrower."""
    column, style = scene.columns["trend"], scene.style
    shapes: list[Shape] = []
    label_room = 1.2 * style.fonts.label * MM_PER_POINT + 0.6
    deepest = max((package.level for package in scene.packages), default=0)
    step = (column.x1 - column.x0 - label_room) / (deepest + 1)
    for package in scene.packages:
        if package.trend == "no trend":
            continue
        span = view.span(package.base_m, package.top_m)
        if span is None:
            continue
        if span[0] - span[1] < 1.5:
            tally.left_out["short trend sails"] += 1
            continue
        mast = column.x1 - 0.8 - package.level * step
        whole = package.base_m >= view.position.base_m and package.top_m <= view.position.top_m
        shapes.append(_sail(scene, package, span, mast, min(5.2, step - 1.2), tally))
        if whole and package.level == deepest:
            shapes.extend(_label(scene, package, span, column.x0, tally))
    return shapes


def _sail(
    scene: Scene, package: Package, span: tuple[float, float], mast: float, wide: float, tally: Tally
) -> Group:
    style = scene.style
    trend, significant = package.trend, package.significant
    inset = min(0.6, (span[0] - span[1]) / 8)
    y0, y1 = span[0] - inset, span[1] + inset
    points = []
    for number in range(17):
        u = number / 16
        q = (1 - u) ** 0.62 if trend in NARROWING else u**0.62
        reach = 0.35 + wide * q * (1 - 0.18 * math.sin(math.pi * u))
        points.append((mast - reach, y0 + u * (y1 - y0)))
    outline = polyline([(mast, y0), *points, (mast, y1)], closed=True)
    ink = style.colours.ink
    tally.marks.add("sail" if significant else "weak sail")
    if significant:
        fill = style.colours.trend if style.ribbon.sail_fill else None
        paint = Paint(fill=fill, stroke=ink, width=0.18)
    else:
        paint = Paint(stroke=ink, width=0.18, dash=DASH)
    title = f"{trend}, beds {package.first_bed} to {package.last_bed}"
    return Group(
        (Path(outline, paint), Path(polyline(((mast, y0), (mast, y1))), Paint(stroke=ink, width=0.40))),
        title=title,
    )


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
