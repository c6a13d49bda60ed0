"""Dimensions: rescaling length, time and mass changes a result as its record declares."""

from __future__ import annotations

import inspect

import numpy as np
import pytest
import sampling

from logkit.registry import FORMULAS, Formula
from logkit.units import NONE, split_suffix


@pytest.mark.parametrize("record", sampling.dimensional_records(), ids=lambda r: r.id)
def test_homogeneous_formula_scales_as_declared(record: Formula) -> None:
    """A formula that declares itself homogeneous gives the same result in any units."""
    assert sampling.scaling_error(record) < 1e-9


@pytest.mark.parametrize(
    "record",
    [r for _, r in FORMULAS.items() if not r.homogeneous and sampling.numeric_arguments(r)],
    ids=lambda r: r.id,
)
def test_flagged_formula_is_really_dimensional(record: Formula) -> None:
    """A formula is flagged as dimensional only when it fails to scale, so that the flag hides nothing."""
    scaled_anything = record.output.dimension != NONE or any(
        (unit := split_suffix(n)[1]) and unit.dimension != NONE
        for n in inspect.signature(record.function).parameters
    )
    if not scaled_anything:  # °C and salinity: their formulas hold for water, in kelvin and pascal seconds
        pytest.skip("nothing in its arguments can be rescaled")
    with np.errstate(all="ignore"):
        assert not sampling.scaling_error(record) < 1e-9
