"""Current ripples: their size at equilibrium, their index, and the grain sizes at which ripples and dunes end.

Ripples give no depth. Wave ripples are in `wave_ripples`.
"""

from __future__ import annotations

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.registry import GRAVITY_M_S2, Limit

_RIPPLE_DSTAR = Limit(
    "D*",
    1.2,
    16,
    lambda d50_m, submerged_gravity, nu_m2_s, g_m_s2, **_: dimensionless_diameter(
        d50_m, submerged_gravity, nu_m2_s, g_m_s2
    ),
)


@formula(
    "bedforms.ripple_height",
    gives="equilibrium height of current ripples",
    unit="mm",
    equation="eta = 202 D50 D*^-0.554",
    source="soulsby_2012",
    domain="1.2 < D* < 16",
    scatter="observed heights within 1-15 %",
    status="secondary",
    inputs=SYMBOLS,
    limits=(_RIPPLE_DSTAR,),
    positive=("d50_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Ripple size depends neither on depth nor on velocity: it gives no depth.",
)
def ripple_height(
    d50_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Height of current ripples at equilibrium.

    Parameters
    ----------
    d50_m : median diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    eta, m (shown in mm)

    References
    ----------
    soulsby_2012, baas_1994
    """
    dstar = dimensionless_diameter(d50_m, submerged_gravity, nu_m2_s, g_m_s2)
    return 202 * np.asarray(d50_m) * dstar**-0.554


@formula(
    "bedforms.ripple_length",
    gives="equilibrium length of current ripples",
    unit="mm",
    equation="lambda = D50 (500 + 1881 D*^-1.5)",
    source="soulsby_2012",
    domain="1.2 < D* < 16",
    scatter="observed lengths within 5-15 %",
    status="secondary",
    inputs=SYMBOLS,
    limits=(_RIPPLE_DSTAR,),
    positive=("d50_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Ripple size depends neither on depth nor on velocity: it gives no depth.",
)
def ripple_length(
    d50_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Length of current ripples at equilibrium.

    Parameters
    ----------
    d50_m : median diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    lambda, m (shown in mm)

    References
    ----------
    soulsby_2012, baas_1994
    """
    dstar = dimensionless_diameter(d50_m, submerged_gravity, nu_m2_s, g_m_s2)
    return d50_m * (500 + 1881 * dstar**-1.5)


_INDEX = {"current ripples": {"lower": 8.0, "upper": 12.0}, "wave ripples": {"lower": 5.0, "upper": 8.0}}


@formula(
    "bedforms.ripple_index",
    gives="length over height of ripples, bound",
    unit="1",
    equation="current ripples 8-12, wave vortex ripples 5-8",
    source="ours",
    locator="from bedforms.ripple_length over ripple_height, and the steepness cap 0.17",
    domain="sand",
    scatter="wave ripples in the field 4-17: complete overlap at 8-12",
    status="ours",
    inputs={"kind": "one of " + ", ".join(repr(k) for k in _INDEX), "bound": '"lower" or "upper"'},
    pitfalls="Never decide wave or current from the index alone.",
)
def ripple_index(kind: str, bound: str) -> float:
    """Bound of the ripple index.

    Parameters
    ----------
    kind : "current ripples" or "wave ripples"
    bound : "lower" or "upper"

    Returns
    -------
    length over height, pure number
    """
    return float(chosen("bound", bound, chosen("kind", kind, _INDEX)))


_SIZE_LIMITS = {"ripples end": 0.7e-3, "dunes begin": 0.12e-3}


@formula(
    "bedforms.size_limits",
    gives="grain size at which ripples end or dunes begin",
    unit="mm",
    equation="ripples absent above about 0.7 mm; dunes absent below about 0.12 mm",
    source="leeder_1980",
    locator="for the reason; sizes recalled from classical diagrams",
    domain="quartz in water",
    scatter="soft: dunes 0.10-0.15 mm; ripples to D* 10 (0.40-0.47 mm) by van Rijn",
    status="memory",
    inputs={"limit": "one of " + ", ".join(repr(k) for k in _SIZE_LIMITS)},
    homogeneous=False,
    pitfalls="The criterion of bedforms.soft_criterion gates at D* 12 and 0.13 mm, softly.",
)
def size_limits(limit: str) -> float:
    """Grain size at which a bed form ends.

    Parameters
    ----------
    limit : "ripples end" or "dunes begin"

    Returns
    -------
    D, m (shown in mm)

    References
    ----------
    leeder_1980
    """
    return float(chosen("limit", limit, _SIZE_LIMITS))
