"""Threshold of grain motion in a current: Shields curves, their measured scatter, stress and velocity.

Critical velocities are in `critical_velocity`, hiding in mixtures in `mixtures`, largest clasts and the
classical velocity-size lines in `competence`, forces on one grain in `forces`, waves and wind in theirs.
"""

from __future__ import annotations

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.registry import GRAVITY_M_S2, Limit

MEASURED_SIGMA_LOG10 = 0.20
"""One sigma of log10 of the critical Shields number about its centre, sand and gravel."""
GRAVEL_SHIFT_LOG10 = -0.15
_SHIFT_BEGINS_M, _SHIFT_ENDS_M = 1e-3, 4e-3


@formula(
    "threshold.shields",
    gives="Shields number theta",
    unit="1",
    equation="theta = u*^2/(R g D)",
    source="shields_1936",
    domain="non-cohesive grains",
    scatter="none (definition)",
    status="published",
    inputs=SYMBOLS,
    positive=("d_m", "submerged_gravity"),
    not_negative=("ustar_m_s",),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="For grain motion use the skin-friction part of the stress.",
)
def shields(
    ustar_m_s: Values, d_m: Values, submerged_gravity: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Shields number from shear velocity.

    Parameters
    ----------
    ustar_m_s : shear velocity u*, m/s
    d_m : grain diameter, m
    submerged_gravity : R

    Returns
    -------
    theta, pure number

    References
    ----------
    shields_1936
    """
    return np.square(ustar_m_s) / (np.asarray(submerged_gravity) * g_m_s2 * d_m)


@formula(
    "threshold.soulsby_whitehouse",
    gives="critical Shields number theta_cr",
    unit="1",
    equation="theta_cr = 0.30/(1 + 1.2 D*) + 0.055 (1 - exp(-0.020 D*))",
    source="soulsby_whitehouse_1997",
    locator="Soulsby 1997, eq. 77",
    domain="non-cohesive grains above about 0.02 mm",
    scatter="0.20 in log10 (threshold.measured_scatter)",
    status="published",
    inputs=SYMBOLS,
    positive=("dstar",),
    resolve=Fluid(("dstar",)),
    pitfalls="The form 0.24/D* under the same names is unbounded for fine grains; it is not this one.",
)
def soulsby_whitehouse(dstar: Values) -> Values:
    """Critical Shields number, the main curve.

    Parameters
    ----------
    dstar : dimensionless diameter D*

    Returns
    -------
    theta_cr, pure number

    References
    ----------
    soulsby_whitehouse_1997, soulsby_1997
    """
    d = np.asarray(dstar, dtype=float)
    return 0.30 / (1 + 1.2 * d) - 0.055 * np.expm1(-0.020 * d)


@formula(
    "threshold.soulsby_whitehouse_minimum",
    gives="smallest critical Shields number of the main curve",
    unit="1",
    equation="minimum of threshold.soulsby_whitehouse over D*",
    source="soulsby_whitehouse_1997",
    status="ours",
    inputs={},
)
def soulsby_whitehouse_minimum() -> float:
    """The lowest point of the main curve, at D* near 17.

    Returns
    -------
    theta_cr, pure number
    """
    return float(np.min(soulsby_whitehouse(np.geomspace(10, 30, 2001))))


@formula(
    "threshold.critical_stress",
    gives="critical bed shear stress tau_cr",
    unit="Pa",
    equation="tau_cr = theta_cr (rho_s - rho) g D",
    source="soulsby_1997",
    domain="as the curve",
    scatter="as the curve",
    status="published",
    inputs=SYMBOLS,
    positive=("d_m", "nu_m2_s", "rho_kg_m3", "rho_s_kg_m3"),
    resolve=Fluid(("nu_m2_s", "rho_kg_m3", "rho_s_kg_m3")),
    pitfalls="The least flow that moves the grain, not the flow that laid it down.",
)
def critical_stress(
    d_m: Values,
    nu_m2_s: Values,
    rho_kg_m3: Values,
    rho_s_kg_m3: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Bed shear stress at which grains of one size begin to move.

    Parameters
    ----------
    d_m : grain diameter, m
    nu_m2_s : kinematic viscosity, m2/s
    rho_kg_m3, rho_s_kg_m3 : densities of water and grains, kg/m3

    Returns
    -------
    tau_cr, Pa

    References
    ----------
    soulsby_1997
    """
    excess = np.asarray(rho_s_kg_m3, dtype=float) - rho_kg_m3
    dstar = dimensionless_diameter(d_m, excess / rho_kg_m3, nu_m2_s, g_m_s2)
    return soulsby_whitehouse(dstar) * excess * g_m_s2 * d_m


@formula(
    "threshold.critical_shear_velocity",
    gives="critical shear velocity u*_cr",
    unit="m/s",
    equation="u*_cr = sqrt(theta_cr R g D)",
    source="soulsby_1997",
    domain="as the curve",
    scatter="half that of the curve in log10",
    status="published",
    inputs=SYMBOLS,
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
)
def critical_shear_velocity(
    d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Shear velocity at which grains of one size begin to move.

    Parameters
    ----------
    d_m : grain diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    u*_cr, m/s
    """
    dstar = dimensionless_diameter(d_m, submerged_gravity, nu_m2_s, g_m_s2)
    return np.sqrt(soulsby_whitehouse(dstar) * submerged_gravity * g_m_s2 * d_m)


@formula(
    "threshold.measured_scatter",
    gives="centre of log10(measured theta_cr / main curve); one sigma is 0.20",
    unit="1",
    equation="0 up to 1 mm, -0.15 from 4 mm, linear in log10 D between",
    source="ours",
    locator="own statistics on 591 published values, most from the tables of Buffington & Montgomery 1997",
    domain="0.015-207 mm, bed slope below 0.02",
    scatter="sigma 0.20 in log10 theta, a factor 1.26 in velocity",
    status="ours",
    inputs=SYMBOLS,
    limits=(Limit("d_mm", 0.015, 207, lambda d_m, **_: np.asarray(d_m) * 1e3),),
    positive=("d_m",),
    homogeneous=False,
    pitfalls="On slopes above 0.02 the measured gravel values climb; do not fit sand class by class.",
)
def measured_scatter(d_m: Values) -> Values:
    """Shift of the measured thresholds from the main curve, in log10.

    Parameters
    ----------
    d_m : grain diameter, m

    Returns
    -------
    centre of log10(theta_cr/curve); its sigma is `MEASURED_SIGMA_LOG10`

    References
    ----------
    buffington_montgomery_1997
    """
    share = np.log(np.asarray(d_m) / _SHIFT_BEGINS_M) / np.log(_SHIFT_ENDS_M / _SHIFT_BEGINS_M)
    return GRAVEL_SHIFT_LOG10 * np.clip(share, 0, 1)


@formula(
    "threshold.brownlie",
    gives="critical Shields number theta_cr",
    unit="1",
    equation="theta_cr = 0.22 Rep^-0.6 + 0.06 x 10^(-7.7 Rep^-0.6)",
    source="brownlie_1981",
    locator="printed in Parker 2004, ch. 6",
    domain="all sizes",
    scatter="0.20 in log10 (threshold.measured_scatter)",
    status="published",
    inputs=SYMBOLS,
    positive=("rep",),
    resolve=Fluid(("rep",)),
    pitfalls="A power of ten; the exponential form has 17.73.",
)
def brownlie(rep: Values) -> Values:
    """Critical Shields number by Brownlie.

    Parameters
    ----------
    rep : particle Reynolds number sqrt(R g D) D/nu

    Returns
    -------
    theta_cr, pure number

    References
    ----------
    brownlie_1981, parker_2004
    """
    power = np.asarray(rep, dtype=float) ** -0.6
    return 0.22 * power + 0.06 * np.exp(-7.7 * np.log(10) * power)


@formula(
    "threshold.parker2003",
    gives="critical Shields number theta_cr",
    unit="1",
    equation="half of threshold.brownlie",
    source="parker_2003",
    locator="printed in Parker 2004, ch. 6",
    domain="gravel rivers chiefly",
    scatter="below 74 % of the measured gravel values",
    status="published",
    inputs=SYMBOLS,
    positive=("rep",),
    resolve=Fluid(("rep",)),
    pitfalls="A lower bound rather than a centre.",
)
def parker2003(rep: Values) -> Values:
    """Critical Shields number of gravel rivers, a low estimate.

    Parameters
    ----------
    rep : particle Reynolds number

    Returns
    -------
    theta_cr, pure number

    References
    ----------
    parker_2003, neill_1968
    """
    return 0.5 * brownlie(rep)


@formula(
    "threshold.van_rijn_shields",
    gives="critical Shields number theta_cr",
    unit="1",
    equation="0.24/D* to 4; 0.14 D*^-0.64 to 10; 0.04 D*^-0.10 to 20; 0.013 D*^0.29 to 150; 0.055 above",
    source="van_rijn_1984_i",
    domain="sand; belongs to the transport stage T",
    scatter="small steps at the joins",
    status="secondary",
    inputs=SYMBOLS,
    positive=("dstar",),
    resolve=Fluid(("dstar",)),
    pitfalls="Do not mix with Soulsby & Whitehouse inside one T.",
)
def van_rijn_shields(dstar: Values) -> Values:
    """Critical Shields number by van Rijn's five pieces.

    Parameters
    ----------
    dstar : dimensionless diameter D*

    Returns
    -------
    theta_cr, pure number

    References
    ----------
    van_rijn_1984_i
    """
    d = np.asarray(dstar, dtype=float)
    piece = np.searchsorted((4.0, 10.0, 20.0, 150.0), d)
    factor = np.take((0.24, 0.14, 0.04, 0.013, 0.055), piece)
    power = np.take((-1.0, -0.64, -0.10, 0.29, 0.0), piece)
    return np.where(np.isnan(d), np.nan, factor * np.exp(power * np.log(d)))


_GRAVEL = {"visual": {"lower": 0.030, "upper": 0.073}, "reference": {"lower": 0.052, "upper": 0.086}}


@formula(
    "threshold.gravel_range",
    gives="critical Shields number of the median gravel size, bound of the published band",
    unit="1",
    equation="0.030-0.073 visual, 0.052-0.086 reference transport",
    source="buffington_montgomery_1997",
    locator="abstract",
    domain="gravel, rough turbulent flow, low relative roughness",
    scatter="the band is the scatter",
    status="published",
    inputs={"method": '"visual" or "reference"', "bound": '"lower" or "upper"'},
    pitfalls="0.030-0.073 alone is only the visual half.",
)
def gravel_range(method: str, bound: str) -> float:
    """Bound of the published band of gravel thresholds.

    Parameters
    ----------
    method : "visual" or "reference"
    bound : "lower" or "upper"

    Returns
    -------
    theta_c50, pure number

    References
    ----------
    buffington_montgomery_1997
    """
    return float(chosen("bound", bound, chosen("method", method, _GRAVEL)))


@formula(
    "threshold.slope_correction",
    gives="critical stress on a downstream slope over that on a flat bed",
    unit="1",
    equation="sin(phi - beta)/sin(phi)",
    source="soulsby_1997",
    locator="general force balance",
    domain="downstream slope beta below the pivoting angle phi",
    status="memory",
    inputs={"bed_slope_deg": "downstream bed slope beta", "pivot_deg": "angle of repose phi of the grains"},
    limits=(Limit("bed_slope_deg", 0, 30, lambda bed_slope_deg, **_: bed_slope_deg),),
    positive=("pivot_deg",),
    pitfalls="On steep gravel beds the measured threshold rises instead (shallow flow, large roughness).",
)
def slope_correction(bed_slope_deg: Values, pivot_deg: Values = 32.0) -> Values:
    """Factor on the critical stress for a bed that slopes downstream.

    Parameters
    ----------
    bed_slope_deg : slope of the bed, degrees, positive downstream
    pivot_deg : angle of repose, degrees

    Returns
    -------
    factor, pure number; 0 where the slope reaches the angle of repose

    References
    ----------
    soulsby_1997
    """
    beta, phi = np.deg2rad(bed_slope_deg), np.deg2rad(pivot_deg)
    return np.maximum(np.sin(phi - beta) / np.sin(phi), 0)
