"""Wave ripples: spacing and height by orbital diameter, and the way back to a region of waves.

The way back is not unique, and is never one depth. Orbital motion itself is in `waves`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.hydraulics.waves import KOMAR_MILLER_RANGE, komar_miller_threshold
from logkit.registry import GRAVITY_M_S2, Limit

ORBITAL_COEFFICIENT = 0.65
STEEPNESS_CAP = 0.17
_ORBITAL_BELOW, _ANORBITAL_ABOVE = 20.0, 100.0


@formula(
    "waves.ripple_spacing_orbital",
    gives="spacing of orbital ripples lambda",
    unit="m",
    equation="lambda = 0.65 d0",
    source="miller_komar_1980",
    domain="vortex ripples in flumes and water tunnels, small d0",
    scatter="coefficient 0.62-0.65",
    status="published",
    inputs=SYMBOLS | {"coefficient": "lambda/d0, 0.62-0.65"},
    positive=("orbital_diameter_m", "coefficient"),
    pitfalls="Fails at large d0, later for coarser sand.",
)
def ripple_spacing_orbital(orbital_diameter_m: Values, coefficient: Values = ORBITAL_COEFFICIENT) -> Values:
    """Spacing of ripples that follow the orbital diameter.

    Parameters
    ----------
    orbital_diameter_m : d0, m
    coefficient : lambda/d0

    Returns
    -------
    lambda, m

    References
    ----------
    miller_komar_1980
    """
    return coefficient * np.asarray(orbital_diameter_m)


@formula(
    "waves.ripple_spacing_limit",
    gives="largest spacing of orbital ripples lambda_max",
    unit="m",
    equation="lambda_max(cm) = 0.0028 D(µm)^1.68",
    source="miller_komar_1980",
    domain="sand 0.1-0.5 mm",
    status="memory",
    inputs=SYMBOLS,
    limits=(Limit("d_mm", 0.1, 0.5, lambda d_m, **_: np.asarray(d_m) * 1e3),),
    positive=("d_m",),
    homogeneous=False,
)
def ripple_spacing_limit(d_m: Values) -> Values:
    """Largest spacing that still follows the orbital diameter.

    Parameters
    ----------
    d_m : diameter, m

    Returns
    -------
    lambda_max, m

    References
    ----------
    miller_komar_1980
    """
    return 0.0028 * (np.asarray(d_m, dtype=float) * 1e6) ** 1.68 / 100


def _height(orbital_diameter_m: Values, spacing_m: Values) -> np.ndarray:
    """Ripple height for a spacing: smaller root of the steepness law, capped; NaN where it has no root."""
    constant = 2.28 + np.log(np.divide(orbital_diameter_m, spacing_m))
    inside = 1.442**2 - 4 * 0.095 * constant
    y = (1.442 - np.sqrt(np.where(inside >= 0, inside, np.nan))) / (2 * 0.095)
    steepness = np.exp(-0.095 * np.square(y) + 0.442 * y - 2.28)
    return np.minimum(steepness, STEEPNESS_CAP) * spacing_m


@formula(
    "waves.wiberg_harris_spacing",
    gives="spacing of wave ripples lambda",
    unit="m",
    equation="0.62 d0 orbital, 535 D anorbital, ln lambda linear in ln(d0/eta_ano) between 20 and 100",
    source="wiberg_harris_1994",
    domain="wave-dominated sand",
    status="secondary",
    inputs=SYMBOLS,
    positive=("orbital_diameter_m", "d50_m"),
    pitfalls="The inverse is not unique: a spacing fits an orbital and an anorbital diameter.",
)
def wiberg_harris_spacing(orbital_diameter_m: Values, d50_m: Values) -> Values:
    """Spacing of orbital, suborbital and anorbital ripples.

    Parameters
    ----------
    orbital_diameter_m : d0, m
    d50_m : median diameter, m

    Returns
    -------
    lambda, m

    References
    ----------
    wiberg_harris_1994
    """
    d0 = np.asarray(orbital_diameter_m, dtype=float)
    orbital, anorbital = 0.62 * d0, 535 * np.asarray(d50_m, dtype=float)
    # the steepness law has no root above d0/lambda = 24: far beyond the anorbital limit
    relative = np.fmin(d0 / _height(d0, anorbital), np.where(np.isnan(d0), np.nan, np.inf))
    share = np.clip(np.log(relative / _ORBITAL_BELOW) / np.log(_ANORBITAL_ABOVE / _ORBITAL_BELOW), 0, 1)
    return orbital * (anorbital / orbital) ** share


@formula(
    "waves.wiberg_harris_height",
    gives="height of wave ripples eta",
    unit="m",
    equation="ln(eta/lambda) = -0.095 y^2 + 0.442 y - 2.28, y = ln(d0/eta), eta/lambda at most 0.17",
    source="wiberg_harris_1994",
    domain="wave-dominated sand",
    status="secondary",
    inputs=SYMBOLS,
    limits=(
        Limit(
            "d0/lambda",
            None,
            24,
            lambda orbital_diameter_m, d50_m, **_: (
                np.asarray(orbital_diameter_m) / wiberg_harris_spacing(orbital_diameter_m, d50_m)
            ),
        ),
    ),
    positive=("orbital_diameter_m", "d50_m"),
    pitfalls="Natural logarithms. No height above d0/lambda = 24, where the law has no root.",
)
def wiberg_harris_height(orbital_diameter_m: Values, d50_m: Values) -> Values:
    """Height of orbital, suborbital and anorbital ripples.

    Parameters
    ----------
    orbital_diameter_m : d0, m
    d50_m : median diameter, m

    Returns
    -------
    eta, m; NaN above d0/lambda of about 24, where the law gives no height

    References
    ----------
    wiberg_harris_1994
    """
    return _height(orbital_diameter_m, wiberg_harris_spacing(orbital_diameter_m, d50_m))


@formula(
    "waves.longest_period",
    gives="longest period of waves that made orbital ripples of this spacing",
    unit="s",
    equation="T_max = pi d0/um, d0 = lambda/0.65, um by waves.komar_miller_threshold",
    source="diem_1985",
    locator="chain lambda, d0, T_max; same in P. A. Allen 1984",
    domain="orbital ripples",
    scatter="dominated by the threshold (27 %) and by the orbital assumption",
    status="secondary",
    inputs=SYMBOLS | {"coefficient": "a of the threshold, 0.21-0.30"},
    limits=(Limit("spacing/limit", None, 1, lambda spacing_m, d_m, **_: (
        np.asarray(spacing_m) / ripple_spacing_limit(d_m))),),
    positive=("spacing_m", "d_m", "submerged_gravity", "coefficient"),
    resolve=Fluid(("submerged_gravity",)),
    homogeneous=False,
    pitfalls="The result opens a region of waves, never one depth.",
)  # fmt: skip
def longest_period(
    spacing_m: Values,
    d_m: Values,
    submerged_gravity: Values,
    coefficient: Values = KOMAR_MILLER_RANGE[0],
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Longest wave period that still moves the sand with the orbit of the ripple.

    Parameters
    ----------
    spacing_m : lambda, m
    d_m : diameter, m
    submerged_gravity : R
    coefficient : a of the threshold

    Returns
    -------
    T, s

    References
    ----------
    diem_1985, allen_p_1984
    """
    d0 = np.asarray(spacing_m) / ORBITAL_COEFFICIENT
    # um goes as a power of T that depends on D alone: two periods give it, and the period in closed form
    one_second = komar_miller_threshold(d_m, 1.0, submerged_gravity, coefficient, g_m_s2)
    e_seconds = komar_miller_threshold(d_m, np.e, submerged_gravity, coefficient, g_m_s2)
    power = np.log(e_seconds / one_second)
    return (np.pi * d0 / one_second) ** (1 / (1 + power))


@formula(
    "waves.diem_chain",
    gives="longest deep-water wavelength of waves that made orbital ripples of this spacing",
    unit="m",
    equation="L_max = g T_max^2/(2 pi), T_max by waves.longest_period",
    source="diem_1985",
    domain="orbital ripples",
    scatter="dominated by the threshold and by the orbital assumption",
    status="memory",
    inputs=SYMBOLS | {"coefficient": "a of the threshold, 0.21-0.30"},
    positive=("spacing_m", "d_m", "submerged_gravity", "coefficient"),
    resolve=Fluid(("submerged_gravity",)),
    homogeneous=False,
    pitfalls="A region, never one depth; a longer period needs anorbital ripples.",
)
def diem_chain(
    spacing_m: Values,
    d_m: Values,
    submerged_gravity: Values,
    coefficient: Values = KOMAR_MILLER_RANGE[0],
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Longest deep-water wavelength behind a ripple.

    Parameters
    ----------
    spacing_m : lambda, m
    d_m : diameter, m
    submerged_gravity : R
    coefficient : a of the threshold

    Returns
    -------
    L_max, m

    References
    ----------
    diem_1985, evans_1942
    """
    period = longest_period(spacing_m, d_m, submerged_gravity, coefficient, g_m_s2)
    return np.asarray(g_m_s2) * np.square(period) / (2 * np.pi)


def wave_region(
    spacing_m: float,
    d_m: float,
    submerged_gravity: float,
    coefficient: float = KOMAR_MILLER_RANGE[0],
    periods: int = 24,
) -> dict[str, np.ndarray]:
    """Waves that can have made orbital ripples: for each period the depths at which they do not break.

    Parameters
    ----------
    spacing_m : ripple spacing lambda, m
    d_m : diameter, m
    submerged_gravity : R
    coefficient : a of the threshold of motion
    periods : number of periods between a fifth of the longest and the longest

    Returns
    -------
    arrays `period_s`, `depth_min_m`, `depth_max_m`: the depth range in which a wave with the ripple's orbital
    diameter is below its breaking height; the deep end is half the deep-water wavelength

    References
    ----------
    diem_1985, miche_1944
    """
    from logkit.hydraulics.waves import breaking_height, wavenumber

    d0 = spacing_m / ORBITAL_COEFFICIENT
    longest = float(longest_period(spacing_m, d_m, submerged_gravity, coefficient))
    period = np.geomspace(longest / 5, longest, periods)
    depth = np.geomspace(1e-3, 1, 400)[:, None] * GRAVITY_M_S2 * period**2 / (4 * np.pi)
    height = d0 * np.sinh(wavenumber(period, depth) * depth)
    stands = height <= breaking_height(period, depth)
    lowest = np.where(stands, depth, np.nan)
    possible = stands.any(axis=0)
    return {
        "period_s": period[possible],
        "depth_min_m": np.nanmin(lowest[:, possible], axis=0),
        "depth_max_m": np.nanmax(lowest[:, possible], axis=0),
    }
