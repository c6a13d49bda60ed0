"""Packed points read like plain ones, and are written as the same text."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.drawing.packed import Points, Polylines, Strokes
from logkit.drawing.steps import packed_data
from logkit.drawing.svg import dots_data, lines_data, path_data

LENGTH = st.floats(-400, 400)
LINES = st.lists(st.lists(st.tuples(LENGTH, LENGTH), min_size=2, max_size=5), min_size=1, max_size=4)


def packed_lines(lines):
    """Polylines of lists of points."""
    sizes = np.array([len(line) for line in lines])
    return Polylines(np.array([point for line in lines for point in line]), np.cumsum(sizes) - sizes)


def strokes(ends):
    """Level strokes of (left, width, y)."""
    return Strokes(np.array([point for x, w, y in ends for point in ((x, y), (x + w, y))]))


@given(LINES, LINES, st.lists(st.tuples(LENGTH, st.floats(0, 90), LENGTH), min_size=1, max_size=5))
def test_packed_points_are_written_like_plain_ones(lines, others, ends):
    """Whatever stands beside it in the pass, each array gives the text that its points one by one give."""
    dots = Points(np.array([point for line in others for point in line]))
    shapes = [packed_lines(lines), dots, strokes(ends), packed_lines(others), strokes(ends), dots]
    plain = [lines_data(lines), dots_data(list(dots)), path_data(list(strokes(ends))), lines_data(others)]
    assert packed_data(shapes) == [*plain, plain[2], plain[1]]


@given(LINES)
def test_packed_polylines_read_like_tuples(lines):
    """Length, items and equality are those of the lines."""
    packed = packed_lines(lines)
    assert list(packed) == [tuple(line) for line in lines]
    assert len(packed) == len(lines)
    assert packed[-1] == tuple(lines[-1])
    assert packed == packed_lines(lines)


def test_a_coordinate_that_is_not_finite_is_refused():
    """It never reaches a file."""
    with pytest.raises(ValueError, match="not finite"):
        packed_data([Points(np.array([[0.0, np.nan]]))])
