"""Rank statistics of a series against its order: Mann-Kendall, Kendall's tau, Theil-Sen, many tests at once.

Numbers in, numbers out: no beds here. Probabilities are exact for short series, with ties in the values
taken into account, and normal above `EXACT_LIMIT` items.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError
from logkit.registry import formula

Array = npt.NDArray[np.float64]

EXACT_LIMIT = 40
"""Longest series whose Kendall p is counted exactly."""

_Y = {"y": "values in their order, y"}
_XY = {"x": "first variable or order, x", "y": "second variable, y"}


@dataclass(frozen=True, slots=True)
class TrendTest:
    """Kendall's test of a series against its order. `p` is two-sided; tau is 0 and p 1 when nothing varies."""

    n: int
    s: float
    tau: float
    p: float
    exact: bool


def _series(name: str, values: npt.ArrayLike, least: int = 2) -> Array:
    array = np.asarray(values, dtype=float)
    if array.ndim != 1 or array.size < least:
        raise ArgumentError(name, values, f"a list of {least} or more numbers")
    if not np.isfinite(array).all():
        raise ArgumentError(name, values, "free of missing and infinite values")
    return array


def _pair(x: npt.ArrayLike, y: npt.ArrayLike, least: int = 2) -> tuple[Array, Array]:
    first, second = _series("x", x, least), _series("y", y, least)
    if first.size != second.size:
        raise ArgumentError("y", y, f"as long as x ({first.size} values)")
    return first, second


def _concordance(x: Array, y: Array) -> float:
    """Concordant less discordant pairs; lag by lag, so memory stays small in long series."""
    if x.size <= 300:
        upper = np.triu_indices(x.size, 1)
        return float(np.sum(np.sign(x[upper[1]] - x[upper[0]]) * np.sign(y[upper[1]] - y[upper[0]])))
    return float(sum(np.sum(np.sign(x[k:] - x[:-k]) * np.sign(y[k:] - y[:-k])) for k in range(1, x.size)))


def _ties(values: Array) -> tuple[int, ...]:
    counts = np.unique(values, return_counts=True)[1]
    return tuple(sorted(int(c) for c in counts))


def _tied_pairs(values: Array) -> float:
    return sum(t * (t - 1) / 2 for t in _ties(values))


@formula(
    "stat.mann_kendall_s", gives="concordant less discordant pairs, S", unit="1",
    equation="S = sum over i < j of sign(y_j - y_i)", source="mann_1945", locator="test T",
    domain="monotonic trend, independent items", status="secondary", inputs=_Y,
)  # fmt: skip
def mann_kendall_s(y: npt.ArrayLike) -> float:
    """S of the Mann-Kendall test.

    Parameters
    ----------
    y : (n,) values in their order

    References
    ----------
    mann_1945, kendall_1975
    """
    values = _series("y", y)
    return _concordance(np.arange(values.size, dtype=float), values)


@formula(
    "stat.mann_kendall_variance", gives="variance of S, Var S", unit="1",
    equation="Var S = (n(n-1)(2n+5) - sum over tie groups t(t-1)(2t+5))/18", source="kendall_1975",
    domain="independent items; ties in y", status="secondary", inputs=_Y,
)  # fmt: skip
def mann_kendall_variance(y: npt.ArrayLike) -> float:
    """Variance of S under random order, ties in y taken off.

    References
    ----------
    kendall_1975
    """
    values = _series("y", y)
    n = values.size
    return (n * (n - 1) * (2 * n + 5) - sum(t * (t - 1) * (2 * t + 5) for t in _ties(values))) / 18


@formula(
    "stat.mann_kendall_z", gives="standardised S with continuity correction, Z", unit="1",
    equation="Z = (S - sign S)/sqrt(Var S), 0 for S = 0", source="kendall_1975",
    domain="n above 10; exact p below", status="secondary", inputs=_Y,
    pitfalls="Neighbouring beds that resemble each other make p too small.",
)  # fmt: skip
def mann_kendall_z(y: npt.ArrayLike) -> float:
    """Standard normal score of S.

    References
    ----------
    mann_1945, kendall_1975
    """
    s = mann_kendall_s(y)
    return (s - math.copysign(1, s)) / math.sqrt(mann_kendall_variance(y)) if s else 0.0


@formula(
    "stat.kendall_tau", gives="Kendall's tau, ties not corrected, tau_a", unit="1",
    equation="tau_a = S/(n(n-1)/2)", source="kendall_1938", domain="ordinal data", status="secondary", inputs=_XY,
)  # fmt: skip
def kendall_tau(x: npt.ArrayLike, y: npt.ArrayLike) -> float:
    """Kendall's tau_a.

    References
    ----------
    kendall_1938
    """
    first, second = _pair(x, y)
    return _concordance(first, second) / (first.size * (first.size - 1) / 2)


@formula(
    "stat.kendall_tau_b", gives="Kendall's tau, ties corrected, tau_b", unit="1",
    equation="tau_b = (P - Q)/sqrt((P + Q + T)(P + Q + U))", source="kendall_1945",
    domain="ordinal data with ties; NaN when one variable is constant", status="secondary", inputs=_XY,
)  # fmt: skip
def kendall_tau_b(x: npt.ArrayLike, y: npt.ArrayLike) -> float:
    """Kendall's tau_b, for classes with many ties.

    References
    ----------
    kendall_1945
    """
    first, second = _pair(x, y)
    pairs = first.size * (first.size - 1) / 2
    spread = math.sqrt((pairs - _tied_pairs(first)) * (pairs - _tied_pairs(second)))
    return _concordance(first, second) / spread if spread else math.nan


@lru_cache(maxsize=4096)
def _inversion_tail(ties: tuple[int, ...]) -> tuple[float, ...]:
    """P(inversions <= d) of a random order of items with these tie groups, d = 0, 1, …

    Inversions of the orders of a multiset are counted by a product of Gaussian binomials, one for each
    group; only sums of positive numbers, so floats serve.
    """
    poly = np.ones(1)
    placed = 0
    for group in sorted(ties, reverse=True):
        placed += group
        poly = np.convolve(poly, _gaussian_binomial(placed, group))
    tail = np.cumsum(poly)
    return tuple(tail / tail[-1])


@lru_cache(maxsize=2048)
def _gaussian_binomial(n: int, k: int) -> Array:
    """Coefficients of the Gaussian binomial, by Pascal's rule [n,k] = [n-1,k-1] + q^k [n-1,k]."""
    row: list[Array] = [np.ones(1)]
    for m in range(1, n + 1):
        new: list[Array] = [np.ones(1)]
        for j in range(1, min(m, k) + 1):
            poly = np.zeros(j * (m - j) + 1)
            poly[: row[j - 1].size] += row[j - 1]
            if j < len(row):
                poly[j : j + row[j].size] += row[j]
            new.append(poly)
        row = new
    return row[k]


@formula(
    "stat.kendall_exact_p", gives="exact two-sided probability of |S| under random order, p", unit="1",
    equation="P(S >= s) from the count of orders with d = (N - S)/2 discordant pairs; doubled, at most 1",
    source="kendall_1938", domain="no ties in x; ties in y are counted exactly (own extension)",
    status="secondary", inputs=_XY, pitfalls="With 4 items the smallest p is 0.083: too few.",
)  # fmt: skip
def kendall_exact_p(x: npt.ArrayLike, y: npt.ArrayLike) -> float:
    """Exact two-sided p of Kendall's test; x without ties.

    References
    ----------
    kendall_1938
    """
    first, second = _pair(x, y)
    if np.unique(first).size < first.size:
        raise ArgumentError("x", x, "free of ties (the order of the items)")
    s = abs(_concordance(first, second))
    return _exact_two_sided(s, _ties(second))


def _exact_two_sided(s: float, ties: tuple[int, ...]) -> float:
    n = sum(ties)
    pairs = n * (n - 1) / 2 - sum(t * (t - 1) / 2 for t in ties)
    if pairs == 0:
        return 1.0
    return float(min(1.0, 2 * _inversion_tail(ties)[round((pairs - abs(s)) / 2)]))


@formula(
    "stat.kendall_critical_tau", gives="smallest tau with one-sided p at or below the level, tau_c", unit="1",
    equation="smallest s with P(S >= s) <= alpha, over n(n-1)/2", source="kendall_1975",
    domain="no ties; NaN when no order is rare enough", status="secondary",
    inputs={"n": "number of items, n", "alpha_one_sided": "one-sided level, alpha"},
)  # fmt: skip
def kendall_critical_tau(n: int, alpha_one_sided: float) -> float:
    """Critical tau of the exact test.

    References
    ----------
    kendall_1975
    """
    count = int(n)
    if count < 2 or count > 170:
        raise ArgumentError("n", n, "from 2 to 170")
    tail = np.asarray(_inversion_tail((1,) * count))
    rare = np.flatnonzero(tail <= alpha_one_sided)
    if rare.size == 0:
        return math.nan
    pairs = count * (count - 1) / 2
    return float((pairs - 2 * rare[-1]) / pairs)


def trend_test(values: npt.ArrayLike) -> TrendTest:
    """Kendall's test of a series against its order, exact up to `EXACT_LIMIT` items.

    Parameters
    ----------
    values : (n,) values in their order, n >= 2, ties allowed

    Notes
    -----
    Ties in the values are counted exactly in short series, where the normal form is too generous. Longer
    series use the normal form without continuity correction.

    References
    ----------
    kendall_1938, kendall_1975
    """
    y = _series("values", values)
    s = _concordance(np.arange(y.size, dtype=float), y)
    ties = _ties(y)
    if len(ties) == 1:
        return TrendTest(y.size, 0.0, 0.0, 1.0, True)
    pairs = y.size * (y.size - 1) / 2
    tau = s / math.sqrt(pairs * (pairs - sum(t * (t - 1) / 2 for t in ties)))
    if y.size <= EXACT_LIMIT:
        return TrendTest(y.size, s, tau, _exact_two_sided(s, ties), True)
    variance = (y.size * (y.size - 1) * (2 * y.size + 5) - sum(t * (t - 1) * (2 * t + 5) for t in ties)) / 18
    return TrendTest(y.size, s, tau, math.erfc(abs(s) / math.sqrt(2 * variance)), False)


def _slopes(x: Array, y: Array) -> Array:
    upper = np.triu_indices(x.size, 1)
    run = x[upper[1]] - x[upper[0]]
    keep = run != 0
    return np.sort((y[upper[1]] - y[upper[0]])[keep] / run[keep])


@formula(
    "stat.theil_sen_slope", gives="median of all pairwise slopes, b", unit="1",
    equation="b = median (y_j - y_i)/(x_j - x_i), x_j not equal x_i", source="sen_1968", locator="eq. 2.6",
    domain="linear trend; breaks down above 29 % outliers", status="secondary", inputs=_XY,
)  # fmt: skip
def theil_sen_slope(x: npt.ArrayLike, y: npt.ArrayLike) -> float:
    """Theil-Sen slope, in the unit of y over that of x.

    References
    ----------
    theil_1950, sen_1968
    """
    slopes = _slopes(*_pair(x, y))
    return float(np.median(slopes)) if slopes.size else math.nan


def theil_sen_interval(x: npt.ArrayLike, y: npt.ArrayLike, confidence: float = 0.95) -> tuple[float, float]:
    """Lower and upper limit of the Theil-Sen slope at a confidence, ranks rounded outward to the nearest.

    References
    ----------
    sen_1968
    """
    from scipy.special import ndtri

    if not 0 < confidence < 1:
        raise ArgumentError("confidence", confidence, "between 0 and 1")
    first, second = _pair(x, y)
    slopes = _slopes(first, second)
    if slopes.size == 0:
        return math.nan, math.nan
    n = first.size
    variance = (
        n * (n - 1) * (2 * n + 5) - sum(t * (t - 1) * (2 * t + 5) for t in (*_ties(first), *_ties(second)))
    ) / 18
    half = float(ndtri(0.5 + confidence / 2)) * math.sqrt(max(variance, 0.0))
    lower = max(round((slopes.size - half) / 2) - 1, 0)
    upper = min(round((slopes.size + half) / 2), slopes.size - 1)
    return float(slopes[lower]), float(slopes[upper])


@formula(
    "stat.theil_sen_low", gives="lower limit of the Theil-Sen slope", unit="1",
    equation="item (N - C)/2 of the N sorted slopes, C = z sqrt(Var S)", source="sen_1968", status="secondary",
    inputs=_XY | {"confidence": "confidence of the interval"},
    pitfalls="Programs round the ranks differently: below 10 items allow one neighbouring slope.",
)  # fmt: skip
def theil_sen_low(x: npt.ArrayLike, y: npt.ArrayLike, confidence: float = 0.95) -> float:
    """Lower limit of the slope.

    References
    ----------
    sen_1968
    """
    return theil_sen_interval(x, y, confidence)[0]


@formula(
    "stat.theil_sen_high", gives="upper limit of the Theil-Sen slope", unit="1",
    equation="item (N + C)/2 + 1 of the N sorted slopes, C = z sqrt(Var S)", source="sen_1968",
    status="secondary", inputs=_XY | {"confidence": "confidence of the interval"},
)  # fmt: skip
def theil_sen_high(x: npt.ArrayLike, y: npt.ArrayLike, confidence: float = 0.95) -> float:
    """Upper limit of the slope.

    References
    ----------
    sen_1968
    """
    return theil_sen_interval(x, y, confidence)[1]


def adjusted_p(p: npt.ArrayLike) -> Array:
    """Benjamini-Hochberg adjusted p of all tests made, in the order given; NaN stay NaN and do not count.

    References
    ----------
    benjamini_hochberg_1995
    """
    values = np.asarray(p, dtype=float)
    result = np.full(values.shape, math.nan)
    known = np.flatnonzero(~np.isnan(values))
    if np.any((values[known] < 0) | (values[known] > 1)):
        raise ArgumentError("p", p, "between 0 and 1")
    order = known[np.argsort(values[known], kind="stable")]
    scaled = values[order] * order.size / np.arange(1, order.size + 1)
    result[order] = np.minimum(np.minimum.accumulate(scaled[::-1])[::-1], 1.0)
    return result


@formula(
    "stat.bh_adjusted", gives="adjusted p of the test with this rank", unit="1",
    equation="min over k >= i of m p_(k)/k, at most 1", source="benjamini_hochberg_1995", status="secondary",
    inputs={"p": "probabilities of all m tests, p", "rank": "rank from the smallest p, counted from 1, i"},
    domain="independent or positively dependent tests", pitfalls="Count all tests made, also those not shown.",
)  # fmt: skip
def bh_adjusted(p: npt.ArrayLike, rank: int) -> float:
    """Adjusted p by rank.

    References
    ----------
    benjamini_hochberg_1995
    """
    ordered = np.sort(adjusted_p(p))
    if not 1 <= int(rank) <= ordered.size:
        raise ArgumentError("rank", rank, f"from 1 to {ordered.size}")
    return float(ordered[int(rank) - 1])


@formula(
    "stat.bh_rejections", gives="number of tests rejected", unit="1",
    equation="number of adjusted p at or below q", source="benjamini_hochberg_1995", status="secondary",
    inputs={"p": "probabilities of all m tests, p", "fdr": "false discovery rate, q"},
)  # fmt: skip
def bh_rejections(p: npt.ArrayLike, fdr: float) -> int:
    """How many tests are rejected at a false discovery rate.

    References
    ----------
    benjamini_hochberg_1995
    """
    return int(np.sum(adjusted_p(p) <= fdr))
