"""Cutting polylines to a polygon, and leaving out points that no eye would miss.

Geometry only. All lines of a bed are cut in one pass, since array code pays per call and not per line.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.ground import Array

TOLERANCE_MM = 0.02
"""Lines are simplified by no more than this."""

LEAST_REST_MM = 0.35
"""Shorter rests of cut lines are left out."""


def cut(lines: Sequence[Array], polygon: Array) -> list[list[Array]]:
    """The parts of polylines that lie inside a polygon.

    Parameters
    ----------
    lines : each (n, 2), mm
    polygon : (m, 2), mm

    Returns
    -------
    For each line its parts, in order along the line, simplified
    """
    if not lines:
        return []
    sizes = np.array([len(line) for line in lines])
    points = np.concatenate(lines)
    owner = np.repeat(np.arange(len(lines)), sizes)
    piece = np.flatnonzero(owner[1:] == owner[:-1])
    start, step = points[piece], points[piece + 1] - points[piece]
    at_piece, along = _crossings(start, step, polygon)
    # every piece is split at its crossings; a part is inside when its middle is
    which = np.concatenate([np.arange(len(piece)), np.arange(len(piece)), at_piece])
    share = np.concatenate([np.zeros(len(piece)), np.ones(len(piece)), along])
    order = np.lexsort((share, which))
    which, share = which[order], share[order]
    pairs = np.flatnonzero((which[1:] == which[:-1]) & (share[1:] - share[:-1] > 1e-9))
    which_part, low, high = which[pairs], share[pairs], share[pairs + 1]
    origin, vector = start[which_part], step[which_part]
    middle = origin + (0.5 * (low + high))[:, None] * vector
    keep = inside(middle, polygon)
    first, last = origin + low[:, None] * vector, origin + high[:, None] * vector
    return _joined(owner[piece[which_part]], first, last, keep, len(lines))


def inside(points: Array, polygon: Array) -> NDArray[np.bool_]:
    """True for points inside a polygon (even-odd)."""
    x, y = points[:, 0, None], points[:, 1, None]
    ax, ay = polygon[:, 0], polygon[:, 1]
    bx, by = np.roll(ax, -1), np.roll(ay, -1)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        at = ax + (y - ay) * ((bx - ax) / (by - ay))
    crosses = ((ay > y) != (by > y)) & (x < at)
    return np.asarray(crosses.sum(axis=1) % 2 == 1)


def _crossings(start: Array, step: Array, polygon: Array) -> tuple[NDArray[np.int64], Array]:
    """Pieces that cross an edge of the polygon, and the share of the piece at which they do."""
    edge = np.roll(polygon, -1, axis=0) - polygon
    cross = step[:, None, 0] * edge[None, :, 1] - step[:, None, 1] * edge[None, :, 0]
    gap = polygon[None, :, :] - start[:, None, :]
    with np.errstate(divide="ignore", invalid="ignore", over="ignore", under="ignore"):
        t = (gap[..., 0] * edge[None, :, 1] - gap[..., 1] * edge[None, :, 0]) / cross
        u = (gap[..., 0] * step[:, None, 1] - gap[..., 1] * step[:, None, 0]) / cross
    hit = (cross != 0) & (t > 0) & (t < 1) & (u >= 0) & (u <= 1)
    pieces, edges = np.nonzero(hit)
    return pieces, t[pieces, edges]


def _joined(
    owner: NDArray[np.int64], first: Array, last: Array, keep: NDArray[np.bool_], count: int
) -> list[list[Array]]:
    """Parts that are kept and follow each other, as polylines of their line."""
    parts: list[list[Array]] = [[] for _ in range(count)]
    kept = np.flatnonzero(keep)
    if not kept.size:
        return parts
    joint = (kept[1:] == kept[:-1] + 1) & (owner[kept[1:]] == owner[kept[:-1]])
    edges = np.concatenate([[0], np.flatnonzero(~joint) + 1, [kept.size]])
    for low, high in zip(edges[:-1].tolist(), edges[1:].tolist(), strict=True):
        index = kept[low:high]
        line = np.concatenate([first[index], last[index[-1:]]])
        if float(np.hypot(*(line[1:] - line[:-1]).T).sum()) >= LEAST_REST_MM:
            parts[int(owner[index[0]])].append(simplified(line))
    return parts


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
