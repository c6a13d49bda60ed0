"""Cutting a series into pieces: penalised least squares with flat and sloping pieces, kernel cost.

The cut is exact for the penalty given. The flat cost is the kernel cost with the linear kernel; sloping
pieces are our extension, since fining-up packages are ramps and a method for steps would cut them up.
Whether a cut is worth making at all is tested elsewhere, against shuffled order.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError
from logkit.registry import formula

Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Piece:
    """Items start..stop-1 of a series, fitted by a line when `sloping`, by a mean else."""

    start: int
    stop: int
    sloping: bool
    squares: float


class _Sums:
    """Running sums of a weighted series, for the squares of any piece in constant time."""

    def __init__(self, y: Array, weights: Array) -> None:
        x = np.arange(y.size, dtype=float) - y.size / 2
        y = y - np.average(y, weights=weights)
        columns = (weights, weights * x, weights * x * x, weights * y, weights * x * y, weights * y * y)
        self.sums = np.zeros((6, y.size + 1))
        np.cumsum(np.stack(columns), axis=1, out=self.sums[:, 1:])

    def squares(self, start: npt.NDArray[np.intp], stop: int) -> tuple[Array, Array]:
        """Sums of squares about the mean and about the line for pieces that end together."""
        w, wx, wxx, wy, wxy, wyy = self.sums[:, stop, None] - self.sums[:, start]
        mean = wy / w
        flat = np.maximum(wyy - wy * mean, 0.0)
        across = np.maximum(wxx - wx * wx / w, 1e-9)
        along = wxy - wx * mean
        return flat, np.maximum(flat - along * along / across, 0.0)


def cut(
    y: npt.ArrayLike,
    flat_penalty: float,
    slope_penalty: float,
    *,
    weights: npt.ArrayLike | None = None,
    minimum: int = 1,
    longest: int | None = None,
    places: tuple[int, ...] | None = None,
) -> tuple[Piece, ...]:
    """The pieces with the least sum of squares plus penalties.

    Parameters
    ----------
    y : (n,) values in their order
    flat_penalty, slope_penalty : price of a flat and of a sloping piece, in y squared; slope >= flat; infinite for
        flat pieces only
    weights : (n,) weights of the squares, 1 by default
    minimum : fewest items of a piece; a shorter series is one piece
    longest : most items of a piece, for a rough cut of a long series; no limit by default
    places : where cuts are allowed (number of items below the cut); everywhere by default

    Notes
    -----
    Dynamic programming with pruning. A start s is dropped once F(s) + C(s,t) - slope_penalty >= F(t): no
    later piece from s can then be cheaper than one cut at t.

    References
    ----------
    killick_2012
    """
    values = np.asarray(y, dtype=float)
    n = values.size
    weight = np.ones(n) if weights is None else np.asarray(weights, dtype=float)
    if n == 0:
        return ()
    sums = _Sums(values, weight)
    stops = sorted({*(places if places is not None else range(1, n)), n})
    margin = slope_penalty if np.isfinite(slope_penalty) else flat_penalty
    origin: dict[int, tuple[int, bool, float]] = {}
    # starts still worth trying, with the best cost below each and the stop from which each is useless
    starts = np.zeros(len(stops) + 1, dtype=np.intp)
    costs = np.zeros(len(stops) + 1)
    reach = n + 1 if longest is None else longest + 1
    expiry = np.full(len(stops) + 1, reach, dtype=np.intp)
    count = 1
    for number, stop in enumerate(stops):
        if number % 16 == 0:  # a useless start does no harm, so they are thrown out now and then
            alive = np.flatnonzero(expiry[:count] > stop)
            for array in (starts, costs, expiry):
                array[: alive.size] = array[alive]
            count = alive.size
        ready = int(np.searchsorted(starts[:count], stop - minimum, side="right"))
        if ready == 0 and stop < n:
            continue
        ready = max(ready, 1)
        flat, sloped = sums.squares(starts[:ready], stop)
        flat_total, sloped_total = flat + flat_penalty, sloped + slope_penalty
        total = costs[:ready] + np.minimum(flat_total, sloped_total)
        k = int(total.argmin())
        least = float(total[k])
        sloping = bool(sloped_total[k] < flat_total[k])
        origin[stop] = (int(starts[k]), sloping, float(sloped[k] if sloping else flat[k]))
        dear = total >= least + margin
        expiry[:ready][dear] = np.minimum(expiry[:ready][dear], stop + minimum)
        starts[count], costs[count], expiry[count] = stop, least, stop + reach
        count += 1
    pieces: list[Piece] = []
    stop = n
    while stop > 0:
        start, sloping, squares = origin[stop]
        pieces.append(Piece(start, stop, sloping, squares))
        stop = start
    return tuple(reversed(pieces))


def least_costs(
    rows: Array, flat_penalty: float, slope_penalty: float, *, minimum: int, longest: int = 64
) -> Array:
    """Least penalised cost of each of many series of one length, cut as `cut` does, without weights.

    Parameters
    ----------
    rows : (m, n) one series a row
    minimum, longest : fewest and most items of a piece; `longest` keeps the work in proportion to n

    Returns
    -------
    (m,) costs, in y squared
    """
    count, n = rows.shape
    x = np.arange(n + 1, dtype=float)
    columns = np.ascontiguousarray(rows.T)  # one series a column: the pieces that end together lie together
    sums = np.zeros((3, n + 1, count))
    for k, values in enumerate((columns, columns * (x[1:, None] - 0.5), columns * columns)):
        np.cumsum(values, axis=0, out=sums[k, 1:])
    costs = np.full((n + 1, count), np.inf)
    costs[0] = 0.0
    first_sum, moment, squares = sums
    for stop in range(min(minimum, n), n + 1):
        own = slice(max(stop - longest, 0), max(stop - minimum, 0) + 1)
        size = (stop - x[own])[:, None]
        y = first_sum[stop] - first_sum[own]
        along = moment[stop] - moment[own] - ((x[own, None] + stop) / 2) * y
        y *= y
        y /= size
        flat = squares[stop] - squares[own]
        flat -= y
        along *= along
        along /= np.maximum(size * (size * size - 1) / 12, 1e-12)
        along -= slope_penalty - flat_penalty
        flat -= np.maximum(along, 0.0)
        flat += costs[own]
        costs[stop] = flat.min(axis=0) + flat_penalty
    return costs[n]


def noise_variance(y: npt.ArrayLike) -> float:
    """Variance of items about a slowly changing level, from first differences, outliers cut off.

    Notes
    -----
    Half the mean square of the differences about their median, without the largest tenth; the factor
    1.57 makes it right for normal noise. A median would be zero or one class for sizes in classes.
    """
    steps = np.diff(np.asarray(y, dtype=float))
    if steps.size < 2:
        return 0.0
    squares = np.sort((steps - np.median(steps)) ** 2)
    kept = squares[: max(int(np.ceil(0.9 * squares.size)), 1)]
    return float(1.57 * kept.mean() / 2)


@formula(
    "stat.changepoint_objective", gives="least penalised cost", unit="1",
    equation="min over cuts of sum C(segment) + beta x (number of change points), C = sum (y - mean)^2",
    source="killick_2012", locator="eq. 1", status="published", domain="independent items within segments",
    inputs={"y": "values in their order", "penalty": "price of a change, beta", "cost": "'l2'"},
    not_negative=("penalty",),
    pitfalls="The penalty decides the answer: show results for a range of penalties.",
)  # fmt: skip
def changepoint_objective(y: npt.ArrayLike, penalty: float, cost: str = "l2") -> float:
    """Least penalised cost of cutting a series into flat pieces, in y squared.

    References
    ----------
    killick_2012
    """
    if cost != "l2":
        raise ArgumentError("cost", cost, "'l2'")
    pieces = cut(y, penalty, np.inf)
    return sum(piece.squares for piece in pieces) + penalty * (len(pieces) - 1)


@formula(
    "stat.kernel_segment_cost", gives="kernel cost of a segment, C", unit="1",
    equation="C = sum k(y_i, y_i) - (1/m) sum sum k(y_i, y_j), k = exp(-gamma (a - b)^2)",
    source="arlot_2019", status="published", domain="changes in the whole distribution",
    inputs={"y": "values of the segment", "gamma": "1/(unit of y)^2", "kernel": "'exp(-gamma (a-b)^2)'"},
    positive=("gamma",), pitfalls="Memory goes with the square of the number of items.",
)  # fmt: skip
def kernel_segment_cost(y: npt.ArrayLike, gamma: float, kernel: str = "exp(-gamma (a-b)^2)") -> float:
    """Kernel cost of one segment with the Gaussian kernel.

    References
    ----------
    harchaoui_cappe_2007, arlot_2019
    """
    if kernel != "exp(-gamma (a-b)^2)":
        raise ArgumentError("kernel", kernel, "'exp(-gamma (a-b)^2)'")
    values = np.asarray(y, dtype=float)
    similarity = np.exp(-gamma * (values[:, None] - values[None, :]) ** 2)
    return float(values.size - similarity.sum() / values.size)
