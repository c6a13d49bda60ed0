"""Marks of rocks that are more than loose grains: carbonate, evaporite, organic, chemical, volcanic, crystalline.

Each function puts one mark of our own design over a thinned pattern of grains, so that the grain size stays
readable. Loose grains themselves are in `textures`, colours in `palette`.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np

from logkit.drawing.ground import Array, Ground
from logkit.drawing.shapes import Dots, Paint, Path, Segment, Shape
from logkit.drawing.style import Style

LooseGrains = Callable[..., tuple[Shape, ...]]
RockMarks = Callable[[Ground, Style, str, LooseGrains], tuple[Shape, ...]]

_MOST_MARKS = 260
"""Per bed and mark; the spacing grows to keep within."""


def organic_flecks(ground: Ground, style: Style, ink: str) -> tuple[Shape, ...]:
    """Small dark lozenges between the strokes."""
    x, y = _places(ground, 2.3, (1.2, 0.9), salt=31)
    return _closed(ground, x, y, [(-0.42, 0.0), (0.0, -0.17), (0.42, 0.0), (0.0, 0.17)], ink)


def _carbonate(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    marks = _steps(ground, style, ink, lean=0.0, spacing=1.0)
    return marks + _sand_only(ground, style, ink, grains)


def _dolomite(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    marks = _steps(ground, style, ink, lean=0.62, spacing=1.0)
    return marks + _sand_only(ground, style, ink, grains)


def _marl(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    marks = _steps(ground, style, ink, lean=0.0, spacing=1.5)
    return marks + grains(ground, style, ink, density=0.5)


def _mixed(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Dots with long wisps of mud."""
    x, y = _places(ground, 2.0, (2.0, 0.72), salt=37)
    length = 1.2 + 1.6 * ground.random.random(x.size)
    bow = 0.25 * (ground.random.random(x.size) - 0.5)
    t = np.linspace(-0.5, 0.5, 5)
    px = x[:, None] + length[:, None] * t
    py = y[:, None] + bow[:, None] * (1 - 4 * t**2)
    wisps = _open(ground, px, py, ink, 1.5 * style.lines.stroke, style.texture.clear)
    return wisps + grains(ground, style, ink, density=0.6)


def _evaporite(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Needles that cross in pairs below their middle, each a thin lozenge."""
    x, y = _places(ground, 2.3, (1.1, 0.95), salt=41)
    spin = 2 * np.pi * ground.random.random(x.size)
    shapes: tuple[Shape, ...] = ()
    for turn, length in ((0.0, 1.0), (0.95, 0.72)):
        along = np.array([-0.5, 0.1, 0.5, 0.1]) * 2.3 * length
        across = np.array([0.0, -0.12, 0.0, 0.12])
        px, py = _turned(x, y, along, across, spin + turn)
        shapes += _filled(ground, px, py, ink, 0.1, blocks=False)
    return shapes


def _chert(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Flat shards with one hollow side."""
    x, y = _places(ground, 1.75, (1.3, 0.85), salt=43)
    spin = 0.5 * (ground.random.random(x.size) - 0.5) + np.pi * (ground.random.random(x.size) < 0.5)
    size = 0.9 + 0.7 * ground.random.random(x.size)
    along = np.array([-0.6, -0.05, 0.6, 0.05, -0.2])
    across = np.array([0.24, -0.28, 0.24, 0.10, 0.10])
    px, py = _turned(x, y, along, across, spin, size)
    return _filled(ground, px, py, ink, 0.1)


def _iron(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Ringed dots."""
    x, y = _places(ground, 1.55, (1.0, 0.92), salt=47)
    radius = 0.36 + 0.12 * ground.random.random(x.size)
    turn = np.linspace(0, 2 * np.pi, 10)
    px, py = x[:, None] + radius[:, None] * np.cos(turn), y[:, None] + radius[:, None] * np.sin(turn)
    held = ground.holds_marks(px, py, 0.1)
    points = tuple(zip(x[held].tolist(), y[held].tolist(), strict=True))
    rings = _loops(px[held][:, :-1], py[held][:, :-1], Paint(stroke=ink, width=style.lines.stroke))
    return rings + ((Dots(points, 0.3, ink),) if points else ())


def _coal(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Bright bands of uneven length."""
    x, y = _places(ground, 1.25, (2.6, 0.55), salt=53)
    half = 0.5 + 1.5 * ground.random.random(x.size) ** 2
    t = np.linspace(-1.0, 1.0, 7)
    px, py = x[:, None] + half[:, None] * t, np.repeat(y[:, None], 7, axis=1)
    return _open(ground, px, py, ink, 1.2 * style.lines.stroke, style.texture.clear)


def _volcanic(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Bubble-wall shards: hooks with a bent arm, in all directions."""
    x, y = _places(ground, 2.0, (1.05, 0.95), salt=59)
    spin = 2 * np.pi * ground.random.random(x.size)
    t = np.linspace(-1.1, 1.5, 8)
    along, across = 0.62 * np.sin(t), 0.62 * (1 - np.cos(t)) - 0.2
    px, py = _turned(x, y, along, across, spin)
    hooks = _open(ground, px, py, ink, 1.3 * style.lines.stroke, style.texture.clear)
    return hooks + grains(ground, style, ink, density=0.5)


def _lava(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Vesicles drawn out along the flow, the larger ones with a short tail."""
    x, y = _places(ground, 1.9, (1.4, 0.85), salt=61)
    size = 0.45 + 0.7 * ground.random.random(x.size)
    turn = np.linspace(0, 2 * np.pi, 9)[:-1]
    along, across = 0.62 * np.cos(turn), 0.30 * np.sin(turn) * (1.15 + 0.5 * np.cos(turn))
    px, py = _turned(x, y, along, across, np.full(x.size, -0.12), size)
    held = ground.holds_marks(px, py, 0.12)
    return _loops(px[held], py[held], Paint(fill=style.colours.clast, stroke=ink, width=style.lines.stroke))


def _crystalline(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Pairs of short dashes that meet like interlocked crystals, in two directions."""
    x, y = _places(ground, 1.7, (1.1, 0.95), salt=67)
    spin = np.where(ground.random.random(x.size) < 0.5, 0.45, 2.2)
    shapes: tuple[Shape, ...] = ()
    for along, across in (([-0.55, 0.0, 0.55], [0.0, 0.0, 0.0]), ([0.12, 0.12, 0.12], [0.0, 0.28, 0.55])):
        px, py = _turned(x, y, np.array(along), np.array(across), spin)
        shapes += _open(ground, px, py, ink, 1.2 * style.lines.stroke, style.texture.clear, blocks=False)
    return shapes


ROCK_MARKS: dict[str, RockMarks] = {
    "carbonate": _carbonate,
    "dolomite": _dolomite,
    "marl": _marl,
    "mixed": _mixed,
    "evaporite": _evaporite,
    "chert": _chert,
    "iron": _iron,
    "coal": _coal,
    "volcanic": _volcanic,
    "lava": _lava,
    "crystalline": _crystalline,
}
"""Texture family -> its marks. Families that are not here are loose grains only."""


def _sand_only(ground: Ground, style: Style, ink: str, grains: LooseGrains) -> tuple[Shape, ...]:
    """Grains of a carbonate: sand and gravel as thinned loose grains; its mud is the plain fill."""
    coarsest, _ = ground.phi_range
    if coarsest >= 4.0:
        return ()
    shapes: tuple[Shape, ...] = grains(ground, style, ink, density=0.6)
    return shapes


def _steps(ground: Ground, style: Style, ink: str, *, lean: float, spacing: float) -> tuple[Shape, ...]:
    """Joints that step from one level to the next: a tread, a riser (leaning for dolomite), a shorter tread."""
    rise = min(1.5, max(0.5, 0.45 * ground.height))
    x, y = _places(ground, 2.25 * spacing, (1.5, 0.82), salt=29)
    first = 1.0 + 0.5 * ground.random.random(x.size)
    second = 0.45 + 0.35 * ground.random.random(x.size)
    shift = np.full(x.size, lean * rise)
    zero = np.zeros(x.size)
    px = np.stack([-first, -first / 2, zero, shift / 2, shift, shift + second], axis=1) + x[:, None]
    levels = np.array([0.5, 0.5, 0.5, 0.0, -0.5, -0.5]) * rise
    return _open(ground, px, y[:, None] + levels, ink, 1.2 * style.lines.stroke, style.texture.clear)


def _places(ground: Ground, spacing: float, stretch: tuple[float, float], salt: int) -> tuple[Array, Array]:
    """Where marks of one kind may stand, closer in thin beds, wider in very large ones."""
    stretch = (stretch[0], min(stretch[1], max(0.35, 0.4 * ground.height / spacing)))
    expected = 0.7 * ground.area / (spacing**2 * stretch[0] * stretch[1])
    spacing *= max(1.0, math.sqrt(expected / _MOST_MARKS))
    x, y, reach = ground.points(spacing, stretch, salt)
    kept = reach >= spacing
    return x[kept], y[kept]


def _turned(
    x: Array, y: Array, along: Array, across: Array, spin: Array, size: Array | float = 1.0
) -> tuple[Array, Array]:
    """Copies of a small shape at each place, turned and sized: points on the last axis."""
    scale = np.broadcast_to(np.asarray(size, dtype=float), x.shape)[:, None]
    cos, sin = np.cos(spin)[:, None], np.sin(spin)[:, None]
    return (
        x[:, None] + scale * (along * cos - across * sin),
        y[:, None] + scale * (along * sin + across * cos),
    )


def _open(
    ground: Ground, px: Array, py: Array, ink: str, width: float, margin: float, blocks: bool = True
) -> tuple[Shape, ...]:
    """One path of all open marks that are held; straight runs keep only their corners."""
    held = ground.holds_marks(px, py, margin)
    if blocks:
        ground.block(px[held], py[held])
    steps: list[Segment] = []
    for xs, ys in zip(px[held].tolist(), py[held].tolist(), strict=True):
        last = len(xs) - 1
        for i, (x, y) in enumerate(zip(xs, ys, strict=True)):
            if 0 < i < last and _straight(xs, ys, i):
                continue
            steps.append(("M" if i == 0 else "L", (x, y)))
    if not steps:
        return ()
    return (Path(tuple(steps), Paint(stroke=ink, width=width, cap="round", join="round")),)


def _straight(xs: list[float], ys: list[float], i: int) -> bool:
    turn = (xs[i] - xs[i - 1]) * (ys[i + 1] - ys[i]) - (ys[i] - ys[i - 1]) * (xs[i + 1] - xs[i])
    return abs(turn) < 1e-9


def _closed(
    ground: Ground, x: Array, y: Array, corners: list[tuple[float, float]], ink: str
) -> tuple[Shape, ...]:
    px = x[:, None] + np.array([c[0] for c in corners])
    py = y[:, None] + np.array([c[1] for c in corners])
    return _filled(ground, px, py, ink, 0.12)


def _filled(
    ground: Ground, px: Array, py: Array, ink: str, margin: float, blocks: bool = True
) -> tuple[Shape, ...]:
    """One path of all filled marks that are held; later marks keep clear of them where `blocks` is set."""
    held = ground.holds_marks(px, py, margin)
    if blocks:
        ground.block(px[held], py[held])
    steps: list[Segment] = []
    for xs, ys in zip(px[held].tolist(), py[held].tolist(), strict=True):
        steps += [("M" if i == 0 else "L", point) for i, point in enumerate(zip(xs, ys, strict=True))]
        steps.append(("Z", ()))
    return (Path(tuple(steps), Paint(fill=ink)),) if steps else ()


def _loops(px: Array, py: Array, paint: Paint) -> tuple[Shape, ...]:
    steps = rounded(px, py)
    return (Path(steps, paint),) if steps else ()


def rounded(px: Array, py: Array) -> tuple[Segment, ...]:
    """Closed smooth curves through the middles of the sides of polygons (points on the last axis)."""
    steps: list[Segment] = []
    mx, my = (px + np.roll(px, -1, axis=1)) / 2, (py + np.roll(py, -1, axis=1)) / 2
    for xs, ys, us, vs in zip(px.tolist(), py.tolist(), mx.tolist(), my.tolist(), strict=True):
        steps.append(("M", (us[-1], vs[-1])))
        steps += [("Q", step) for step in zip(xs, ys, us, vs, strict=True)]
        steps.append(("Z", ()))
    return tuple(steps)
