"""Distances between two records: dynamic time warping and the two-sample Kolmogorov-Smirnov test."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError
from logkit.registry import formula

_RECORDS = {
    "x": "first record", "y": "second record",
    "local_cost": "'absolute difference' or 'squared difference', c",
    "diagonal_weight": "weight of a diagonal step, w (1 or 2)",
}  # fmt: skip
_SAMPLES = {"x": "first sample", "y": "second sample"}


def _records(x: npt.ArrayLike, y: npt.ArrayLike) -> tuple[npt.NDArray[np.float64], npt.NDArray[np.float64]]:
    first, second = np.asarray(x, dtype=float), np.asarray(y, dtype=float)
    for name, values in (("x", first), ("y", second)):
        if values.ndim != 1 or values.size == 0 or not np.isfinite(values).all():
            raise ArgumentError(name, values, "a list of one or more finite numbers")
    return first, second


@formula(
    "stat.dtw", gives="least cost of warping one record on the other, D", unit="1",
    equation="D(i,j) = min(D(i-1,j) + c, D(i,j-1) + c, D(i-1,j-1) + w c), D(1,1) = w c",
    source="sakoe_chiba_1978", status="secondary", inputs=_RECORDS, domain="same order of events in both records",
    pitfalls="It always finds a match: test against shuffled records. Never warp across a gap.",
)  # fmt: skip
def warping_cost(
    x: npt.ArrayLike,
    y: npt.ArrayLike,
    local_cost: str = "absolute difference",
    diagonal_weight: float = 1,
) -> float:
    """Cost of the best warping path, in the unit of the local cost.

    References
    ----------
    sakoe_chiba_1978
    """
    first, second = _records(x, y)
    difference = np.abs(first[:, None] - second[None, :])
    if local_cost == "squared difference":
        difference = difference**2
    elif local_cost != "absolute difference":
        raise ArgumentError("local_cost", local_cost, "'absolute difference' or 'squared difference'")
    total = np.full((first.size + 1, second.size + 1), math.inf)
    total[0, 0] = 0.0
    for i in range(first.size):
        for j in range(second.size):
            c = difference[i, j]
            total[i + 1, j + 1] = min(
                total[i, j + 1] + c, total[i + 1, j] + c, total[i, j] + diagonal_weight * c
            )
    return float(total[-1, -1])


@formula(
    "stat.dtw_symmetric_normalised", gives="warping cost a step, D/(n + m)", unit="1",
    equation="D(w = 2)/(n + m)", source="sakoe_chiba_1978", status="secondary", inputs=_RECORDS,
    pitfalls="Only the form with w = 2 may be divided by n + m.",
)  # fmt: skip
def normalised_warping_cost(
    x: npt.ArrayLike,
    y: npt.ArrayLike,
    local_cost: str = "absolute difference",
    diagonal_weight: float = 2,
) -> float:
    """Cost of the symmetric form, a step.

    References
    ----------
    sakoe_chiba_1978
    """
    if diagonal_weight != 2:
        raise ArgumentError("diagonal_weight", diagonal_weight, "2 for the normalised form")
    return warping_cost(x, y, local_cost, 2) / (np.size(x) + np.size(y))


@formula(
    "stat.ks_d", gives="largest distance between two cumulative distributions, D", unit="1",
    equation="D = max |F1 - F2|", source="hodges_1958", status="secondary", inputs=_SAMPLES,
    domain="independent samples", pitfalls="Ties make the test conservative; weak in the tails.",
)  # fmt: skip
def ks_distance(x: npt.ArrayLike, y: npt.ArrayLike) -> float:
    """Two-sample Kolmogorov-Smirnov distance.

    References
    ----------
    hodges_1958
    """
    first, second = (np.sort(v) for v in _records(x, y))
    places = np.concatenate([first, second])
    lower = np.searchsorted(first, places, side="right") / first.size
    upper = np.searchsorted(second, places, side="right") / second.size
    return float(np.max(np.abs(lower - upper)))


@formula(
    "stat.ks_p_exact", gives="exact two-sided probability of D, p", unit="1",
    equation="share of lattice paths that leave the band |i/n - j/m| < D", source="hodges_1958",
    status="secondary", inputs=_SAMPLES, domain="no ties; practical below a few hundred values",
)  # fmt: skip
def ks_exact_p(x: npt.ArrayLike, y: npt.ArrayLike) -> float:
    """Exact p of the two-sample distance by counting paths.

    References
    ----------
    hodges_1958
    """
    first, second = _records(x, y)
    n, m = first.size, second.size
    bound = round(ks_distance(x, y) * n * m)
    if bound == 0:
        return 1.0
    ways = [0.0] * (m + 1)
    for i in range(n + 1):
        for j in range(m + 1):
            if abs(i * m - j * n) >= bound:
                ways[j] = 0.0
            elif i == 0 and j == 0:
                ways[j] = 1.0
            elif i == 0:
                ways[j] = ways[j - 1]
            elif j == 0:
                pass
            else:
                # probability form: each path step weighted so that numbers stay near one
                ways[j] = ways[j] * i / (i + j) + ways[j - 1] * j / (i + j)
    return min(max(1.0 - ways[m], 0.0), 1.0)


@formula(
    "stat.ks_critical_asymptotic", gives="critical distance in large samples, D_c", unit="1",
    equation="D_c = sqrt(-ln(a/2)/2) sqrt((n + m)/(n m))", source="hodges_1958", status="secondary",
    inputs={"n": "size of the first sample", "m": "size of the second sample", "alpha": "level, a"},
    positive=("n", "m"), domain="n + m above about 40",
)  # fmt: skip
def ks_critical(n: float, m: float, alpha: float) -> float:
    """Critical distance of the two-sample test.

    References
    ----------
    hodges_1958
    """
    return math.sqrt(-math.log(alpha / 2) / 2) * math.sqrt((n + m) / (n * m))
