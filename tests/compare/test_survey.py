"""Holes and true thickness."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.compare import Survey
from logkit.compare.survey import depth_below_head, stratigraphic_depth
from logkit.errors import ArgumentError
from logkit.registry import evaluate

TRADE_CHECKS = (
    (0.0, 90.0, 30.0, 90.0, 8.660),
    (30.0, 90.0, 20.0, 90.0, 6.428),
    (30.0, 270.0, 20.0, 90.0, 9.848),
)


@pytest.mark.parametrize(("hole", "azimuth", "dip", "direction", "expected"), TRADE_CHECKS)
def test_true_thickness_of_ten_metres(
    hole: float, azimuth: float, dip: float, direction: float, expected: float
) -> None:
    """Ten metres along a straight hole give the true thickness of the handbook's checks."""
    along = stratigraphic_depth(Survey.straight(hole, azimuth), [1000.0, 1010.0], direction, dip)
    assert along[1] - along[0] == pytest.approx(expected, abs=5e-4)


@given(hole=st.floats(0, 85), azimuth=st.floats(0, 360), dip=st.floats(0, 60), direction=st.floats(0, 360))
def test_straight_hole_equals_the_formula(hole: float, azimuth: float, dip: float, direction: float) -> None:
    """Coordinates of a straight hole and the published formula give the same thickness."""
    along = stratigraphic_depth(Survey.straight(hole, azimuth), [0.0, 10.0], direction, dip)
    formula = evaluate(
        "geometry.tst",
        measured_m=10.0,
        hole_inclination_deg=hole,
        hole_azimuth_deg=azimuth,
        dip_deg=dip,
        dip_direction_deg=direction,
    )
    assert along[1] - along[0] == pytest.approx(formula, abs=1e-9)


def test_quarter_circle_has_the_radius_as_depth_and_reach() -> None:
    """A hole that builds from vertical to level along a quarter circle ends one radius down and one radius out."""
    length = 900.0
    radius = length / (math.pi / 2)
    survey = Survey((0.0, length), (0.0, 90.0), (90.0, 90.0))
    east, north, down = survey.positions([length])[0]
    assert (east, north, down) == pytest.approx((radius, 0.0, radius))
    middle = survey.positions([length / 2])[0]
    assert middle[2] == pytest.approx(radius * math.sin(math.pi / 4))


def test_hole_goes_straight_on_beyond_its_last_station() -> None:
    """Below the last station the direction is kept, and a vertical start needs no station at zero."""
    survey = Survey((100.0, 200.0), (0.0, 60.0), (0.0, 0.0))
    ends = depth_below_head(survey, [50.0, 100.0, 200.0, 210.0])
    assert ends[:2] == pytest.approx([50.0, 100.0])
    assert ends[3] - ends[2] == pytest.approx(10.0 * math.cos(math.radians(60)))


@given(st.lists(st.floats(0, 80), min_size=2, max_size=6), st.floats(1, 500))
def test_length_is_never_shorter_than_the_straight_line(tilts: list[float], step: float) -> None:
    """Two points on the hole are no farther apart in space than along the hole."""
    depths = tuple(step * i for i in range(len(tilts)))
    survey = Survey(depths, tuple(tilts), tuple(10.0 * i for i in range(len(tilts))))
    at = np.linspace(0, depths[-1], 17)
    points = survey.positions(at)
    apart = np.linalg.norm(np.diff(points, axis=0), axis=1)
    assert (apart <= np.diff(at) + 1e-6).all()


def test_stations_out_of_order_are_refused() -> None:
    """A station that goes back up the hole names the argument."""
    with pytest.raises(ArgumentError, match=r"measured_depth_m is .* increasing from station to station"):
        Survey((0.0, 100.0, 50.0), (0.0, 0.0, 0.0), (0.0, 0.0, 0.0))
    with pytest.raises(ArgumentError, match="non-finite"):
        Survey((0.0, math.nan), (0.0, 0.0), (0.0, 0.0))
