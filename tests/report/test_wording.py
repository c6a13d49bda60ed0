"""Numbers in words and units of the reader."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.report.wording import Units, chance


@pytest.mark.parametrize(
    ("text", "feet"),
    [
        ("depth from the sets: 0.8 to 6.1 m; more", "depth from the sets: 2.6 to 20 ft; more"),
        ("alone above 0.62 m/s", "alone above 2.0 ft/s"),
        ("quartz sand 0.06 to 2 mm", "quartz sand 0.06 to 2 mm"),
        ("moved a clast of 34.8 mm", "moved a clast of 34.8 mm"),
        ("0.1 to 5 Pa, 1 m", "0.1 to 5 Pa, 3.3 ft"),
    ],
)
def test_sentences_follow_the_units(text: str, feet: str) -> None:
    """Lengths in m and velocities in m/s are turned to feet; grain sizes and other units stay."""
    assert Units(True).words(text) == feet
    assert Units().words(text) == text


@given(st.floats(0.001, 1000))
def test_feet_are_metres_over_0_3048(metres: float) -> None:
    """One foot is 0.3048 m, and SI numbers are left alone."""
    assert Units(True).number(metres) == pytest.approx(metres / 0.3048)
    assert Units().number(metres) == metres


def test_a_probability_is_never_nothing() -> None:
    """A p that rounds to zero is a bound, one that is not there stays blank."""
    assert [chance(p) for p in (None, 0.0, 0.0009, 0.0214)] == ["", "below 0.001", "below 0.001", "0.021"]
