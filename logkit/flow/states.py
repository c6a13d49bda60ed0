"""Likelihood tables of the bed states on the grid, for one fluid.

The soft edges and their combination are `hydraulics.bedstates`; here they are laid out on the grid as
products of an edge's part in (D, h) and its part in U, which needs no exponential per cell. Which state a
structure stands for, and what is done with the tables, belongs to the criteria and the slices.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np

from logkit.errors import ArgumentError
from logkit.flow.grid import Array, Grid
from logkit.hydraulics import water
from logkit.hydraulics.bedstates import EDGES, STATES, soft_edge, state_probabilities
from logkit.hydraulics.inputs import QUARTZ_KG_M3, dimensionless_diameter
from logkit.hydraulics.resistance import grain_chezy
from logkit.hydraulics.threshold import measured_scatter, soulsby_whitehouse
from logkit.registry import GRAVITY_M_S2

OPEN_ABOVE = ("upper_plane", "antidune")
"""Bed states that no faster flow under a deep water ends."""

D90_OVER_D50 = 1.5
"""Share of the coarse tail where only a class is known (judgement)."""

SUBMERGENCE = (3.0, 0.10)
"""A clast counts as moved by a flow only where h > 3 D; sigma in log10 (judgement): C' means nothing below."""

SHARP_MOTION_SIGMA = 0.10
"""Width of the motion edge in the conflict test, log10: one bed, not all laboratories (judgement)."""

MOVING = tuple(state for state in STATES if state != "still")


@dataclass(frozen=True)
class Fluid:
    """The water and the grains of a bed.

    Parameters
    ----------
    temperature_c, salinity : of the water; practical salinity
    grain_density_kg_m3 : of the grains
    """

    temperature_c: float = 15.0
    salinity: float = 0.0
    grain_density_kg_m3: float = QUARTZ_KG_M3

    def __post_init__(self) -> None:
        if not 0.0 <= self.temperature_c <= 40.0:
            raise ArgumentError("temperature_c", self.temperature_c, "from 0 to 40")
        if not 0.0 <= self.salinity <= 45.0:
            raise ArgumentError("salinity", self.salinity, "from 0 to 45")
        if not 1100.0 <= self.grain_density_kg_m3 <= 8000.0:
            raise ArgumentError("grain_density_kg_m3", self.grain_density_kg_m3, "from 1100 to 8000")

    @cached_property
    def submerged_gravity(self) -> float:
        """R = (rho_s - rho)/rho."""
        return float(self.grain_density_kg_m3 / self.density_kg_m3 - 1.0)

    @cached_property
    def density_kg_m3(self) -> float:
        """Density of the water, kg/m3."""
        return float(water.density(self.temperature_c, self.salinity))

    @cached_property
    def nu_m2_s(self) -> float:
        """Kinematic viscosity, m2/s."""
        return float(water.kinematic_viscosity(self.temperature_c, self.salinity))

    def dstar(self, d_m: Array | float) -> Array:
        """Dimensionless diameter D*."""
        return np.asarray(dimensionless_diameter(d_m, self.submerged_gravity, self.nu_m2_s))

    def theta_critical(self, d_m: Array | float) -> Array:
        """Critical Shields number with the measured shift for gravel."""
        return np.asarray(soulsby_whitehouse(self.dstar(d_m)) * 10.0 ** measured_scatter(np.asarray(d_m)))


def chezy(flow_depth_m: Array | float, d50_m: Array | float) -> Array:
    """Grain Chezy coefficient C', m^0.5/s, held at 4h/D90 = 1.5 in films thinner than the grains."""
    d90 = D90_OVER_D50 * np.asarray(d50_m)
    return np.asarray(grain_chezy(np.maximum(flow_depth_m, 0.375 * d90), d90))


def skin_shear_velocity(velocity_m_s: Array, flow_depth_m: Array, d50_m: Array | float) -> Array:
    """Grain (skin) shear velocity u*' = U sqrt(g)/C', m/s."""
    return np.asarray(velocity_m_s * np.sqrt(GRAVITY_M_S2) / chezy(flow_depth_m, d50_m))


def states_at(velocity_m_s: float, flow_depth_m: float, d50_mm: float, fluid: Fluid) -> dict[str, float]:
    """Probability of each bed state where velocity, depth and size are known.

    Parameters
    ----------
    velocity_m_s, flow_depth_m : depth-averaged velocity and depth
    d50_mm : median grain size, mm

    Returns
    -------
    state -> probability; sums to one
    """
    for name, value in (("velocity_m_s", velocity_m_s), ("flow_depth_m", flow_depth_m), ("d50_mm", d50_mm)):
        if not (np.isfinite(value) and value > 0):
            raise ArgumentError(name, value, "a number above zero")
    d = 1e-3 * d50_mm
    theta = velocity_m_s**2 / (chezy(flow_depth_m, d) ** 2 * fluid.submerged_gravity * d)
    froude = velocity_m_s / np.sqrt(GRAVITY_M_S2 * flow_depth_m)
    shares = state_probabilities(theta, fluid.dstar(d), froude, d)
    return {state: float(share) for state, share in zip(STATES, shares, strict=True)}


class StateTables:
    """Likelihood of each bed state in every cell, float32 of shape (size, velocity, depth).

    Parameters
    ----------
    grid, fluid : the cells, and what flows over what
    """

    def __init__(self, grid: Grid, fluid: Fluid) -> None:
        self.grid, self.fluid = grid, fluid
        d, h = grid.d_m[:, None], grid.depth.nodes[None, :]
        self.ln_chezy = np.log(chezy(h, d))
        self.theta_unit = np.exp(-2 * self.ln_chezy) / (fluid.submerged_gravity * d)
        curve = soulsby_whitehouse(fluid.dstar(grid.d_m))
        self.moved = self._passed(fluid.theta_critical(grid.d_m), EDGES.motion.sigma)
        past_ripple = self._passed(EDGES.ripple_dune.centre * curve, EDGES.ripple_dune.sigma)
        past_lower = self._passed(EDGES.lower_plane_dune.centre * curve, EDGES.lower_plane_dune.sigma)
        plane = self._passed(np.full_like(curve, EDGES.upper_plane.centre), EDGES.upper_plane.sigma)
        froude = grid.velocity.nodes[:, None] / np.sqrt(GRAVITY_M_S2 * grid.depth.nodes[None, :])
        anti = soft_edge(froude, EDGES.antidune.centre, EDGES.antidune.sigma).astype(np.float32)[None]
        ripples = 1 - soft_edge(fluid.dstar(grid.d_m), EDGES.ripples_end.centre, EDGES.ripples_end.sigma)
        dunes = soft_edge(grid.d_m, EDGES.dunes_begin.centre, EDGES.dunes_begin.sigma)
        gate_r = ripples.astype(np.float32)[:, None, None]
        gate_d = dunes.astype(np.float32)[:, None, None]
        w_ripple = gate_r * (1 - past_ripple * gate_d)
        w_dune = gate_d * (gate_r * past_ripple + (1 - gate_r) * past_lower)
        w_lower = (1 - gate_r) * (1 - past_lower)
        calm = self.moved * (1 - anti)
        low = calm * (1 - plane) / (w_ripple + w_dune + w_lower)
        self._states = {
            "ripple": low * w_ripple,
            "dune": low * w_dune,
            "lower_plane": low * w_lower,
            "upper_plane": calm * plane,
            "antidune": self.moved * anti,
        }

    def _passed(self, centre: Array, sigma: float) -> Array:
        """Soft edge on theta', as 1/(1 + a(D, h) b(U))."""
        rate = 1.702 / (sigma * np.log(10.0))
        middle = 0.5 * (self.grid.velocity.ln_nodes[0] + self.grid.velocity.ln_nodes[-1])
        with np.errstate(over="ignore"):
            by_size = np.exp(rate * (np.log(centre[:, None] / self.theta_unit) - 2 * middle)).astype(
                np.float32
            )
            by_velocity = np.exp(-2 * rate * (self.grid.velocity.ln_nodes - middle)).astype(np.float32)
            table: Array = by_size[:, None, :] * by_velocity[None, :, None]
        table += 1
        np.reciprocal(table, out=table)
        return table

    def __getitem__(self, state: str) -> Array:
        """The table of a state; "moved" is the sum of all but "still"."""
        return self.moved if state == "moved" else self._states[state]

    def clast_moved(self, cell: int, sharp: bool = False) -> Array:
        """Likelihood that a clast of a size cell was moved by the flow, shape (velocity, depth).

        Parameters
        ----------
        cell : index of the size cell
        sharp : for the conflict test: the edge without the scatter between laboratories
        """
        ratio, sigma = SUBMERGENCE
        deep = soft_edge(self.grid.depth.nodes, ratio * self.grid.d_m[cell], sigma)
        moved = self.moved[cell]
        if sharp:
            theta = self.theta_unit[cell][None, :] * self.grid.velocity.nodes[:, None] ** 2
            critical = self.fluid.theta_critical(self.grid.d_m[cell])
            moved = soft_edge(theta, critical, SHARP_MOTION_SIGMA).astype(np.float32)
        result: Array = moved * deep.astype(np.float32)[None, :]
        return result


@lru_cache(maxsize=4)
def state_tables(grid: Grid, fluid: Fluid) -> StateTables:
    """The tables of a grid and a fluid, built once."""
    return StateTables(grid, fluid)
