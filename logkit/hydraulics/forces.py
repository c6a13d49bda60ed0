"""Lift and drag on one exposed grain at the bed, so that a threshold can be explained and not only looked up.

Our own simple construction from general theory: Bernoulli lift and form drag against submerged weight,
about a pivot. Measured thresholds are in `threshold`; these forces never replace them.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.hydraulics.resistance import KAPPA
from logkit.registry import GRAVITY_M_S2, Limit

DRAG_COEFFICIENT = 0.45
LIFT_COEFFICIENT = 0.2
ROUGHNESS_SHARE = 1 / 30
"""Height of zero velocity over the roughness height of a rough wall."""
TOP_AND_CENTRE = (1.0, 0.5)
BOTTOM = 0.1
"""Heights over D at which the velocity at the grain's top, centre and base is read."""

_MEANINGS = SYMBOLS | {
    "pivot_deg": "pivoting angle phi, from the vertical to the contact about which the grain turns",
    "drag_coefficient": "drag coefficient Cd",
    "lift_coefficient": "lift coefficient Cl on the difference of squared velocities",
}
_PIVOT = Limit("pivot_deg", 20, 75, lambda pivot_deg, **_: pivot_deg)
_FORCE = (1.0, -2.0, 1.0)
_THEORY = "coleman_1967"


def _squared_speed(height: float) -> float:
    """(u/u*)^2 of a rough wall at a height given over D = ks."""
    return float((np.log(height / ROUGHNESS_SHARE) / KAPPA) ** 2)


@formula(
    "threshold.submerged_weight",
    gives="submerged weight of a grain",
    unit="N",
    equation="W = (rho_s - rho) g pi D^3/6",
    source="definition",
    domain="spheres",
    scatter="none (definition)",
    status="published",
    inputs=_MEANINGS,
    positive=("d_m", "rho_s_kg_m3", "rho_kg_m3"),
    resolve=Fluid(("rho_s_kg_m3", "rho_kg_m3")),
    dimension=_FORCE,
)
def submerged_weight(
    d_m: Values, rho_s_kg_m3: Values, rho_kg_m3: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Weight of a grain less its buoyancy.

    Parameters
    ----------
    d_m : diameter, m
    rho_s_kg_m3, rho_kg_m3 : densities, kg/m3

    Returns
    -------
    W, N
    """
    return (np.asarray(rho_s_kg_m3, dtype=float) - rho_kg_m3) * g_m_s2 * np.pi * np.asarray(d_m) ** 3 / 6


@formula(
    "threshold.drag_force",
    gives="drag on an exposed grain at the bed",
    unit="N",
    equation="FD = 1/2 rho Cd (pi D^2/4) u^2, u by the rough log law at D/2",
    source=_THEORY,
    locator="general theory of forces on bed grains; heights and Cd ours",
    domain="grain on a rough bed of like grains, turbulent flow",
    status="ours",
    inputs=_MEANINGS,
    positive=("d_m", "rho_kg_m3", "drag_coefficient"),
    not_negative=("ustar_m_s",),
    resolve=Fluid(("rho_kg_m3",)),
    dimension=_FORCE,
    pitfalls="Mean force; turbulent peaks are two to three times it.",
)
def drag_force(
    ustar_m_s: Values, d_m: Values, rho_kg_m3: Values, drag_coefficient: Values = DRAG_COEFFICIENT
) -> Values:
    """Drag force of the current on a grain.

    Parameters
    ----------
    ustar_m_s : shear velocity, m/s
    d_m : diameter, m
    rho_kg_m3 : water density, kg/m3
    drag_coefficient : Cd

    Returns
    -------
    FD, N
    """
    area = np.pi * np.square(d_m) / 4
    speed = _squared_speed(TOP_AND_CENTRE[1]) * np.square(ustar_m_s)
    return 0.5 * np.asarray(rho_kg_m3) * drag_coefficient * area * speed


@formula(
    "threshold.lift_force",
    gives="lift on an exposed grain at the bed",
    unit="N",
    equation="FL = 1/2 rho Cl (pi D^2/4) (u_top^2 - u_base^2), velocities by the rough log law",
    source=_THEORY,
    locator="Bernoulli pressure difference; heights and Cl ours",
    domain="grain on a rough bed of like grains, turbulent flow",
    status="ours",
    inputs=_MEANINGS,
    positive=("d_m", "rho_kg_m3", "lift_coefficient"),
    not_negative=("ustar_m_s",),
    resolve=Fluid(("rho_kg_m3",)),
    dimension=_FORCE,
    pitfalls="Mean force; turbulent peaks are two to three times it.",
)
def lift_force(
    ustar_m_s: Values, d_m: Values, rho_kg_m3: Values, lift_coefficient: Values = LIFT_COEFFICIENT
) -> Values:
    """Lift force of the current on a grain: faster water above than below.

    Parameters
    ----------
    ustar_m_s : shear velocity, m/s
    d_m : diameter, m
    rho_kg_m3 : water density, kg/m3
    lift_coefficient : Cl

    Returns
    -------
    FL, N
    """
    area = np.pi * np.square(d_m) / 4
    speed = (_squared_speed(TOP_AND_CENTRE[0]) - _squared_speed(BOTTOM)) * np.square(ustar_m_s)
    return 0.5 * np.asarray(rho_kg_m3) * lift_coefficient * area * speed


@formula(
    "threshold.pivot_shields",
    gives="Shields number at which a grain pivots out of its pocket",
    unit="1",
    equation="FD cos(phi) = (W - FL) sin(phi) solved for theta = u*^2/(R g D)",
    source=_THEORY,
    locator="pivoting-angle entrainment; construction ours",
    domain="rough turbulent flow, exposed grain",
    scatter="a factor 2 between pockets; explains, does not predict",
    status="ours",
    inputs=_MEANINGS,
    limits=(_PIVOT,),
    positive=("pivot_deg", "drag_coefficient"),
    not_negative=("lift_coefficient",),
)
def pivot_shields(
    pivot_deg: Values = 45.0,
    drag_coefficient: Values = DRAG_COEFFICIENT,
    lift_coefficient: Values = LIFT_COEFFICIENT,
) -> Values:
    """Threshold that follows from lift, drag and weight about a pivot.

    Parameters
    ----------
    pivot_deg : pivoting angle, degrees; larger for small grains among large ones
    drag_coefficient, lift_coefficient : Cd, Cl

    Returns
    -------
    theta, pure number
    """
    tangent = np.tan(np.deg2rad(pivot_deg))
    drag = drag_coefficient * _squared_speed(TOP_AND_CENTRE[1])
    lift = lift_coefficient * (_squared_speed(TOP_AND_CENTRE[0]) - _squared_speed(BOTTOM))
    return 4 / 3 * tangent / (drag + lift * tangent)
