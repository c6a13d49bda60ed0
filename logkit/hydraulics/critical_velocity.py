"""Depth-averaged velocity at the threshold of motion, where the flow depth is known.

The threshold itself is in `threshold`; velocities that need no depth are in `competence`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, above_one, formula
from logkit.hydraulics.resistance import ks_grain, log_law
from logkit.hydraulics.threshold import critical_shear_velocity
from logkit.registry import GRAVITY_M_S2, Limit


@formula(
    "threshold.van_rijn_ucr",
    gives="depth-averaged critical velocity Ucr",
    unit="m/s",
    equation="0.19 D50^0.1 log10(4h/D90) to 0.5 mm; 8.5 D50^0.6 log10(4h/D90) above",
    source="van_rijn_1984_iii",
    domain="0.1-2 mm",
    scatter="within 12 % of the main curve with the log law",
    status="published",
    inputs=SYMBOLS,
    limits=(Limit("d50_mm", 0.1, 2, lambda d50_m, **_: np.asarray(d50_m) * 1e3),),
    positive=("d50_m", "d90_m", "flow_depth_m"),
    homogeneous=False,
    pitfalls="Coefficients carry dimensions: metres.",
)
def van_rijn_ucr(d50_m: Values, d90_m: Values, flow_depth_m: Values) -> Values:
    """Depth-averaged velocity at which sand begins to move.

    Parameters
    ----------
    d50_m, d90_m : grain diameters, m
    flow_depth_m : flow depth, m

    Returns
    -------
    Ucr, m/s

    References
    ----------
    van_rijn_1984_iii
    """
    d = np.asarray(d50_m, dtype=float)
    depth_term = np.log10(above_one(4 * np.asarray(flow_depth_m) / d90_m))
    return np.where(d <= 0.5e-3, 0.19 * d**0.1, 8.5 * d**0.6) * depth_term


@formula(
    "threshold.ucr_log_law",
    gives="depth-averaged critical velocity Ucr",
    unit="m/s",
    equation="Ucr = 2.5 u*_cr ln(11 h/ks), ks = 2.5 D50",
    source="ours",
    locator="threshold.critical_shear_velocity with resistance.log_law",
    domain="rough plane bed, h/ks above about 3",
    scatter="that of the threshold",
    status="ours",
    inputs=SYMBOLS,
    limits=(
        Limit("h/ks", 3, None, lambda d50_m, flow_depth_m, **_: np.divide(flow_depth_m, ks_grain(d50_m))),
    ),
    positive=("d50_m", "flow_depth_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Below about 0.5 mm the bed is not fully rough.",
)
def ucr_log_law(
    d50_m: Values,
    flow_depth_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Depth-averaged velocity at which grains of any size begin to move.

    Parameters
    ----------
    d50_m : grain diameter, m
    flow_depth_m : flow depth, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    Ucr, m/s
    """
    shear = critical_shear_velocity(d50_m, submerged_gravity, nu_m2_s, g_m_s2)
    return shear * log_law(flow_depth_m, ks_grain(d50_m))


@formula(
    "threshold.zanke",
    gives="depth-averaged critical velocity Ucr",
    unit="m/s",
    equation="Ucr = 2.8 (sqrt(R g D) + 5.25 (nu/D) c)",
    source="zanke_1977",
    domain="sand, silt",
    status="secondary",
    inputs=SYMBOLS | {"cohesion": "cohesion coefficient c, 1 for none"},
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="The cohesion coefficient cannot be measured on rock.",
)
def zanke(
    d_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    cohesion: Values = 1.0,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Depth-averaged critical velocity by Zanke.

    Parameters
    ----------
    d_m : grain diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    cohesion : coefficient c, 1 without cohesion

    Returns
    -------
    Ucr, m/s

    References
    ----------
    zanke_1977
    """
    return 2.8 * (
        np.sqrt(np.asarray(submerged_gravity) * g_m_s2 * d_m) + 5.25 * np.asarray(nu_m2_s) / d_m * cohesion
    )
