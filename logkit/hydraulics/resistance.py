"""Flow resistance of plane beds and beds with bedforms: velocity over shear velocity, roughness, Manning's n.

Stress needed to move grains is in `threshold`; the size of dunes is in `depth`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, above_one, chosen, formula
from logkit.registry import GRAVITY_M_S2, Limit

KAPPA = 0.40
CHEZY_GRAIN = 18.0
"""Coefficient of the Chezy law in m^0.5/s at g = 9.81 m/s2; it goes with the square root of gravity."""

_RELATIVE_DEPTH = Limit("h/ks", 3, None, lambda flow_depth_m, ks_m, **_: np.divide(flow_depth_m, ks_m))
_DEPTH_OVER_D90 = Limit("h/D90", 10, None, lambda flow_depth_m, d90_m, **_: np.divide(flow_depth_m, d90_m))


@formula(
    "resistance.log_law",
    gives="depth-averaged velocity over shear velocity U/u*",
    unit="1",
    equation="U/u* = 2.5 ln(11 h/ks)",
    source="garcia_2008",
    locator="ch. 2",
    domain="rough bed, h/ks above about 3",
    scatter="11 or 12 in the logarithm changes U by 0.7-1.5 %",
    status="secondary",
    inputs=SYMBOLS,
    limits=(_RELATIVE_DEPTH,),
    positive=("flow_depth_m", "ks_m"),
    pitfalls="In log10 form C = 18 log10(12 h/ks) and U/u* = C/sqrt(g).",
)
def log_law(flow_depth_m: Values, ks_m: Values) -> Values:
    """Depth-averaged velocity over shear velocity on a rough plane bed.

    Parameters
    ----------
    flow_depth_m : flow depth h, m
    ks_m : roughness height ks, m

    Returns
    -------
    U/u*, pure number; NaN where 11 h/ks is not above one

    References
    ----------
    garcia_2008
    """
    return np.log(above_one(11 * np.asarray(flow_depth_m) / ks_m)) / KAPPA


@formula(
    "resistance.manning_strickler",
    gives="depth-averaged velocity over shear velocity U/u*",
    unit="1",
    equation="U/u* = 8.1 (h/ks)^(1/6)",
    source="parker_2004",
    domain="h/ks 3-200",
    scatter="within 2 % of the log law at h/ks 10-33, +6 % at 500",
    status="memory",
    inputs=SYMBOLS,
    limits=(Limit("h/ks", 3, 200, lambda flow_depth_m, ks_m, **_: np.divide(flow_depth_m, ks_m)),),
    positive=("flow_depth_m", "ks_m"),
    pitfalls="Not for deep flows over fine sand.",
)
def manning_strickler(flow_depth_m: Values, ks_m: Values) -> Values:
    """Power form of the plane-bed resistance.

    Parameters
    ----------
    flow_depth_m : flow depth h, m
    ks_m : roughness height ks, m

    Returns
    -------
    U/u*, pure number

    References
    ----------
    parker_2004
    """
    return 8.1 * (np.asarray(flow_depth_m) / ks_m) ** (1 / 6)


_GRAIN_ROUGHNESS = {"D50": 2.5, "D90": 3.0}


@formula(
    "resistance.ks_grain",
    gives="grain roughness ks",
    unit="m",
    equation="ks = 2.5 D50 or ks = 3 D90",
    source="engelund_hansen_1967",
    locator="3 D90: van Rijn 1984",
    domain="plane bed",
    scatter="factor 2 in ks, 5-10 % in U",
    status="secondary",
    inputs=SYMBOLS | {"d_m": "the diameter named by `of`", "of": '"D50" or "D90"'},
    positive=("d_m",),
    pitfalls="Keep one choice inside one formula set.",
)
def ks_grain(d_m: Values, of: str = "D50") -> Values:
    """Roughness height of a plane grain bed.

    Parameters
    ----------
    d_m : D50 or D90, m
    of : which of the two

    Returns
    -------
    ks, m

    References
    ----------
    engelund_hansen_1967, van_rijn_1984_iii
    """
    return chosen("of", of, _GRAIN_ROUGHNESS) * np.asarray(d_m)


@formula(
    "resistance.grain_chezy",
    gives="grain Chezy coefficient C'",
    unit="m^0.5/s",
    equation="C' = 18 log10(12 h/(3 D90)) = 18 log10(4 h/D90)",
    source="van_rijn_1984_i",
    domain="sand beds",
    scatter="as the log law",
    status="secondary",
    inputs=SYMBOLS,
    limits=(_DEPTH_OVER_D90,),
    positive=("flow_depth_m", "d90_m"),
    pitfalls="Strictly the hydraulic radius of the bed replaces h in narrow flumes.",
)
def grain_chezy(flow_depth_m: Values, d90_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Chezy coefficient of the grains alone.

    Parameters
    ----------
    flow_depth_m : flow depth h, m
    d90_m : D90, m
    g_m_s2 : gravity, m/s2; the coefficient 18 goes with its square root

    Returns
    -------
    C', m^0.5/s; NaN where 4 h/D90 is not above one

    References
    ----------
    van_rijn_1984_i
    """
    coefficient = CHEZY_GRAIN * np.sqrt(np.asarray(g_m_s2) / GRAVITY_M_S2)
    return coefficient * np.log10(above_one(4 * np.asarray(flow_depth_m) / d90_m))


@formula(
    "resistance.chezy_velocity",
    gives="depth-averaged velocity U",
    unit="m/s",
    equation="U = (U/u*) sqrt(g h S)",
    source="definition",
    domain="steady uniform flow",
    status="published",
    inputs=SYMBOLS | {"u_over_ustar": "velocity over shear velocity U/u* = C/sqrt(g)"},
    positive=("flow_depth_m", "slope", "u_over_ustar"),
)
def chezy_velocity(
    u_over_ustar: Values, flow_depth_m: Values, slope: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Velocity of a uniform flow from its resistance, depth and slope.

    Parameters
    ----------
    u_over_ustar : U/u*, pure number, as from `log_law`
    flow_depth_m : flow depth h, m
    slope : energy slope S

    Returns
    -------
    U, m/s
    """
    return u_over_ustar * np.sqrt(np.asarray(g_m_s2) * flow_depth_m * slope)


@formula(
    "resistance.depth_slope_stress",
    gives="total bed shear stress tau",
    unit="Pa",
    equation="tau = rho g h S",
    source="definition",
    domain="steady uniform flow in a wide channel",
    status="published",
    inputs=SYMBOLS,
    positive=("flow_depth_m", "rho_kg_m3"),
    not_negative=("slope",),
    resolve=Fluid(("rho_kg_m3",)),
    pitfalls="Total stress: over dunes the grains feel a half to a tenth of it.",
)
def depth_slope_stress(
    flow_depth_m: Values, slope: Values, rho_kg_m3: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Total bed shear stress from depth and slope.

    Parameters
    ----------
    flow_depth_m : flow depth h, m
    slope : energy slope S
    rho_kg_m3 : water density, kg/m3

    Returns
    -------
    tau, Pa
    """
    return rho_kg_m3 * np.asarray(g_m_s2) * flow_depth_m * slope


@formula(
    "resistance.bedform_roughness",
    gives="roughness height of a bed with bedforms ks",
    unit="m",
    equation="ks = 3 D90 + 1.1 Delta (1 - exp(-25 Delta/lambda))",
    source="van_rijn_1984_iii",
    domain="h 0.1-16 m, D50 0.19-3.6 mm",
    status="secondary",
    inputs=SYMBOLS
    | {"bedform_height_m": "bedform height Delta", "bedform_length_m": "bedform length lambda"},
    positive=("bedform_length_m",),
    not_negative=("bedform_height_m", "d90_m"),
    pitfalls="Set the height to zero for T of 25 and more; the height formula turns negative there.",
)
def bedform_roughness(bedform_height_m: Values, bedform_length_m: Values, d90_m: Values = 0.0) -> Values:
    """Roughness height of grains and bedforms together.

    Parameters
    ----------
    bedform_height_m : Delta, m
    bedform_length_m : lambda, m
    d90_m : D90, m; 0 gives the part of the bedforms alone

    Returns
    -------
    ks, m

    References
    ----------
    van_rijn_1984_iii
    """
    height = np.asarray(bedform_height_m)
    return 3 * np.asarray(d90_m) + 1.1 * height * -np.expm1(-25 * height / bedform_length_m)


@formula(
    "resistance.engelund_hansen",
    gives="skin-friction Shields number theta'",
    unit="1",
    equation="theta' = 0.06 + 0.4 theta^2 (dunes)",
    source="engelund_hansen_1967",
    domain="sand above 0.15 mm, theta about 0.06-0.8",
    status="secondary",
    inputs=SYMBOLS,
    limits=(Limit("theta", 0.06, 0.8, lambda theta, **_: theta),),
    not_negative=("theta",),
    pitfalls="Equals theta at 0.0615 and 2.438; two solutions exist between them.",
)
def engelund_hansen(theta: Values) -> Values:
    """Skin-friction part of the Shields number over dunes.

    Parameters
    ----------
    theta : total Shields number

    Returns
    -------
    theta', pure number

    References
    ----------
    engelund_hansen_1967
    """
    return 0.06 + 0.4 * np.square(theta)
