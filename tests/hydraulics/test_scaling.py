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


def flagged_records() -> list[Formula]:
    """Formulas declared dimensional whose arguments or result can be rescaled (°C and salinity cannot)."""
    found = []
    for _, record in FORMULAS.items():
        units = [split_suffix(n)[1] for n in inspect.signature(record.function).parameters]
        has_dimension = record.output.dimension != NONE or any(u and u.dimension != NONE for u in units)
        if not record.homogeneous and has_dimension and sampling.numeric_arguments(record):
            found.append(record)
    return found


@pytest.mark.parametrize("record", flagged_records(), ids=lambda r: r.id)
def test_flagged_formula_is_really_dimensional(record: Formula) -> None:
    """A formula is flagged as dimensional only when it fails to scale, so that the flag hides nothing."""
    with np.errstate(all="ignore"):
        assert not sampling.scaling_error(record) < 1e-9
