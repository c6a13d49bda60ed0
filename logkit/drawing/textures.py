"""The texture of a bed: marks whose size and spacing follow the grain size, drawn after the family.

Loose grains (dots, triangles, strokes, clasts) are made here; the marks of carbonates, evaporites, organic and
volcanic rocks in `textures_rock`. Fill and outline are the layout's, colours the palette's.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from math import isfinite

import numpy as np

from logkit.drawing.ground import Array, Ground, LineSegment
from logkit.drawing.noise import FINEST_MM, seed_of
from logkit.drawing.packed import Points, Strokes
from logkit.drawing.palette import stipple
from logkit.drawing.shapes import Dots, Paint, Path, Point, Segment, Shape
from logkit.drawing.strips import Window
from logkit.drawing.style import Style, TextureStyle
from logkit.drawing.textures_rock import ROCK_MARKS, organic_flecks, rounded
from logkit.errors import ArgumentError

__all__ = ["bed_texture", "dot_diameter", "dot_spacing", "seed_of"]

SAND_COARSEST, SAND_FINEST = -1.0, 4.0
MUD_ONLY = 6.0
"""From this phi on a bed has strokes alone; between 4 and 6 dots mix in."""

UNKNOWN_PHI = {"mud": 6.5, "organic_mud": 6.5, "marl": 6.5, "gravel": -3.0}
"""Grain size that the marks assume where the log has none; other families get 2."""

_STROKE_STRETCH = (1.55, 0.80)
_CLAST_TILT = math.radians(-18)
_CLAST_RATIO = 0.64


def bed_texture(
    outline: Sequence[Point],
    knots: Sequence[tuple[float, float]],
    family: str,
    style: Style,
    *,
    seed: int,
    clear: Sequence[LineSegment] = (),
    windows: Sequence[Window] = (),
) -> tuple[Shape, ...]:
    """The marks of one bed or of one phase of it.

    Parameters
    ----------
    outline : closed polygon of the bed's body on the page, mm
    knots : (y on the page, phi), linear between and constant outside; may be empty when the size is unknown
    family : texture family of the lithology
    style : whose sizes and colours are used
    seed : `seed_of(bed id)`; the same seed gives the same marks
    clear : structure lines (x0, y0, x1, y1) that marks keep away from
    windows : of the strips whose lines marks keep away from

    Returns
    -------
    Shapes inside the outline: one path a dot diameter, one path for all strokes, one for all clasts

    Raises
    ------
    ArgumentError : an outline of fewer than three points, or numbers that are not finite
    """
    if len(outline) < 3:
        raise ArgumentError("outline", len(outline), "a polygon of at least three points")
    if not all(isfinite(x) and isfinite(y) for x, y in (*outline, *knots)):
        raise ArgumentError("outline", "not finite", "finite numbers in outline and knots")
    ys = [y for _, y in outline]
    if not style.texture.dots or max(ys) - min(ys) < style.texture.least_bed:
        return ()
    sizes = knots or [(ys[0], UNKNOWN_PHI.get(family, 2.0))]
    ground = Ground(outline, sizes, seed, clear, windows)
    ink = stipple(family, style)
    rock = ROCK_MARKS.get(family)
    if rock is not None:
        return rock(ground, style, ink, _loose_grains)
    flecks = organic_flecks(ground, style, ink) if family == "organic_mud" else ()
    return flecks + _loose_grains(ground, style, ink, lithic=family == "lithic")


@dataclass(frozen=True, slots=True)
class BedGround:
    """A bed to give marks to; see `bed_texture`."""

    outline: Sequence[Point]
    knots: Sequence[tuple[float, float]]
    family: str
    seed: int
    clear: Sequence[LineSegment] = ()
    windows: Sequence[Window] = ()


def bed_textures(beds: Sequence[BedGround], style: Style) -> list[tuple[Shape, ...]]:
    """The marks of many beds."""
    return [
        bed_texture(b.outline, b.knots, b.family, style, seed=b.seed, clear=b.clear, windows=b.windows)
        for b in beds
    ]


def dot_diameter(phi: Array, texture: TextureStyle) -> Array:
    """Diameter of the dots at a grain size, mm, in steps of 0.05 from 0.15 up."""
    wide = texture.diameter * 2 ** (texture.diameter_rate * (4 - np.minimum(np.maximum(phi, -1.0), 5.0)))
    return np.maximum(np.rint(20 * wide) / 20, 0.15)


def dot_spacing(phi: Array | float, texture: TextureStyle) -> Array:
    """Least distance between dots at a grain size, mm."""
    return np.asarray(
        texture.spacing * 2 ** (texture.spacing_rate * (4 - np.minimum(np.maximum(phi, -1.0), 5.0)))
    )


def _loose_grains(
    ground: Ground, style: Style, ink: str, *, lithic: bool = False, density: float = 1.0
) -> tuple[Shape, ...]:
    """Clasts, dots and strokes, each where the grain size asks for it; `density` below 1 spreads dots and strokes."""
    coarsest, finest = ground.phi_range
    shapes: tuple[Shape, ...] = ()
    if finest > SAND_FINEST:
        shapes += _strokes(ground, style, ink, density)
    if coarsest < MUD_ONLY and finest > SAND_COARSEST:
        shapes += _dots(ground, style, ink, lithic, density)
    if coarsest < SAND_COARSEST:
        shapes += _clasts(ground, style)
    return shapes


def _dots(ground: Ground, style: Style, ink: str, lithic: bool, density: float) -> tuple[Shape, ...]:
    texture = style.texture
    coarsest, finest = ground.phi_range
    loosened = 1 / math.sqrt(density)
    closest = float(dot_spacing(min(finest, MUD_ONLY), texture)) * loosened
    expected = 0.7 * ground.area / closest**2
    loosened *= max(1.0, math.sqrt(expected / texture.most_dots))
    x, y, reach = ground.points(max(closest * loosened, FINEST_MM))
    phi = ground.phi_at(y) if finest > coarsest else np.full(y.size, finest)
    kept = (reach >= dot_spacing(phi, texture) * loosened) & (phi > SAND_COARSEST) & (phi < MUD_ONLY)
    if finest > SAND_FINEST:
        mixing = np.where(phi <= SAND_FINEST, 1.0, 0.55 * (MUD_ONLY - phi) / 2)
        kept &= ground.random.random(x.size) < mixing
    x, y, diameter = x[kept], y[kept], dot_diameter(phi[kept], texture)
    needed = texture.clear + diameter / 2
    if lithic:
        needed = np.maximum(needed, 1.1 * diameter)
    held = ground.holds(x, y, needed)
    x, y, diameter = x[held], y[held], diameter[held]
    shapes: list[Shape] = []
    places = np.column_stack((x, y))
    if lithic:
        angular = (diameter > 0.26) & (ground.random.random(x.size) < texture.triangles)
        shapes += _triangles(ground, x[angular], y[angular], diameter[angular], ink)
        places, diameter = places[~angular], diameter[~angular]
    for size in sorted(set(diameter.tolist())):
        own = diameter == size
        shapes.append(Dots(Points(places[own]), round(size, 2), ink))
    return tuple(shapes)


def _triangles(ground: Ground, x: Array, y: Array, diameter: Array, ink: str) -> list[Shape]:
    if not x.size:
        return []
    turn = ground.random.random(x.size)[:, None] * 2 * np.pi + np.array([0.0, 2.2, 4.1])
    corner_x = (x[:, None] + 1.05 * diameter[:, None] * np.cos(turn)).tolist()
    corner_y = (y[:, None] + 1.05 * diameter[:, None] * np.sin(turn)).tolist()
    steps: list[Segment] = []
    for xs, ys in zip(corner_x, corner_y, strict=True):
        steps += [("M", (xs[0], ys[0])), ("L", (xs[1], ys[1])), ("L", (xs[2], ys[2])), ("Z", ())]
    return [Path(tuple(steps), Paint(fill=ink))]


def _strokes(ground: Ground, style: Style, ink: str, density: float) -> tuple[Shape, ...]:
    texture = style.texture
    spacing = 1.05 / math.sqrt(density)
    expected = 0.7 * ground.area / (spacing**2 * _STROKE_STRETCH[0] * _STROKE_STRETCH[1])
    spacing *= max(1.0, math.sqrt(expected / texture.most_dots))
    x, y, reach = ground.points(spacing, _STROKE_STRETCH, salt=101)
    phi = ground.phi_at(y)
    length = 0.55 + 0.16 * (np.minimum(phi, 8) - SAND_FINEST) + 0.35 * ground.random.random(x.size)
    share = np.where(phi < MUD_ONLY, 1 - 0.55 * (MUD_ONLY - phi) / 2, 1.0)
    kept = (reach >= spacing) & (phi > SAND_FINEST) & (ground.random.random(x.size) < share)
    x, y, half = x[kept], y[kept], length[kept] / 2
    across = x[:, None] + half[:, None] * np.array([-1.0, 0.0, 1.0])
    held = ground.holds_marks(across, np.repeat(y[:, None], 3, axis=1), texture.clear)
    x, y, half = x[held], y[held], half[held]
    if not x.size:
        return ()
    ends = np.empty((x.size, 2, 2))
    ends[:, 0, 0], ends[:, 1, 0] = x - half, x + half
    ends[:, :, 1] = y[:, None]
    return (Path(Strokes(ends.reshape(-1, 2)), Paint(stroke=ink, width=style.lines.stroke, cap="round")),)


def _clasts(ground: Ground, style: Style) -> tuple[Shape, ...]:
    """Rounded clasts, all tilted alike, so that in stretched coordinates they are packed circles."""
    texture = style.texture
    coarsest, _ = ground.phi_range
    largest = 1.0 + 0.34 * (SAND_COARSEST - max(coarsest, -8.0))
    fits = min(1.0, 0.62 * ground.height / (largest * _CLAST_RATIO))
    expected = 1.2 * ground.area / (largest * fits) ** 2 / _CLAST_RATIO
    enlarged = max(1.0, math.sqrt(expected / texture.most_clasts)) if fits == 1.0 else 1.0
    x0, y0, x1, y1 = ground.box
    corners = _squeeze(np.array([x0, x1, x0, x1]), np.array([y0, y0, y1, y1]))
    extent = (corners[0].min(), corners[1].min(), corners[0].max(), corners[1].max())
    sizes = Ground(
        ((extent[0], extent[1]), (extent[2], extent[1]), (extent[2], extent[3])), [(0, 0)], ground.seed
    )
    smallest = (1.0 + 0.34 * max(0.0, SAND_COARSEST - ground.phi_range[1])) * fits * enlarged
    u, v, reach = sizes.points(0.52 * smallest, salt=211)
    x, y = _unsqueeze(u, v)
    phi = ground.phi_at(y)
    axis = (1.0 + 0.34 * (SAND_COARSEST - np.clip(phi, -8, SAND_COARSEST))) * fits * enlarged
    kept = (phi < SAND_COARSEST + 1e-9) & (reach >= 0.52 * axis) & (x > x0) & (x < x1) & (y > y0) & (y < y1)
    u, v, axis = u[kept], v[kept], axis[kept]
    wish = axis * (0.6 + 0.6 * ground.random.random(u.size))
    radius = _packed(u, v, wish / 2, gap=0.14)
    index = np.flatnonzero(radius > 0.22 * axis)
    turn = np.arange(7) * (2 * np.pi / 7) + ground.random.random((index.size, 1)) * 2 * np.pi
    wobble = 0.93 + 0.22 * (ground.random.random((index.size, 7)) - 0.5)
    r = radius[index, None] * wobble
    px, py = _unsqueeze(u[index, None] + r * np.cos(turn), v[index, None] + r * np.sin(turn))
    held = ground.holds_marks(px, py, 0.1)
    steps = rounded(px[held], py[held])
    if not steps:
        return ()
    paint = Paint(fill=style.colours.clast, stroke=style.colours.ink, width=style.lines.clast, join="round")
    return (Path(steps, paint),)


def _packed(u: Array, v: Array, wish: Array, gap: float) -> Array:
    """Radii so that no two circles come nearer than `gap`: room between neighbours is shared as they wish."""
    if u.size < 2:
        return wish
    order = np.argsort(u, kind="stable")
    su, sv, sw = u[order], v[order], wish[order]
    reach = np.searchsorted(su, su + 2 * float(wish.max()) + gap) - np.arange(u.size)
    radius = sw.copy()
    for step in range(1, int(reach.max())):
        room = np.hypot(su[step:] - su[:-step], sv[step:] - sv[:-step]) - gap
        share = sw[:-step] / (sw[:-step] + sw[step:])
        np.minimum(radius[:-step], room * share, out=radius[:-step])
        np.minimum(radius[step:], room * (1 - share), out=radius[step:])
    result = np.empty(u.size)
    result[order] = np.maximum(radius, 0.0)
    return result


def _squeeze(x: Array, y: Array) -> tuple[Array, Array]:
    """Page to the frame in which tilted clasts are circles of their long axis."""
    cos, sin = math.cos(_CLAST_TILT), math.sin(_CLAST_TILT)
    return x * cos + y * sin, (-x * sin + y * cos) / _CLAST_RATIO


def _unsqueeze(u: Array, v: Array) -> tuple[Array, Array]:
    cos, sin = math.cos(_CLAST_TILT), math.sin(_CLAST_TILT)
    w = v * _CLAST_RATIO
    return u * cos - w * sin, u * sin + w * cos
