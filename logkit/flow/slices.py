"""Slices: prior times likelihood on (velocity, depth) for everything but the evidence on depth.

All beds with the same prior, water, size class and readings share one slice; a bed's depth evidence is then
a vector to multiply it with. Slices are built when first asked for and kept in memory. How many beds are
answered at once belongs to `solver`.
"""

from __future__ import annotations

import math
from collections import OrderedDict
from collections.abc import Callable, Hashable
from dataclasses import dataclass, replace
from functools import cached_property, lru_cache
from typing import TypeVar

import numpy as np

from logkit.errors import ArgumentError
from logkit.flow.criteria import CRITERIA, Cells, ClastReading
from logkit.flow.grid import Array, ColumnShift, Grid
from logkit.flow.settings import Prior, Settings
from logkit.flow.states import Fluid, StateTables, state_tables
from logkit.registry import GRAVITY_M_S2

K = TypeVar("K", bound=Hashable)
T = TypeVar("T")

SIZE_STEPS_PER_PHI = 64
"""Size limits are rounded to this part of a phi (1 % of the diameter), so that equal classes share slices."""

LIMITS = {"stacks": 1600, "planes": 5000, "shifts": 200}
"""Numbers of slices, of planes and of shifts kept in memory: below 400 MB when all are full."""


@dataclass(frozen=True)
class Signature:
    """What a phase says apart from depth evidence; equal signatures share their slices.

    Attributes
    ----------
    prior : name of the prior
    fluid : water and grains
    size : coarse and fine limit in steps of 1/64 phi
    factors : (criterion id, reading) of all criteria but those of the kind "depth"
    """

    prior: str
    fluid: Fluid
    size: tuple[int, int]
    factors: tuple[tuple[str, Hashable], ...]

    @cached_property
    def _key(self) -> int:
        return hash((self.prior, self.fluid, self.size, self.factors))

    def __hash__(self) -> int:
        return self._key

    @lru_cache(maxsize=20000)  # noqa: B019 - signatures are values, few and shared
    def without(self, criterion: str) -> Signature:
        """The signature with one criterion left out."""
        return replace(self, factors=tuple(f for f in self.factors if f[0] != criterion))

    @cached_property
    def _unbiased(self) -> Signature:
        return replace(self, prior="off")

    def unbiased(self) -> Signature:
        """The signature with the prior off."""
        return self._unbiased

    def only(self, *criteria: str) -> Signature:
        """The signature with none but the named criteria."""
        return replace(self, factors=tuple(f for f in self.factors if f[0] in criteria))


def size_steps(coarse_phi: float, fine_phi: float) -> tuple[int, int]:
    """Size limits as a signature keeps them."""
    return round(coarse_phi * SIZE_STEPS_PER_PHI), round(fine_phi * SIZE_STEPS_PER_PHI)


@dataclass(frozen=True, slots=True)
class Evidence:
    """Sharp likelihoods of a slice, for the conflict test.

    Attributes
    ----------
    by_depth : prior times likelihood summed over velocity, shape (depth,)
    peak : largest likelihood over velocity, shape (depth,)
    """

    by_depth: Array
    peak: Array


_Sizes = tuple[Fluid, tuple[int, int]]


class SliceStore:
    """Builds and keeps the slices of one grid.

    Parameters
    ----------
    grid : the cells
    settings : priors and relations
    """

    def __init__(self, grid: Grid, settings: Settings) -> None:
        self.grid, self.settings = grid, settings
        self._velocity: OrderedDict[Signature, Array] = OrderedDict()
        self._stacks: OrderedDict[Signature, Array] = OrderedDict()
        self._evidence: OrderedDict[Signature, Evidence] = OrderedDict()
        self._sharp: OrderedDict[Signature, Array] = OrderedDict()
        self._nodes: dict[Signature, tuple[tuple[Signature, float], ...]] = {}
        self._alone: dict[Signature, tuple[float, float, float]] = {}
        self._priors: dict[str, Array] = {}
        self._depths: dict[str, Array] = {}
        self._kernels: dict[float, Array] = {}
        self._shifts: OrderedDict[_Sizes, tuple[ColumnShift, ColumnShift]] = OrderedDict()

    def velocity(self, signature: Signature) -> Array:
        """Prior times likelihood, shape (velocity, depth)."""
        return self._kept(self._velocity, signature, self._build)

    def stack(self, signature: Signature) -> Array:
        """Velocity, skin shear velocity, Froude number and total shear velocity, shape (4 cells, depth)."""
        return self._kept(self._stacks, signature, self._build_stack, "stacks")

    def evidence(self, signature: Signature) -> Evidence:
        """Sharp likelihoods: no allowance for local velocities and none for structures that say nothing."""
        return self._kept(self._evidence, signature, self._build_evidence)

    def sharp(self, signature: Signature) -> Array:
        """Prior times sharp likelihood, shape (velocity, depth)."""
        return self._kept(self._sharp, signature, lambda s: self._build(s, sharp=True))

    def prior(self, name: str) -> Array:
        """Prior mass of the cells, shape (velocity, depth); sums to one."""
        if name not in self._priors:
            self._priors[name] = self._build_prior(self.settings.prior(name))
        return self._priors[name]

    def believed_depth(self, name: str) -> Array:
        """Prior mass of the depth cells, shape (depth,)."""
        if name not in self._depths:
            self._depths[name] = self.prior(name).sum(axis=0)
        return self._depths[name]

    def tables(self, fluid: Fluid) -> StateTables:
        """Bed-state tables of a fluid on this grid."""
        return state_tables(self.grid, fluid)

    def alone(self, signature: Signature) -> tuple[float, float, float]:
        """The criteria of a signature one by one, from sharp likelihoods.

        Returns
        -------
        sum of log10 of their evidences, sum of log10 of their best likelihoods, best likelihood of the structure
        """
        known = self._alone.get(signature)
        if known is None:
            evidence = best = 0.0
            expected = 1.0
            for id, _ in signature.factors:
                one = self.evidence(signature.only(id))
                peak = max(float(one.peak.max()), 1e-30)
                evidence += math.log10(max(float(one.by_depth.sum()), 1e-300))
                best += math.log10(peak)
                if id == "bed_state":
                    expected = peak
            known = self._alone[signature] = evidence, best, expected
        return known

    def _kept(self, cache: OrderedDict[K, T], key: K, build: Callable[[K], T], limit: str = "planes") -> T:
        found = cache.get(key)
        if found is None:
            found = cache[key] = build(key)
            if len(cache) > LIMITS[limit]:
                cache.popitem(last=False)
        return found

    def on_nodes(self, signature: Signature) -> tuple[tuple[Signature, float], ...]:
        """The signatures, with weights, whose weighted sum answers a signature.

        A clast between two size cells of the grid is shared linearly between both.
        """
        known = self._nodes.get(signature)
        if known is None:
            known = self._nodes[signature] = self._split(signature)
        return known

    def _split(self, signature: Signature) -> tuple[tuple[Signature, float], ...]:
        for place, (id, reading) in enumerate(signature.factors):
            if isinstance(reading, ClastReading):
                position = (reading.phi - self.grid.coarse_phi) * self.grid.per_phi - 0.5
                node = int(np.clip(np.floor(position), 0, len(self.grid.phi) - 2))
                share = float(np.clip(position - node, 0.0, 1.0))
                before, after = signature.factors[:place], signature.factors[place + 1 :]
                return tuple(
                    (replace(signature, factors=(*before, (id, cell), *after)), weight)
                    for cell, weight in ((node, 1.0 - share), (node + 1, share))
                )
        return ((signature, 1.0),)

    def _build(self, signature: Signature, sharp: bool = False) -> Array:
        likelihood = self._likelihood(signature, sharp)
        result: Array = likelihood * self.prior(signature.prior)
        return result

    def _likelihood(self, signature: Signature, sharp: bool) -> Array:
        """Product of the likelihoods, averaged over the sizes of the class; shape (velocity, depth)."""
        prior = self.settings.prior(signature.prior)
        tables = self.tables(signature.fluid)
        cells, shares = self.size_cells(signature.size)
        spread = self._identity if sharp else self._kernel(prior.delta)
        eps = 0.0 if sharp else prior.eps
        plane = np.ones((self.grid.velocity.count, self.grid.depth.count), dtype=np.float32)
        by_size: list[Array] = []
        states: tuple[str, ...] | None = None
        for id, reading in signature.factors:
            criterion = CRITERIA[id]
            if criterion.kind == "state":
                states = reading  # type: ignore[assignment]
            elif criterion.kind == "clast":
                plane = plane * (spread @ tables.clast_moved(reading, sharp))  # type: ignore[arg-type]
            else:
                table = self._cells_likelihood(id, reading, signature.fluid, cells)
                if table.shape[0] == 1:
                    plane = plane * table[0]
                else:
                    by_size.append(table)
        if states is None and not by_size:
            return plane
        if states is not None and not by_size:
            mixed = self._state_mean(tables, states, cells, shares, eps)
            result: Array = plane * (spread @ mixed)
            return result
        product = np.broadcast_to(plane, (len(shares), *plane.shape))
        if states is not None:
            product = product * (spread @ self._state_tables(tables, states, cells, eps))
        for table in by_size:
            product = product * table
        averaged: Array = np.tensordot(shares, product, 1)
        return averaged

    def _state_tables(self, tables: StateTables, states: tuple[str, ...], cells: slice, eps: float) -> Array:
        total = tables[states[0]][cells]
        for state in states[1:]:
            total = total + tables[state][cells]
        if eps and states != ("moved",):
            total = (1 - eps) * total + np.float32(0.5 * eps) * tables.moved[cells]
        return total

    def _state_mean(
        self, tables: StateTables, states: tuple[str, ...], cells: slice, shares: Array, eps: float
    ) -> Array:
        total: Array = np.tensordot(shares, tables[states[0]][cells], 1)
        for state in states[1:]:
            total = total + np.tensordot(shares, tables[state][cells], 1)
        if eps and states != ("moved",):
            total = (1 - eps) * total + 0.5 * eps * np.tensordot(shares, tables.moved[cells], 1)
        return total.astype(np.float32, copy=False)

    def _cells_likelihood(self, id: str, reading: Hashable, fluid: Fluid, cells: slice) -> Array:
        function = CRITERIA[id].log_likelihood
        if function is None:
            raise ArgumentError("log_likelihood", None, f"given by the criterion {id!r}")
        grid = self.grid
        asked = Cells(
            grid.d_m[cells][:, None, None], grid.velocity.nodes[None, :, None],
            grid.depth.nodes[None, None, :], fluid,
        )  # fmt: skip
        logs = np.asarray(function(reading, asked), dtype=np.float64)
        sizes = logs.shape[0] if logs.ndim == 3 else 1
        table = np.exp(np.broadcast_to(logs, (sizes, grid.velocity.count, grid.depth.count)))
        return table.astype(np.float32)

    def size_cells(self, size: tuple[int, int]) -> tuple[slice, Array]:
        """Cells of a signature's size and their shares."""
        return self.grid.size_weights(size[0] / SIZE_STEPS_PER_PHI, size[1] / SIZE_STEPS_PER_PHI)

    @cached_property
    def _identity(self) -> Array:
        return np.eye(self.grid.velocity.count, dtype=np.float32)

    def _kernel(self, sigma: float) -> Array:
        if sigma not in self._kernels:
            self._kernels[sigma] = self.grid.kernel(sigma)
        return self._kernels[sigma]

    def _build_prior(self, prior: Prior) -> Array:
        grid = self.grid
        x, y = grid.velocity.ln_nodes[:, None], grid.depth.ln_nodes[None, :]
        given = np.ones((grid.velocity.count, grid.depth.count))
        if prior.velocity_given_depth is not None:
            intercept, slope, spread = prior.velocity_given_depth
            given = np.exp(-0.5 * ((x - intercept - slope * y) / spread) ** 2)
        given /= given.sum(axis=0, keepdims=True)
        depth = np.ones((1, grid.depth.count))
        if prior.depth is not None:
            depth = np.exp(-0.5 * ((y - prior.depth[0]) / prior.depth[1]) ** 2)
        return np.asarray(given * depth / depth.sum(), dtype=np.float32)

    def _build_stack(self, signature: Signature) -> Array:
        plane = self.velocity(signature)
        sizes = (signature.fluid, signature.size)
        skin, total = self._kept(self._shifts, sizes, self._size_shifts, "shifts")
        spread = self._kernel(self.settings.resistance["sd_ln"])
        return np.vstack([plane, skin(plane), self._froude_shift(plane), spread @ total(plane)])

    @cached_property
    def _froude_shift(self) -> ColumnShift:
        grid = self.grid
        offset = -0.5 * grid.depth.ln_nodes - 0.5 * np.log(GRAVITY_M_S2)
        start = grid.velocity.ln_nodes[0] - grid.froude.ln_nodes[0]
        return ColumnShift((start + offset) / grid.velocity.step, grid.velocity.count)

    def _size_shifts(self, sizes: _Sizes) -> tuple[ColumnShift, ColumnShift]:
        """Shifts from velocity to skin and to total shear velocity, mean over the sizes of the class."""
        grid, (fluid, size) = self.grid, sizes
        cells, shares = self.size_cells(size)
        ln_chezy = shares @ self.tables(fluid).ln_chezy[cells]
        ln_d = float(shares @ np.log(grid.d_m[cells]))
        numbers = self.settings.resistance
        start = grid.velocity.ln_nodes[0] - grid.shear.ln_nodes[0]
        skin = start + 0.5 * np.log(GRAVITY_M_S2) - ln_chezy
        total = start - numbers["intercept"] - numbers["slope"] * (grid.depth.ln_nodes - ln_d)
        return (
            ColumnShift(skin / grid.velocity.step, grid.velocity.count),
            ColumnShift(total / grid.velocity.step, grid.velocity.count),
        )

    def _build_evidence(self, signature: Signature) -> Evidence:
        likelihood = self._likelihood(signature, sharp=True)
        product = likelihood * self.prior(signature.prior)
        return Evidence(product.sum(axis=0, dtype=np.float64), likelihood.max(axis=0))
