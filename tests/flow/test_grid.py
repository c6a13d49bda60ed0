"""The grid: class weights, shifts, quantiles."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.flow.grid import LEVELS, Axis, ColumnShift, Grid, quantiles

GRID = Grid()


def test_a_half_phi_class_uses_four_equal_cells() -> None:
    """Class limits fall on cell limits, so every cell of the class counts the same."""
    cells, shares = GRID.size_weights(1.5, 2.0)
    assert cells.stop - cells.start == 4
    assert shares == pytest.approx([0.25] * 4)
    assert 1.5 < GRID.phi[cells].min() < GRID.phi[cells].max() < 2.0


@given(st.floats(-7.5, 5.4), st.floats(0.0, 3.0))
@settings(max_examples=60, deadline=None)
def test_size_shares_keep_the_middle_of_the_interval(coarse: float, width: float) -> None:
    """Shares sum to one and their mean phi is the middle of the interval."""
    fine = min(coarse + width, 5.9)
    cells, shares = GRID.size_weights(coarse, fine)
    assert shares.sum() == pytest.approx(1.0, abs=1e-5)
    assert float(shares @ GRID.phi[cells]) == pytest.approx(0.5 * (coarse + fine), abs=0.5 / GRID.per_phi)


def test_a_size_off_the_grid_has_no_cells() -> None:
    """An interval outside the grid gets no cells instead of the nearest ones."""
    cells, shares = GRID.size_weights(9.0, 10.0)
    assert cells.stop == 0
    assert shares.size == 0


def test_a_shift_moves_mass_without_losing_it() -> None:
    """A shift by a broken number of cells keeps the mass and moves the mean by that number."""
    column = np.zeros((40, 2), dtype=np.float32)
    column[10:14] = 0.25
    shifted = ColumnShift(np.array([3.3, -2.6]), 40)(column)
    assert shifted.sum(axis=0) == pytest.approx([1.0, 1.0], abs=1e-6)
    means = np.arange(40) @ shifted
    assert means == pytest.approx([11.5 + 3.3, 11.5 - 2.6], abs=1e-4)


def test_quantiles_of_a_lognormal_are_met() -> None:
    """Quantiles of a fine lognormal equal the closed form within 0.2 %."""
    axis = Axis(0.01, 0.05, 200)
    mass = np.exp(-0.5 * ((axis.ln_nodes - np.log(1.3)) / 0.5) ** 2)[:, None].astype(np.float32)
    expected = 1.3 * np.exp(0.5 * np.array([-1.281552, -0.67449, 0.0, 0.67449, 1.281552]))
    assert quantiles(mass, axis)[:, 0] == pytest.approx(expected, rel=2e-3)


def test_quantiles_rise_with_the_level_and_are_missing_without_mass() -> None:
    """Quantiles never cross; a column without mass gives NaN."""
    mass = np.abs(np.random.default_rng(3).normal(size=(96, 30))).astype(np.float32)
    mass[:, 7] = 0
    found = quantiles(mass, GRID.velocity)
    assert np.isnan(found[:, 7]).all()
    kept = np.delete(found, 7, axis=1)
    assert (np.diff(kept, axis=0) > 0).all()
    assert len(found) == len(LEVELS)


def test_spreading_keeps_the_mass_of_a_flat_likelihood() -> None:
    """A likelihood of one stays one under the allowance for local velocities."""
    assert GRID.kernel(0.5) @ np.ones(96, dtype=np.float32) == pytest.approx(np.ones(96), abs=1e-5)
    assert GRID.kernel(0.0) == pytest.approx(np.eye(96))
