"""Blue noise: points that are irregular but never close, for every density from one precomputed tile.

Each point of the tile has a rank, the least distance to all points of higher rank. Taking the points whose rank
reaches the spacing wanted at their place gives blue noise of varying density at the cost of a comparison.
Which mark stands at a point is decided in `textures` and `motifs`.
"""

from __future__ import annotations

import itertools
import math
import zlib
from bisect import bisect_left
from collections.abc import Sequence
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
        first = self.skip(count)
        table = _table()
        if first + count <= _TABLE_SIZE:
            return table[first : first + count].reshape(shape)
        return table.take(np.arange(first, first + count), mode="wrap").reshape(shape)

    def skip(self, count: int) -> int:
        """Take the next numbers without looking at them; where they begin in the table."""
        first, self._at = self._at, (self._at + count) % _TABLE_SIZE
        return first


def drawn_for_each(chances: Sequence[Chance], counts: NDArray[np.int64]) -> Array:
    """So many numbers from each source, one after the other."""
    ends = np.cumsum(counts)
    first = [chance.skip(count) for chance, count in zip(chances, counts.tolist(), strict=True)]
    places = np.repeat(np.array(first, dtype=np.int64) - (ends - counts), counts) + np.arange(counts.sum())
    return _table().take(places, mode="wrap")


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
    x, y, rank, _ = scatter_each([box], [least_spacing], [seed])
    return x, y, rank


@cache
def _shelf() -> tuple[Array, tuple[list[float], ...], tuple[int, ...]]:
    """All levels of the tile as columns of one array, heights of each as a list, and where each begins."""
    tiles = _tiles()
    starts = np.cumsum([0, *(tile[1].size for tile in tiles[:-1])])
    columns = np.concatenate([np.array(tile[1:]) for tile in tiles], axis=1)
    return columns, tuple(tile[2].tolist() for tile in tiles), tuple(starts.tolist())


def scatter_each(
    boxes: Sequence[tuple[float, float, float, float]], spacings: Sequence[float], seeds: Sequence[int]
) -> tuple[Array, Array, Array, NDArray[np.int64]]:
    """As `scatter` for many boxes: x, y, rank of the points of all, and how many each box has."""
    columns, heights, begins = _shelf()
    firsts, sizes, moves = [], [], []
    others: dict[int, tuple[Array, Array, Array]] = {}
    for number, ((x0, y0, x1, y1), spacing, seed) in enumerate(zip(boxes, spacings, seeds, strict=True)):
        level = max((place for place, least in enumerate(_LEVELS) if least <= spacing), default=0)
        along, up = (seed * 0.754877666) % 1.0, (seed * 0.569840291) % 1.0
        first = last = 0
        dx = dy = 0.0
        if x1 - x0 <= TILE_MM and y1 - y0 <= TILE_MM:
            # a box that the tile can hold is laid inside it: no seam, one look
            dx, dy = x0 - along * (TILE_MM - x1 + x0), y0 - up * (TILE_MM - y1 + y0)
            first, last = bisect_left(heights[level], y0 - dy), bisect_left(heights[level], y1 - dy)
        else:
            others[number] = _tiled((x0, y0, x1, y1), level, along, up)
        firsts.append(first + begins[level])
        sizes.append(last - first)
        moves.append((dx, dy, x0, x1))
    size = np.array(sizes)
    ends = np.cumsum(size)
    of = np.repeat(np.arange(size.size), size)
    index = np.repeat(np.array(firsts) - (ends - size), size) + np.arange(of.size)
    dx, dy, x0, x1 = np.array(moves).T
    x = columns[0].take(index) + dx[of]
    held = ((x >= x0[of]) & (x <= x1[of])).nonzero()[0]
    of, index = of[held], index[held]
    x, y, rank = x[held], columns[1].take(index) + dy[of], columns[2].take(index) / _RANK_FACTOR
    counts = np.bincount(of, minlength=size.size)
    if not others:
        return x, y, rank, counts
    bounds = [0, *np.cumsum(counts).tolist()]
    parts = [
        others.get(number) or (x[first:last], y[first:last], rank[first:last])
        for number, (first, last) in enumerate(itertools.pairwise(bounds))
    ]
    x, y, rank = (np.concatenate(column) for column in zip(*parts, strict=True))
    return x, y, rank, np.array([part[0].size for part in parts])


def _tiled(
    box: tuple[float, float, float, float], level: int, along: float, up: float
) -> tuple[Array, Array, Array]:
    """Points in a box larger than the tile, which is laid again and again."""
    x0, y0, x1, y1 = box
    _, tile_x, tile_y, tile_rank = _tiles()[level]
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
