"""Blue noise: points that are irregular but never close, for every density from one precomputed tile.

Each point of the tile has a rank, the least distance to all points of higher rank. Taking the points whose rank
reaches the spacing wanted at their place gives blue noise of varying density at the cost of a comparison.
Which mark stands at a point is decided in `textures` and `motifs`.
"""

from __future__ import annotations

import zlib
from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

TILE_MM = 40.0
FINEST_MM = 0.40
"""Least spacing the tile can give, mm."""

_LEVELS = (FINEST_MM, 0.62, 0.9, 1.4, 2.2)
_RANK_FACTOR = 0.95  # makes the mean density that of saturated dart throwing at the same spacing


def seed_of(text: str) -> int:
    """A seed that depends on the text alone, the same on every machine."""
    return zlib.crc32(text.encode("utf-8"))


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
    shift_x = (seed * 0.754877666) % 1.0 * TILE_MM
    shift_y = (seed * 0.569840291) % 1.0 * TILE_MM
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
