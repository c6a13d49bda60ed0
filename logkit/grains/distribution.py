"""Measures of a size distribution from its percentiles, sorting classes, and the mean of the largest clasts."""

from __future__ import annotations

from typing import Any

import numpy as np

from logkit.errors import ArgumentError, nearest
from logkit.registry import formula

PERCENTILES = {
    f"phi{p}": f"phi value than which {p} % by weight is coarser" for p in (5, 16, 25, 50, 75, 84, 95)
}

# standard normal deviates of the percentiles, for a curve given as "normal in phi"
_DEVIATES = {5: -1.6448536269514722, 16: -0.9944578832097531, 25: -0.6744897501960817, 50: 0.0,
             75: 0.6744897501960817, 84: 0.9944578832097531, 95: 1.6448536269514722}  # fmt: skip


def _percentiles(*needed: int) -> Any:
    """A `resolve` that keeps the percentiles a measure needs, or makes them from a normal curve in phi."""

    def resolve(given: dict[str, Any]) -> dict[str, Any]:
        if "distribution" in given:
            if given["distribution"] != "normal in phi":
                raise ArgumentError("distribution", given["distribution"], "'normal in phi'")
            if not np.all(np.asarray(given.get("sd_phi", np.nan), dtype=float) > 0):
                raise ArgumentError("sd_phi", given.get("sd_phi"), "given, and above zero")
            mean, sd = given.get("mean_phi", 0.0), given["sd_phi"]
            return {f"phi{p}": mean + sd * _DEVIATES[p] for p in needed}
        unknown = [name for name in given if name not in PERCENTILES]
        if unknown:
            raise ArgumentError(unknown[0], given[unknown[0]], f"one of {', '.join(PERCENTILES)}")
        # a whole set of percentiles may be handed to every measure: those it does not use are left out
        return {name: value for name, value in given.items() if int(name[3:]) in needed}

    return resolve


def _inputs(*needed: int) -> dict[str, str]:
    return {f"phi{p}": PERCENTILES[f"phi{p}"] for p in needed}


def _ordered(*values: Any) -> tuple[np.ndarray, ...]:
    arrays = tuple(np.asarray(v, dtype=float) for v in values)
    for finer, coarser in zip(arrays[1:], arrays[:-1], strict=True):
        if np.any(finer < coarser):
            raise ArgumentError("phi", [np.asarray(a).tolist() for a in arrays],
                                "rising with the percentile (percentiles count from the coarse end)")  # fmt: skip
    return arrays


@formula(
    "grain.folk_ward_mean",
    gives="graphic mean Mz",
    unit="phi",
    equation="Mz = (phi16 + phi50 + phi84)/3",
    source="folk_ward_1957",
    status="published",
    inputs=_inputs(16, 50, 84),
    domain="cumulative curve known from 16 to 84 %",
    resolve=_percentiles(16, 50, 84),
)
def folk_ward_mean(phi16: Any, phi50: Any, phi84: Any) -> Any:
    """Graphic mean in phi.

    Parameters
    ----------
    phi16, phi50, phi84 : float or array, phi, counted from the coarse end

    References
    ----------
    folk_ward_1957
    """
    p16, p50, p84 = _ordered(phi16, phi50, phi84)
    return (p16 + p50 + p84) / 3.0


@formula(
    "grain.folk_ward_sorting",
    gives="inclusive graphic standard deviation sigma_I",
    unit="phi",
    equation="sigma_I = (phi84 - phi16)/4 + (phi95 - phi5)/6.6",
    source="folk_ward_1957",
    status="published",
    inputs=_inputs(5, 16, 84, 95),
    domain="cumulative curve known from 5 to 95 %",
    scatter="for a normal curve of standard deviation s: 0.9957 s",
    resolve=_percentiles(5, 16, 84, 95),
)
def folk_ward_sorting(phi5: Any, phi16: Any, phi84: Any, phi95: Any) -> Any:
    """Inclusive graphic standard deviation in phi.

    Parameters
    ----------
    phi5, phi16, phi84, phi95 : float or array, phi, counted from the coarse end

    References
    ----------
    folk_ward_1957
    """
    p5, p16, p84, p95 = _ordered(phi5, phi16, phi84, phi95)
    return (p84 - p16) / 4.0 + (p95 - p5) / 6.6


@formula(
    "grain.folk_ward_skewness",
    gives="inclusive graphic skewness Sk_I",
    unit="1",
    equation="Sk_I = (phi16 + phi84 - 2 phi50)/(2 (phi84 - phi16)) + (phi5 + phi95 - 2 phi50)/(2 (phi95 - phi5))",
    source="folk_ward_1957",
    status="memory",
    inputs=_inputs(5, 16, 50, 84, 95),
    domain="cumulative curve known from 5 to 95 %",
    pitfalls="not defined for a sample of one size: NaN",
    resolve=_percentiles(5, 16, 50, 84, 95),
)
def folk_ward_skewness(phi5: Any, phi16: Any, phi50: Any, phi84: Any, phi95: Any) -> Any:
    """Inclusive graphic skewness; NaN for a sample of one size.

    Parameters
    ----------
    phi5, phi16, phi50, phi84, phi95 : float or array, phi, counted from the coarse end

    References
    ----------
    folk_ward_1957
    """
    p5, p16, p50, p84, p95 = _ordered(phi5, phi16, phi50, phi84, phi95)
    inner = _ratio(p16 + p84 - 2 * p50, 2 * (p84 - p16))
    return inner + _ratio(p5 + p95 - 2 * p50, 2 * (p95 - p5))


@formula(
    "grain.folk_ward_kurtosis",
    gives="graphic kurtosis K_G",
    unit="1",
    equation="K_G = (phi95 - phi5)/(2.44 (phi75 - phi25))",
    source="folk_ward_1957",
    status="memory",
    inputs=_inputs(5, 25, 75, 95),
    domain="cumulative curve known from 5 to 95 %",
    pitfalls="not defined for a sample of one size: NaN",
    resolve=_percentiles(5, 25, 75, 95),
)
def folk_ward_kurtosis(phi5: Any, phi25: Any, phi75: Any, phi95: Any) -> Any:
    """Graphic kurtosis; NaN for a sample of one size.

    Parameters
    ----------
    phi5, phi25, phi75, phi95 : float or array, phi, counted from the coarse end

    References
    ----------
    folk_ward_1957
    """
    p5, p25, p75, p95 = _ordered(phi5, phi25, phi75, phi95)
    return _ratio(p95 - p5, 2.44 * (p75 - p25))


def _ratio(above: np.ndarray, below: np.ndarray) -> np.ndarray:
    safe = np.where(below > 0, below, np.nan)
    return np.asarray(above / safe)


SORTING_LIMITS: dict[str, float] = {
    "very well sorted": 0.35,
    "well sorted": 0.5,
    "moderately well sorted": 0.71,
    "moderately sorted": 1.0,
    "poorly sorted": 2.0,
    "very poorly sorted": 4.0,
}
"""Sorting class -> upper limit of sigma_I in phi; above the last one: extremely poorly sorted."""


@formula(
    "grain.sorting_class_upper_limit",
    gives="upper limit of a sorting class",
    unit="phi",
    equation="0.35, 0.50, 0.71, 1.00, 2.00, 4.00 phi",
    source="mchendrie_1988",
    status="published",
    inputs={"class_name": "words of the class"},
    domain="whole rock or sand fraction; say which",
    scatter="none",
    pitfalls="the class `moderately well` is of 1968; the scheme of 1957 had one class 0.50-1.00",
)
def sorting_class_upper_limit(class_name: str) -> float:
    """Upper limit in phi of a sorting class by its words.

    Raises
    ------
    ArgumentError : no such class, or the open one

    References
    ----------
    mchendrie_1988
    """
    key = class_name.casefold().strip()
    if key not in SORTING_LIMITS:
        near = nearest(key, SORTING_LIMITS)
        hint = f" (nearest: {near})" if near else ""
        raise ArgumentError("class_name", class_name, f"one of {', '.join(SORTING_LIMITS)}{hint}")
    return SORTING_LIMITS[key]


def sorting_class(sorting_phi: float) -> str:
    """Words of the sorting class of a graphic standard deviation in phi.

    Raises
    ------
    ArgumentError : negative or not a number
    """
    if not sorting_phi >= 0:
        raise ArgumentError("sorting_phi", sorting_phi, "zero or above")
    return next((w for w, limit in SORTING_LIMITS.items() if sorting_phi < limit), "extremely poorly sorted")


@formula(
    "grain.mps",
    gives="mean size of the largest clasts (MPS)",
    unit="mm",
    equation="mean of the n largest clasts, n = 5 or 10",
    source="ours",
    locator="field practice",
    status="memory",
    inputs={"sizes_m": "sizes of the largest clasts, one axis throughout"},
    positive=("sizes_m",),
    domain="conglomerates",
    scatter="depends on the area searched",
    pitfalls="hydraulic formulas want the intermediate axis; say which axis was measured",
)
def largest_clast_mean(sizes_m: Any) -> float:
    """Mean size in metres of the largest clasts.

    Parameters
    ----------
    sizes_m : sequence of sizes, m

    Raises
    ------
    ArgumentError : no sizes
    """
    values = np.atleast_1d(np.asarray(sizes_m, dtype=float))
    if values.size == 0:
        raise ArgumentError("sizes_m", sizes_m, "one size or more")
    return float(values.mean())
