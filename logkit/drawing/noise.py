"""Blue noise: points that are irregular but never close, for every density from one precomputed tile.

Each point of the tile has a rank, the least distance to all points of higher rank. Taking the points whose rank
reaches the spacing wanted at their place gives blue noise of varying density at the cost of a comparison.
Which mark stands at a point is decided in `textures` and `motifs`.
"""

from __future__ import annotations

import math
import zlib
from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

TILE_MM = 40.0
FINEST_MM = 0.40
"""Least spacing the tile can give, mm."""

_TABLE_SIZE = 1 << 14
_LEVELS = (FINEST_MM, 0.62, 0.9, 1.4, 2.2)
_RANK_FACTOR = 0.95  # makes the mean density that of saturated dart throwing at the same spacing


def seed_of(text: str) -> int:
    """A seed that depends on the text alone, the same on every machine."""
    return zlib.crc32(text.encode("utf-8"))


class Chance:
    """Random numbers from 0 to 1 that depend on a seed alone, whatever the version of numpy.

    A bed asks for a few dozen; a place in one fixed table costs far less than a generator for each bed.
    """

    def __init__(self, seed: int) -> None:
        self._at = seed * 40503 % _TABLE_SIZE

    def random(self, shape: int | tuple[int, ...]) -> Array:
        """The next numbers, as an array of a shape."""
        count = shape if isinstance(shape, int) else math.prod(shape)
        first, self._at = self._at, (self._at + count) % _TABLE_SIZE
        table = _table()
        if first + count <= _TABLE_SIZE:
            return table[first : first + count].reshape(shape)
        return table.take(np.arange(first, first + count), mode="wrap").reshape(shape)


@cache
def _table() -> Array:
    """Counting numbers, mixed by multiplying and shifting, as fractions of one."""
    order = np.arange(1, _TABLE_SIZE + 1, dtype=np.uint64) * np.uint64(0x9E3779B97F4A7C15)
    for factor in (0xBF58476D1CE4E5B9, 0x94D049BB133111EB):
        order = (order ^ (order >> np.uint64(30))) * np.uint64(factor)
    order ^= order >> np.uint64(31)
    table = (order >> np.uint64(11)).astype(np.float64) / 2.0**53
    table.setflags(write=False)
    return table


@cache
def _tiles() -> tuple[tuple[float, Array, Array, Array], ...]:
    """For each level: its least rank, and x, y, rank in mm of the points that reach it, sorted by y."""
    tile = np.load(Path(__file__).parent / "data" / "noise.npy").astype(np.float64) / 1000
    made = []
    for level in _LEVELS:
        kept = tile[tile[:, 2] >= level * _RANK_FACTOR - 1e-3]
        made.append((level, kept[:, 0].copy(), kept[:, 1].copy(), kept[:, 2].copy()))
    return tuple(made)


def scatter(
    box: tuple[float, float, float, float], least_spacing: float, seed: int
) -> tuple[Array, Array, Array]:
    """Candidate points in a box.

    Parameters
    ----------
    box : x0, y0, x1, y1 in mm
    least_spacing : the smallest spacing that will be asked for, mm
    seed : shifts the tile

    Returns
    -------
    x, y (mm) and the spacing (mm) up to which each point belongs to the pattern
    """
    x0, y0, x1, y1 = box
    _, tile_x, tile_y, tile_rank = next(
        (level for level in reversed(_tiles()) if level[0] <= least_spacing), _tiles()[0]
    )
    along, up = (seed * 0.754877666) % 1.0, (seed * 0.569840291) % 1.0
    if x1 - x0 <= TILE_MM and y1 - y0 <= TILE_MM:
        # a box that the tile can hold is laid inside it: no seam, one look
        dx, dy = x0 - along * (TILE_MM - x1 + x0), y0 - up * (TILE_MM - y1 + y0)
        first, last = np.searchsorted(tile_y, (y0 - dy, y1 - dy))
        x = tile_x[first:last] + dx
        held = np.flatnonzero((x >= x0) & (x <= x1))
        return x[held], tile_y[first:last][held] + dy, tile_rank[first:last][held] / _RANK_FACTOR
    shift_x, shift_y = along * TILE_MM, up * TILE_MM
    parts = []
    for row in range(int((y0 - shift_y) // TILE_MM), int((y1 - shift_y) // TILE_MM) + 1):
        low = y0 - shift_y - row * TILE_MM
        first, last = np.searchsorted(tile_y, (low, low + y1 - y0))
        if first == last:
            continue
        rows_x, rows_y = tile_x[first:last], tile_y[first:last] + (shift_y + row * TILE_MM)
        ranks = tile_rank[first:last]
        for column in range(int((x0 - shift_x) // TILE_MM), int((x1 - shift_x) // TILE_MM) + 1):
            x = rows_x + (shift_x + column * TILE_MM)
            inside = (x >= x0) & (x <= x1)
            parts.append((x[inside], rows_y[inside], ranks[inside]))
    if not parts:
        empty = np.empty(0)
        return empty, empty, empty
    if len(parts) == 1:
        return parts[0][0], parts[0][1], parts[0][2] / _RANK_FACTOR
    x, y, rank = (np.concatenate(column) for column in zip(*parts, strict=True))
    return x, y, rank / _RANK_FACTOR
