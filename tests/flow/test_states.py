"""The tables of bed states, and the published observations they have to meet."""

from __future__ import annotations

import numpy as np
import pytest

from logkit.errors import ArgumentError
from logkit.flow import Fluid, states_at
from logkit.flow.grid import Grid
from logkit.flow.states import MOVING, StateTables, chezy
from logkit.hydraulics.bedstates import EDGES, STATES, state_probabilities
from logkit.registry import GRAVITY_M_S2

GRID = Grid(velocity_cells=48, depth_cells=28)
FLUID = Fluid(20.0)


@pytest.fixture(scope="module")
def tables() -> StateTables:
    """Tables of a small grid."""
    return StateTables(GRID, FLUID)


def test_states_sum_to_what_moved(tables: StateTables) -> None:
    """In every cell the five moving states sum to the share that moved."""
    total = sum(tables[state] for state in MOVING)
    assert np.abs(total - tables.moved).max() < 1e-5


def test_the_quick_layout_equals_the_criterion_of_the_handbook(tables: StateTables) -> None:
    """Tables built from products of edge parts equal the formula cell by cell, for sand."""
    sand = GRID.d_m < 1e-3
    d, u, h = np.meshgrid(GRID.d_m[sand], GRID.velocity.nodes, GRID.depth.nodes, indexing="ij")
    theta = u**2 / (chezy(h, d) ** 2 * FLUID.submerged_gravity * d)
    expected = state_probabilities(theta, FLUID.dstar(d), u / np.sqrt(GRAVITY_M_S2 * h), d)
    for row, state in enumerate(STATES[1:], 1):
        assert np.abs(tables[state][sand] - expected[row]).max() < 1e-5


def test_an_edge_is_half_at_its_own_velocity() -> None:
    """At U = C' sqrt(R D theta) of the upper-plane edge, half of the moving lower states have passed."""
    d, h = 0.2e-3, 1.0
    theta = EDGES.upper_plane.centre
    velocity = float(chezy(h, d) * np.sqrt(FLUID.submerged_gravity * d * theta))
    found = states_at(velocity, h, 0.2, FLUID)
    assert found["upper_plane"] == pytest.approx(0.5, abs=0.01)


@pytest.mark.parametrize(
    ("d50_mm", "depth_m", "velocity_m_s", "temp_c", "observed"),
    [
        (0.108, 0.25, 0.60, 10.0, "ripple"),
        (0.108, 0.25, 0.91, 10.0, "upper_plane"),
        (0.108, 0.15, 0.91, 10.0, "upper_plane"),
        (0.095, 0.25, 0.45, 10.0, "ripple"),
        (0.5, 0.15, 0.45, 20.0, "dune"),
        (0.5, 0.15, 0.55, 20.0, "dune"),
    ],
)
def test_published_observations_get_their_state(
    d50_mm: float, depth_m: float, velocity_m_s: float, temp_c: float, observed: str
) -> None:
    """Observed bed states are the most likely ones (Baas & de Koning 1995, Baas 1994, Venditti et al. 2005)."""
    found = states_at(velocity_m_s, depth_m, d50_mm, Fluid(temp_c))
    assert max(found, key=found.__getitem__) == observed


def test_a_shallow_plane_bed_near_critical_flow_is_a_stated_miss() -> None:
    """Plane beds at Fr 0.83-0.96 (Bridge & Best 1988) lie across the soft antidune edge at 0.90.

    The edge is soft there on purpose: the plane bed keeps at least a tenth of the probability on both sides.
    """
    for velocity in (0.86, 1.0):
        found = states_at(velocity, 0.11, 0.3, Fluid(20.0))
        assert found["upper_plane"] > 0.1
        assert found["upper_plane"] + found["antidune"] + found["dune"] > 0.99


@pytest.mark.parametrize("bad", [(-1.0, 1.0, 0.2), (1.0, 0.0, 0.2), (1.0, 1.0, float("nan"))])
def test_impossible_flows_are_refused(bad: tuple[float, float, float]) -> None:
    """Negative, zero and missing numbers raise an error that names the argument."""
    with pytest.raises(ArgumentError, match="above zero"):
        states_at(*bad, FLUID)


def test_water_out_of_range_is_refused() -> None:
    """A temperature at which water is no liquid names what is allowed."""
    with pytest.raises(ArgumentError, match=r"temperature_c is 95\.0"):
        Fluid(95.0)
