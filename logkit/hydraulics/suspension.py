"""Suspension criteria and the transport mode of a grain size.

Settling velocities are in `settling`; fall-out velocities are in `rest`.
"""

from __future__ import annotations

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.hydraulics.resistance import KAPPA
from logkit.hydraulics.settling import ferguson_church
from logkit.hydraulics.threshold import critical_shear_velocity
from logkit.registry import GRAVITY_M_S2, Limit

MODES = ("at rest", "traction", "saltation", "saltation or suspension", "suspension")
SALTATION_STAGE = 1.5
"""u*/u*_cr from which hopping grains outnumber rolling ones; our judgement."""

_ROUSE = {
    "bed load, lower limit": 2.5,
    "half suspended, lower limit": 1.2,
    "fully suspended, lower limit": 0.8,
}


@formula(
    "suspension.rouse_number",
    gives="Rouse number P",
    unit="1",
    equation="P = ws/(beta kappa u*), kappa 0.40",
    source="rouse_1937",
    domain="dilute, steady flow",
    scatter="bands are conventions",
    status="published",
    inputs=SYMBOLS | {"beta": "ratio of grain to momentum diffusivity beta"},
    positive=("ustar_m_s", "beta"),
    not_negative=("ws_m_s",),
    pitfalls="P = 2.5 is u* = ws. Takes the total u*.",
)
def rouse_number(ws_m_s: Values, ustar_m_s: Values, beta: Values = 1.0) -> Values:
    """Rouse number.

    Parameters
    ----------
    ws_m_s : settling velocity, m/s
    ustar_m_s : total shear velocity, m/s
    beta : ratio of diffusivities

    Returns
    -------
    P, pure number

    References
    ----------
    rouse_1937
    """
    return np.asarray(ws_m_s) / (beta * KAPPA * np.asarray(ustar_m_s))


@formula(
    "suspension.rouse_band",
    gives="limit of a band of the Rouse number",
    unit="1",
    equation="bed load above 2.5, half suspended 1.2-2.5, fully suspended 0.8-1.2, wash load below",
    source="rouse_1937",
    locator="bands as printed in general references",
    scatter="conventions, not measured limits",
    status="published",
    inputs={"band": "one of " + ", ".join(repr(k) for k in _ROUSE)},
)
def rouse_band(band: str) -> float:
    """Limit of a band of the Rouse number.

    Parameters
    ----------
    band : name of the limit

    Returns
    -------
    P, pure number

    References
    ----------
    rouse_1937
    """
    return float(chosen("band", band, _ROUSE))


@formula(
    "suspension.bagnold",
    gives="shear velocity of full suspension u*",
    unit="m/s",
    equation="u* = ws",
    source="bagnold_1966",
    domain="sand",
    scatter="criteria span u*/ws 0.4-1.0 above 0.25 mm",
    status="secondary",
    inputs=SYMBOLS,
    not_negative=("ws_m_s",),
)
def bagnold(ws_m_s: Values) -> Values:
    """Shear velocity at which a grain is held up by turbulence.

    Parameters
    ----------
    ws_m_s : settling velocity, m/s

    Returns
    -------
    u*, m/s

    References
    ----------
    bagnold_1966
    """
    return 1.0 * np.asarray(ws_m_s)


@formula(
    "suspension.van_rijn_initiation",
    gives="shear velocity of first suspension u*_s",
    unit="m/s",
    equation="u*_s/ws = 4/D* (1 < D* <= 10); 0.4 (D* > 10)",
    source="van_rijn_1984_ii",
    domain="sand, D* above 1",
    status="memory",
    inputs=SYMBOLS,
    limits=(Limit("dstar", 1, None, lambda dstar, **_: dstar),),
    positive=("dstar",),
    not_negative=("ws_m_s",),
    resolve=Fluid(("dstar",)),
    pitfalls="First bursts off the bed, far below full suspension above 0.2 mm.",
)
def van_rijn_initiation(ws_m_s: Values, dstar: Values) -> Values:
    """Shear velocity at which the first grains leave the bed.

    Parameters
    ----------
    ws_m_s : settling velocity, m/s
    dstar : D*

    Returns
    -------
    u*_s, m/s

    References
    ----------
    van_rijn_1984_ii
    """
    return np.asarray(ws_m_s) * np.maximum(4 / np.asarray(dstar, dtype=float), 0.4)


@formula(
    "suspension.nino",
    gives="shear velocity of entrainment into suspension over settling velocity u*/ws",
    unit="1",
    equation="21.2 Rep^-1.2 (1 < Rep < 27.3); 0.4 (above)",
    source="nino_2003",
    domain="sand, Rep above 1",
    status="memory",
    inputs=SYMBOLS,
    limits=(Limit("rep", 1, None, lambda rep, **_: rep),),
    positive=("rep",),
    resolve=Fluid(("rep",)),
    pitfalls="Rep, not D*.",
)
def nino(rep: Values) -> Values:
    """Entrainment of sand into suspension.

    Parameters
    ----------
    rep : particle Reynolds number

    Returns
    -------
    u*/ws, pure number

    References
    ----------
    nino_2003
    """
    number = np.asarray(rep, dtype=float)
    return np.where(np.isnan(number), np.nan, np.where(number < 27.3, 21.2 * number**-1.2, 0.4))


@formula(
    "suspension.range",
    gives="lower and upper shear velocity between first and full suspension",
    unit="m/s",
    equation="between suspension.van_rijn_initiation and suspension.bagnold, in either order",
    source="ours",
    domain="sand",
    scatter="factor 2.5",
    status="ours",
    inputs=SYMBOLS,
    positive=("dstar",),
    not_negative=("ws_m_s",),
    resolve=Fluid(("dstar",)),
    pitfalls="Below about 0.12 mm grains go into suspension almost as soon as they move.",
)
def suspension_range(ws_m_s: Values, dstar: Values) -> np.ndarray:
    """The band between the suspension criteria.

    Parameters
    ----------
    ws_m_s : settling velocity, m/s
    dstar : D*

    Returns
    -------
    array of shape (2, ...): lower and upper u*, m/s
    """
    first, full = np.broadcast_arrays(van_rijn_initiation(ws_m_s, dstar), bagnold(ws_m_s))
    return np.stack([np.minimum(first, full), np.maximum(first, full)])


@formula(
    "suspension.transport_mode",
    gives="how grains of one size travel",
    unit="",
    equation="at rest below u*_cr; traction to 1.5 u*_cr; saltation to suspension.range; suspension above it",
    source="ours",
    locator="limits by Soulsby & Whitehouse, van Rijn and Bagnold; 1.5 ours",
    domain="non-cohesive grains in water, 0.06 mm and coarser",
    scatter="factor 2.5 between the suspension criteria, named as a mode of its own",
    status="ours",
    inputs=SYMBOLS,
    limits=(Limit("d_mm", 0.0625, None, lambda d_m, **_: np.asarray(d_m) * 1e3),),
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    not_negative=("ustar_m_s",),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Grain (skin) stress decides motion, total stress suspension; one u* is taken for both.",
)
def transport_mode(
    ustar_m_s: Values,
    d_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Name of the transport mode of a grain size.

    Parameters
    ----------
    ustar_m_s : shear velocity, m/s
    d_m : diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    one of `MODES`, or an array of them; "" where an input is NaN
    """
    shear = np.asarray(ustar_m_s, dtype=float)
    moves = critical_shear_velocity(d_m, submerged_gravity, nu_m2_s, g_m_s2)
    ws = ferguson_church(d_m, submerged_gravity, nu_m2_s, g_m_s2=g_m_s2)
    low, high = suspension_range(ws, dimensionless_diameter(d_m, submerged_gravity, nu_m2_s, g_m_s2))
    conditions = np.broadcast_arrays(
        np.isnan(shear + moves + ws),
        shear < moves,
        shear >= high,
        shear >= low,
        shear >= SALTATION_STAGE * moves,
    )
    name = np.select(list(conditions), ["", MODES[0], MODES[4], MODES[3], MODES[2]], MODES[1])
    return str(name) if name.ndim == 0 else name
