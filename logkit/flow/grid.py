"""The log grid of grain size, velocity and depth, and what is done with numbers on it.

Only axes, class weights, shifts along the velocity axis and quantiles belong here; nothing of criteria.
The axes of shear velocity and Froude number have the same log step as the velocity axis, so that both are
plain shifts of a column of constant depth.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property

import numpy as np

Array = np.ndarray

LEVELS = (0.10, 0.25, 0.50, 0.75, 0.90)
"""Cumulative shares of the quantiles of every quantity."""


@dataclass(frozen=True)
class Axis:
    """A logarithmic axis of cells.

    Parameters
    ----------
    low : lower edge of the first cell, SI
    step : width of a cell in natural logarithms
    count : number of cells
    """

    low: float
    step: float
    count: int

    @cached_property
    def ln_edges(self) -> Array:
        """Natural logarithm of the cell edges, shape (count + 1,)."""
        return np.asarray(math.log(self.low) + self.step * np.arange(self.count + 1))

    @cached_property
    def ln_nodes(self) -> Array:
        """Natural logarithm of the cell centres, shape (count,)."""
        return self.ln_edges[:-1] + 0.5 * self.step

    @cached_property
    def nodes(self) -> Array:
        """Cell centres, SI, shape (count,)."""
        return np.exp(self.ln_nodes)


@dataclass(frozen=True)
class Grid:
    """The grid of the engine; the defaults keep every quantile within 1 % of a fine grid.

    Parameters
    ----------
    per_phi : grain-size cells a phi; class limits fall on cell limits when it is even
    velocity_cells, depth_cells : cells of the velocity and depth axes
    """

    per_phi: int = 8
    velocity_cells: int = 96
    depth_cells: int = 56

    coarse_phi = -8.0
    fine_phi = 6.0
    velocity_limits = (0.02, 12.0)
    depth_limits = (0.02, 60.0)

    @cached_property
    def phi(self) -> Array:
        """Centres of the grain-size cells, phi, from coarse to fine."""
        count = round((self.fine_phi - self.coarse_phi) * self.per_phi)
        return self.coarse_phi + (np.arange(count) + 0.5) / self.per_phi

    @cached_property
    def d_m(self) -> Array:
        """Grain diameters of the cells, m."""
        return 1e-3 * 2.0**-self.phi

    @cached_property
    def velocity(self) -> Axis:
        """Depth-averaged velocity U, m/s."""
        low, high = self.velocity_limits
        return Axis(low, math.log(high / low) / self.velocity_cells, self.velocity_cells)

    @cached_property
    def depth(self) -> Axis:
        """Flow depth h, m."""
        low, high = self.depth_limits
        return Axis(low, math.log(high / low) / self.depth_cells, self.depth_cells)

    @cached_property
    def shear(self) -> Axis:
        """Shear velocity, m/s; skin and total share it."""
        return Axis(0.0008, self.velocity.step, self.velocity.count)

    @cached_property
    def froude(self) -> Axis:
        """Froude number."""
        return Axis(0.008, self.velocity.step, self.velocity.count)

    def size_weights(self, coarse_phi: float, fine_phi: float) -> tuple[slice, Array]:
        """Cells of a grain-size interval and their shares, uniform in phi.

        Parameters
        ----------
        coarse_phi, fine_phi : limits, coarse < fine; an interval narrower than a cell is shared linearly
            between the two nearest cells

        Returns
        -------
        cells, and shares that sum to one; an empty slice when the interval lies outside the grid
        """
        width = 1.0 / self.per_phi
        if fine_phi - coarse_phi < width:
            middle = 0.5 * (coarse_phi + fine_phi)
            coarse_phi, fine_phi = middle - 0.5 * width, middle + 0.5 * width
        edges = self.coarse_phi + width * np.arange(len(self.phi) + 1)
        share = np.clip(np.minimum(edges[1:], fine_phi) - np.maximum(edges[:-1], coarse_phi), 0.0, None)
        if share.sum() < 0.5 * (fine_phi - coarse_phi):
            return slice(0, 0), np.zeros(0)
        share[share < 1e-9] = 0.0
        used = np.flatnonzero(share)
        cells = slice(int(used[0]), int(used[-1]) + 1)
        return cells, (share[cells] / share.sum()).astype(np.float32)

    def kernel(self, sigma: float) -> Array:
        """Matrix that spreads a density along the velocity axis by a normal in ln U; rows sum to one.

        Parameters
        ----------
        sigma : standard deviation in natural logarithms; zero gives the identity
        """
        count = self.velocity.count
        if sigma <= 0:
            return np.eye(count, dtype=np.float32)
        offset = (np.arange(count)[:, None] - np.arange(count)[None, :]) * (self.velocity.step / sigma)
        weights = np.exp(-0.5 * offset**2)
        return (weights / weights.sum(axis=1, keepdims=True)).astype(np.float32)


class ColumnShift:
    """Shifts every column of a density by its own number of cells, sharing cells linearly.

    Parameters
    ----------
    offsets : shift of each column in cells, need not be whole
    cells : number of cells of a column

    Notes
    -----
    What leaves the axis is lost; the axes are long enough for that to be negligible.
    """

    def __init__(self, offsets: Array, cells: int) -> None:
        whole = np.floor(offsets).astype(int)
        rows = np.arange(cells)[:, None] - whole[None, :]
        self._columns = np.arange(len(offsets))[None, :]
        self._upper = np.where((rows >= 0) & (rows < cells), rows, cells)
        self._lower = np.where((rows >= 1) & (rows <= cells), rows - 1, cells)
        self._part = (offsets - whole).astype(np.float32)[None, :]

    def __call__(self, columns: Array) -> Array:
        """The shifted densities, shape (cells, columns) as given."""
        padded = np.vstack([columns, np.zeros((1, columns.shape[1]), dtype=columns.dtype)])
        kept = padded[self._upper, self._columns] * (1 - self._part)
        passed: Array = padded[self._lower, self._columns] * self._part
        return kept + passed


def quantiles(mass: Array, axis: Axis, levels: tuple[float, ...] = LEVELS) -> Array:
    """Quantiles of densities on an axis; the cumulative share is linear inside a cell.

    Parameters
    ----------
    mass : mass of the cells, shape (cells, beds); need not sum to one
    axis : the axis of the cells
    levels : cumulative shares wanted

    Returns
    -------
    SI values, shape (levels, beds); NaN where a column has no mass
    """
    cumulated = np.empty_like(mass)
    cumulated[0] = mass[0]
    for cell in range(1, axis.count):  # row by row: several times faster than a cumulative sum over rows
        np.add(cumulated[cell - 1], mass[cell], out=cumulated[cell])
    total = cumulated[-1]
    beds = np.arange(mass.shape[1])
    result = np.empty((len(levels), mass.shape[1]))
    with np.errstate(invalid="ignore", divide="ignore"):
        for row, level in enumerate(levels):
            wanted = total * np.float32(level)
            passed = np.sum(cumulated < wanted, axis=0, dtype=np.uint8 if axis.count < 255 else np.int64)
            at = np.minimum(passed, axis.count - 1).astype(np.intp)
            inside = mass[at, beds]
            below = cumulated[at, beds] - inside
            result[row] = axis.ln_edges[0] + axis.step * (at + np.clip((wanted - below) / inside, 0.0, 1.0))
    result[:, ~(total > 0)] = np.nan
    return np.exp(result)
