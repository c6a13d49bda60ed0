"""River slope from grain size and depth: three relations that agree in one place only.

Stress from slope and depth is in `resistance`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.registry import Limit

_MEANINGS = SYMBOLS | {
    "bankfull_depth_m": "bankfull depth Hbf",
    "depth_m": "depth H",
    "theta_bankfull": "bankfull Shields number",
}


@formula(
    "slope.trampush",
    gives="slope S",
    unit="1",
    equation="log10 S = -2.08 + 0.254 log10 D50 - 1.09 log10 Hbf",
    source="trampush_2014",
    domain="541 modern bankfull reaches on Earth",
    scatter="standard errors 0.036, 0.016, 0.044; residual about a factor 2",
    status="secondary",
    inputs=_MEANINGS,
    positive=("d50_m", "bankfull_depth_m"),
    homogeneous=False,
    pitfalls="Carry the residual factor 2, not only the parameter errors.",
)
def trampush(d50_m: Values, bankfull_depth_m: Values) -> Values:
    """Slope by regression on grain size and bankfull depth.

    Parameters
    ----------
    d50_m : median diameter, m
    bankfull_depth_m : Hbf, m

    Returns
    -------
    S, pure number

    References
    ----------
    trampush_2014
    """
    exponent = -2.08 + 0.254 * np.log10(d50_m) - 1.09 * np.log10(bankfull_depth_m)
    return np.exp(np.log(10) * exponent)


@formula(
    "slope.constant_shields",
    gives="slope S",
    unit="1",
    equation="S = tau*_bf R D50/H, tau*_bf = 1.86",
    source="holbrook_wanas_2014",
    domain="sand-bed rivers",
    status="memory",
    inputs=_MEANINGS,
    limits=(Limit("d50_mm", 0.0625, 2, lambda d50_m, **_: np.asarray(d50_m) * 1e3),),
    positive=("d50_m", "depth_m", "submerged_gravity", "theta_bankfull"),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="Never for gravel (Dunne & Jerolmack 2018: two separate states).",
)
def constant_shields(
    d50_m: Values, depth_m: Values, submerged_gravity: Values, theta_bankfull: Values = 1.86
) -> Values:
    """Slope of a sand-bed river from a constant bankfull Shields number.

    Parameters
    ----------
    d50_m : median diameter, m
    depth_m : H, m
    submerged_gravity : R
    theta_bankfull : bankfull Shields number

    Returns
    -------
    S, pure number

    References
    ----------
    holbrook_wanas_2014, dunne_jerolmack_2018
    """
    return theta_bankfull * np.asarray(submerged_gravity) * d50_m / depth_m


@formula(
    "slope.paola_mohrig",
    gives="slope S",
    unit="1",
    equation="S = 0.094 D50/H",
    source="paola_mohrig_1996",
    domain="gravel-bed braided rivers",
    scatter="factor 2",
    status="memory",
    inputs=_MEANINGS,
    limits=(Limit("d50_mm", 2, None, lambda d50_m, **_: np.asarray(d50_m) * 1e3),),
    positive=("d50_m", "depth_m"),
    pitfalls="Not for sand.",
)
def paola_mohrig(d50_m: Values, depth_m: Values) -> Values:
    """Slope of a braided gravel river.

    Parameters
    ----------
    d50_m : median diameter, m
    depth_m : H, m

    Returns
    -------
    S, pure number

    References
    ----------
    paola_mohrig_1996
    """
    return 0.094 * np.asarray(d50_m) / depth_m
