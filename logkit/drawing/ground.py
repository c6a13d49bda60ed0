"""The ground that marks are put on: a bed's outline, its grain size at each height, and lines to keep off.

Geometry only: which mark goes where is decided in `textures`, `textures_rock` and `structures`.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache, cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.noise import FINEST_MM, Chance, scatter
from logkit.drawing.shapes import Point

if TYPE_CHECKING:
    from logkit.drawing.strips import Window

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
LineSegment = tuple[float, float, float, float]
"""x0, y0, x1, y1 in mm."""

_CELL_MM = 0.1  # of the raster that remembers lines; larger only on very large grounds
_MOST_CELLS = 4_000_000


def edges_of(outlines: Sequence[Sequence[Point]]) -> tuple[Array, NDArray[np.int64]]:
    """Edges of polygons that have a length, polygon after polygon, and how many each polygon has.

    Rows: x and y of the start, extent in x and y, y of the end, slope, inverse squared length.
    """
    sizes = np.array([len(outline) for outline in outlines])
    start = np.array([point for outline in outlines for point in outline])
    lasts = np.cumsum(sizes) - 1
    end = np.empty_like(start)
    end[:-1] = start[1:]
    end[lasts] = start[lasts - sizes + 1]
    long = (start != end).any(axis=1)
    counts = np.add.reduceat(long.astype(np.int64), lasts - sizes + 1)
    (ax, ay), (bx, by) = start[long].T, end[long].T
    ex, ey = bx - ax, by - ay
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.array((ax, ay, ex, ey, by, ex / ey, 1.0 / (ex * ex + ey * ey))), counts


class Ground:
    """One bed's area on the page.

    Parameters
    ----------
    outline : closed polygon, mm
    knots : (y on the page, phi); linear between, constant outside
    seed : of every random choice on this ground
    clear : lines that marks keep away from
    windows : pieces of strips whose lines marks keep away from
    """

    def __init__(
        self,
        outline: Sequence[Point],
        knots: Sequence[tuple[float, float]],
        seed: int,
        clear: Sequence[LineSegment] = (),
        windows: Sequence[Window] = (),
    ) -> None:
        points = [(float(x), float(y)) for x, y in outline]
        self.outline = points
        ordered = sorted(knots)
        self._knot_y = np.array([y for y, _ in ordered])
        self._knot_phi = np.array([phi for _, phi in ordered])
        self.seed = seed
        xs, ys = [x for x, _ in points], [y for _, y in points]
        self.box = (min(xs), min(ys), max(xs), max(ys))
        turned = [*points[1:], points[0]]
        twice = sum(a[0] * b[1] - a[1] * b[0] for a, b in zip(points, turned, strict=True))
        self.area = 0.5 * abs(twice)
        self.phi_range = (min(phi for _, phi in ordered), max(phi for _, phi in ordered))
        self.windows = windows
        self._raster: Mask | None = None
        self._cell = _CELL_MM
        if len(clear):
            self._mark(np.asarray(clear, dtype=float).reshape(-1, 4))

    @cached_property
    def edges(self) -> Array:
        """The outline's edges; see `edges_of`."""
        return edges_of([self.outline])[0]

    @property
    def has_raster(self) -> bool:
        """True when lines or marks to keep off have been marked one by one."""
        return self._raster is not None

    @property
    def has_lines(self) -> bool:
        """True when there is anything to keep off inside the outline."""
        return self.has_raster or bool(self.windows)

    @cached_property
    def random(self) -> Chance:
        """Source of every random choice on this ground."""
        return Chance(self.seed)

    @property
    def height(self) -> float:
        """Height of the ground, mm."""
        return self.box[3] - self.box[1]

    @property
    def width(self) -> float:
        """Greatest width of the ground, mm."""
        return self.box[2] - self.box[0]

    def phi_at(self, y: Array) -> Array:
        """Grain size at heights on the page, phi."""
        return np.interp(y, self._knot_y, self._knot_phi)

    def points(
        self, spacing: float, stretch: tuple[float, float] = (1.0, 1.0), salt: int = 0
    ) -> tuple[Array, Array, Array]:
        """Blue-noise candidates over the box: x, y, and what spacing they serve (see `noise`).

        A stretch of (2, 1) puts points twice as far apart along the bed as across it.
        """
        sx, sy = stretch
        x0, y0, x1, y1 = self.box
        box = (x0 / sx, y0 / sy, x1 / sx, y1 / sy)
        x, y, reach = scatter(box, max(spacing, FINEST_MM), self.seed + salt)
        return x * sx, y * sy, reach

    def block(self, px: Array, py: Array) -> None:
        """Keep later marks clear of marks already made: points on the last axis."""
        start = np.stack([px[:, :-1].ravel(), py[:, :-1].ravel()], axis=1)
        end = np.stack([px[:, 1:].ravel(), py[:, 1:].ravel()], axis=1)
        self._mark(np.concatenate([start, end], axis=1))

    def holds(self, x: Array, y: Array, margin: Array | float) -> Mask:
        """True for points inside the outline and at least `margin` mm from its edge and every line."""
        if not x.size:
            return np.zeros(x.shape, dtype=bool)
        held = inside_edges(self.edges[:, :, None], x, y, margin)
        if self._raster is not None or self.windows:
            index = np.flatnonzero(held)
            margins = np.broadcast_to(np.asarray(margin, dtype=float), x.shape)[index]
            near = [piece.near(x[index], y[index], margins) for piece in self.windows]
            if self._raster is not None:
                near.append(self.near_marks(x[index], y[index], margins))
            held[index] = ~np.logical_or.reduce(near)
        return held

    def holds_marks(self, x: Array, y: Array, margin: float) -> Mask:
        """True for marks all of whose points (last axis) are held."""
        held = self.holds(x.ravel(), y.ravel(), margin).reshape(x.shape)
        return np.asarray(held.all(axis=-1))

    def near_marks(self, x: Array, y: Array, margin: Array) -> Mask:
        """True for places within `margin` mm of lines and marks that were marked one by one."""
        raster = self._grid()
        column = ((x - self.box[0]) / self._cell).astype(int) + _PAD
        row = ((y - self.box[1]) / self._cell).astype(int) + _PAD
        steps = np.clip(np.ceil(margin / self._cell).astype(int), 0, _PAD)
        near = np.zeros(x.shape, dtype=bool)
        for reach in np.unique(steps):
            here = np.flatnonzero(steps == reach)
            dr, dc = _disc(int(reach))
            near[here] = raster[row[here, None] + dr, column[here, None] + dc].any(axis=1)
        return near

    def _grid(self) -> Mask:
        """The raster that remembers lines, made when the first one comes."""
        if self._raster is None:
            self._cell = max(_CELL_MM, ((self.width + 3) * (self.height + 3) / _MOST_CELLS) ** 0.5)
            rows, columns = (int(extent / self._cell) + 2 * _PAD + 2 for extent in (self.height, self.width))
            self._raster = np.zeros((rows, columns), dtype=bool)
        return self._raster

    def _mark(self, lines: Array) -> None:
        """Set the cells that lines pass."""
        raster = self._grid()
        rows, columns = raster.shape
        start, step = lines[:, :2], lines[:, 2:] - lines[:, :2]
        size = np.hypot(step[:, 0], step[:, 1])
        count = np.maximum(np.ceil(size / (0.9 * self._cell)).astype(int), 1) + 1
        which = np.repeat(np.arange(len(lines)), count)
        place = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
        along = (place / (count - 1)[which])[:, None]
        at = start[which] + along * step[which]
        column = np.floor((at[:, 0] - self.box[0]) / self._cell).astype(int) + _PAD
        row = np.floor((at[:, 1] - self.box[1]) / self._cell).astype(int) + _PAD
        kept = (row >= 0) & (row < rows) & (column >= 0) & (column < columns)
        raster[row[kept], column[kept]] = True


_PAD = 12


@cache
def _disc(reach: int) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Offsets of the cells within a number of cells."""
    span = np.arange(-reach, reach + 1)
    rows, columns = np.meshgrid(span, span, indexing="ij")
    round_ = rows**2 + columns**2 <= (reach + 0.3) ** 2
    return rows[round_], columns[round_]


def inside_edges(edges: Array, x: Array, y: Array, margin: Array | float) -> Mask:
    """Even-odd test and distance from all edges at once; edges downward, candidates across."""
    ax, ay, ex, ey, by, slope, shrink = edges
    dx, dy = x - ax, y - ay
    with np.errstate(invalid="ignore"):
        crosses = dx < dy * slope
    crosses &= (dy < 0) != (y < by)
    along = np.minimum(np.maximum((dx * ex + dy * ey) * shrink, 0.0), 1.0)
    dx -= along * ex
    dy -= along * ey
    near = (dx * dx + dy * dy).min(axis=0)
    return np.asarray(np.logical_xor.reduce(crosses, axis=0) & (near >= np.square(margin)))
