"""Density and viscosity of fresh and sea water at the pressure of one atmosphere.

Air constants and the defaults for what a person does not give are in `inputs`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Values, formula
from logkit.registry import Limit

KELVIN = 273.15
_EOS_TEMPERATURE = Limit("temp_c", 0, 40, lambda temp_c, **_: temp_c)
_EOS_SALINITY = Limit("salinity", 0, 42, lambda salinity, **_: salinity)


@formula(
    "water.viscosity_fresh",
    gives="dynamic viscosity of pure water mu",
    unit="Pa s",
    equation="mu = 1e-6 (280.68 t^-1.9 + 511.45 t^-7.7 + 61.131 t^-19.6 + 0.45903 t^-40), "
    "t = (T + 273.15)/300",
    source="iapws_2011",
    locator="SR6-08, viscosity of liquid water at 0.1 MPa",
    domain="253.15-383.15 K, 0.1 MPa",
    scatter="about 1 %",
    status="secondary",
    inputs=SYMBOLS,
    limits=(Limit("temp_c", -20, 110, lambda temp_c, **_: temp_c),),
    homogeneous=False,
    pitfalls="Kelvin inside, degrees Celsius outside.",
)
def viscosity_fresh(temp_c: Values) -> Values:
    """Dynamic viscosity of fresh water.

    Parameters
    ----------
    temp_c : temperature, °C, any shape

    Returns
    -------
    mu, Pa s

    References
    ----------
    iapws_2011
    """
    t = (np.asarray(temp_c) + KELVIN) / 300
    log_t = np.log(t)
    return 1e-6 * (
        280.68 * np.exp(-1.9 * log_t)
        + 511.45 * np.exp(-7.7 * log_t)
        + 61.131 * np.exp(-19.6 * log_t)
        + 0.45903 * np.exp(-40 * log_t)
    )


@formula(
    "water.density",
    gives="density of water rho",
    unit="kg/m3",
    equation="EOS-80 polynomial in T and S at 1 atm with terms in S, S^1.5 and S^2",
    source="millero_poisson_1981",
    locator="UNESCO Tech. Pap. Mar. Sci. 44, eq. 13-14",
    domain="0-40 °C, practical salinity 0-42",
    scatter="within 0.003 kg/m3 of TEOS-10 for 0-30 °C",
    status="memory",
    inputs=SYMBOLS,
    limits=(_EOS_TEMPERATURE, _EOS_SALINITY),
    not_negative=("salinity",),
    homogeneous=False,
    pitfalls="Practical salinity, not kg/kg; temperature scale of 1968 (difference below 0.01 °C).",
)
def density(temp_c: Values, salinity: Values = 0.0) -> Values:
    """Density of fresh or sea water.

    Parameters
    ----------
    temp_c : temperature, °C
    salinity : practical salinity, 0 for fresh water

    Returns
    -------
    rho, kg/m3

    References
    ----------
    millero_poisson_1981, unesco_1983
    """
    t, s = np.asarray(temp_c, dtype=float), np.asarray(salinity, dtype=float)
    pure = 999.842594 + t * (
        6.793952e-2 + t * (-9.095290e-3 + t * (1.001685e-4 + t * (-1.120083e-6 + t * 6.536332e-9)))
    )
    linear = 8.24493e-1 + t * (-4.0899e-3 + t * (7.6438e-5 + t * (-8.2467e-7 + t * 5.3875e-9)))
    root = -5.72466e-3 + t * (1.0227e-4 - t * 1.6546e-6)
    return pure + s * (linear + np.sqrt(s) * root + s * 4.8314e-4)


@formula(
    "water.viscosity_sea",
    gives="dynamic viscosity of sea water mu",
    unit="Pa s",
    equation="mu = mu_w (1 + A S + B S^2), mu_w = 4.2844e-5 + 1/(0.157 (T + 64.993)^2 - 91.296), "
    "A = 1.541 + 1.998e-2 T - 9.52e-5 T^2, B = 7.974 - 7.561e-2 T + 4.724e-4 T^2, S in kg/kg",
    source="sharqawy_2010",
    locator="eq. 22-23",
    domain="0-180 °C, 0-150 g/kg",
    scatter="1.5 %",
    status="secondary",
    inputs=SYMBOLS,
    limits=(
        Limit("temp_c", 0, 180, lambda temp_c, **_: temp_c),
        Limit("salinity", 0, 150, lambda salinity, **_: salinity),
    ),
    not_negative=("salinity",),
    homogeneous=False,
    pitfalls="The printed formula wants kg/kg; here salinity 35 means 35 g/kg, as everywhere in logkit.",
)
def viscosity_sea(temp_c: Values, salinity: Values) -> Values:
    """Dynamic viscosity of sea water.

    Parameters
    ----------
    temp_c : temperature, °C
    salinity : salinity, g/kg (the practical salinity is near enough)

    Returns
    -------
    mu, Pa s

    References
    ----------
    sharqawy_2010
    """
    t, s = np.asarray(temp_c, dtype=float), np.asarray(salinity, dtype=float) / 1000
    pure = 4.2844e-5 + 1 / (0.157 * (t + 64.993) ** 2 - 91.296)
    a = 1.541 + t * (1.998e-2 - t * 9.52e-5)
    b = 7.974 + t * (-7.561e-2 + t * 4.724e-4)
    return pure * (1 + s * (a + s * b))


def dynamic_viscosity(temp_c: Values, salinity: Values = 0.0) -> Values:
    """Dynamic viscosity by the fresh-water formula at salinity 0 and the sea-water formula above.

    Parameters
    ----------
    temp_c : temperature, °C
    salinity : practical salinity

    Returns
    -------
    mu, Pa s. The two formulas meet within 0.13 %.
    """
    salt = np.asarray(salinity, dtype=float)
    if not np.any(salt > 0):
        return viscosity_fresh(temp_c) + 0 * salt
    sea = viscosity_sea(temp_c, salinity)
    return sea if np.all(salt > 0) else np.where(salt > 0, sea, viscosity_fresh(temp_c))


@formula(
    "water.kinematic_viscosity",
    gives="kinematic viscosity of water nu",
    unit="m2/s",
    equation="nu = mu/rho",
    source="definition",
    domain="as density and viscosity",
    scatter="about 1 %",
    status="published",
    inputs=SYMBOLS,
    limits=(_EOS_TEMPERATURE, _EOS_SALINITY),
    not_negative=("salinity",),
    homogeneous=False,
)
def kinematic_viscosity(temp_c: Values, salinity: Values = 0.0) -> Values:
    """Kinematic viscosity of fresh or sea water.

    Parameters
    ----------
    temp_c : temperature, °C
    salinity : practical salinity

    Returns
    -------
    nu, m2/s
    """
    return dynamic_viscosity(temp_c, salinity) / density(temp_c, salinity)
