"""Settling velocity of single grains and of grains in company.

Laws for spheres, a benchmark only, are in `spheres`; suspension is in `suspension`.
"""

from __future__ import annotations

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, chosen, formula
from logkit.registry import GRAVITY_M_S2, Limit

FERGUSON_CHURCH = {
    "sphere": (18.0, 0.4),
    "sieve": (18.0, 1.0),
    "nominal": (20.0, 1.1),
    "angular": (24.0, 1.2),
}
"""Constants C1, C2 of Ferguson & Church by what the diameter or the shape is."""

_FLUID = Fluid(("submerged_gravity", "nu_m2_s"))
_SIZES = ("d_m", "submerged_gravity", "nu_m2_s")


def galileo(d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """R g D^3/nu^2, the cube of D*."""
    return dimensionless_diameter(d_m, submerged_gravity, nu_m2_s, g_m_s2) ** 3


@formula(
    "settling.stokes",
    gives="settling velocity ws",
    unit="m/s",
    equation="ws = R g D^2/(18 nu)",
    source="stokes_1851",
    domain="ws D/nu below about 1: quartz finer than about 0.1 mm",
    scatter="theory; 2-7 % above sphere values at 0.0625 mm",
    status="published",
    inputs=SYMBOLS,
    limits=(Limit("ws D/nu", None, 1, lambda **sizes: galileo(**sizes) / 18),),
    positive=_SIZES,
    resolve=_FLUID,
    pitfalls="At 0.25 mm it is 70 % too high, at 1 mm more than five times.",
)
def stokes(d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Settling velocity of small spheres.

    Parameters
    ----------
    d_m : diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    ws, m/s

    References
    ----------
    stokes_1851
    """
    return np.asarray(submerged_gravity) * g_m_s2 * np.square(d_m) / (18 * np.asarray(nu_m2_s))


@formula(
    "settling.ferguson_church",
    gives="settling velocity ws",
    unit="m/s",
    equation="ws = R g D^2/(C1 nu + sqrt(0.75 C2 R g D^3))",
    source="ferguson_church_2004",
    domain="silt to boulder",
    scatter="formulas for natural sand differ by 10-15 %",
    status="secondary",
    inputs=SYMBOLS
    | {
        "c1": "constant C1: 18 sieve diameters and spheres, 20 nominal, 24 very angular",
        "c2": "constant C2: 1.0, 1.1, 1.2 in the same order; 0.4 smooth spheres",
    },
    positive=(*_SIZES, "c1", "c2"),
    resolve=_FLUID,
    pitfalls="With sphere constants it is 15-24 % above standard sphere drag at 0.25-1 mm.",
)
def ferguson_church(
    d_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    c1: Values = 18.0,
    c2: Values = 1.0,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Settling velocity of natural grains, the centre of `band`.

    Parameters
    ----------
    d_m : diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    c1, c2 : constants, see `FERGUSON_CHURCH`

    Returns
    -------
    ws, m/s

    References
    ----------
    ferguson_church_2004
    """
    pull = np.asarray(submerged_gravity) * g_m_s2 * np.square(d_m)
    return pull / (c1 * np.asarray(nu_m2_s) + np.sqrt(0.75 * c2 * pull * d_m))


@formula(
    "settling.soulsby",
    gives="settling velocity ws",
    unit="m/s",
    equation="ws = (nu/D)(sqrt(10.36^2 + 1.049 D*^3) - 10.36)",
    source="soulsby_1997",
    domain="natural sand to fine gravel",
    scatter="formulas for natural sand differ by 10-15 %",
    status="published",
    inputs=SYMBOLS,
    positive=_SIZES,
    resolve=_FLUID,
    pitfalls="Its fine limit is 9 % below Stokes.",
)
def soulsby(d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Settling velocity of natural sand.

    Parameters
    ----------
    d_m : diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    ws, m/s

    References
    ----------
    soulsby_1997
    """
    cube = 1.049 * galileo(d_m, submerged_gravity, nu_m2_s, g_m_s2)
    # (sqrt(a^2 + x) - a) loses all digits for clay; x/(sqrt(a^2 + x) + a) is the same and does not
    return np.asarray(nu_m2_s) / d_m * cube / (np.sqrt(10.36**2 + cube) + 10.36)


@formula(
    "settling.dietrich",
    gives="settling velocity ws",
    unit="m/s",
    equation="W = R3 x 10^(R1 + R2), ws = (W R g nu)^(1/3); R1, R2, R3 polynomials of log10 Dd, CSF and P",
    source="dietrich_1982",
    domain="Dd up to 5e9, CSF 0.15-1, P 0-6",
    scatter="sphere curve 5-11 % below other sphere laws at 0.1-0.25 mm",
    status="secondary",
    inputs=SYMBOLS | {"csf": "Corey shape factor c/sqrt(a b)", "powers": "Powers roundness P, 0-6"},
    limits=(
        Limit(
            "Dd", None, 5e9, lambda d_m, submerged_gravity, nu_m2_s, g_m_s2, **_: galileo(
                d_m, submerged_gravity, nu_m2_s, g_m_s2)
        ),
        Limit("csf", 0.15, 1, lambda csf, **_: csf),
        Limit("powers", 0, 6, lambda powers, **_: powers),
    ),
    positive=(*_SIZES, "csf"),
    not_negative=("powers",),
    resolve=_FLUID,
    pitfalls="Dd is D*^3; the branches leave a step of 4.7 % in ws at Dd = 0.05.",
)  # fmt: skip
def dietrich(
    d_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    csf: Values = 0.7,
    powers: Values = 3.5,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Settling velocity with grain shape and roundness.

    Parameters
    ----------
    d_m : nominal diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    csf : Corey shape factor, 0.7 for natural sand, 1 for spheres
    powers : Powers roundness, 3.5 for natural sand, 6 for spheres

    Returns
    -------
    ws, m/s; NaN for a shape factor outside 0.15-1

    References
    ----------
    dietrich_1982
    """
    size = galileo(d_m, submerged_gravity, nu_m2_s, g_m_s2)
    flat = 1 - np.asarray(csf, dtype=float)
    flat = np.where(flat >= 0, flat, np.nan)
    squash = 1 - flat / 0.85
    squash = np.where(squash > 0, squash, np.nan)
    x = np.log10(size)
    bend = np.tanh(x - 4.6)
    r1 = -3.76715 + x * (1.92944 + x * (-0.09815 + x * (-0.00575 + x * 0.00056)))
    r2 = (
        np.log10(squash)
        - flat**2.3 * bend
        + 0.3 * (flat - 0.5) * np.square(flat) * (x - 4.6)
    )  # fmt: skip
    r3 = (0.65 - (1 - flat) / 2.83 * bend) ** (1 + (3.5 - np.asarray(powers)) / 2.5)
    dimensionless = np.where(size < 0.05, 1.71e-4 * np.square(size), r3 * np.exp(np.log(10) * (r1 + r2)))
    return np.cbrt(dimensionless * submerged_gravity * g_m_s2 * nu_m2_s)


_NON_BROWNIAN = 4.48


@formula(
    "settling.richardson_zaki_exponent",
    gives="exponent n of hindered settling",
    unit="1",
    equation="n = 4.65 (Re < 0.2), 4.35 Re^-0.03 (to 1), 4.45 Re^-0.1 (to 500), 2.39 (above)",
    source="richardson_zaki_1954",
    domain="grains of one size, volume fraction below about 0.5",
    scatter="4.48 ± 0.04 for non-Brownian spheres at low Re (Brzinski & Durian 2018)",
    status="memory",
    inputs={
        "particle_reynolds": "Reynolds number ws D/nu of a single grain",
        "system": '"grains" or "non-Brownian spheres" (low Re only)',
    },
    positive=("particle_reynolds",),
    pitfalls="Re takes the velocity of a single grain; no flocculation.",
)
def richardson_zaki_exponent(particle_reynolds: Values, system: str = "grains") -> Values:
    """Exponent of hindered settling.

    Parameters
    ----------
    particle_reynolds : ws D/nu of the single grain
    system : "grains" by Richardson & Zaki, "non-Brownian spheres" by Brzinski & Durian

    Returns
    -------
    n, pure number

    References
    ----------
    richardson_zaki_1954, brzinski_durian_2018
    """
    re = np.asarray(particle_reynolds, dtype=float)
    if chosen("system", system, {"grains": False, "non-Brownian spheres": True}):
        return np.where(np.isnan(re), np.nan, _NON_BROWNIAN)
    conditions = [np.isnan(re), re < 0.2, re < 1, re < 500]
    return np.select(conditions, [np.nan, 4.65, 4.35 * re**-0.03, 4.45 * re**-0.1], 2.39)


@formula(
    "settling.hindered",
    gives="settling velocity in a suspension ws(C)",
    unit="m/s",
    equation="ws(C) = ws (1 - C)^n",
    source="richardson_zaki_1954",
    domain="grains of one size, volume fraction below about 0.5",
    status="published",
    inputs=SYMBOLS,
    limits=(Limit("concentration_vol", 0, 0.5, lambda concentration_vol, **_: concentration_vol),),
    positive=("ws_m_s", "d_m", "nu_m2_s"),
    not_negative=("concentration_vol",),
    resolve=Fluid(("nu_m2_s",)),
)
def hindered(ws_m_s: Values, concentration_vol: Values, d_m: Values, nu_m2_s: Values) -> Values:
    """Settling velocity of grains among many others.

    Parameters
    ----------
    ws_m_s : velocity of a single grain, m/s
    concentration_vol : volume fraction of grains C, below one
    d_m : diameter, m
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    ws(C), m/s; NaN for C above one

    References
    ----------
    richardson_zaki_1954
    """
    share = 1 - np.asarray(concentration_vol, dtype=float)
    exponent = richardson_zaki_exponent(np.asarray(ws_m_s) * d_m / nu_m2_s)
    return ws_m_s * np.where(share >= 0, share, np.nan) ** exponent


@formula(
    "settling.band",
    gives="lowest, central and highest settling velocity of natural grains",
    unit="m/s",
    equation="centre Ferguson & Church 18/1.0; band of it with 20/1.1, Soulsby and Dietrich 0.7/3.5",
    source="ours",
    domain="silt to gravel",
    scatter="about ±15 % in fine and medium sand, ±7 % from 0.5 mm",
    status="ours",
    inputs=SYMBOLS,
    positive=_SIZES,
    resolve=_FLUID,
    pitfalls="Sieve, nominal and thin-section diameters differ; no shells or mica.",
)
def band(
    d_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> np.ndarray:
    """The band between formulas for natural grains, as a value of its own.

    Parameters
    ----------
    d_m : diameter, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    array of shape (3, ...): lowest, central and highest ws, m/s
    """
    fluid = (submerged_gravity, nu_m2_s)
    centre = ferguson_church(d_m, *fluid, g_m_s2=g_m_s2)
    members = np.stack(
        np.broadcast_arrays(
            centre,
            ferguson_church(d_m, *fluid, *FERGUSON_CHURCH["nominal"], g_m_s2=g_m_s2),
            soulsby(d_m, *fluid, g_m_s2=g_m_s2),
            dietrich(d_m, *fluid, g_m_s2=g_m_s2),
        )
    )
    return np.stack([members.min(axis=0), members[0], members.max(axis=0)])


@formula(
    "settling.size_exponent",
    gives="ratio of the settling velocities of two sizes ws(d2)/ws(d1)",
    unit="1",
    equation="ws(d2)/ws(d1) by settling.ferguson_church",
    source="ferguson_church_2004",
    status="ours",
    inputs=SYMBOLS | {"d1_m": "first diameter", "d2_m": "second diameter"},
    positive=("d1_m", "d2_m", "submerged_gravity", "nu_m2_s"),
    resolve=_FLUID,
)
def size_exponent(
    d1_m: Values, d2_m: Values, submerged_gravity: Values, nu_m2_s: Values, g_m_s2: Values = GRAVITY_M_S2
) -> Values:
    """How much faster the second size settles.

    Parameters
    ----------
    d1_m, d2_m : diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    ws(d2)/ws(d1), pure number
    """
    fluid = (submerged_gravity, nu_m2_s)
    return ferguson_church(d2_m, *fluid, g_m_s2=g_m_s2) / ferguson_church(d1_m, *fluid, g_m_s2=g_m_s2)


@formula(
    "settling.order_sign",
    gives="sign of ws(coarse) - ws(fine): +1 when the coarser grain settles faster",
    unit="1",
    equation="sign(ws(coarse) - ws(fine)) by settling.ferguson_church",
    source="ferguson_church_2004",
    status="ours",
    inputs=SYMBOLS | {"d_fine_m": "finer diameter", "d_coarse_m": "coarser diameter"},
    positive=("d_fine_m", "d_coarse_m", "submerged_gravity", "nu_m2_s"),
    resolve=_FLUID,
    pitfalls="Holds in still water; a decelerating current can lay down its whole size range at once.",
)
def order_sign(
    d_fine_m: Values,
    d_coarse_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Whether the coarser grain settles faster.

    Parameters
    ----------
    d_fine_m, d_coarse_m : diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    +1, 0 or -1
    """
    return np.sign(np.log(size_exponent(d_fine_m, d_coarse_m, submerged_gravity, nu_m2_s, g_m_s2)))
