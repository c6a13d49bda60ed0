"""Waves: near-bed motion by linear theory, breaking, grain motion and wash-out under waves, combined flow.

Ripple geometry and the chain from a ripple to a region of waves are in `wave_ripples`.
"""

from __future__ import annotations

import numpy as np

from logkit.errors import LogkitError
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.registry import GRAVITY_M_S2, Limit

KOMAR_MILLER_RANGE = (0.21, 0.30)
"""Published values of the coefficient of the threshold of fine sand: carry both."""
_WAVE = ("period_s", "water_depth_m")


def wavenumber(period_s: Values, water_depth_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> np.ndarray:
    """Wavenumber k of linear theory, (2 pi/T)^2 = g k tanh(k h).

    Parameters
    ----------
    period_s : T, s
    water_depth_m : h, m

    Returns
    -------
    k, 1/m

    Notes
    -----
    Solved for x = k h by Newton steps inside the bracket [max(a, sqrt a), a + sqrt a], a = (2 pi/T)^2 h/g,
    until no value moves by more than 1e-12 of itself.
    """
    h = np.asarray(water_depth_m, dtype=float)
    a = np.square(2 * np.pi / np.asarray(period_s, dtype=float)) * h / g_m_s2
    low, high = np.maximum(a, np.sqrt(a)), a + np.sqrt(a)
    x = a / np.sqrt(np.tanh(a))
    for _ in range(100):
        t = np.tanh(x)
        step = (x * t - a) / (t + x * (1 - np.square(t)))
        new = np.clip(x - step, low, high)
        done = np.abs(new - x) <= 1e-12 * x
        x = new
        if np.all(done | np.isnan(x)):
            return x / h
    raise LogkitError("The wave dispersion relation was not solved.", "Check period and water depth.")


@formula(
    "waves.wavelength",
    gives="wavelength L",
    unit="m",
    equation="(2 pi/T)^2 = g k tanh(k h), L = 2 pi/k",
    source="airy_1845",
    domain="small steepness, flat bed",
    scatter="theory",
    status="published",
    inputs=SYMBOLS,
    positive=_WAVE,
)
def wavelength(period_s: Values, water_depth_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Length of a wave over a flat bed.

    Parameters
    ----------
    period_s : T, s
    water_depth_m : h, m

    Returns
    -------
    L, m

    References
    ----------
    airy_1845
    """
    return 2 * np.pi / wavenumber(period_s, water_depth_m, g_m_s2)


@formula(
    "waves.breaking_height",
    gives="largest wave height before breaking",
    unit="m",
    equation="smaller of 0.142 L tanh(k h) and 0.78 h",
    source="miche_1944",
    locator="0.78 h: solitary-wave limit",
    domain="gently sloping bed",
    scatter="0.6-0.8 h in the field",
    status="secondary",
    inputs=SYMBOLS,
    positive=_WAVE,
)
def breaking_height(period_s: Values, water_depth_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Height at which a wave breaks.

    Parameters
    ----------
    period_s : T, s
    water_depth_m : h, m

    Returns
    -------
    H, m

    References
    ----------
    miche_1944
    """
    k = wavenumber(period_s, water_depth_m, g_m_s2)
    h = np.asarray(water_depth_m)
    return np.minimum(0.142 * 2 * np.pi / k * np.tanh(k * h), 0.78 * h)


@formula(
    "waves.orbital_diameter",
    gives="near-bed orbital diameter d0",
    unit="m",
    equation="d0 = H/sinh(k h)",
    source="airy_1845",
    domain="small steepness, flat bed",
    scatter="theory",
    status="published",
    inputs=SYMBOLS,
    limits=(
        Limit("H/H_breaking", None, 1, lambda period_s, water_depth_m, wave_height_m, **_: (
            np.asarray(wave_height_m) / breaking_height(period_s, water_depth_m))),
    ),
    positive=_WAVE,
    not_negative=("wave_height_m",),
)  # fmt: skip
def orbital_diameter(
    period_s: Values, water_depth_m: Values, wave_height_m: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Distance water travels to and fro at the bed.

    Parameters
    ----------
    period_s : T, s
    water_depth_m : h, m
    wave_height_m : H, m

    Returns
    -------
    d0, m

    References
    ----------
    airy_1845
    """
    depth = wavenumber(period_s, water_depth_m, g_m_s2) * water_depth_m
    with np.errstate(over="ignore"):
        return np.asarray(wave_height_m) / np.sinh(depth)


@formula(
    "waves.orbital_velocity",
    gives="near-bed orbital velocity amplitude um",
    unit="m/s",
    equation="um = pi d0/T",
    source="airy_1845",
    domain="small steepness, flat bed",
    scatter="theory",
    status="published",
    inputs=SYMBOLS,
    positive=("period_s",),
    not_negative=("orbital_diameter_m",),
)
def orbital_velocity(orbital_diameter_m: Values, period_s: Values) -> Values:
    """Largest velocity of the water at the bed.

    Parameters
    ----------
    orbital_diameter_m : d0, m
    period_s : T, s

    Returns
    -------
    um, m/s

    References
    ----------
    airy_1845
    """
    return np.pi * np.asarray(orbital_diameter_m) / period_s


@formula(
    "waves.komar_miller_threshold",
    gives="orbital velocity at which grains begin to move um",
    unit="m/s",
    equation="um = (a R g sqrt(T/pi) sqrt(D))^(2/3) below 0.5 mm; "
    "(0.46 pi R g D^0.75 (T/pi)^0.25)^(4/7) above; joined between 0.4 and 0.6 mm",
    source="komar_miller_1975",
    locator="Komar & Miller 1973 for fine sand",
    domain="0.1-2 mm, smooth bed",
    scatter="a 0.21-0.30 is 27 % in um; coarse branch 10-12 % above the printed dimensional form",
    status="secondary",
    inputs=SYMBOLS | {"coefficient": "a of the fine branch, 0.21-0.30"},
    limits=(Limit("d_mm", 0.1, 2, lambda d_m, **_: np.asarray(d_m) * 1e3),),
    positive=("d_m", "period_s", "submerged_gravity", "coefficient"),
    homogeneous=False,
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="The published branches leave a jump at 0.5 mm; it is smoothed here.",
)
def komar_miller_threshold(
    d_m: Values,
    period_s: Values,
    submerged_gravity: Values,
    coefficient: Values = KOMAR_MILLER_RANGE[0],
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Orbital velocity at which sand begins to move under waves.

    Parameters
    ----------
    d_m : diameter, m
    period_s : T, s
    submerged_gravity : R
    coefficient : a, 0.21-0.30

    Returns
    -------
    um, m/s

    References
    ----------
    komar_miller_1973, komar_miller_1975
    """
    d = np.asarray(d_m, dtype=float)
    weight, beat = np.asarray(submerged_gravity) * g_m_s2, np.asarray(period_s) / np.pi
    fine = np.cbrt(np.square(coefficient * weight) * beat * d)
    coarse = (0.46 * np.pi * weight * d**0.75 * beat**0.25) ** (4 / 7)
    share = np.clip(np.log(d / 0.4e-3) / np.log(0.6 / 0.4), 0, 1)
    return fine * (coarse / fine) ** share


@formula(
    "waves.ripple_initiation",
    gives="mobility number um^2/(R g D) at which ripples start on a natural bed",
    unit="1",
    equation="M = 2.5",
    source="sekiguchi_sunamura_2004",
    domain="wave flume, three sands",
    status="published",
    inputs={},
    pitfalls="The laws for flat and notched beds have uncertain exponents and are left out.",
)
def ripple_initiation() -> float:
    """Mobility number at which ripples start on a natural bed.

    Returns
    -------
    M, pure number

    References
    ----------
    sekiguchi_sunamura_2004
    """
    return 2.5


_SHEET = {"lower": 190.0, "upper": 240.0}


@formula(
    "waves.sheet_flow_velocity",
    gives="orbital velocity um at which ripples wash out, bound of the range",
    unit="m/s",
    equation="um = sqrt(psi R g D), psi = 190-240",
    source="van_der_a_2013",
    locator="appendix B",
    domain="sand",
    scatter="psi 190-240",
    status="secondary",
    inputs=SYMBOLS | {"bound": '"lower" or "upper"'},
    positive=("d_m", "submerged_gravity"),
    resolve=Fluid(("submerged_gravity",)),
    pitfalls="um is the peak value in irregular waves.",
)
def sheet_flow_velocity(
    d_m: Values, submerged_gravity: Values, bound: str, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Orbital velocity at which wave ripples give way to sheet flow.

    Parameters
    ----------
    d_m : diameter, m
    submerged_gravity : R
    bound : "lower" or "upper"

    Returns
    -------
    um, m/s

    References
    ----------
    van_der_a_2013
    """
    return np.sqrt(chosen("bound", bound, _SHEET) * np.asarray(submerged_gravity) * g_m_s2 * d_m)


_HCS = {
    "period": {"lower": 8.0, "upper": 10.0},
    "oscillatory velocity": {"lower": 0.50, "upper": 0.90},
    "current, isotropic": {"lower": 0.0, "upper": 0.05},
    "current, anisotropic": {"lower": 0.05, "upper": 0.10},
}


@formula(
    "waves.hcs_limits",
    gives="bound of the conditions of hummocky cross-stratification: s for the period, m/s for velocities",
    unit="",
    equation="T 8-10 s, Uo 0.50-0.90 m/s, Uu below 0.05 isotropic, 0.05-0.10 anisotropic, dune-like above",
    source="dumas_arnott_2006",
    domain="fine sand, wave tunnel",
    scatter="the ranges",
    status="published",
    inputs={"quantity": "one of " + ", ".join(repr(k) for k in _HCS), "bound": '"lower" or "upper"'},
    pitfalls="Hummocky beds give no current velocity beyond the bound of Uu.",
    homogeneous=False,
)
def hcs_limits(quantity: str, bound: str) -> float:
    """Bound of the conditions in which hummocks form.

    Parameters
    ----------
    quantity : which condition
    bound : "lower" or "upper"

    Returns
    -------
    s or m/s

    References
    ----------
    dumas_arnott_2006, southard_1990
    """
    return float(chosen("bound", bound, chosen("quantity", quantity, _HCS)))


@formula(
    "waves.hcs_spacing_over_orbital_maximum",
    gives="largest spacing of hummocks over orbital diameter",
    unit="1",
    equation="spacing < 0.75 d0",
    source="yang_2006",
    locator="abstract",
    domain="fine sand",
    status="published",
    inputs={},
)
def hcs_spacing_over_orbital_maximum() -> float:
    """Largest hummock spacing over orbital diameter.

    Returns
    -------
    pure number

    References
    ----------
    yang_2006
    """
    return 0.75


_HCS_RATE = {"hummocky": 4.2e-3 / 60, "swaley": 1e-3 / 60}


@formula(
    "waves.hcs_aggradation_rate",
    gives="aggradation rate",
    unit="mm/min",
    equation="4.2 mm/min hummocky, 1 mm/min swaley",
    source="dumas_arnott_2006",
    locator="abstract",
    domain="fine sand, wave tunnel",
    status="published",
    inputs={"structure": '"hummocky" or "swaley"'},
    homogeneous=False,
)
def hcs_aggradation_rate(structure: str) -> float:
    """Aggradation rate seen with hummocky or swaley cross-stratification.

    Parameters
    ----------
    structure : "hummocky" or "swaley"

    Returns
    -------
    rate, m/s (shown in mm/min)

    References
    ----------
    dumas_arnott_2006
    """
    return float(chosen("structure", structure, _HCS_RATE))
