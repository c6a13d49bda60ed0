"""Labels along a line: order kept, no overlap, limits held, as near as possible to where they belong."""

from __future__ import annotations

import itertools

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.drawing.placement import keep_clear, spread, thin

positions = st.lists(st.floats(0, 200), min_size=1, max_size=40).map(sorted)


@given(positions, st.floats(0.1, 4.0), st.floats(0.0, 1.0))
def test_labels_keep_order_and_distance(wanted: list[float], height: float, gap: float) -> None:
    """Neighbouring labels never overlap, and all stay between the limits."""
    placed = spread(wanted, [height] * len(wanted), -10.0, 400.0, gap)
    assert placed is not None
    assert all(b - a >= height + gap - 1e-6 for a, b in itertools.pairwise(placed))
    assert placed[0] >= -10 + height / 2 - 1e-6
    assert placed[-1] <= 400 - height / 2 + 1e-6


@given(positions)
def test_labels_with_room_stay_where_they_belong(wanted: list[float]) -> None:
    """Labels that do not touch are not moved."""
    apart = [value + 3.0 * index for index, value in enumerate(wanted)]
    placed = spread(apart, [2.0] * len(apart), -10.0, 1000.0)
    assert placed == pytest.approx(apart)


def test_two_labels_at_one_place_move_apart_evenly() -> None:
    """Least squares: two labels for the same height move by the same amount, up and down."""
    assert spread([10.0, 10.0], [2.0, 4.0], 0.0, 100.0) == pytest.approx([8.5, 11.5])


def test_too_many_labels_are_refused() -> None:
    """What does not fit is not squeezed in."""
    assert spread([1.0, 2.0, 3.0], [4.0] * 3, 0.0, 10.0) is None


@given(positions, st.integers(0, 2**16))
def test_thinning_keeps_the_weighty(wanted: list[float], seed: int) -> None:
    """No stretch holds more labels than fit, and a kept label never weighs less than a dropped one beside it."""
    weights = [float((seed * (i + 7)) % 101) for i in range(len(wanted))]
    kept = thin(wanted, 6.0, weights, window=24.0)
    assert kept == sorted(set(kept))
    for cell in range(10):
        inside = [i for i in range(len(wanted)) if int(wanted[i] // 24.0) == cell]
        stay = [i for i in inside if i in kept]
        assert len(stay) == min(len(inside), 4)
        if len(stay) < len(inside):
            assert min(weights[i] for i in stay) >= max(weights[i] for i in inside if i not in stay)


def test_later_labels_give_way() -> None:
    """Labels that would touch an earlier one are left out, not moved."""
    assert keep_clear([0.0, 1.0, 2.0, 4.0], [2.0] * 4) == [0, 2, 3]
