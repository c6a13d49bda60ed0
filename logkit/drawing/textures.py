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
from numpy.typing import NDArray

from logkit.drawing.ground import Array, Ground, LineSegment
from logkit.drawing.grounds import Grounds
from logkit.drawing.noise import seed_of
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

_MOST_STEPS = 1 << 16  # of 0.05 mm in a diameter
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
    return bed_textures([BedGround(outline, knots, family, seed, clear, windows)], style)[0]


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
    """The marks of many beds; the loose grains of all are made together."""
    made: list[tuple[Shape, ...]] = []
    loose: list[tuple[int, Ground, str]] = []
    for bed in beds:
        ground = _ground(bed, style)
        rock = ROCK_MARKS.get(bed.family)
        marks: tuple[Shape, ...] = ()
        if ground is not None and rock is not None:
            marks = rock(ground, style, stipple(bed.family, style), _loose_grains)
        elif ground is not None:
            if bed.family == "organic_mud":
                marks = organic_flecks(ground, style, stipple(bed.family, style))
            loose.append((len(made), ground, bed.family))
        made.append(marks)
    inks = [stipple(family, style) for _, _, family in loose]
    lithic = [family == "lithic" for _, _, family in loose]
    grains = _grains_of_each([ground for _, ground, _ in loose], style, inks, lithic)
    for (place, _, _), own in zip(loose, grains, strict=True):
        made[place] += own
    return made


def _ground(bed: BedGround, style: Style) -> Ground | None:
    """The ground of a bed, None when it is too thin for marks."""
    outline, knots = bed.outline, bed.knots
    if len(outline) < 3:
        raise ArgumentError("outline", len(outline), "a polygon of at least three points")
    if not all(isfinite(x) and isfinite(y) for x, y in (*outline, *knots)):
        raise ArgumentError("outline", "not finite", "finite numbers in outline and knots")
    ys = [y for _, y in outline]
    if not style.texture.dots or max(ys) - min(ys) < style.texture.least_bed:
        return None
    sizes = knots or [(ys[0], UNKNOWN_PHI.get(bed.family, 2.0))]
    return Ground(outline, sizes, bed.seed, bed.clear, bed.windows)


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
    return _grains_of_each([ground], style, [ink], [lithic], density)[0]


def _grains_of_each(
    grounds: Sequence[Ground], style: Style, inks: Sequence[str], lithic: Sequence[bool], density: float = 1.0
) -> list[tuple[Shape, ...]]:
    """Loose grains of many grounds: strokes, then dots, then clasts."""
    shapes: list[tuple[Shape, ...]] = [() for _ in grounds]
    ranges = [ground.phi_range for ground in grounds]
    muddy = [n for n, (_, finest) in enumerate(ranges) if finest > SAND_FINEST]
    if muddy:
        strokes = _strokes(Grounds([grounds[n] for n in muddy]), style, [inks[n] for n in muddy], density)
        for n, own in zip(muddy, strokes, strict=True):
            shapes[n] += own
    sandy = [n for n, (c, f) in enumerate(ranges) if c < MUD_ONLY and f > SAND_COARSEST]
    if sandy:
        chosen = Grounds([grounds[n] for n in sandy])
        dots = _dots(chosen, style, [inks[n] for n in sandy], [lithic[n] for n in sandy], density)
        for n, own in zip(sandy, dots, strict=True):
            shapes[n] += own
    for n, (coarsest, _) in enumerate(ranges):
        if coarsest < SAND_COARSEST:
            shapes[n] += _clasts(grounds[n], style)
    return shapes


def _dots(
    beds: Grounds, style: Style, inks: Sequence[str], lithic: Sequence[bool], density: float
) -> list[tuple[Shape, ...]]:
    texture = style.texture
    least, loosened = [], []
    for ground in beds.grounds:
        loose = 1 / math.sqrt(density)
        closest = float(dot_spacing(min(ground.phi_range[1], MUD_ONLY), texture)) * loose
        expected = 0.7 * ground.area / closest**2
        loose *= max(1.0, math.sqrt(expected / texture.most_dots))
        least.append(closest * loose)
        loosened.append(loose)
    x, y, reach, counts = beds.points(least)
    phi = beds.phi_at(y, counts)
    of = np.repeat(np.arange(counts.size), counts)
    wide = dot_spacing(phi, texture) * np.array(loosened)[of]
    kept = (reach >= wide) & (phi > SAND_COARSEST) & (phi < MUD_ONLY)
    mixed = np.array([ground.phi_range[1] > SAND_FINEST for ground in beds.grounds])
    if mixed.any():
        some = mixed[of]
        own = phi[some]
        mixing = np.where(own <= SAND_FINEST, 1.0, 0.55 * (MUD_ONLY - own) / 2)
        kept[some] &= beds.random(np.where(mixed, counts, 0)) < mixing
    x, y, of, diameter = x[kept], y[kept], of[kept], dot_diameter(phi[kept], texture)
    needed = texture.clear + diameter / 2
    angular_beds = np.array(lithic)
    if angular_beds.any():
        needed = np.where(angular_beds[of], np.maximum(needed, 1.1 * diameter), needed)
    held = beds.holds(x, y, needed, of)
    places, diameter, of = np.column_stack((x[held], y[held])), diameter[held], of[held]
    shapes: list[list[Shape]] = [[] for _ in inks]
    if angular_beds.any():
        left = np.ones(of.size, dtype=bool)
        bounds = np.searchsorted(of, np.arange(len(inks) + 1)).tolist()
        for n in np.flatnonzero(angular_beds).tolist():
            own = slice(bounds[n], bounds[n + 1])
            ground, size = beds.grounds[n], diameter[own]
            angular = (size > 0.26) & (ground.random.random(size.size) < texture.triangles)
            shapes[n] += _triangles(
                ground, places[own][angular, 0], places[own][angular, 1], size[angular], inks[n]
            )
            left[own] = ~angular
        places, diameter, of = places[left], diameter[left], of[left]
    _add_dots(shapes, places, diameter, of, inks)
    return [tuple(own) for own in shapes]


def _add_dots(
    shapes: list[list[Shape]], places: Array, diameter: Array, of: NDArray[np.int64], inks: Sequence[str]
) -> None:
    """One shape a bed and diameter, the dots in the order found; `of` is the bed of each dot."""
    if not of.size:
        return
    key = of * _MOST_STEPS + np.rint(diameter * 20).astype(np.int64)
    order = np.argsort(key, kind="stable")
    places, diameter, of, key = places[order], diameter[order], of[order], key[order]
    heads = np.flatnonzero(np.diff(key, prepend=-1))
    ends = [*heads[1:].tolist(), key.size]
    for n, size, first, last in zip(
        of[heads].tolist(), diameter[heads].tolist(), heads.tolist(), ends, strict=True
    ):
        shapes[n].append(Dots(Points(places[first:last]), round(size, 2), inks[n]))


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


def _strokes(beds: Grounds, style: Style, inks: Sequence[str], density: float) -> list[tuple[Shape, ...]]:
    texture = style.texture
    spacings = []
    for ground in beds.grounds:
        spacing = 1.05 / math.sqrt(density)
        expected = 0.7 * ground.area / (spacing**2 * _STROKE_STRETCH[0] * _STROKE_STRETCH[1])
        spacings.append(spacing * max(1.0, math.sqrt(expected / texture.most_dots)))
    x, y, reach, counts = beds.points(spacings, _STROKE_STRETCH, salt=101)
    phi = beds.phi_at(y, counts)
    of = np.repeat(np.arange(counts.size), counts)
    length = 0.55 + 0.16 * (np.minimum(phi, 8) - SAND_FINEST) + 0.35 * beds.random(counts)
    share = np.where(phi < MUD_ONLY, 1 - 0.55 * (MUD_ONLY - phi) / 2, 1.0)
    kept = (reach >= np.array(spacings)[of]) & (phi > SAND_FINEST) & (beds.random(counts) < share)
    x, y, half, of = x[kept], y[kept], length[kept] / 2, of[kept]
    across = x[:, None] + half[:, None] * np.array([-1.0, 0.0, 1.0])
    margin = np.full(3 * x.size, texture.clear)
    held = beds.holds(across.ravel(), np.repeat(y, 3), margin, np.repeat(of, 3)).reshape(-1, 3).all(axis=1)
    x, y, half, of = x[held], y[held], half[held], of[held]
    ends = np.empty((x.size, 2, 2))
    ends[:, 0, 0], ends[:, 1, 0] = x - half, x + half
    ends[:, :, 1] = y[:, None]
    bounds = np.searchsorted(of, np.arange(len(inks) + 1)).tolist()
    shapes: list[tuple[Shape, ...]] = []
    for ink, first, last in zip(inks, bounds[:-1], bounds[1:], strict=True):
        paint = Paint(stroke=ink, width=style.lines.stroke, cap="round")
        own = Path(Strokes(ends[first:last].reshape(-1, 2)), paint)
        shapes.append((own,) if last > first else ())
    return shapes


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
