"""Our own criterion of bed states: soft edges with stated scatter in (D*, theta', Fr), six probabilities.

Everything here is our construction from published observations and labelled so; published
classifications are in `bedforms`.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from logkit.grains.numbers import dimensionless_diameter
from logkit.hydraulics.bedforms import UPPER_PLANE_THETA, froude, skin_shields
from logkit.hydraulics.inputs import SYMBOLS, Fluid, Values, formula
from logkit.hydraulics.resistance import _DEPTH_OVER_D90
from logkit.hydraulics.threshold import MEASURED_SIGMA_LOG10, soulsby_whitehouse
from logkit.registry import GRAVITY_M_S2, Limit

STATES = ("still", "ripple", "dune", "lower_plane", "upper_plane", "antidune")
"""Order of the first axis of `soft_criterion`."""


@dataclass(frozen=True, slots=True)
class Edge:
    """A soft limit: its centre and one sigma in log10 units."""

    centre: Values
    sigma: Values


@dataclass(frozen=True, slots=True)
class Edges:
    """The edges of the criterion.

    Attributes
    ----------
    motion : times theta_cr of the main curve
    ripple_dune, lower_plane_dune : times theta_cr
    upper_plane : theta'
    antidune : Froude number
    ripples_end : D*
    dunes_begin : grain diameter, m
    """

    motion: Edge = Edge(1.0, MEASURED_SIGMA_LOG10)
    ripple_dune: Edge = Edge(4.0, 0.20)
    lower_plane_dune: Edge = Edge(2.0, 0.20)
    upper_plane: Edge = Edge(UPPER_PLANE_THETA, 0.15)
    antidune: Edge = Edge(0.90, 0.08)
    ripples_end: Edge = Edge(12.0, 0.10)
    dunes_begin: Edge = Edge(0.13e-3, 0.08)


EDGES = Edges()


def soft_edge(x: Values, centre: Values, sigma: Values) -> Values:
    """Probability that a soft edge has been passed.

    Parameters
    ----------
    x, centre : value and centre of the edge, same unit, above zero
    sigma : one sigma in log10 units

    Returns
    -------
    L = 1/(1 + exp(-1.702 log10(x/centre)/sigma)), close to a cumulative normal
    """
    with np.errstate(divide="ignore"):
        return _passed(np.log10(x), Edge(centre, sigma))


def _passed(log10_x: Values, edge: Edge) -> Values:
    """Probability that an edge has been passed, from the logarithm, which several edges share."""
    with np.errstate(over="ignore"):
        return 1 / (1 + np.exp((np.log10(edge.centre) - log10_x) * (1.702 / edge.sigma)))


def state_probabilities(
    theta_skin: Values, dstar: Values, froude: Values, d50_m: Values, edges: Edges = EDGES
) -> np.ndarray:
    """Probabilities of the six bed states in the coordinates of the criterion.

    Parameters
    ----------
    theta_skin : skin-friction Shields number theta'
    dstar : D*
    froude : Fr
    d50_m : median diameter, m
    edges : the soft edges

    Returns
    -------
    array of shape (6, ...) in the order of `STATES`; sums to one along the first axis
    """
    motion = np.log10(soulsby_whitehouse(dstar))
    with np.errstate(divide="ignore"):
        theta, size, fr = np.log10(theta_skin), np.log10(dstar), np.log10(froude)
    moves = _passed(theta - motion, edges.motion)
    past_ripple = _passed(theta - motion, edges.ripple_dune)
    past_lower = _passed(theta - motion, edges.lower_plane_dune)
    plane = _passed(theta, edges.upper_plane)
    anti = _passed(fr, edges.antidune)
    ripples = 1 - _passed(size, edges.ripples_end)
    dunes = _passed(np.log10(d50_m), edges.dunes_begin)
    w_ripple = ripples * ((1 - past_ripple) + past_ripple * (1 - dunes))
    w_dune = dunes * (ripples * past_ripple + (1 - ripples) * past_lower)
    w_lower = (1 - ripples) * (1 - past_lower)
    low = moves * (1 - anti) * (1 - plane) / (w_ripple + w_dune + w_lower)
    return np.stack(
        np.broadcast_arrays(
            1 - moves, low * w_ripple, low * w_dune, low * w_lower, moves * (1 - anti) * plane, moves * anti
        )
    )


_INPUTS = SYMBOLS | {"sigma_motion": "one sigma of the motion edge in log10 units"}
_COMMON: dict[str, Any] = {
    "unit": "1",
    "source": "ours",
    "locator": "edges from published observations; handbook of the project",
    "domain": "quartz sand 0.06-2 mm, unidirectional current, not turbidity currents",
    "scatter": "the sigma of each edge, 0.08-0.20 in log10",
    "status": "ours",
    "inputs": _INPUTS,
    "limits": (
        _DEPTH_OVER_D90,
        Limit("d50_mm", 0.06, 2, lambda d50_m, **_: np.asarray(d50_m) * 1e3),
    ),
    "positive": ("flow_depth_m", "d50_m", "d90_m", "submerged_gravity", "nu_m2_s", "sigma_motion"),
    "not_negative": ("velocity_m_s",),
    "resolve": Fluid(("submerged_gravity", "nu_m2_s")),
}


@formula(
    "bedforms.soft_criterion",
    gives="probabilities of still, ripple, dune, lower plane, upper plane, antidune",
    equation="products of soft edges L(x; c, s) = 1/(1 + exp(-1.702 log10(x/c)/s))",
    pitfalls="Never for turbidity currents; refit when labelled flume data are at hand.",
    homogeneous=False,
    **_COMMON,
)
def soft_criterion(
    velocity_m_s: Values,
    flow_depth_m: Values,
    d50_m: Values,
    d90_m: Values,
    submerged_gravity: Values,
    nu_m2_s: Values,
    sigma_motion: Values = MEASURED_SIGMA_LOG10,
    g_m_s2: Values = GRAVITY_M_S2,
) -> np.ndarray:
    """Probabilities of the bed states under a current.

    Parameters
    ----------
    velocity_m_s : depth-averaged velocity U, m/s
    flow_depth_m : flow depth h, m
    d50_m, d90_m : grain diameters, m
    submerged_gravity : R
    nu_m2_s : kinematic viscosity, m2/s
    sigma_motion : one sigma of the motion edge in log10 units

    Returns
    -------
    array of shape (6, ...) in the order of `STATES`
    """
    theta = skin_shields(velocity_m_s, flow_depth_m, d50_m, d90_m, submerged_gravity, g_m_s2)
    # g goes into D* as well, but the dunes' lower size limit stays a length observed on Earth in water
    dstar = dimensionless_diameter(d50_m, submerged_gravity, nu_m2_s, g_m_s2)
    edges = replace(EDGES, motion=Edge(EDGES.motion.centre, sigma_motion))
    return state_probabilities(theta, dstar, froude(velocity_m_s, flow_depth_m, g_m_s2), d50_m, edges)


def _one_state(state: str, name: str) -> Any:
    row = STATES.index(state)

    def probability(
        velocity_m_s: Values,
        flow_depth_m: Values,
        d50_m: Values,
        d90_m: Values,
        submerged_gravity: Values,
        nu_m2_s: Values,
        sigma_motion: Values = MEASURED_SIGMA_LOG10,
        g_m_s2: Values = GRAVITY_M_S2,
    ) -> Values:
        return soft_criterion(
            velocity_m_s, flow_depth_m, d50_m, d90_m, submerged_gravity, nu_m2_s, sigma_motion, g_m_s2
        )[row]

    probability.__name__ = probability.__qualname__ = name
    probability.__doc__ = f"Probability of the bed state {state!r}; arguments as `soft_criterion`."
    return formula(
        f"bedforms.{name}",
        gives=f"probability of the bed state {state.replace('_', ' ')}",
        equation=f"the row {state.replace('_', ' ')} of bedforms.soft_criterion",
        homogeneous=state in ("still", "upper_plane", "antidune"),
        **_COMMON,
    )(probability)


p_still = _one_state("still", "p_still")
p_ripple = _one_state("ripple", "p_ripple")
p_dune = _one_state("dune", "p_dune")
p_lower_plane = _one_state("lower_plane", "p_lower_plane")
p_upper_plane = _one_state("upper_plane", "p_upper_plane")
p_antidune = _one_state("antidune", "p_antidune")
