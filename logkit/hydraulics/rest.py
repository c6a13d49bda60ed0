"""Velocities at which grains come to rest: three mechanisms that must be named, never one number.

The erosion line and thresholds of motion are in `competence` and `threshold`.
"""

from __future__ import annotations

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.bedforms import velocity_from_skin_shields
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.hydraulics.resistance import _DEPTH_OVER_D90, grain_chezy
from logkit.hydraulics.settling import ferguson_church
from logkit.hydraulics.threshold import soulsby_whitehouse
from logkit.registry import GRAVITY_M_S2, Limit

TWO_THIRDS_CESSATION = 4 / 9
"""Cessation ratio that makes the stopping velocity two thirds of the entrainment velocity."""

_BED = ("d50_m", "d90_m", "flow_depth_m", "submerged_gravity", "nu_m2_s")


@formula(
    "rest.hjulstrom_deposition",
    gives="mean velocity of the classical deposition line U",
    unit="m/s",
    equation="U = 77 D/(1 + 24 D)",
    source="miedema_2010",
    locator="fit to Hjulstrom 1935",
    domain="flows about 1 m deep, 0.01-100 mm",
    scatter="factor 1.5-2",
    status="memory",
    inputs=SYMBOLS,
    limits=(Limit("d_mm", 0.01, 100, lambda d_m, **_: np.asarray(d_m) * 1e3),),
    positive=("d_m",),
    homogeneous=False,
    pitfalls="Behaves like a settling line: rolling sand really stops ten times faster than it says.",
)
def hjulstrom_deposition(d_m: Values) -> Values:
    """Deposition line of the classical velocity-size diagram, as an algebraic fit.

    Parameters
    ----------
    d_m : grain diameter, m

    Returns
    -------
    U, m/s

    References
    ----------
    hjulstrom_1935, miedema_2010
    """
    d = np.asarray(d_m, dtype=float)
    return 77 * d / (1 + 24 * d)


@formula(
    "rest.bedload_stop_velocity",
    gives="depth-averaged velocity U at which rolling and hopping grains stop",
    unit="m/s",
    equation="theta' = c theta_cr, U = C' sqrt(R D50 theta')",
    source="sundborg_1956",
    locator="two-thirds rule c = 4/9; c = 0.8 ours",
    domain="bed load, non-cohesive",
    scatter="0.67-1.0 of the entrainment velocity",
    status="ours",
    inputs=SYMBOLS | {"cessation_ratio": "c, share of the threshold at which motion stops"},
    limits=(
        _DEPTH_OVER_D90,
        Limit("cessation_ratio", 0.44, 1, lambda cessation_ratio, **_: cessation_ratio),
    ),
    positive=(*_BED, "cessation_ratio"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
)
def bedload_stop_velocity(
    d50_m: Values,
    d90_m: Values,
    flow_depth_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    cessation_ratio: Values = 0.8,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Velocity at which bed load stops.

    Parameters
    ----------
    d50_m, d90_m : grain diameters, m
    flow_depth_m : h, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    cessation_ratio : c, 0.8-1, or `TWO_THIRDS_CESSATION`

    Returns
    -------
    U, m/s

    References
    ----------
    sundborg_1956, menard_1950
    """
    theta = cessation_ratio * soulsby_whitehouse(
        dimensionless_diameter(d50_m, submerged_gravity, nu_m2_s, g_m_s2)
    )
    return velocity_from_skin_shields(theta, flow_depth_m, d50_m, d90_m, submerged_gravity, g_m_s2)


@formula(
    "rest.fallout_velocity",
    gives="depth-averaged velocity U at which suspended grains fall out",
    unit="m/s",
    equation="u* = c ws, U = u* C'/sqrt(g); c = 1 at Rouse number 2.5",
    source="bagnold_1966",
    locator="combination ours",
    domain="suspended sand and silt, single grains",
    scatter="u* 0.4-1.0 ws",
    status="ours",
    inputs=SYMBOLS | {"ustar_over_ws": "shear velocity over settling velocity at fall-out"},
    limits=(_DEPTH_OVER_D90,),
    positive=(*_BED, "ustar_over_ws"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Silt and clay flocculate, so values for single grains are too low.",
)
def fallout_velocity(
    d50_m: Values,
    d90_m: Values,
    flow_depth_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    ustar_over_ws: Values = 1.0,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Velocity below which suspended grains rain out.

    Parameters
    ----------
    d50_m, d90_m : grain diameters, m
    flow_depth_m : h, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    ustar_over_ws : u*/ws at fall-out, 1 for Rouse number 2.5

    Returns
    -------
    U, m/s

    References
    ----------
    bagnold_1966
    """
    shear = ustar_over_ws * ferguson_church(d50_m, submerged_gravity, nu_m2_s, g_m_s2=g_m_s2)
    return shear * grain_chezy(flow_depth_m, d90_m, g_m_s2) / np.sqrt(g_m_s2)
