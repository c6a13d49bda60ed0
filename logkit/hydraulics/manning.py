"""Manning's n: total drag coefficient, and the two resistance methods carried through to an n.

The building blocks (log law, roughness, skin stress) are in `resistance`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.bedforms import transport_stage
from logkit.hydraulics.depth import DUNE_LENGTH_OVER_DEPTH, van_rijn_dune_height
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, above_one, chosen, formula
from logkit.hydraulics.resistance import bedform_roughness, engelund_hansen, ks_grain, log_law
from logkit.registry import GRAVITY_M_S2, Limit


@formula(
    "resistance.cf_from_manning",
    gives="total drag coefficient Cf = (u*/U)^2",
    unit="1",
    equation="Cf = g n^2/h^(1/3)",
    source="definition",
    domain="wide channel",
    scatter="none (definition)",
    status="published",
    inputs=SYMBOLS | {"manning_n_s_m1_3": "Manning's n"},
    positive=("manning_n_s_m1_3", "flow_depth_m"),
)
def cf_from_manning(manning_n_s_m1_3: Values, flow_depth_m: Values, g_m_s2: Values = GRAVITY_M_S2) -> Values:
    """Total drag coefficient from Manning's n.

    Parameters
    ----------
    manning_n_s_m1_3 : n, s/m^(1/3)
    flow_depth_m : h, m

    Returns
    -------
    Cf, pure number
    """
    return np.asarray(g_m_s2) * np.square(manning_n_s_m1_3) / np.cbrt(flow_depth_m)


_CF = {
    "sand rivers": {"lower": 0.002, "upper": 0.01},
    "gravel or dunes": {"lower": 0.005, "upper": 0.02},
    "tidal channels": {"lower": 0.0035, "upper": 0.054},
}


@formula(
    "resistance.cf_range",
    gives="bound of the total drag coefficient Cf",
    unit="1",
    equation="sand rivers 0.002-0.01, gravel or dunes 0.005-0.02, tidal channels with bedforms 0.0035-0.054",
    source="ludwick_1973",
    locator="tidal channels: two thirds of the values 1 m above the bed; rivers recalled",
    status="memory",
    inputs={"setting": "one of " + ", ".join(repr(k) for k in _CF), "bound": '"lower" or "upper"'},
)
def cf_range(setting: str, bound: str) -> float:
    """Bound of the drag coefficient of a kind of channel.

    Parameters
    ----------
    setting : kind of channel
    bound : "lower" or "upper"

    Returns
    -------
    Cf, pure number

    References
    ----------
    ludwick_1973
    """
    return float(chosen("bound", bound, chosen("setting", setting, _CF)))


@formula(
    "resistance.engelund_hansen_manning_n",
    gives="Manning's n",
    unit="s/m^(1/3)",
    equation="theta = h S/(R D50); theta' = 0.06 + 0.4 theta^2; h' = theta' R D50/S; "
    "U = sqrt(theta' R g D50) 2.5 ln(11 h'/(2.5 D50)); n = h^(2/3) S^0.5/U",
    source="engelund_hansen_1967",
    locator="chain built on the method",
    domain="sand above 0.15 mm, dunes, wide channel, theta about 0.06-0.8",
    status="secondary",
    inputs=SYMBOLS,
    limits=(
        Limit("d50_mm", 0.15, 2, lambda d50_m, **_: np.asarray(d50_m) * 1e3),
        Limit(
            "theta", 0.06, 0.8, lambda flow_depth_m, slope, d50_m, submerged_gravity, **_: np.asarray(
                flow_depth_m) * slope / (np.asarray(submerged_gravity) * d50_m)
        ),
    ),
    positive=("flow_depth_m", "slope", "d50_m", "submerged_gravity"),
    resolve=Fluid(("submerged_gravity",)),
)  # fmt: skip
def engelund_hansen_manning_n(
    flow_depth_m: Values,
    slope: Values,
    d50_m: Values,
    submerged_gravity: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Manning's n of a bed with dunes by the method of Engelund & Hansen.

    Parameters
    ----------
    flow_depth_m : h, m
    slope : S
    d50_m : median diameter, m
    submerged_gravity : R

    Returns
    -------
    n, s/m^(1/3)

    References
    ----------
    engelund_hansen_1967
    """
    weight = np.asarray(submerged_gravity) * d50_m
    skin = engelund_hansen(np.asarray(flow_depth_m) * slope / weight)
    velocity = np.sqrt(skin * weight * g_m_s2) * log_law(skin * weight / slope, ks_grain(d50_m))
    return np.cbrt(flow_depth_m) ** 2 * np.sqrt(slope) / velocity


@formula(
    "resistance.van_rijn_manning_n",
    gives="Manning's n",
    unit="s/m^(1/3)",
    equation="T, dune height and ks by van Rijn, lambda = 7.3 h; n = h^(1/6)/(18 log10(12 h/ks))",
    source="van_rijn_1984_iii",
    domain="0 < T < 25",
    status="secondary",
    inputs=SYMBOLS,
    limits=(Limit("T", 0, 25, lambda **a: transport_stage(**a)),),
    positive=("velocity_m_s", "flow_depth_m", "d50_m", "d90_m", "submerged_gravity", "nu_m2_s"),
    resolve=Fluid(("submerged_gravity", "nu_m2_s")),
    pitfalls="Worked examples with T above 25 circulate with negative dune heights.",
)
def van_rijn_manning_n(
    velocity_m_s: Values,
    flow_depth_m: Values,
    d50_m: Values,
    d90_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    g_m_s2: Values = GRAVITY_M_S2,
) -> Values:
    """Manning's n of a sand bed by the method of van Rijn.

    Parameters
    ----------
    velocity_m_s : U, m/s
    flow_depth_m : h, m
    d50_m, d90_m : grain diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s

    Returns
    -------
    n, s/m^(1/3); outside 0 < T < 25 the bed counts as flat

    References
    ----------
    van_rijn_1984_iii
    """
    stage = transport_stage(velocity_m_s, flow_depth_m, d50_m, d90_m, submerged_gravity, nu_m2_s, g_m_s2)
    height = van_rijn_dune_height(flow_depth_m, d50_m, stage)
    ks = bedform_roughness(height, DUNE_LENGTH_OVER_DEPTH * np.asarray(flow_depth_m), d90_m)
    chezy = (
        18
        * np.sqrt(np.asarray(g_m_s2) / GRAVITY_M_S2)
        * np.log10(above_one(12 * np.asarray(flow_depth_m) / ks))
    )
    return np.asarray(flow_depth_m) ** (1 / 6) / chezy
