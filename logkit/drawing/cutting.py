"""Cutting polylines to a polygon, and leaving out points that no eye would miss.

Geometry only. All lines of a bed are cut in one pass, since array code pays per call and not per line.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.ground import Array

Places = NDArray[np.complex128]
"""Points of the page as x + y·i."""

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
    starts: NDArray[np.int64]
    owners: NDArray[np.int64]

    def lines(self) -> list[Array]:
        """The polylines one by one."""
        return np.split(self.points, self.starts[1:]) if len(self.starts) else []


def cut_each(
    points: Array, owner: NDArray[np.int64], bed: NDArray[np.int64], polygons: Sequence[Array]
) -> Runs:
    """As `cut`, with lines of many beds, each cut to the polygon of its own bed; `bed` is each point's."""
    # places as complex numbers: one array to index where there would be two
    place = np.ascontiguousarray(points).view(np.complex128)[:, 0]
    corners = _even(polygons)
    piece = (owner[1:] == owner[:-1]).nonzero()[0]
    start = place[piece]
    step = place[piece + 1] - start
    owner, bed = owner[piece], bed[piece]
    at_piece, along = _crossings(start, step, corners, bed)
    # every piece is split at its crossings; a part is inside when its middle is
    which = np.concatenate((np.arange(piece.size), at_piece))
    share = np.concatenate((np.zeros(piece.size), along))
    order = np.lexsort((share, which))
    which, share = which[order], share[order]
    stop = np.ones(which.size)
    stop[:-1] = np.where(which[1:] == which[:-1], share[1:], 1.0)
    origin, vector = start[which], step[which]
    first, last = origin + share * vector, origin + stop * vector
    bed = bed[which]
    crossed = np.zeros(len(polygons), dtype=bool)
    crossed[bed[(share > 0).nonzero()[0]]] = True
    middle = np.where(crossed[bed], 0.5 * (first + last), origin + 0.5 * vector)
    kept = ((stop - share > 1e-9) & _inside(middle, corners, bed)).nonzero()[0]
    return _joined(owner[which], first, last, kept)


def _even(polygons: Sequence[Array]) -> Places:
    """Polygons as columns of equal length: the last corner again where one has fewer."""
    longest = max(map(len, polygons))
    corners = np.empty((len(polygons), longest), dtype=np.complex128)
    for row, polygon in zip(corners, polygons, strict=True):
        places = np.ascontiguousarray(polygon, dtype=float).view(np.complex128)[:, 0]
        row[: places.size] = places
        row[places.size :] = places[-1]
    return np.ascontiguousarray(corners.T)


def inside(points: Array, polygon: Array) -> NDArray[np.bool_]:
    """True for points inside a polygon (even-odd)."""
    places, corners = (
        np.ascontiguousarray(a, dtype=float).view(np.complex128)[:, 0] for a in (points, polygon)
    )
    return _inside(places, corners[:, None], np.zeros(places.size, dtype=np.int64))


def _inside(places: Places, corners: Places, bed: NDArray[np.int64]) -> NDArray[np.bool_]:
    x, y = places.real, places.imag
    after = np.concatenate((corners[1:], corners[:1]))
    ax, ay, by = corners.real, corners.imag, after.imag
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        slope = (after.real - ax) / (by - ay)
        ay = ay.take(bed, axis=1)
        crosses = x < ax.take(bed, axis=1) + (y - ay) * slope.take(bed, axis=1)
    crosses &= (ay > y) != (by.take(bed, axis=1) > y)
    return np.logical_xor.reduce(crosses, axis=0)


def _crossings(
    start: Places, step: Places, corners: Places, bed: NDArray[np.int64]
) -> tuple[NDArray[np.int64], Array]:
    """Pieces that cross an edge of the polygon, and the share of the piece at which they do."""
    edge = np.concatenate((corners[1:], corners[:1])) - corners
    ex, ey = edge.real.take(bed, axis=1), edge.imag.take(bed, axis=1)
    sx, sy = step.real, step.imag
    gx, gy = corners.real.take(bed, axis=1) - start.real, corners.imag.take(bed, axis=1) - start.imag
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        scale = 1.0 / (sx * ey - sy * ex)
        t = (gx * ey - gy * ex) * scale
        u = (gx * sy - gy * sx) * scale
    edges, pieces = ((t > 0) & (t < 1) & (u >= 0) & (u <= 1)).nonzero()
    return pieces, t[edges, pieces]


def _joined(owner: NDArray[np.int64], first: Places, last: Places, kept: NDArray[np.int64]) -> Runs:
    """Parts that are kept and follow each other, as polylines of their line."""
    if not kept.size:
        none = np.empty(0, dtype=np.int64)
        return Runs(np.empty((0, 2)), none, none)
    first, last, owner = first[kept], last[kept], owner[kept]
    fresh = np.ones(kept.size, dtype=bool)
    fresh[1:] = (kept[1:] != kept[:-1] + 1) | (owner[1:] != owner[:-1])
    begins = np.flatnonzero(fresh)
    long = np.add.reduceat(np.abs(last - first), begins) >= LEAST_REST_MM
    if not long.all():
        seen = np.repeat(long, np.diff(begins, append=kept.size))
        first, last, owner, fresh = first[seen], last[seen], owner[seen], fresh[seen]
        begins = np.flatnonzero(fresh)
    place = np.empty(last.size + begins.size, dtype=np.complex128)
    place[np.arange(last.size) + np.cumsum(fresh)] = last
    starts = begins + np.arange(begins.size)
    place[starts] = first[begins]
    return Runs(place.view(np.float64).reshape(-1, 2), starts, owner[begins])


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
