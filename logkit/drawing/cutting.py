"""Cutting polylines to a polygon, and leaving out points that no eye would miss.

Geometry only. All lines of a bed are cut in one pass, since array code pays per call and not per line.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.ground import Array

TOLERANCE_MM = 0.02
"""Lines are simplified by no more than this."""

LEAST_REST_MM = 0.35
"""Shorter rests of cut lines are left out."""


@dataclass(frozen=True, slots=True)
class Runs:
    """Polylines one after the other.

    Attributes
    ----------
    points : points of all of them, mm
    starts : where each begins in `points`
    owners : for each the line it is a part of
    """

    points: Array
    starts: list[int]
    owners: list[int]

    def lines(self) -> list[Array]:
        """The polylines one by one."""
        return np.split(self.points, self.starts[1:]) if self.starts else []


def cut(points: Array, owner: NDArray[np.int64], polygon: Array) -> Runs:
    """The parts of polylines that lie inside a polygon.

    Parameters
    ----------
    points : points of all lines, one line after the other, (n, 2), mm
    owner : number of the line of each point, increasing
    polygon : (m, 2), mm

    Returns
    -------
    the parts, in order along their lines; rests too short to see are left out
    """
    piece = np.flatnonzero(owner[1:] == owner[:-1])
    start, step = points[piece], points[piece + 1] - points[piece]
    at_piece, along = _crossings(start, step, polygon)
    # every piece is split at its crossings; a part is inside when its middle is
    count = len(piece)
    which, share = np.arange(count), np.zeros(count)
    if at_piece.size:
        which, share = np.concatenate([which, at_piece]), np.concatenate([share, along])
        order = np.lexsort((share, which))
        which, share = which[order], share[order]
    stop = np.ones(which.size)
    stop[:-1][which[1:] == which[:-1]] = share[1:][which[1:] == which[:-1]]
    origin, vector = start[which], step[which]
    first, last = origin + share[:, None] * vector, origin + stop[:, None] * vector
    keep = np.flatnonzero((stop - share > 1e-9) & inside(0.5 * (first + last), polygon))
    return _joined(owner[piece[which]], first, last, keep)


def inside(points: Array, polygon: Array) -> NDArray[np.bool_]:
    """True for points inside a polygon (even-odd)."""
    x, y = points[:, 0, None], points[:, 1, None]
    ax, ay = polygon[:, 0], polygon[:, 1]
    bx, by = np.concatenate((ax[1:], ax[:1])), np.concatenate((ay[1:], ay[:1]))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        at = ax + (y - ay) * ((bx - ax) / (by - ay))
    crosses = ((ay > y) != (by > y)) & (x < at)
    return np.asarray(crosses.sum(axis=1) % 2 == 1)


def _crossings(start: Array, step: Array, polygon: Array) -> tuple[NDArray[np.int64], Array]:
    """Pieces that cross an edge of the polygon, and the share of the piece at which they do."""
    edge = np.concatenate((polygon[1:], polygon[:1])) - polygon
    cross = step[:, None, 0] * edge[None, :, 1] - step[:, None, 1] * edge[None, :, 0]
    gap = polygon[None, :, :] - start[:, None, :]
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        t = (gap[..., 0] * edge[None, :, 1] - gap[..., 1] * edge[None, :, 0]) / cross
        u = (gap[..., 0] * step[:, None, 1] - gap[..., 1] * step[:, None, 0]) / cross
    hit = (cross != 0) & (t > 0) & (t < 1) & (u >= 0) & (u <= 1)
    pieces, edges = np.nonzero(hit)
    return pieces, t[pieces, edges]


def _joined(owner: NDArray[np.int64], first: Array, last: Array, kept: NDArray[np.int64]) -> Runs:
    """Parts that are kept and follow each other, as polylines of their line."""
    if not kept.size:
        return Runs(np.empty((0, 2)), [], [])
    fresh = np.ones(kept.size, dtype=bool)
    fresh[1:] = (kept[1:] != kept[:-1] + 1) | (owner[kept[1:]] != owner[kept[:-1]])
    first, last, owner = first[kept], last[kept], owner[kept]
    begins = np.flatnonzero(fresh)
    long = np.add.reduceat(np.hypot(*(last - first).T), begins) >= LEAST_REST_MM
    seen = np.repeat(long, np.diff(np.append(begins, kept.size)))
    first, last, owner, fresh = first[seen], last[seen], owner[seen], fresh[seen]
    place = np.arange(len(last)) + np.cumsum(fresh)
    points = np.empty((len(last) + int(fresh.sum()), 2))
    points[place] = last
    begins = place[fresh] - 1
    points[begins] = first[fresh]
    return Runs(points, begins.tolist(), owner[fresh].tolist())


def simplified(line: Array) -> Array:
    """The polyline without points that lie within the tolerance of what is kept.

    From each kept point the directions are narrowed to those that pass all points since within the tolerance; the
    first point outside of them, or nearer than the one before it, ends the piece.
    """
    if len(line) < 3:
        return line
    points = line.tolist()
    keep = [0]
    x0, y0 = points[0]
    reference = low = high = far = 0.0
    fresh = True
    for number in range(1, len(points)):
        x, y = points[number]
        away = math.hypot(x - x0, y - y0)
        turn = 0.0 if fresh else (math.atan2(y - y0, x - x0) - reference + math.pi) % math.tau - math.pi
        if not fresh and (away < far or not low <= turn <= high):
            keep.append(number - 1)
            x0, y0 = points[number - 1]
            away, turn, fresh = math.hypot(x - x0, y - y0), 0.0, True
        slack = math.asin(min(1.0, TOLERANCE_MM / away)) if away else math.pi
        if fresh:
            reference, low, high, fresh = math.atan2(y - y0, x - x0), -slack, slack, False
        else:
            low, high = max(low, turn - slack), min(high, turn + slack)
        far = away
    keep.append(len(points) - 1)
    return line[keep]
