"""Bed states under a current: the coordinates (D*, theta', Fr), published classifications.

Our own soft edges are kept apart in `bedstates`; ripple geometry is in `ripples`, dunes are in `depth`.
"""

from __future__ import annotations

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.hydraulics.resistance import _DEPTH_OVER_D90, grain_chezy
from logkit.hydraulics.threshold import van_rijn_shields
from logkit.registry import GRAVITY_M_S2, Limit

_FLOW = ("velocity_m_s", "flow_depth_m", "d50_m", "d90_m", "submerged_gravity")
UPPER_PLANE_THETA = 0.70
"""Skin-friction Shields number at which plane beds begin, geometric middle of the observations."""
MU_10C_PA_S = 1.307e-3


@formula(
    "bedforms.skin_shields",
    gives="skin-friction Shields number theta'",
    unit="1",
    equation="theta' = U^2/(R C'^2 D50), C' = 18 log10(4h/D90)",
    source="van_rijn_1984_iii",
    locator="same form in van den Berg & van Gelder 1993",
    domain="sand, plane or rippled bed, h/D90 above about 10",
    scatter="that of the log law",
    status="secondary",
    inputs=SYMBOLS,
    limits=(_DEPTH_OVER_D90,),
    positive=("flow_depth_m", "d50_m", "d90_m", "submerged_gravity"),
    not_negative=("velocity_m_s",),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="Not the total Shields number: over dunes they differ by a factor 2 to 10.",
)
def skin_shields(
    velocity_m_s: Values,
    flow_depth_m: Values,
    d50_m: Values,
    d90_m: Values,
    submerged_gravity: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Skin-friction Shields number of a current.

    Parameters
    ----------
    velocity_m_s : depth-averaged velocity U, m/s
    flow_depth_m : flow depth h, m
    d50_m, d90_m : grain diameters, m
    submerged_gravity : R

    Returns
    -------
    theta', pure number; NaN where 4 h/D90 is not above one

    References
    ----------
    van_rijn_1984_iii, van_den_berg_van_gelder_1993
    """
    chezy = grain_chezy(flow_depth_m, d90_m, g_m_s2)
    return np.square(velocity_m_s / chezy) / (np.asarray(submerged_gravity) * d50_m)


@formula(
    "bedforms.velocity_from_skin_shields",
    gives="depth-averaged velocity U",
    unit="m/s",
    equation="U = C' sqrt(R D50 theta')",
    source="ours",
    locator="inverse of bedforms.skin_shields",
    domain="h/D90 above about 10",
    scatter="half that of theta' in log10",
    status="ours",
    inputs=SYMBOLS,
    limits=(_DEPTH_OVER_D90,),
    positive=("flow_depth_m", "d50_m", "d90_m", "submerged_gravity"),
    not_negative=("theta_skin",),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="Depth matters little; grain size and the value of the edge matter.",
)
def velocity_from_skin_shields(
    theta_skin: Values,
    flow_depth_m: Values,
    d50_m: Values,
    d90_m: Values,
    submerged_gravity: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Velocity that gives a skin-friction Shields number.

    Parameters
    ----------
    theta_skin : theta'
    flow_depth_m : flow depth h, m
    d50_m, d90_m : grain diameters, m
    submerged_gravity : R

    Returns
    -------
    U, m/s
    """
    chezy = grain_chezy(flow_depth_m, d90_m, g_m_s2)
    return chezy * np.sqrt(np.asarray(submerged_gravity) * d50_m * theta_skin)


@formula(
    "bedforms.velocity_at_upper_plane_onset",
    gives="depth-averaged velocity U at which the bed turns plane",
    unit="m/s",
    equation="U = C' sqrt(R D50 theta'_edge), theta'_edge 0.70",
    source="ours",
    locator="edge from the observed onsets 0.5-1.1",
    domain="sand 0.1-0.5 mm, h/D90 above about 10",
    scatter="one sigma 19 % in U",
    status="ours",
    inputs=SYMBOLS | {"theta_skin_edge": "theta' of the edge"},
    limits=(_DEPTH_OVER_D90, Limit("d50_mm", 0.1, 0.5, lambda d50_m, **_: np.asarray(d50_m) * 1e3)),
    positive=("flow_depth_m", "d50_m", "d90_m", "submerged_gravity", "theta_skin_edge"),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="T = 25 is the zero of a dune-height formula, not this edge.",
)
def velocity_at_upper_plane_onset(
    flow_depth_m: Values,
    d50_m: Values,
    d90_m: Values,
    submerged_gravity: Values,
    theta_skin_edge: Values = UPPER_PLANE_THETA,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Velocity at the centre of the edge to upper plane beds.

    Parameters
    ----------
    flow_depth_m : flow depth h, m
    d50_m, d90_m : grain diameters, m
    submerged_gravity : R
    theta_skin_edge : theta' of the edge

    Returns
    -------
    U, m/s
    """
    return velocity_from_skin_shields(theta_skin_edge, flow_depth_m, d50_m, d90_m, submerged_gravity, g_m_s2)


@formula(
    "bedforms.transport_stage",
    gives="transport stage T",
    unit="1",
    equation="T = theta'/theta_cr - 1, theta_cr by threshold.van_rijn_shields",
    source="van_rijn_1984_iii",
    domain="sand 0.19-3.6 mm, depth 0.1-16 m",
    status="secondary",
    inputs=SYMBOLS,
    limits=(
        Limit("d50_mm", 0.19, 3.6, lambda d50_m, **_: np.asarray(d50_m) * 1e3),
        Limit("flow_depth_m", 0.1, 16, lambda flow_depth_m, **_: flow_depth_m),
    ),
    positive=(*_FLOW[1:], "nu_m2_s"),
    not_negative=("velocity_m_s",),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Negative below the threshold; clamp it for display only.",
)
def transport_stage(
    velocity_m_s: Values,
    flow_depth_m: Values,
    d50_m: Values,
    d90_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Excess of the skin stress over the threshold of motion.

    Parameters
    ----------
    velocity_m_s : U, m/s
    flow_depth_m : h, m
    d50_m, d90_m : grain diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    T, pure number

    References
    ----------
    van_rijn_1984_iii, van_rijn_1993
    """
    theta = skin_shields(velocity_m_s, flow_depth_m, d50_m, d90_m, submerged_gravity, g_m_s2)
    dstar = dimensionless_diameter(d50_m, submerged_gravity, nu_m2_s, g_m_s2)
    return theta / van_rijn_shields(dstar) - 1


@formula(
    "bedforms.froude",
    gives="Froude number Fr",
    unit="1",
    equation="Fr = U/sqrt(g h)",
    source="definition",
    domain="free-surface flow",
    scatter="none (definition)",
    status="published",
    inputs=SYMBOLS,
    positive=("flow_depth_m",),
    not_negative=("velocity_m_s",),
)
def froude(velocity_m_s: Values, flow_depth_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Froude number.

    Parameters
    ----------
    velocity_m_s : U, m/s
    flow_depth_m : h, m

    Returns
    -------
    Fr, pure number
    """
    return velocity_m_s / np.sqrt(np.asarray(g_m_s2) * flow_depth_m)


@formula(
    "bedforms.antidune_velocity",
    gives="depth-averaged velocity U over antidunes",
    unit="m/s",
    equation="U = sqrt(g lambda/(2 pi))",
    source="kennedy_1963",
    domain="Fr about 0.84 and up",
    status="memory",
    inputs=SYMBOLS | {"wavelength_m": "antidune wavelength lambda"},
    positive=("wavelength_m",),
    pitfalls='"Antidunes need Fr > 1" is wrong.',
)
def antidune_velocity(wavelength_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Velocity from the wavelength of antidunes.

    Parameters
    ----------
    wavelength_m : lambda, m

    Returns
    -------
    U, m/s

    References
    ----------
    kennedy_1963
    """
    return np.sqrt(np.asarray(g_m_s2) * wavelength_m / (2 * np.pi))


@formula(
    "bedforms.ten_degree_length_factor",
    gives="factor on lengths for the equivalent flow in 10 °C water",
    unit="1",
    equation="(mu10/mu)^(2/3)",
    source="southard_boguchwal_1990",
    locator="exponents from Boguchwal 1977",
    domain="one ratio of grain to fluid density",
    scatter="exact scaling",
    status="published",
    inputs=SYMBOLS,
    positive=("mu_pa_s",),
    resolve=Fluid(("mu_pa_s",)),
    homogeneous=False,
)
def ten_degree_length_factor(mu_pa_s: Values) -> Values:
    """Factor on grain size and depth that gives the flow in water of 10 °C.

    Parameters
    ----------
    mu_pa_s : dynamic viscosity of the water, Pa s

    Returns
    -------
    factor, pure number

    References
    ----------
    boguchwal_1977, southard_boguchwal_1990
    """
    return np.cbrt(MU_10C_PA_S / np.asarray(mu_pa_s)) ** 2


@formula(
    "bedforms.ten_degree_velocity_factor",
    gives="factor on velocities for the equivalent flow in 10 °C water",
    unit="1",
    equation="(mu10/mu)^(1/3)",
    source="southard_boguchwal_1990",
    locator="exponents from Boguchwal 1977",
    domain="one ratio of grain to fluid density",
    scatter="exact scaling",
    status="published",
    inputs=SYMBOLS,
    positive=("mu_pa_s",),
    resolve=Fluid(("mu_pa_s",)),
    homogeneous=False,
)
def ten_degree_velocity_factor(mu_pa_s: Values) -> Values:
    """Factor on velocity that gives the flow in water of 10 °C.

    Parameters
    ----------
    mu_pa_s : dynamic viscosity of the water, Pa s

    Returns
    -------
    factor, pure number

    References
    ----------
    boguchwal_1977, southard_boguchwal_1990
    """
    return np.cbrt(MU_10C_PA_S / np.asarray(mu_pa_s))


_STAGE_EDGES = (0.0, 3.0, 10.0, 15.0, 25.0)
_FINE_CLASSES = ("no motion", "mini-ripples", "mega-ripples and dunes", "dunes", "washed-out dunes")
_COARSE_CLASSES = ("no motion", "dunes", "dunes", "dunes", "washed-out dunes")


@formula(
    "bedforms.van_rijn_classes",
    gives="name of the bed state in van Rijn's classification",
    unit="",
    equation="T 3, 10, 15, 25 with D* 10 and Fr 0.8 as limits",
    source="van_rijn_1993",
    locator="van Rijn 1984 part III for the classes below T = 25",
    domain="sand 0.19-3.6 mm, depth 0.1-16 m",
    status="secondary",
    inputs=SYMBOLS | {"transport_stage": "transport stage T", "froude": "Froude number Fr"},
    positive=("dstar",),
    not_negative=("froude",),
    pitfalls="A published classification, shown as such; flume plane beds begin at T 8-20, not 25.",
)
def van_rijn_classes(transport_stage: Values, dstar: Values, froude: Values) -> Values:
    """Bed state by van Rijn's limits.

    Parameters
    ----------
    transport_stage : T
    dstar : D*
    froude : Fr

    Returns
    -------
    name, or array of names; "" where an input is NaN

    References
    ----------
    van_rijn_1984_iii, van_rijn_1993
    """
    stage, size, fr = np.broadcast_arrays(
        *(np.asarray(v, dtype=float) for v in (transport_stage, dstar, froude))
    )
    row = np.minimum(np.searchsorted(_STAGE_EDGES, stage, side="right"), len(_STAGE_EDGES))
    upper = np.where(fr < 0.8, "symmetrical sand waves", "plane bed or antidunes")
    fine, coarse = (np.take(names, row, mode="clip") for names in (_FINE_CLASSES, _COARSE_CLASSES))
    low = np.where(size <= 10, fine, coarse)
    name = np.where(row == len(_STAGE_EDGES), upper, low)
    name = np.where(np.isnan(stage) | np.isnan(size) | np.isnan(fr), "", name)
    return str(name) if name.ndim == 0 else name
