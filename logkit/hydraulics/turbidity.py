"""Turbidity currents: what their deposits can and cannot say. The river ladder of bed states never applies.

Settling and suspension criteria are in `settling` and `suspension`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.registry import GRAVITY_M_S2, Limit

DRAG = 0.004
INTERFACE_SHARE = 0.43
_MEANINGS = SYMBOLS | {
    "thickness_m": "thickness of the current h",
    "drag_coefficient": "bed drag coefficient Cd",
    "interface_ratio": "share a of the upper interface",
    "aggradation_rate_m_s": "aggradation rate r",
    "efficiency": "efficiency e, 1 as the necessary limit",
}


@formula(
    "turbidity.suspension_velocity",
    gives="velocity of the current U",
    unit="m/s",
    equation="u* = ws, U = u*/sqrt(Cd)",
    source="bagnold_1966",
    locator="Komar 1985 for its use",
    domain="dilute part of the flow",
    scatter="u* 0.4-1.0 ws, Cd a factor 2.5",
    status="secondary",
    inputs=_MEANINGS,
    positive=("drag_coefficient",),
    not_negative=("ws_m_s",),
    pitfalls="Reduce ws for concentration; suspension estimates exceed those from structures.",
)
def suspension_velocity(ws_m_s: Values, drag_coefficient: Values = DRAG) -> Values:
    """Velocity that holds the coarse suspended size.

    Parameters
    ----------
    ws_m_s : settling velocity of the coarse suspended size, m/s
    drag_coefficient : Cd, 0.002-0.005 at field scale

    Returns
    -------
    U, m/s

    References
    ----------
    bagnold_1966, komar_1985
    """
    return np.asarray(ws_m_s) / np.sqrt(drag_coefficient)


@formula(
    "turbidity.normal_flow_velocity",
    gives="velocity of the current U",
    unit="m/s",
    equation="U = sqrt(g R C h S/(Cd (1 + a)))",
    source="parker_1987",
    domain="steady, thick relative to roughness",
    scatter="Cd 0.002-0.005 at field scale",
    status="secondary",
    inputs=_MEANINGS,
    positive=("concentration_vol", "thickness_m", "slope", "submerged_gravity", "drag_coefficient"),
    not_negative=("interface_ratio",),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="Only as an upper check: concentration and thickness are rarely known.",
)
def normal_flow_velocity(
    concentration_vol: Values,
    thickness_m: Values,
    slope: Values,
    submerged_gravity: Values,
    drag_coefficient: Values = DRAG,
    interface_ratio: Values = INTERFACE_SHARE,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Velocity of a current in balance with bed and interface drag.

    Parameters
    ----------
    concentration_vol : volume fraction C
    thickness_m : h, m
    slope : S
    submerged_gravity : R
    drag_coefficient : Cd
    interface_ratio : a

    Returns
    -------
    U, m/s

    References
    ----------
    parker_1987
    """
    push = np.asarray(submerged_gravity) * g_m_s2 * concentration_vol * thickness_m * slope
    return np.sqrt(push / (drag_coefficient * (1 + np.asarray(interface_ratio))))


@formula(
    "turbidity.densimetric_froude",
    gives="densimetric Froude number Frd of normal flow",
    unit="1",
    equation="Frd = sqrt(S/(Cd (1 + a)))",
    source="parker_1987",
    domain="steady, thick relative to roughness",
    status="secondary",
    inputs=_MEANINGS,
    positive=("slope", "drag_coefficient"),
    not_negative=("interface_ratio",),
)
def densimetric_froude(
    slope: Values, drag_coefficient: Values = DRAG, interface_ratio: Values = INTERFACE_SHARE
) -> Values:
    """Densimetric Froude number of a current in balance.

    Parameters
    ----------
    slope : S
    drag_coefficient : Cd
    interface_ratio : a

    Returns
    -------
    Frd, pure number

    References
    ----------
    parker_1987
    """
    return np.sqrt(np.asarray(slope) / (drag_coefficient * (1 + np.asarray(interface_ratio))))


@formula(
    "turbidity.autosuspension_size",
    gives="coarsest grain that keeps itself in suspension",
    unit="mm",
    equation="ws(D) = e U sin(atan S), ws by settling.ferguson_church 18/1.0",
    source="bagnold_1962",
    locator="Knapp 1938; Bagnold 1962",
    domain="self-maintaining suspension",
    scatter="e smaller in practice",
    status="memory",
    inputs=_MEANINGS,
    positive=("velocity_m_s", "slope", "submerged_gravity", "nu_m2_s", "efficiency"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
)
def autosuspension_size(
    velocity_m_s: Values,
    slope: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    efficiency: Values = 1.0,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Coarsest grain a current can carry down its slope for ever.

    Parameters
    ----------
    velocity_m_s : U, m/s
    slope : S
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    efficiency : e

    Returns
    -------
    D, m (shown in mm)

    References
    ----------
    knapp_1938, bagnold_1962
    """
    ws = np.asarray(efficiency) * velocity_m_s * np.sin(np.arctan(slope))
    return _size_of_settling_velocity(ws, submerged_gravity, nu_m2_s, g_m_s2)


def _size_of_settling_velocity(ws: Values, gravity: Values, nu: Values, g: Values) -> Values:
    """Diameter that settles at ws by Ferguson & Church 18/1.0: its fixed point contracts."""
    pull = np.asarray(gravity) * g
    d = np.sqrt(np.asarray(nu) * ws / pull) + np.square(ws) / pull
    for _ in range(200):
        new = np.sqrt(ws * (18 * np.asarray(nu) + np.sqrt(0.75 * pull * d**3)) / pull)
        if np.all((np.abs(new - d) <= 1e-10 * d) | np.isnan(d)):
            return new
        d = new
    return new


@formula(
    "turbidity.p_massive",
    gives="probability that a bed is massive at this aggradation rate",
    unit="1",
    equation="1/(1 + exp(-1.702 (log10 r - log10 1.3)/0.5)), r in mm/s",
    source="ours",
    locator="between lamination seen to 4 mm/s and massive above 0.44 mm/s",
    domain="sand",
    scatter="half a decade is the assumed sigma",
    status="ours",
    inputs=_MEANINGS,
    positive=("aggradation_rate_m_s",),
    homogeneous=False,
    pitfalls="Where ripples climb, the climb angle is the better rate meter.",
)
def p_massive(aggradation_rate_m_s: Values) -> Values:
    """Probability that fall-out was too fast for lamination.

    Parameters
    ----------
    aggradation_rate_m_s : r, m/s

    Returns
    -------
    probability

    References
    ----------
    leclair_arnott_2005, sumner_2008, arnott_hand_1989
    """
    decades = np.log10(np.asarray(aggradation_rate_m_s) * 1e3 / 1.3)
    return 1 / (1 + np.exp(-1.702 * decades / 0.5))


@formula(
    "turbidity.climb_aggradation_rate",
    gives="aggradation rate of climbing ripples r",
    unit="mm/s",
    equation="r = migration rate x tan(climb angle)",
    source="allen_1984",
    locator="geometry",
    domain="climbing ripples",
    status="published",
    inputs={"climb_deg": "angle of climb", "migration_m_s": "migration rate of the ripples"},
    limits=(Limit("climb_deg", 0, 60, lambda climb_deg, **_: climb_deg),),
    not_negative=("climb_deg", "migration_m_s"),
)
def climb_aggradation_rate(climb_deg: Values, migration_m_s: Values) -> Values:
    """Aggradation rate from the climb of ripples.

    Parameters
    ----------
    climb_deg : angle of climb, degrees
    migration_m_s : migration rate, m/s

    Returns
    -------
    r, m/s (shown in mm/s)
    """
    return np.tan(np.deg2rad(climb_deg)) * migration_m_s


@formula(
    "turbidity.lamination_rate_upper",
    gives="highest aggradation rate at which parallel lamination was seen",
    unit="mm/s",
    equation="4 mm/s",
    source="leclair_arnott_2005",
    domain="sand",
    status="published",
    inputs={},
    homogeneous=False,
)
def lamination_rate_upper() -> float:
    """Highest aggradation rate with parallel lamination.

    Returns
    -------
    rate, m/s (shown in mm/s)

    References
    ----------
    leclair_arnott_2005
    """
    return 4e-3


_WASHOUT = {"lower": 0.009, "upper": 0.016}


@formula(
    "turbidity.ripple_washout_concentration",
    gives="near-bed volume fraction at which ripples wash out, bound",
    unit="1",
    equation="0.9-1.6 vol % 1 cm above the crests",
    source="baas_de_koning_1995",
    domain="sand of 0.108 mm",
    scatter="the range",
    status="published",
    inputs={"bound": '"lower" or "upper"'},
    pitfalls="Near-bed value, not the mean of the layer.",
)
def ripple_washout_concentration(bound: str) -> float:
    """Bound of the concentration at which ripples wash out.

    Parameters
    ----------
    bound : "lower" or "upper"

    Returns
    -------
    volume fraction

    References
    ----------
    baas_de_koning_1995
    """
    return float(chosen("bound", bound, _WASHOUT))


_POPULATIONS = {
    "clay to medium sand": 0.0,
    "coarse sand to small pebbles": 0.20,
    "pebbles and cobbles": 0.10,
}


@formula(
    "turbidity.lowe_populations",
    gives="volume fraction from which a size population is held up by more than turbulence",
    unit="1",
    equation="clay to medium sand: turbulence alone (0); coarse sand to small pebbles 0.20; larger 0.10-0.15",
    source="lowe_1982",
    domain="sediment gravity flows",
    scatter="a review limit of 9 vol % for turbulence alone is disputed",
    status="published",
    inputs={"population": "one of " + ", ".join(repr(k) for k in _POPULATIONS)},
    pitfalls="Layer thickness is neither the thickness of a traction carpet nor a stress.",
)
def lowe_populations(population: str) -> float:
    """Concentration needed to hold up a size population.

    Parameters
    ----------
    population : name of the population

    Returns
    -------
    volume fraction

    References
    ----------
    lowe_1982
    """
    return float(chosen("population", population, _POPULATIONS))


@formula(
    "turbidity.grading_style_limit",
    gives="volume fraction between distribution grading (below) and coarse-tail grading (above)",
    unit="1",
    equation="0.30",
    source="middleton_1967",
    domain="plastic beads of density 1.52, 0.18 mm",
    status="published",
    inputs={},
    pitfalls="Needs grain-size percentiles, not one word a bed.",
)
def grading_style_limit() -> float:
    """Concentration at which the style of grading changes.

    Returns
    -------
    volume fraction

    References
    ----------
    middleton_1967
    """
    return 0.30


_GRAND_BANKS = {"lower": 0.027, "upper": 0.054}


@formula(
    "turbidity.grand_banks_concentration",
    gives="bulk volume fraction of the 1929 flow, bound",
    unit="1",
    equation="2.7-5.4 vol %",
    source="stevenson_2018",
    domain="one giant flow",
    scatter="the range",
    status="published",
    inputs={"bound": '"lower" or "upper"'},
    pitfalls="Concentration has never been measured directly in a large flow.",
)
def grand_banks_concentration(bound: str) -> float:
    """Bound of the bulk concentration of a known large flow.

    Parameters
    ----------
    bound : "lower" or "upper"

    Returns
    -------
    volume fraction

    References
    ----------
    stevenson_2018
    """
    return float(chosen("bound", bound, _GRAND_BANKS))


@formula(
    "turbidity.bed_size",
    gives="thickness of the thickest mapped graded beds",
    unit="m",
    equation="35 m",
    source="ispra_sheets",
    domain="foredeep basins",
    status="published",
    inputs={},
    homogeneous=False,
    pitfalls="Warn about a very thick bed, never refuse it.",
)
def bed_size() -> float:
    """Thickness that mapped megabeds reach.

    Returns
    -------
    m

    References
    ----------
    ispra_sheets
    """
    return 35.0
