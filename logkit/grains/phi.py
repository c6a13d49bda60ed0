"""The phi scale and the class label as numbers. Formulas only: labels and limits are in `scales`."""

from __future__ import annotations

from typing import Any

import numpy as np

from logkit.errors import ArgumentError
from logkit.grains.scales import scale
from logkit.registry import formula


@formula(
    "grain.phi_from_diameter",
    gives="phi value",
    unit="phi",
    equation="phi = -log2(D / 1 mm)",
    source="krumbein_1934",
    status="published",
    inputs={"d_m": "grain diameter D"},
    positive=("d_m",),
    domain="any size above zero",
    scatter="none (definition)",
    homogeneous=False,
    pitfalls="phi rises as size falls; a coarse limit is the smaller phi",
)
def phi_from_diameter(d_m: Any) -> Any:
    """Phi value of a diameter in metres.

    Parameters
    ----------
    d_m : float or array, m

    Returns
    -------
    phi, dimensionless, shape of `d_m`

    References
    ----------
    krumbein_1934
    """
    # 0.25 mm passes through 0.25e-3 m: rounding keeps the exact powers of two exact
    return -np.log2(np.asarray(d_m, dtype=float) * 1000.0)


@formula(
    "grain.diameter_from_phi",
    gives="grain diameter D",
    unit="mm",
    equation="D = 2^-phi mm",
    source="krumbein_1934",
    status="published",
    inputs={"phi": "phi value"},
    domain="any phi",
    scatter="none (definition)",
    homogeneous=False,
)
def diameter_from_phi(phi: Any) -> Any:
    """Diameter in metres of a phi value.

    Parameters
    ----------
    phi : float or array

    Returns
    -------
    diameter, m, shape of `phi`

    References
    ----------
    krumbein_1934
    """
    return np.exp2(-np.asarray(phi, dtype=float)) * 1e-3


def _limits(class_name: str, scale_name: str) -> tuple[float, float]:
    found = scale(scale_name).find(class_name)
    if found is None:
        allowed = f"a class of the scale {scale_name}: {', '.join(scale(scale_name))}"
        raise ArgumentError("class_name", class_name, allowed)
    return found.low_mm * 1e-3, found.high_mm * 1e-3


@formula(
    "grain.udden_wentworth",
    gives="finer and coarser limit of a class",
    unit="mm",
    equation="limits are powers of two in mm",
    source="wentworth_1922",
    status="published",
    inputs={"class_name": "label of the class"},
    domain="sedimentological descriptions",
    scatter="none; a class label is an interval",
    homogeneous=False,
    pitfalls="the sand limit is 0.0625 mm, not 0.063",
)
def udden_wentworth(class_name: str) -> Any:
    """Limits (finer, coarser) in metres of a class of the Udden-Wentworth scale.

    Raises
    ------
    ArgumentError : no such class

    References
    ----------
    wentworth_1922
    """
    return np.array(_limits(class_name, "wentworth"))


@formula(
    "grain.half_phi",
    gives="finer and coarser limit of a half class",
    unit="mm",
    equation="limit = 2^-(k + 1/2) mm; L the finer, U the coarser half",
    source="usgs_2006_1195",
    status="published",
    inputs={"class_name": "label of the half class, vfL to vcU"},
    domain="sand",
    scatter="none",
    homogeneous=False,
    pitfalls="U means coarser, not higher in the bed; the names L and U are field usage",
)
def half_phi(class_name: str) -> Any:
    """Limits (finer, coarser) in metres of a half-phi sand class.

    Raises
    ------
    ArgumentError : no such half class

    References
    ----------
    usgs_2006_1195
    """
    found = scale("wentworth").find(class_name)
    if found is None or found.name[-1] not in "LU":
        halves = [name for name in scale("wentworth") if name[-1] in "LU"]
        raise ArgumentError("class_name", class_name, f"a half class: {', '.join(halves)}")
    return np.array((found.low_mm, found.high_mm)) * 1e-3


@formula(
    "grain.iso14688",
    gives="finer and coarser limit of a class",
    unit="mm",
    equation="limits 0.002, 0.0063, 0.02, 0.063, 0.2, 0.63, 2, 6.3, 20, 63, 200, 630 mm",
    source="iso_14688_1",
    status="secondary",
    inputs={"class_name": "label of the class"},
    domain="engineering exports",
    scatter="none",
    homogeneous=False,
    pitfalls="never mix with Udden-Wentworth: medium sand is 0.2-0.63 mm here",
)
def iso14688(class_name: str) -> Any:
    """Limits (finer, coarser) in metres of a class of ISO 14688-1.

    Raises
    ------
    ArgumentError : no such class

    References
    ----------
    iso_14688_1
    """
    return np.array(_limits(class_name, "iso14688"))


@formula(
    "grain.class_midpoint",
    gives="geometric middle of a class or interval",
    unit="mm",
    equation="sqrt(D_low D_high); uniform in log D: sd of log10 D = log10(D_high/D_low)/sqrt(12)",
    source="ours",
    status="ours",
    inputs={"low_m": "finer limit", "high_m": "coarser limit"},
    positive=("low_m", "high_m"),
    domain="closed classes",
    scatter="the width of the class",
    pitfalls="a written range is one wide state, not grading; an open class has no middle",
    resolve=lambda given: _from_class(given),
)
def class_midpoint(low_m: Any, high_m: Any) -> Any:
    """Geometric middle of a class in metres; by public names also from `class_name` (and `scale`).

    Parameters
    ----------
    low_m, high_m : float or array, limits of the class, m

    Returns
    -------
    middle, m

    Raises
    ------
    ArgumentError : unknown class, or one that is open on a side
    """
    return np.sqrt(np.asarray(low_m, dtype=float) * np.asarray(high_m, dtype=float))


def class_spread(low_mm: float, high_mm: float) -> float:
    """Standard deviation of log10 D inside a class, decades: uniform between the limits."""
    return float(np.log10(high_mm / low_mm) / np.sqrt(12.0))


def _from_class(given: dict[str, Any]) -> dict[str, Any]:
    if "class_name" not in given:
        return given
    name = given["class_name"]
    table = scale(given.get("scale", "wentworth"))
    found = table.find(name)
    if found is None or found.open_end:
        closed = [c.name for c in table.values() if not c.open_end]
        raise ArgumentError("class_name", name, f"a closed class of the scale: {', '.join(closed)}")
    return {"low_m": found.low_mm * 1e-3, "high_m": found.high_mm * 1e-3}
