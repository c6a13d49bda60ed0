"""Dynamic time warping of many cost tables at once, with open ends. Numbers in, paths out; no beds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

FORBIDDEN = 1e3
"""Cost of a cell outside the window: dearer than any path inside."""

_DIAGONAL, _FROM_BELOW, _FROM_LEFT, _START = 0, 1, 2, 3


@dataclass(frozen=True, eq=False, slots=True)
class Warping:
    """Cheapest paths through K tables of n x m costs.

    Attributes
    ----------
    score : total cost divided by n + m, shape (K,)
    steps : how each cell was reached, shape (K, n, m)
    ends : last cell of each path, shape (K, 2)
    """

    score: NDArray[np.float64]
    steps: NDArray[np.int8]
    ends: NDArray[np.int64]

    def on_path(self) -> NDArray[np.bool_]:
        """Cells of the paths, shape (K, n, m)."""
        count, rows, columns = self.steps.shape
        marked = np.zeros((count, rows, columns), dtype=bool)
        which = np.arange(count)
        i, j = self.ends[:, 0].copy(), self.ends[:, 1].copy()
        active = np.ones(count, dtype=bool)
        for _ in range(rows + columns):
            marked[which[active], i[active], j[active]] = True
            step = self.steps[which, i, j]
            i = i - ((step == _DIAGONAL) | (step == _FROM_BELOW))
            j = j - ((step == _DIAGONAL) | (step == _FROM_LEFT))
            active &= step != _START
            i, j = np.maximum(i, 0), np.maximum(j, 0)
            if not active.any():
                break
        return marked


def warp(
    cost: NDArray[np.float64],
    *,
    open_start: bool = False,
    open_end: bool = False,
    skip: float = 0.35,
) -> Warping:
    """Align two records by their table of local costs.

    Parameters
    ----------
    cost : local costs, shape (K, n, m)
    open_start, open_end : leading or trailing items of one record may stay without partner
    skip : cost of each item that stays without partner

    Returns
    -------
    paths of least total cost; a diagonal step counts its cell twice (the symmetric form), so that the score
    may be divided by n + m

    References
    ----------
    sakoe_chiba_1978
    """
    count, rows, columns = cost.shape
    steps = np.empty((count, rows, columns), dtype=np.int8)
    along = np.arange(columns) * skip
    total = np.empty((count, columns))
    last_column = np.empty((count, rows))
    for i in range(rows):
        local = cost[:, i, :]
        if i == 0:
            enter = np.full((count, columns), FORBIDDEN * (rows + columns))
            enter[:, 0] = 2 * local[:, 0]
            if open_start:
                enter = along + 2 * local
            kind = np.full((count, columns), _START, dtype=np.int8)
        else:
            below = total + local
            diagonal = np.empty_like(below)
            diagonal[:, 1:] = total[:, :-1] + 2 * local[:, 1:]
            diagonal[:, 0] = i * skip + 2 * local[:, 0] if open_start else np.inf
            kind = np.where(diagonal <= below, _DIAGONAL, _FROM_BELOW).astype(np.int8)
            kind[:, 0] = np.where(diagonal[:, 0] <= below[:, 0], _START, _FROM_BELOW)
            enter = np.minimum(below, diagonal)
        # a run along a row is a running minimum once the sum of the costs is taken off
        summed = np.cumsum(local, axis=1)
        lowest = np.minimum.accumulate(enter - summed, axis=1)
        total = lowest + summed
        kind[total < enter - 1e-9] = _FROM_LEFT
        steps[:, i, :] = kind
        last_column[:, i] = total[:, -1]
    ends, best = _ends(total, last_column, skip if open_end else None)
    return Warping(best / (rows + columns), steps, ends)


def _ends(
    last_row: NDArray[np.float64], last_column: NDArray[np.float64], skip: float | None
) -> tuple[NDArray[np.int64], NDArray[np.float64]]:
    """Where the paths end, and their total cost."""
    count, columns = last_row.shape
    rows = last_column.shape[1]
    ends = np.tile(np.array([rows - 1, columns - 1]), (count, 1))
    if skip is None:
        return ends, last_row[:, -1]
    by_row = last_row + skip * np.arange(columns - 1, -1, -1)
    by_column = last_column + skip * np.arange(rows - 1, -1, -1)
    j, i = by_row.argmin(axis=1), by_column.argmin(axis=1)
    which = np.arange(count)
    in_row = by_row[which, j] <= by_column[which, i]
    ends[:, 0] = np.where(in_row, rows - 1, i)
    ends[:, 1] = np.where(in_row, j, columns - 1)
    return ends, np.minimum(by_row[which, j], by_column[which, i])
