"""The test of a whole log against random order, by shuffling beds within unbroken runs.

Several features of an ordered section are measured on the ranks of a series and on shuffled copies; the
largest standardised one is judged against the largest ones of the copies, so that looking at many features
does not make order out of nothing. Packages are searched only where this test says that there is order.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from logkit.trends.segments import least_costs
from logkit.trends.series import seed_of

Array = npt.NDArray[np.float64]

FEWEST = 8
"""Fewest items for the test."""

PIECE = 4
"""Fewest items of a piece in the feature that cuts the series into pieces."""

CUTTING = "cutting into pieces"
"""The feature that packages must show: what is gained by cutting into flat and sloping pieces."""


SIGNED = ("alternation", "step asymmetry", "step balance")
"""Features that are no sums of squares; of those the cube root is nearly normal and is used instead."""


@dataclass(frozen=True, slots=True)
class OrderTest:
    """Result of the test of one series against random order.

    Attributes
    ----------
    quantity : "grain size" or "thickness"
    beds, shuffles : beds in runs of two or more; number of shuffled copies
    p : probability of a feature as strong in random order, None when there are too few beds
    p_packages : probability of the gain from cutting into pieces alone; packages are searched below a level of it
    strongest : name of the feature that stands out most
    features : (name, probability) of each
    """

    quantity: str
    beds: int
    shuffles: int
    p: float | None
    p_packages: float | None
    strongest: str = ""
    features: tuple[tuple[str, float], ...] = ()

    def sentence(self, level: float = 0.05) -> str:
        """The result in words."""
        if self.p is None:
            return (
                f"Order of {self.quantity}: not determinable, {self.beds} beds in unbroken runs are too few."
            )
        head = f"Order of {self.quantity} ({self.beds} beds, {self.shuffles} shuffled copies)"
        if self.p > level:
            return f"{head}: not distinguished from random (p = {self.p:.2g})."
        return f"{head}: not random (p = {self.p:.2g}); strongest in {self.strongest}."


def order_test(runs: Sequence[npt.ArrayLike], quantity: str = "grain size") -> OrderTest:
    """Test runs of values against random order within each run.

    Parameters
    ----------
    runs : (n_i,) values in their order, one array a run; any unit, ranks are used

    Notes
    -----
    Features: trend of a run; persistence (squares of moving means over 2, 4, 8 … items); ramps (squares of
    moving slopes); asymmetry (few large steps one way, many small ones back); gain from cutting into flat and sloping
    pieces; alternation. 399 copies
    up to 1,000 items, 199 up to 2,500, 99 above; the seed comes from the values.

    References
    ----------
    westfall_young_1993
    """
    arrays = [np.asarray(run, dtype=float) for run in runs]
    arrays = [a for a in arrays if a.size >= 2]
    total = sum(a.size for a in arrays)
    if total < FEWEST:
        return OrderTest(quantity, total, 0, None, None)
    shuffles = 399 if total <= 1000 else 199 if total <= 2500 else 99
    generator = np.random.default_rng(seed_of(*arrays))
    scores: dict[str, Array] = {}
    for array in arrays:
        ranks = _ranks(array)
        rows = np.empty((shuffles + 1, array.size))
        rows[0] = ranks
        rows[1:] = generator.permuted(np.broadcast_to(ranks, (shuffles, array.size)), axis=1)
        for name, values in _features(rows, total).items():
            scores[name] = scores[name] + values if name in scores else values
    for name in SIGNED[1:]:
        scores[name] = np.abs(scores[name])
    names = list(scores)
    matrix = np.stack([scores[name] for name in names])
    signed = np.array([name in SIGNED for name in names])
    standard = _standardised(np.where(signed[:, None], matrix, np.cbrt(matrix)))
    strongest = names[int(np.argmax(standard[:, 0]))]
    single = np.mean(standard >= standard[:, :1] - 1e-9, axis=1)
    return OrderTest(
        quantity,
        total,
        shuffles,
        _largest(standard),
        float(single[names.index(CUTTING)]),
        strongest,
        tuple((name, float(p)) for name, p in zip(names, single, strict=True)),
    )


def _ranks(values: Array) -> Array:
    """Mean ranks from -0.5 to 0.5, ties shared."""
    _, place, counts = np.unique(values, return_inverse=True, return_counts=True)
    upper = np.cumsum(counts)
    middle = upper - (counts + 1) / 2
    ranks: Array = middle[place] / max(values.size - 1, 1)
    return ranks - ranks.mean()


def _features(rows: Array, total: int) -> dict[str, Array]:
    """Features of each row; they add up over runs. Rows sum to zero."""
    n = rows.shape[1]
    position = np.arange(n) - (n - 1) / 2
    features = {"trend of the whole run": (rows @ position) ** 2 / max(float(position @ position), 1.0)}
    steps = np.diff(rows, axis=1)
    features["alternation"] = -np.sum(rows[:, 1:] * rows[:, :-1], axis=1)
    features["step asymmetry"] = np.einsum("ij,ij,ij->i", steps, steps, steps)
    features["step balance"] = np.sum(np.sign(steps), axis=1)
    sums = np.zeros((rows.shape[0], n + 1))
    np.cumsum(rows, axis=1, out=sums[:, 1:])
    moments = np.zeros_like(sums)
    np.cumsum(rows * position, axis=1, out=moments[:, 1:])
    width = 2
    while width <= max(n // 2, 2) and width <= n:
        window = sums[:, width:] - sums[:, :-width]
        features[f"persistence over {width} beds"] = np.einsum("ij,ij->i", window, window) / width
        if width >= 4:
            middle = position[: n - width + 1] + (width - 1) / 2
            slope = moments[:, width:] - moments[:, :-width] - middle * window
            norm = width * (width**2 - 1) / 12
            features[f"ramps over {width} beds"] = np.einsum("ij,ij->i", slope, slope) / norm
        width *= 2
    price = 0.3 * math.log(total) / 12  # 1/12 is the variance of untied ranks
    costs = least_costs(rows, price, 1.5 * price, minimum=PIECE, longest=64 if total <= 1000 else 32)
    features[CUTTING] = np.einsum("ij,ij->i", rows, rows) - costs + price
    return features


def _standardised(scores: Array) -> Array:
    """Scores of each feature (a row) as deviations from the mean of all copies, in their spread.

    A feature that cannot vary is zero.
    """
    spread = scores.std(axis=1, keepdims=True)
    middle = scores.mean(axis=1, keepdims=True)
    return np.divide(scores - middle, spread, out=np.zeros_like(scores), where=spread > 1e-12)


def _largest(standard: Array) -> float:
    """Share of columns whose largest deviation is at least that of the first."""
    largest = standard.max(axis=0)
    return float(np.mean(largest >= largest[0] - 1e-9))
