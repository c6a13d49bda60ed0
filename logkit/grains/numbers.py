"""Dimensionless numbers of a grain in a fluid: submerged gravity, D* and the particle Reynolds number."""

from __future__ import annotations

from typing import Any

import numpy as np

from logkit.registry import GRAVITY_M_S2, formula

_INPUTS = {
    "g_m_s2": "acceleration of gravity g",
    "d_m": "grain diameter D",
    "submerged_gravity": "submerged specific gravity R",
    "nu_m2_s": "kinematic viscosity nu",
}


@formula(
    "grain.submerged_gravity",
    gives="submerged specific gravity R",
    unit="1",
    equation="R = (rho_s - rho)/rho",
    source="parker_2004",
    locator="definition",
    status="published",
    inputs={"rho_s_kg_m3": "grain density rho_s", "rho_kg_m3": "water density rho"},
    positive=("rho_s_kg_m3", "rho_kg_m3"),
    domain="all",
    scatter="none",
    pitfalls="s = rho_s/rho = R + 1",
)
def submerged_gravity(rho_s_kg_m3: Any, rho_kg_m3: Any) -> Any:
    """Submerged specific gravity, dimensionless, from two densities in kg/m3.

    References
    ----------
    parker_2004
    """
    rho = np.asarray(rho_kg_m3, dtype=float)
    return (np.asarray(rho_s_kg_m3, dtype=float) - rho) / rho


@formula(
    "grain.dstar",
    gives="dimensionless diameter D*",
    unit="1",
    equation="D* = D (R g / nu^2)^(1/3)",
    source="soulsby_1997",
    status="published",
    inputs=_INPUTS,
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    domain="all",
    scatter="none",
    homogeneous=True,
    pitfalls="another D* in use is the cube of this one",
)
def dimensionless_diameter(d_m: Any, submerged_gravity: Any, nu_m2_s: Any, g_m_s2: Any = GRAVITY_M_S2) -> Any:
    """Dimensionless diameter D*.

    Parameters
    ----------
    d_m : float or array, m
    submerged_gravity : float or array, R
    nu_m2_s : float or array, m2/s

    References
    ----------
    soulsby_1997
    """
    nu = np.asarray(nu_m2_s, dtype=float)
    return np.asarray(d_m, dtype=float) * np.cbrt(np.asarray(submerged_gravity) * g_m_s2 / nu**2)


@formula(
    "grain.rep",
    gives="particle Reynolds number Rep",
    unit="1",
    equation="Rep = sqrt(R g D) D / nu",
    source="parker_2004",
    status="published",
    inputs=_INPUTS,
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    domain="all",
    scatter="none",
    pitfalls="identity Rep = D*^1.5",
)
def particle_reynolds_number(
    d_m: Any, submerged_gravity: Any, nu_m2_s: Any, g_m_s2: Any = GRAVITY_M_S2
) -> Any:
    """Particle Reynolds number.

    Parameters
    ----------
    d_m : float or array, m
    submerged_gravity : float or array, R
    nu_m2_s : float or array, m2/s

    References
    ----------
    parker_2004
    """
    d = np.asarray(d_m, dtype=float)
    return np.sqrt(np.asarray(submerged_gravity) * g_m_s2 * d) * d / np.asarray(nu_m2_s, dtype=float)
