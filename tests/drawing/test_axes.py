"""Axes: from quantities to millimetres."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.drawing.axes import LogAxis, PhiAxis, Piece, PositionScale, round_ends


@pytest.mark.parametrize(
    ("phi", "x"), [(8, 41.0), (4, 47.8), (-1, 72.8), (-4, 77.9), (12, 41.0), (-12, 83.0)]
)
def test_grain_size_axis_at_full_size(phi: float, x: float) -> None:
    """The axis gives sand three times the width per phi of mud and gravel and is held at both ends."""
    assert PhiAxis(36.0, 46.9).x(phi) == pytest.approx(x)


@given(st.floats(-10, 10), st.floats(-10, 10))
def test_coarser_is_never_narrower(a: float, b: float) -> None:
    """Width grows with grain size over the whole axis."""
    axis = PhiAxis(0.0, 30.0)
    assert axis.x(min(a, b)) >= axis.x(max(a, b))


@given(st.floats(0.001, 90), st.floats(1.0, 100))
def test_round_ends_hold_the_range(low: float, factor: float) -> None:
    """Ends are 1, 2 or 5 times a power of ten, enclose the range and lie a decade apart at least."""
    first, last = round_ends(low, low * factor)
    assert first <= low * 1.001
    assert last >= low * factor * 0.999
    assert last / first > 9.9
    assert {f"{value:e}"[0] for value in (first, last)} <= {"1", "2", "5"}


def test_axis_ticks_label_both_ends() -> None:
    """Both ends carry a label, labels do not touch, every 1-2-5 value has a tick."""
    ticks = LogAxis(0.0, 17.0, 0.1, 20.0).ticks(6.0)
    assert [value for value, _ in ticks] == pytest.approx([0.1, 0.2, 0.5, 1, 2, 5, 10, 20])
    assert ticks[0][1] == "0.1"
    assert ticks[-1][1] == "20"


def test_cut_scale_is_monotone() -> None:
    """A cut gap takes less paper, and positions keep their order across it."""
    scale = PositionScale((Piece(0, 2, 100, 60), Piece(2, 8, 60, 50, cut=True), Piece(8, 9, 50, 30)))
    heights = [scale.y(m / 4) for m in range(37)]
    assert heights == sorted(heights, reverse=True)
    assert scale.y(5) == pytest.approx(55)
    assert scale.y(-3) == 100
    assert scale.y(99) == 30
