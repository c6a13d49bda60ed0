"""Criteria that clash: how much, which pair, and that nothing is averaged away."""

from __future__ import annotations

import numpy as np
import pytest
from make import bed, log

from logkit.flow import infer_flow
from logkit.flow.conflict import CONFLICT_FROM, TENSION_FROM
from logkit.flow.inference import shared_solver
from logkit.flow.reading import Reading
from logkit.flow.solver import Disagreement
from logkit.model import LargestClasts, PhaseEstimate, SetThickness


def example(
    grain: str, structure: str, set_m: float | None, clast_mm: float | None
) -> tuple[PhaseEstimate, Disagreement]:
    """A bed of the worked conflict table, with its numbers."""
    sets = SetThickness(set_m, set_m, set_m) if set_m else None
    largest = LargestClasts((clast_mm,), clast_mm) if clast_mm else None
    history = infer_flow(log(bed(grain, structure, set_thickness=sets, largest=largest)), temperature_c=20.0)
    reading = history.readings[0]
    assert isinstance(reading, Reading)
    solver = shared_solver()
    return history.estimates[0], solver.disagreement(solver.compile([reading.case]))


@pytest.mark.parametrize(
    ("grain", "structure", "set_m", "clast_mm", "verdict", "agreement", "decades", "expected"),
    [
        ("mL", "trough_cross_bedding", 0.12, None, "agrees", 0.01, 0.00, 0.92),
        ("mL", "trough_cross_bedding", 0.12, 20.0, "conflict", -1.13, 1.43, 0.92),
        ("vfU", "current_ripples", None, 40.0, "conflict", -3.15, 2.37, 0.98),
        ("cL", "trough_cross_bedding", 0.5, 60.0, "conflict", -1.19, 1.67, 0.99),
        ("vfL", "trough_cross_bedding", 0.3, None, "size", -0.02, 0.01, 0.005),
    ],
)
def test_the_worked_conflicts_come_out(
    grain: str, structure: str, set_m: float | None, clast_mm: float | None,
    verdict: str, agreement: float, decades: float, expected: float,
) -> None:  # fmt: skip
    """Verdicts of the worked table, and its numbers within half a decade."""
    estimate, numbers = example(grain, structure, set_m, clast_mm)
    assert float(numbers.agreement[0]) == pytest.approx(agreement, abs=0.5)
    assert -float(np.log10(numbers.support[0])) == pytest.approx(decades, abs=0.5)
    assert float(numbers.expected[0]) == pytest.approx(expected, abs=0.05)
    if verdict == "agrees":
        assert estimate.conflict < TENSION_FROM
        assert estimate.clash is None
    elif verdict == "size":
        assert estimate.clash is not None
        assert estimate.clash.second == "grain_size"
    else:
        assert estimate.conflict >= CONFLICT_FROM
        assert estimate.clash is not None
        assert {estimate.clash.first, estimate.clash.second} == {"bed_state", "largest_clast"}


def test_both_readings_of_a_conflict_are_told_and_the_range_is_the_first_ones() -> None:
    """A dune bed with a cobble: the range is that of the dunes alone, the cobble's bound stands beside it."""
    found, _ = example("mL", "trough_cross_bedding", None, 60.0)
    plain, _ = example("mL", "trough_cross_bedding", None, None)
    assert found.velocity == plain.velocity
    assert found.clash is not None
    assert found.clash.first_velocity == plain.velocity
    assert found.clash.second_velocity is None
    assert "above" in found.clash.second_reading
    assert "no single flow does both" in found.notes[-1]


def test_a_pebble_that_the_dunes_could_move_is_no_conflict() -> None:
    """A clast within reach of the flow changes the range a little and raises nothing."""
    found, _ = example("cL", "trough_cross_bedding", 0.5, 4.0)
    assert found.conflict < CONFLICT_FROM
    assert found.clash is None


def test_a_stated_depth_can_clash_with_antidunes() -> None:
    """Antidunes under ten metres of river water clash with the stated depth."""
    (found,) = infer_flow(log(bed("mL", "antidunes", flow_depth_m=(9.0, 11.0)))).estimates
    assert found.conflict >= TENSION_FROM
