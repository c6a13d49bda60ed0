"""Flow depth from the rock: cross-set thickness, dune height, accretion sets, with their joint scatter.

Ripples give no depth; their size is in `bedforms`. Slope relations are in `slope`.
"""

from __future__ import annotations

from functools import cache

import numpy as np

from logkit.errors import ArgumentError
from logkit.hydraulics.inputs import SYMBOLS, Values, chosen, formula
from logkit.registry import Limit

DUNE_LENGTH_OVER_DEPTH = 7.3
SET_FACTOR = (2.9, 0.7)
"""Mean dune height over mean set thickness: mean and one sigma."""
DEPTH_FACTOR_MEDIAN = 6.7
DEPTH_FACTOR_QUARTILES = (4.4, 10.1)
DEPTH_FACTOR_SIGMA_LN = float(np.log(DEPTH_FACTOR_QUARTILES[1] / DEPTH_FACTOR_QUARTILES[0]) / (2 * 0.6745))
ZETA_3 = 1.2020569031595942

_LENGTHS = SYMBOLS | {
    "mean_set_thickness_m": "mean thickness of several cross-sets at one level",
    "dune_height_m": "mean dune height h_d",
    "transport_stage": "transport stage T",
    "bar_thickness_m": "thickness of a complete bar or accretion set, base to top",
    "compaction": "thickness now over thickness when laid down",
    "stress_ratio": "bed stress over threshold tau/tau_cr",
}


@formula(
    "depth.set_to_dune_height",
    gives="mean dune height h_d",
    unit="m",
    equation="h_d = 2.9 (± 0.7) s_m",
    source="leclair_bridge_2001",
    domain="dunes, little net climb, set variability near 0.88",
    scatter="0.7 on the factor, taken as one sigma",
    status="secondary",
    inputs=_LENGTHS,
    positive=("mean_set_thickness_m",),
    pitfalls="The mean of several sets, not one and not the largest; not for ripples.",
)
def set_to_dune_height(mean_set_thickness_m: Values) -> Values:
    """Mean dune height from mean cross-set thickness.

    Parameters
    ----------
    mean_set_thickness_m : s_m, m

    Returns
    -------
    h_d, m

    References
    ----------
    leclair_bridge_2001
    """
    return SET_FACTOR[0] * np.asarray(mean_set_thickness_m)


@formula(
    "depth.set_thickness_cv",
    gives="expected standard deviation over mean of set thickness; applies within ± 0.3",
    unit="1",
    equation="sqrt(4 zeta(3) - (pi^2/6)^2)/(pi^2/6), moments of the set-thickness density",
    source="paola_borgman_1991",
    domain="no climb, random topography; about 10 sets or more",
    scatter="± 0.3",
    status="secondary",
    inputs={},
)
def set_thickness_cv() -> float:
    """Ratio of spread to mean that sets of random dunes should show.

    Returns
    -------
    sd(s)/mean(s), pure number

    References
    ----------
    paola_borgman_1991, bridge_tye_2000
    """
    mean = np.pi**2 / 6
    return float(np.sqrt(4 * ZETA_3 - mean**2) / mean)


_FORMATIVE = {"lower": 0.18, "upper": 0.30}


@formula(
    "depth.set_to_formative_ratio",
    gives="mean set thickness over mean height of the formative dunes, bound",
    unit="1",
    equation="0.18-0.30",
    source="leclair_bridge_wang_1997",
    domain="flume dunes; most sets come from the highest tenth of the dunes",
    scatter="the range",
    status="published",
    inputs={"bound": '"lower" or "upper"'},
    pitfalls="1/2.9 = 0.345 is set over all dunes: another denominator.",
)
def set_to_formative_ratio(bound: str) -> float:
    """Bound of set thickness over formative dune height.

    Parameters
    ----------
    bound : "lower" or "upper"

    Returns
    -------
    pure number

    References
    ----------
    leclair_bridge_wang_1997
    """
    return float(chosen("bound", bound, _FORMATIVE))


_RIPPLE_SET = {"mean ripple height": 0.53, "mean formative ripple height": 0.4}


@formula(
    "depth.ripple_set_ratio_upper",
    gives="upper bound of mean set thickness over ripple height",
    unit="1",
    equation="below 0.53 of the mean, below 0.4 of the mean formative ripple height",
    source="storms_1999",
    domain="current ripples",
    status="published",
    inputs={"reference": "one of " + ", ".join(repr(k) for k in _RIPPLE_SET)},
    pitfalls="Gives ripple height at best, never depth.",
)
def ripple_set_ratio_upper(reference: str) -> float:
    """Upper bound of set thickness over ripple height.

    Parameters
    ----------
    reference : which ripple height is meant

    Returns
    -------
    pure number

    References
    ----------
    storms_1999
    """
    return float(chosen("reference", reference, _RIPPLE_SET))


@formula(
    "depth.yalin_dune_height",
    gives="dune height h_d",
    unit="m",
    equation="h_d = (h/6)(1 - tau_cr/tau), zero above tau/tau_cr = 17.6",
    source="yalin_1964",
    locator="after Soulsby 1997, p. 116",
    domain="dunes",
    status="secondary",
    inputs=_LENGTHS,
    positive=("flow_depth_m", "stress_ratio"),
    pitfalls="h = 6 h_d is the least depth.",
)
def yalin_dune_height(flow_depth_m: Values, stress_ratio: Values) -> Values:
    """Height of dunes by depth and stress.

    Parameters
    ----------
    flow_depth_m : h, m
    stress_ratio : tau/tau_cr

    Returns
    -------
    h_d, m

    References
    ----------
    yalin_1964, soulsby_1997
    """
    ratio = np.asarray(stress_ratio, dtype=float)
    dunes = (ratio > 1) & (ratio < 17.6)
    height = np.asarray(flow_depth_m) / 6 * np.where(dunes, 1 - 1 / ratio, 0)
    return np.where(np.isnan(ratio), np.nan, height)


_BRIDGE_TYE = {"lower": 6.0, "upper": 10.0}


@formula(
    "depth.bridge_tye",
    gives="flow depth h, bound of the range",
    unit="m",
    equation="h = 6 to 10 h_d",
    source="bridge_tye_2000",
    domain="river dunes",
    scatter="treat as uniform",
    status="memory",
    inputs=_LENGTHS | {"bound": '"lower" or "upper"'},
    positive=("dune_height_m",),
    pitfalls="Narrower than the data.",
)
def bridge_tye(dune_height_m: Values, bound: str) -> Values:
    """Bound of flow depth from dune height.

    Parameters
    ----------
    dune_height_m : h_d, m
    bound : "lower" or "upper"

    Returns
    -------
    h, m

    References
    ----------
    bridge_tye_2000
    """
    return chosen("bound", bound, _BRIDGE_TYE) * np.asarray(dune_height_m)


@formula(
    "depth.allen_depth",
    gives="flow depth h",
    unit="m",
    equation="h = (h_d/0.086)^(1/1.19)",
    source="allen_1984",
    domain="river and tidal dunes 0.05-5 m high",
    status="memory",
    inputs=_LENGTHS,
    limits=(Limit("dune_height_m", 0.05, 5, lambda dune_height_m, **_: dune_height_m),),
    positive=("dune_height_m",),
    homogeneous=False,
    pitfalls="Below 18 m it gives deeper water than the factor 6.7.",
)
def allen_depth(dune_height_m: Values) -> Values:
    """Flow depth from dune height by a power law.

    Parameters
    ----------
    dune_height_m : h_d, m

    Returns
    -------
    h, m

    References
    ----------
    allen_1968, allen_1984
    """
    return (np.asarray(dune_height_m, dtype=float) / 0.086) ** (1 / 1.19)


_STANDARD_NORMAL = {
    "p05": -1.6449,
    "p16": -1.0,
    "p25": -0.6745,
    "p50": 0.0,
    "p75": 0.6745,
    "p84": 1.0,
    "p95": 1.6449,
}


@formula(
    "depth.bradley_venditti",
    gives="flow depth h at a percentile",
    unit="m",
    equation="h = k h_d, ln k normal, median 6.7, sigma ln(10.1/4.4)/(2 x 0.6745)",
    source="bradley_venditti_2017",
    domain="compiled river and flume dunes",
    scatter="middle half 4.4-10.1",
    status="memory",
    inputs=_LENGTHS | {"percentile": '"p05" ... "p95"'},
    positive=("dune_height_m",),
)
def bradley_venditti(dune_height_m: Values, percentile: str = "p50") -> Values:
    """Flow depth from dune height with its scatter.

    Parameters
    ----------
    dune_height_m : h_d, m
    percentile : "p05", "p16", "p25", "p50", "p75", "p84" or "p95"

    Returns
    -------
    h, m

    References
    ----------
    bradley_venditti_2017
    """
    z = chosen("percentile", percentile, _STANDARD_NORMAL)
    return DEPTH_FACTOR_MEDIAN * np.exp(z * DEPTH_FACTOR_SIGMA_LN) * np.asarray(dune_height_m)


@formula(
    "depth.van_rijn_dune_height",
    gives="dune height Delta",
    unit="m",
    equation="Delta = 0.11 h (D50/h)^0.3 (1 - exp(-0.5 T))(25 - T)",
    source="van_rijn_1984_iii",
    locator="eq. 14",
    domain="0 < T < 25",
    scatter="factor 2 for about 70 % of the data",
    status="secondary",
    inputs=_LENGTHS,
    limits=(Limit("T", 0, 25, lambda transport_stage, **_: transport_stage),),
    positive=("flow_depth_m", "d50_m"),
    pitfalls="Keep the leading h and the T inside the exponential. Zero outside 0-25.",
)
def van_rijn_dune_height(flow_depth_m: Values, d50_m: Values, transport_stage: Values) -> Values:
    """Height of dunes by depth, grain size and transport stage.

    Parameters
    ----------
    flow_depth_m : h, m
    d50_m : median diameter, m
    transport_stage : T

    Returns
    -------
    Delta, m; zero outside 0 < T < 25

    References
    ----------
    van_rijn_1984_iii
    """
    h = np.asarray(flow_depth_m, dtype=float)
    stage = np.clip(transport_stage, 0, 25)
    return 0.11 * h * (np.asarray(d50_m) / h) ** 0.3 * -np.expm1(-0.5 * stage) * (25 - stage)


@formula(
    "depth.van_rijn_megaripple_height",
    gives="mega-ripple height Delta",
    unit="m",
    equation="Delta = 0.02 h (1 - exp(-0.1 T))(10 - T)",
    source="van_rijn_1993",
    locator="length 0.5 h",
    domain="0 < T < 10, D* up to 10",
    status="secondary",
    inputs=_LENGTHS,
    limits=(Limit("T", 0, 10, lambda transport_stage, **_: transport_stage),),
    positive=("flow_depth_m",),
)
def van_rijn_megaripple_height(flow_depth_m: Values, transport_stage: Values) -> Values:
    """Height of mega-ripples by depth and transport stage.

    Parameters
    ----------
    flow_depth_m : h, m
    transport_stage : T

    Returns
    -------
    Delta, m; zero outside 0 < T < 10

    References
    ----------
    van_rijn_1993
    """
    stage = np.clip(transport_stage, 0, 10)
    return 0.02 * np.asarray(flow_depth_m) * -np.expm1(-0.1 * stage) * (10 - stage)


@cache
def _product_quantiles(mean: float, sd: float, median: float, sigma_ln: float) -> dict[str, float]:
    """Quantiles of a k, a normal cut at 0.3, k lognormal, by integration over a."""
    from scipy.special import ndtr

    a = np.linspace(max(0.3, mean - 8 * sd), mean + 8 * sd, 1601)
    weight = np.exp(-0.5 * ((a - mean) / sd) ** 2)
    x = np.linspace(-6, 10, 1601)
    cumulative = ndtr((x[:, None] - np.log(a) - np.log(median)) / sigma_ln) @ (weight / weight.sum())
    return {name: float(np.exp(np.interp(ndtr(z), cumulative, x))) for name, z in _STANDARD_NORMAL.items()}


@formula(
    "depth.depth_over_set_thickness",
    gives="flow depth over mean set thickness at a percentile",
    unit="1",
    equation="h/s_m = a k, a normal (2.9, 0.7) cut at 0.3, k lognormal (6.7, 0.616)",
    source="ours",
    domain="dunes, several sets",
    scatter="16-84 % 9.7-36.5; 5-95 % 6.2-56",
    status="ours",
    inputs={
        "percentile": '"p05" ... "p95"',
        "set_factor_mean": "mean of dune height over set thickness",
        "set_factor_sd": "its standard deviation",
        "depth_factor_median": "median of depth over dune height",
        "depth_factor_sigma_ln": "its sigma in natural logarithms",
    },
    positive=("set_factor_mean", "set_factor_sd", "depth_factor_median", "depth_factor_sigma_ln"),
    pitfalls="Known to a factor 2 (one sigma) or 3 (90 %); ± 24 % alone is wrong.",
)
def depth_over_set_thickness(
    percentile: str = "p50",
    set_factor_mean: float = SET_FACTOR[0],
    set_factor_sd: float = SET_FACTOR[1],
    depth_factor_median: float = DEPTH_FACTOR_MEDIAN,
    depth_factor_sigma_ln: float = DEPTH_FACTOR_SIGMA_LN,
) -> float:
    """Depth over set thickness with the scatter of both steps.

    Parameters
    ----------
    percentile : "p05", "p16", "p25", "p50", "p75", "p84" or "p95"
    set_factor_mean, set_factor_sd : dune height over set thickness
    depth_factor_median, depth_factor_sigma_ln : depth over dune height

    Returns
    -------
    h/s_m, pure number
    """
    factors = (set_factor_mean, set_factor_sd, depth_factor_median, depth_factor_sigma_ln)
    if any(np.ndim(factor) for factor in factors):
        raise ArgumentError("set_factor_mean to depth_factor_sigma_ln", factors, "one number each")
    if any(np.isnan(factor) for factor in factors):
        return float("nan")
    return float(chosen("percentile", percentile, _product_quantiles(*map(float, factors))))


@formula(
    "depth.bar_thickness",
    gives="mean bankfull depth",
    unit="m",
    equation="0.585 t/0.9",
    source="ethridge_schumm_1978",
    domain="complete bar or lateral-accretion sets",
    status="memory",
    inputs=_LENGTHS,
    positive=("bar_thickness_m", "compaction"),
    pitfalls="Truncated tops give minima; bar tops need not reach bankfull level.",
)
def bar_thickness(bar_thickness_m: Values, compaction: Values = 0.9) -> Values:
    """Mean bankfull depth from the thickness of a bar.

    Parameters
    ----------
    bar_thickness_m : t, m
    compaction : thickness now over thickness when laid down; 0.9 for 10 % in sand

    Returns
    -------
    mean depth, m

    References
    ----------
    ethridge_schumm_1978
    """
    return 0.585 * np.asarray(bar_thickness_m) / compaction


@formula(
    "depth.bankfull_maximum",
    gives="maximum bankfull depth",
    unit="m",
    equation="t/0.9",
    source="ethridge_schumm_1978",
    domain="complete bar or lateral-accretion sets",
    status="memory",
    inputs=_LENGTHS,
    positive=("bar_thickness_m", "compaction"),
    pitfalls="Truncated tops give minima.",
)
def bankfull_maximum(bar_thickness_m: Values, compaction: Values = 0.9) -> Values:
    """Maximum bankfull depth: the thickness of a complete bar when it was laid down.

    Parameters
    ----------
    bar_thickness_m : t, m
    compaction : thickness now over thickness when laid down

    Returns
    -------
    maximum depth, m

    References
    ----------
    ethridge_schumm_1978
    """
    return np.asarray(bar_thickness_m) / compaction
