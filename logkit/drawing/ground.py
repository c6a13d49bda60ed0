"""The ground that marks are put on: a bed's outline, its grain size at each height, and lines to keep clear of.

Geometry only: which mark goes where is decided in `textures`, `textures_rock` and `structures`.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.noise import FINEST_MM, scatter
from logkit.drawing.shapes import Point

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]
LineSegment = tuple[float, float, float, float]
"""x0, y0, x1, y1 in mm."""

_CELL_MM = 0.1
_MOST_CELLS = 4_000_000


class Ground:
    """One bed's area on the page.

    Parameters
    ----------
    outline : closed polygon, mm
    knots : (y on the page, phi); linear between, constant outside
    seed : of every random choice on this ground
    clear : lines that marks keep away from
    """

    def __init__(
        self,
        outline: Sequence[Point],
        knots: Sequence[tuple[float, float]],
        seed: int,
        clear: Sequence[LineSegment] = (),
    ) -> None:
        self.outline = np.asarray(outline, dtype=float)
        ordered = sorted(knots)
        self._knot_y = np.array([y for y, _ in ordered])
        self._knot_phi = np.array([phi for _, phi in ordered])
        self.seed = seed
        x, y = self.outline[:, 0], self.outline[:, 1]
        self.box = (float(x.min()), float(y.min()), float(x.max()), float(y.max()))
        self.area = 0.5 * abs(float(np.dot(x, np.roll(y, 1)) - np.dot(y, np.roll(x, 1))))
        self.random = np.random.default_rng(seed)
        edges = np.concatenate([self.outline, np.roll(self.outline, -1, axis=0)], axis=1)
        lines = np.concatenate([edges, np.asarray(clear, dtype=float).reshape(-1, 4)])
        self._raster = _raster(lines, self.box)

    @property
    def height(self) -> float:
        """Height of the ground, mm."""
        return self.box[3] - self.box[1]

    @property
    def width(self) -> float:
        """Greatest width of the ground, mm."""
        return self.box[2] - self.box[0]

    @property
    def phi_range(self) -> tuple[float, float]:
        """Coarsest and finest grain size on the ground, phi."""
        return float(self._knot_phi.min()), float(self._knot_phi.max())

    def phi_at(self, y: Array) -> Array:
        """Grain size at heights on the page, phi."""
        return np.interp(y, self._knot_y, self._knot_phi)

    def points(
        self, spacing: float, stretch: tuple[float, float] = (1.0, 1.0), salt: int = 0
    ) -> tuple[Array, Array, Array]:
        """Blue-noise candidates over the box: x, y, and the spacing each point can serve (see `noise.scatter`).

        A stretch of (2, 1) puts points twice as far apart along the bed as across it.
        """
        sx, sy = stretch
        x0, y0, x1, y1 = self.box
        box = (x0 / sx, y0 / sy, x1 / sx, y1 / sy)
        x, y, reach = scatter(box, max(spacing, FINEST_MM), self.seed + salt)
        return x * sx, y * sy, reach

    def holds(self, x: Array, y: Array, margin: Array | float) -> Mask:
        """True for points inside the outline and at least `margin` mm from its edge and every line."""
        inside = self._inside(x, y)
        index = np.flatnonzero(inside)
        if index.size:
            margins = np.broadcast_to(np.asarray(margin, dtype=float), x.shape)[index]
            inside[index] = ~self._near(x[index], y[index], margins)
        return inside

    def holds_marks(self, x: Array, y: Array, margin: float) -> Mask:
        """True for marks all of whose points (last axis) are held."""
        held = self.holds(x.ravel(), y.ravel(), margin).reshape(x.shape)
        return np.asarray(held.all(axis=-1))

    def _inside(self, x: Array, y: Array) -> Mask:
        inside = np.zeros(x.shape, dtype=bool)
        ax, ay = self.outline[:, 0], self.outline[:, 1]
        bx, by = np.roll(ax, -1), np.roll(ay, -1)
        for i in np.flatnonzero(ay != by):
            crosses = (ay[i] > y) != (by[i] > y)
            at = ax[i] + (y - ay[i]) * ((bx[i] - ax[i]) / (by[i] - ay[i]))
            inside ^= crosses & (x < at)
        return inside

    def _near(self, x: Array, y: Array, margin: Array) -> Mask:
        raster = self._raster
        if raster is None:
            return np.zeros(x.shape, dtype=bool)
        column = ((x - self.box[0]) / _CELL_MM).astype(int) + _PAD
        row = ((y - self.box[1]) / _CELL_MM).astype(int) + _PAD
        steps = np.clip(np.ceil(margin / _CELL_MM).astype(int), 0, _PAD)
        near = np.zeros(x.shape, dtype=bool)
        for reach in np.unique(steps):
            here = np.flatnonzero(steps == reach)
            dr, dc = _disc(int(reach))
            near[here] = raster[row[here, None] + dr, column[here, None] + dc].any(axis=1)
        return near


_PAD = 12


@cache
def _disc(reach: int) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Offsets of the cells within a number of cells."""
    span = np.arange(-reach, reach + 1)
    rows, columns = np.meshgrid(span, span, indexing="ij")
    round_ = rows**2 + columns**2 <= (reach + 0.3) ** 2
    return rows[round_], columns[round_]


def _raster(lines: Array, box: tuple[float, float, float, float]) -> Mask | None:
    """Cells of the box that a line passes; None when the box is too large for it to matter."""
    rows = int((box[3] - box[1]) / _CELL_MM) + 2 * _PAD + 2
    columns = int((box[2] - box[0]) / _CELL_MM) + 2 * _PAD + 2
    if rows * columns > _MOST_CELLS:
        return None
    raster = np.zeros((rows, columns), dtype=bool)
    start, step = lines[:, :2], lines[:, 2:] - lines[:, :2]
    count = np.maximum(np.ceil(np.hypot(step[:, 0], step[:, 1]) / (0.9 * _CELL_MM)).astype(int), 1) + 1
    which = np.repeat(np.arange(len(lines)), count)
    place = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
    along = (place / (count - 1)[which])[:, None]
    at = start[which] + along * step[which]
    column = np.floor((at[:, 0] - box[0]) / _CELL_MM).astype(int) + _PAD
    row = np.floor((at[:, 1] - box[1]) / _CELL_MM).astype(int) + _PAD
    kept = (row >= 0) & (row < rows) & (column >= 0) & (column < columns)
    raster[row[kept], column[kept]] = True
    return raster
