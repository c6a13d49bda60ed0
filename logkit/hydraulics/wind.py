"""Threshold shear velocities of dry sand in air.

Thresholds in water are in `threshold`.
"""

from __future__ import annotations

from functools import cache

import numpy as np

from logkit.hydraulics.inputs import AIR_KG_M3, AIR_NU_M2_S, QUARTZ_KG_M3, SYMBOLS, Values, formula
from logkit.registry import GRAVITY_M_S2, Limit

_MEANINGS = SYMBOLS | {
    "coefficient": "coefficient A",
    "cohesion_kg_s2": "cohesion gamma",
    "cohesion_term": "coefficient of the cohesion term",
}
_SIZES = ("d_m", "rho_s_kg_m3", "rho_air_kg_m3")


def _d_mm(low: float, high: float | None) -> tuple[Limit, ...]:
    return (Limit("d_mm", low, high, lambda d_m, **_: np.asarray(d_m) * 1e3),)


def _bagnold(d_m: Values, rho_s: Values, rho_air: Values, coefficient: Values, g_m_s2: Values) -> Values:
    return coefficient * np.sqrt((np.asarray(rho_s, dtype=float) - rho_air) / rho_air * g_m_s2 * d_m)


@formula(
    "wind.bagnold_fluid",
    gives="fluid threshold shear velocity u*_t",
    unit="m/s",
    equation="u*_t = A sqrt((rho_s - rho_a)/rho_a g D), A = 0.10",
    source="bagnold_1941",
    domain="D above 0.1-0.2 mm, dry",
    scatter="17 % below Shao & Lu at 0.25 mm",
    status="secondary",
    inputs=_MEANINGS,
    limits=_d_mm(0.1, None),
    positive=(*_SIZES, "coefficient"),
    pitfalls="Wrong below 0.1 mm, where cohesion raises the threshold.",
)
def bagnold_fluid(
    d_m: Values,
    rho_s_kg_m3: Values = QUARTZ_KG_M3,
    rho_air_kg_m3: Values = AIR_KG_M3,
    coefficient: Values = 0.10,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Wind shear velocity that starts grains from rest.

    Parameters
    ----------
    d_m : diameter, m
    rho_s_kg_m3, rho_air_kg_m3 : densities, kg/m3
    coefficient : A

    Returns
    -------
    u*_t, m/s

    References
    ----------
    bagnold_1941, kok_2012
    """
    return _bagnold(d_m, rho_s_kg_m3, rho_air_kg_m3, coefficient, g_m_s2)


@formula(
    "wind.bagnold_impact",
    gives="impact threshold shear velocity u*_t",
    unit="m/s",
    equation="u*_t = A sqrt((rho_s - rho_a)/rho_a g D), A = 0.082",
    source="bagnold_1941",
    locator="Kok et al. 2012, eq. 2.5",
    domain="D above 0.1-0.2 mm, dry",
    scatter="5-7 % below the curve of Kok et al. at 0.25-1 mm",
    status="secondary",
    inputs=_MEANINGS,
    limits=_d_mm(0.1, None),
    positive=(*_SIZES, "coefficient"),
)
def bagnold_impact(
    d_m: Values,
    rho_s_kg_m3: Values = QUARTZ_KG_M3,
    rho_air_kg_m3: Values = AIR_KG_M3,
    coefficient: Values = 0.082,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Wind shear velocity that keeps saltation going.

    Parameters
    ----------
    d_m : diameter, m
    rho_s_kg_m3, rho_air_kg_m3 : densities, kg/m3
    coefficient : A

    Returns
    -------
    u*_t, m/s

    References
    ----------
    bagnold_1941, kok_2012
    """
    return _bagnold(d_m, rho_s_kg_m3, rho_air_kg_m3, coefficient, g_m_s2)


@formula(
    "wind.shao_lu",
    gives="fluid threshold shear velocity u*_t",
    unit="m/s",
    equation="u*_t = sqrt(A_N (rho_s/rho_a g D + gamma/(rho_a D))), A_N 0.0123, gamma 3e-4 kg/s2",
    source="shao_lu_2000",
    domain="0.05-2 mm, dry",
    scatter="gamma 1.65e-4 to 5e-4",
    status="secondary",
    inputs=_MEANINGS,
    limits=_d_mm(0.05, 2),
    positive=_SIZES,
    not_negative=("cohesion_kg_s2",),
    pitfalls="The often quoted 0.278 m/s at 0.25 mm needs air of 1.225 kg/m3.",
)
def shao_lu(
    d_m: Values,
    rho_s_kg_m3: Values = QUARTZ_KG_M3,
    rho_air_kg_m3: Values = AIR_KG_M3,
    cohesion_kg_s2: Values = 3e-4,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Wind shear velocity that starts grains from rest, with cohesion.

    Parameters
    ----------
    d_m : diameter, m
    rho_s_kg_m3, rho_air_kg_m3 : densities, kg/m3
    cohesion_kg_s2 : gamma, kg/s2

    Returns
    -------
    u*_t, m/s

    References
    ----------
    shao_lu_2000
    """
    rho = np.asarray(rho_air_kg_m3, dtype=float)
    return np.sqrt(0.0123 * (rho_s_kg_m3 / rho * g_m_s2 * d_m + cohesion_kg_s2 / (rho * d_m)))


def _iversen_white_coefficient(reynolds: np.ndarray) -> np.ndarray:
    """A without its cohesion factor, by friction Reynolds number."""
    low = 0.200 / np.sqrt(1 + 2.5 * reynolds)
    middle = 0.129 / np.sqrt(np.maximum(1.928 * reynolds**0.092 - 1, 1e-9))
    high = 0.120 * (1 - 0.0858 * np.exp(-0.0617 * (reynolds - 10)))
    return np.where(reynolds < 0.3, low, np.where(reynolds < 10, middle, high))


@cache
def _iversen_white_table() -> tuple[np.ndarray, np.ndarray]:
    """ln(Re/A) and ln Re; Re/A rises with Re, so that the implicit law has one root."""
    log_reynolds = np.linspace(np.log(1e-3), np.log(1e4), 8192)
    reynolds = np.exp(log_reynolds)
    return np.maximum.accumulate(log_reynolds - np.log(_iversen_white_coefficient(reynolds))), log_reynolds


def _friction_reynolds(
    d_m: Values,
    rho_s_kg_m3: Values = QUARTZ_KG_M3,
    rho_air_kg_m3: Values = AIR_KG_M3,
    nu_air_m2_s: Values = AIR_NU_M2_S,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """u*_t D/nu_a at the threshold, the root of the implicit law."""
    d = np.asarray(d_m, dtype=float)
    weight = np.asarray(rho_s_kg_m3) * g_m_s2
    pull = np.sqrt(1 + 6e-7 / (weight * d**2.5)) * np.sqrt(weight * d / rho_air_kg_m3)
    scaled, log_reynolds = _iversen_white_table()
    return np.exp(np.interp(np.log(pull * d / nu_air_m2_s), scaled, log_reynolds, right=np.nan))


@formula(
    "wind.iversen_white",
    gives="fluid threshold shear velocity u*_t",
    unit="m/s",
    equation="u*_t = A(Re) F sqrt(rho_s/rho_a g D), F = sqrt(1 + 6e-7/(rho_s g D^2.5)), Re = u*_t D/nu_a, "
    "A in three pieces with limits at Re 0.3 and 10",
    source="iversen_white_1982",
    domain="dry grains in air, Re above 0.03",
    scatter="within 10 % of Shao & Lu for 0.125-1 mm",
    status="secondary",
    inputs=_MEANINGS,
    limits=(Limit("Re", 0.03, None, lambda **sizes: _friction_reynolds(**sizes)),),
    positive=(*_SIZES, "nu_air_m2_s"),
    homogeneous=False,
    pitfalls="Implicit. The original cohesion constant 0.006 is in cgs units.",
)
def iversen_white(
    d_m: Values,
    rho_s_kg_m3: Values = QUARTZ_KG_M3,
    rho_air_kg_m3: Values = AIR_KG_M3,
    nu_air_m2_s: Values = AIR_NU_M2_S,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Wind shear velocity that starts grains from rest, by friction Reynolds number.

    Parameters
    ----------
    d_m : diameter, m
    rho_s_kg_m3, rho_air_kg_m3 : densities, kg/m3
    nu_air_m2_s : kinematic viscosity of air, m2/s

    Returns
    -------
    u*_t, m/s

    References
    ----------
    iversen_white_1982
    """
    reynolds = _friction_reynolds(d_m, rho_s_kg_m3, rho_air_kg_m3, nu_air_m2_s, g_m_s2)
    return reynolds * nu_air_m2_s / np.asarray(d_m)
