"""Velocities read from grain size by empirical curves: classical erosion line, largest clasts, mud.

All carry dimensions in their coefficients. The deposition line and other ways to come to rest are in
`rest`; Shields curves are in `threshold`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.hydraulics.rest import hjulstrom_deposition
from logkit.registry import GRAVITY_M_S2, Limit


def _mm(d_m: Values) -> Values:
    return np.asarray(d_m, dtype=float) * 1e3


def _d_mm(low: float | None, high: float | None) -> tuple[Limit, ...]:
    return (Limit("d_mm", low, high, lambda d_m, **_: _mm(d_m)),)


@formula(
    "threshold.miller_u100",
    gives="velocity 1 m above the bed at the threshold U100",
    unit="m/s",
    equation="U100 = 122.6 D^0.29 (D < 0.2), 160.0 D^0.45 (D > 0.2); D cm, U cm/s",
    source="miller_1977",
    domain="quartz 0.1-60 mm, water of 20 °C",
    scatter="within -11 to +29 % of the main curve with a rough log law",
    status="memory",
    inputs=SYMBOLS,
    limits=_d_mm(0.1, 60),
    positive=("d_m",),
    homogeneous=False,
    pitfalls="Never for boulders.",
)
def miller_u100(d_m: Values) -> Values:
    """Threshold velocity one metre above the bed.

    Parameters
    ----------
    d_m : grain diameter, m

    Returns
    -------
    U100, m/s

    References
    ----------
    miller_1977
    """
    d = np.asarray(d_m, dtype=float) * 100
    return np.where(d < 0.2, 122.6 * d**0.29, 160.0 * d**0.45) / 100


@formula(
    "threshold.hjulstrom_erosion",
    gives="mean velocity of the classical erosion line v",
    unit="m/s",
    equation="v = 1.5 (nu/D)^0.80 + 0.85 (nu/D)^0.35 + 9.5 R g D/(1 + 2.25 R g D)",
    source="miedema_2010",
    locator="fit to Hjulstrom 1935",
    domain="flows about 1 m deep, 0.001-100 mm",
    scatter="the classical band is a factor 1.5-2",
    status="memory",
    inputs=SYMBOLS,
    limits=_d_mm(0.001, 100),
    positive=("d_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    homogeneous=False,
    pitfalls="For qualitative use only.",
)
def hjulstrom_erosion(
    d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """Erosion line of the classical velocity-size diagram, as an algebraic fit.

    Parameters
    ----------
    d_m : grain diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    v, m/s

    References
    ----------
    hjulstrom_1935, miedema_2010
    """
    ratio = np.asarray(nu_m2_s) / d_m
    weight = np.asarray(submerged_gravity) * g_m_s2 * d_m
    return 1.5 * ratio**0.80 + 0.85 * ratio**0.35 + 9.5 * weight / (1 + 2.25 * weight)


def _erosion_slope(
    d_fine_m: Values, d_coarse_m: Values, submerged_gravity: Values, nu_m2_s: Values
) -> Values:
    """Log-log slope of the erosion line between two sizes."""
    rise = np.log(
        hjulstrom_erosion(d_coarse_m, submerged_gravity, nu_m2_s)
        / hjulstrom_erosion(d_fine_m, submerged_gravity, nu_m2_s)
    )
    return rise / np.log(np.divide(d_coarse_m, d_fine_m))


_TWO_SIZES = SYMBOLS | {"d_fine_m": "finer diameter", "d_coarse_m": "coarser diameter"}


@formula(
    "threshold.hjulstrom_erosion_slope_sign",
    gives="sign of the log-log slope of the erosion line between two sizes",
    unit="1",
    equation="sign of ln(v2/v1)/ln(D2/D1) by threshold.hjulstrom_erosion",
    source="miedema_2010",
    status="memory",
    inputs=_TWO_SIZES,
    positive=("d_fine_m", "d_coarse_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    homogeneous=False,
)
def hjulstrom_erosion_slope_sign(
    d_fine_m: Values, d_coarse_m: Values, submerged_gravity: Values, nu_m2_s: Values
) -> Values:
    """Whether erosion gets harder (-1, cohesion) or easier (+1) to the finer size.

    Parameters
    ----------
    d_fine_m, d_coarse_m : diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    -1 or +1
    """
    return np.sign(_erosion_slope(d_fine_m, d_coarse_m, submerged_gravity, nu_m2_s))


@formula(
    "threshold.hjulstrom_slope_ratio",
    gives="log-log slope of the erosion line over that of the deposition line",
    unit="1",
    equation="slopes of threshold.hjulstrom_erosion and rest.hjulstrom_deposition between two sizes",
    source="miedema_2010",
    status="memory",
    inputs=_TWO_SIZES,
    positive=("d_fine_m", "d_coarse_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    homogeneous=False,
    pitfalls="Near one above 1 mm only.",
)
def hjulstrom_slope_ratio(
    d_fine_m: Values, d_coarse_m: Values, submerged_gravity: Values, nu_m2_s: Values
) -> Values:
    """How parallel the two classical lines run.

    Parameters
    ----------
    d_fine_m, d_coarse_m : diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    ratio of slopes, pure number
    """
    fall = np.log(hjulstrom_deposition(d_coarse_m) / hjulstrom_deposition(d_fine_m))
    deposition = fall / np.log(np.divide(d_coarse_m, d_fine_m))
    return _erosion_slope(d_fine_m, d_coarse_m, submerged_gravity, nu_m2_s) / deposition


_POWER_INPUTS = {"d_m": "intermediate axis of the largest clasts d"}
_COSTA = (
    "Steady-flow competence may exceed the real peak velocity of flash floods; carry the spread of the three."
)
_FLOOR = "The lowest values at which motion was ever seen: a floor, never a central estimate."


def _clast_power(
    name: str,
    gives: str,
    unit: str,
    factor: float,
    power: float,
    source: str,
    limits: tuple[Limit, ...],
    note: str,
) -> None:
    """Register one power law of the intermediate axis in mm."""

    def law(d_m: Values) -> Values:
        return factor * _mm(d_m) ** power

    law.__name__ = law.__qualname__ = name
    law.__doc__ = (
        f"{gives[0].upper()}{gives[1:]} from the intermediate axis (m), {factor} d^{power} with d in mm."
    )
    globals()[name] = formula(
        f"threshold.{name}",
        gives=gives,
        unit=unit,
        equation=f"{factor} d^{power}, d in mm",
        source=source,
        domain="floods in steep valleys" if source == "costa_1983" else "streams with gravel to boulders",
        scatter="the three velocity relations differ by up to 20 %"
        if source == "costa_1983"
        else "an envelope",
        status="memory",
        inputs=_POWER_INPUTS,
        limits=limits,
        positive=("d_m",),
        homogeneous=False,
        pitfalls=note,
    )(law)


_clast_power("costa_mean", "velocity V", "m/s", 0.18, 0.487, "costa_1983", _d_mm(50, 3200), _COSTA)
_clast_power("costa_bed", "velocity V", "m/s", 0.20, 0.455, "costa_1983", _d_mm(50, 3200), _COSTA)
_clast_power("costa_large", "velocity V", "m/s", 0.27, 0.40, "costa_1983", _d_mm(500, None), _COSTA)
_clast_power(
    "costa_stress", "bed shear stress tau", "Pa", 0.163, 1.213, "costa_1983", _d_mm(50, 3200), _COSTA
)
_clast_power("costa_power", "stream power omega", "W/m2", 0.030, 1.686, "costa_1983", _d_mm(50, 3200), _COSTA)
_clast_power(
    "williams_lower", "lowest velocity V", "m/s", 0.065, 0.5, "williams_1983", _d_mm(10, 1500), _FLOOR
)
_clast_power(
    "williams_stress",
    "lowest bed shear stress tau",
    "Pa",
    0.17,
    1.0,
    "williams_1983",
    _d_mm(10, 1500),
    _FLOOR,
)
_clast_power(
    "williams_power",
    "lowest stream power omega",
    "W/m2",
    0.079,
    1.3,
    "williams_1983",
    _d_mm(10, 1500),
    _FLOOR,
)


@formula(
    "threshold.largest_clast_velocity",
    gives="floor, lowest and highest velocity of the published largest-clast relations",
    unit="m/s",
    equation="threshold.williams_lower; min and max of threshold.costa_mean, costa_bed and, from 500 mm, "
    "costa_large",
    source="ours",
    domain="clasts 50-1500 mm",
    scatter="the spread is the value",
    status="ours",
    inputs=_POWER_INPUTS,
    limits=_d_mm(50, 1500),
    positive=("d_m",),
    homogeneous=False,
    pitfalls=_COSTA,
)
def largest_clast_velocity(d_m: Values) -> np.ndarray:
    """Velocity from the largest clasts as a range, never one number.

    Parameters
    ----------
    d_m : intermediate axis, m

    Returns
    -------
    array of shape (3, ...): floor, lowest and highest velocity, m/s

    References
    ----------
    costa_1983, williams_1983, alexander_cooker_2016
    """
    laws = {
        name: globals()[name](d_m) for name in ("costa_mean", "costa_bed", "costa_large", "williams_lower")
    }
    large = np.where(_mm(d_m) >= 500, laws["costa_large"], np.nan)
    both = np.stack(np.broadcast_arrays(laws["costa_mean"], laws["costa_bed"], large))
    return np.stack([laws["williams_lower"], np.fmin.reduce(both), np.fmax.reduce(both)])


@formula(
    "threshold.mitchener_torfs",
    gives="erosion stress of mud tau_ce",
    unit="Pa",
    equation="tau_ce = 0.015 (rho_b - 1000)^0.73",
    source="mitchener_torfs_1996",
    domain="soft mud",
    scatter="large; R2 0.73 in a fit of the same kind",
    status="memory",
    inputs={"bulk_density_kg_m3": "wet bulk density rho_b of the mud when it was eroded"},
    limits=(Limit("bulk_density_kg_m3", 1000, 1600, lambda bulk_density_kg_m3, **_: bulk_density_kg_m3),),
    positive=("bulk_density_kg_m3",),
    homogeneous=False,
    pitfalls="The bulk density at the time of erosion is not preserved in rock.",
)
def mitchener_torfs(bulk_density_kg_m3: Values) -> Values:
    """Erosion stress of soft mud from its bulk density.

    Parameters
    ----------
    bulk_density_kg_m3 : wet bulk density, kg/m3

    Returns
    -------
    tau_ce, Pa; NaN below the density of water

    References
    ----------
    mitchener_torfs_1996
    """
    excess = np.asarray(bulk_density_kg_m3, dtype=float) - 1000
    return 0.015 * np.where(excess >= 0, excess, np.nan) ** 0.73


_MUD = {"soft": {"lower": 0.1, "upper": 0.5}, "consolidated": {"lower": 0.5, "upper": 5.0}}


@formula(
    "threshold.mud_range",
    gives="erosion stress of mud tau, bound of the range",
    unit="Pa",
    equation="soft 0.1-0.5 Pa, consolidated 0.5-5 Pa",
    source="ours",
    domain="rip-up clasts give a minimum stress in this range",
    scatter="a factor 10",
    status="ours",
    inputs={"state": '"soft" or "consolidated"', "bound": '"lower" or "upper"'},
    homogeneous=False,
    pitfalls="The clay content of the rock is not that of the fresh bed.",
)
def mud_range(state: str, bound: str) -> float:
    """Bound of the erosion stress of mud.

    Parameters
    ----------
    state : "soft" or "consolidated"
    bound : "lower" or "upper"

    Returns
    -------
    tau, Pa
    """
    return float(chosen("bound", bound, chosen("state", state, _MUD)))
