"""Settling velocity of spheres: the benchmark beside the laws for natural grains in `settling`."""

from __future__ import annotations

from functools import cache

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.hydraulics.settling import galileo
from logkit.registry import GRAVITY_M_S2, Limit


@formula(
    "settling.dietrich_rep_form",
    gives="settling velocity over sqrt(R g D)",
    unit="1",
    equation="exp(-2.891394 + 0.95296 L - 0.056835 L^2 - 0.002892 L^3 + 0.000245 L^4), L = ln Rep",
    source="parker_2004",
    locator="after Dietrich 1982",
    domain="spheres",
    scatter="within 0.6 % of the sphere curve of settling.dietrich",
    status="secondary",
    inputs=SYMBOLS,
    positive=("rep",),
    resolve=Fluid(("rep",)),
    pitfalls="For natural grains 13 % (0.125 mm) to 46 % (2 mm) too high.",
)
def dietrich_rep_form(rep: Values) -> Values:
    """Settling velocity of spheres from the particle Reynolds number.

    Parameters
    ----------
    rep : particle Reynolds number

    Returns
    -------
    ws/sqrt(R g D), pure number

    References
    ----------
    parker_2004, dietrich_1982
    """
    x = np.log(np.asarray(rep, dtype=float))
    return np.exp(-2.891394 + x * (0.95296 + x * (-0.056835 + x * (-0.002892 + x * 0.000245))))


@formula(
    "settling.gibbs",
    gives="settling velocity of spheres w",
    unit="m/s",
    equation="w = (-3 eta + sqrt(9 eta^2 + G r^2 rho (rho_s - rho)(0.015476 + 0.19841 r)))"
    "/(rho (0.011607 + 0.14881 r)), cgs, r radius",
    source="gibbs_1971",
    domain="spheres 0.05-5 mm",
    scatter="within 8 % of library sphere drag, 0.06-2 mm",
    status="memory",
    inputs=SYMBOLS,
    limits=(Limit("d_mm", 0.05, 5, lambda d_m, **_: np.asarray(d_m) * 1e3),),
    positive=("d_m", "rho_s_kg_m3", "rho_kg_m3", "mu_pa_s"),
    homogeneous=False,
    resolve=Fluid(("rho_s_kg_m3", "rho_kg_m3", "mu_pa_s")),
    pitfalls="Radius, not diameter, and cgs units inside; diverges above 5 mm.",
)
def gibbs(
    d_m: Values,
    rho_s_kg_m3: Values,
    rho_kg_m3: Values,
    mu_pa_s: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Settling velocity of spheres by the empirical law of Gibbs, Matthews & Link.

    Parameters
    ----------
    d_m : diameter, m
    rho_s_kg_m3, rho_kg_m3 : densities, kg/m3
    mu_pa_s : dynamic viscosity, Pa s

    Returns
    -------
    w, m/s

    References
    ----------
    gibbs_1971
    """
    r = np.asarray(d_m, dtype=float) * 100 / 2
    eta = np.asarray(mu_pa_s) * 10
    grain, fluid = np.asarray(rho_s_kg_m3) / 1000, np.asarray(rho_kg_m3) / 1000
    pull = np.asarray(g_m_s2) * 100 * np.square(r) * fluid * (grain - fluid) * (0.015476 + 0.19841 * r)
    return (np.sqrt(9 * np.square(eta) + pull) - 3 * eta) / (fluid * (0.011607 + 0.14881 * r)) / 100


def _sphere_drag_coefficient(reynolds: Values) -> Values:
    """Drag coefficient of a smooth sphere by the fit of Barati et al. 2014, Re up to 2e5.

    References
    ----------
    barati_2014
    """
    inverse = 1 / np.asarray(reynolds)
    return (
        5.4856e9 * np.tanh(4.3774e-9 * inverse)
        + 0.0709 * np.tanh(700.6574 * inverse)
        + 0.3894 * np.tanh(74.1539 * inverse)
        - 0.1198 * np.tanh(7429.0843 * inverse)
        + 1.7174 * np.tanh(9.9851 / (reynolds + 2.3384))
        + 0.4744
    )


@cache
def _sphere_table() -> tuple[np.ndarray, np.ndarray]:
    """ln of D*^3 and of the Reynolds number at terminal velocity; finer than 1e-5 by interpolation."""
    log_reynolds = np.linspace(np.log(1e-12), np.log(2e5), 8192)
    reynolds = np.exp(log_reynolds)
    return np.log(0.75 * _sphere_drag_coefficient(reynolds) * reynolds**2), log_reynolds


@formula(
    "settling.sphere_drag",
    gives="settling velocity of smooth spheres ws",
    unit="m/s",
    equation="ws^2 = 4 R g D/(3 Cd(Re)), Re = ws D/nu, Cd by Barati, Neyshabouri & Ahmadi",
    source="barati_2014",
    locator="drag law for Re up to 2e5",
    domain="smooth spheres, Re below 2e5",
    scatter="drag laws differ by 3-4 % in the sand range",
    status="secondary",
    inputs=SYMBOLS,
    limits=(Limit("D*", 2.7e-4, 1.9e3, lambda **sizes: np.cbrt(galileo(**sizes))),),
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Not a law for natural grains.",
)
def sphere_drag(
    d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Settling velocity of smooth spheres, the benchmark.

    Parameters
    ----------
    d_m : diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    ws, m/s

    Notes
    -----
    Cd Re^2 = 4/3 D*^3 has one root; it is read from a table of the exact relation in logarithms.

    References
    ----------
    barati_2014
    """
    log_size, log_reynolds = _sphere_table()
    size = np.log(galileo(d_m, submerged_gravity, nu_m2_s, g_m_s2))
    return np.exp(np.interp(size, log_size, log_reynolds, left=np.nan, right=np.nan)) * nu_m2_s / d_m
