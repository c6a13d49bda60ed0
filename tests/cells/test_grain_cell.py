"""The grain-size cell: ranges against grading, doubts, measures, dates."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.grains import scale
from logkit.tables.cells import Reading, read_grain, read_largest, read_size, read_sorting
from logkit.tables.cells.grain import GrainCell


def labels(text: str) -> list[str]:
    """Labels of the states of a cell, upward."""
    cell = read_grain(text).value
    return [state.size.label for state in cell.states] if cell else []


def only_question(reading: Reading[GrainCell]) -> tuple[str, ...]:
    """Choices of the one question of a reading."""
    (asked,) = [r for r in reading.remarks if r.level == "question"]
    return asked.choices


@pytest.mark.parametrize("text", ["f-m", "f–m", "F-M", "fine-medium", "m-f", "fs-ms"])
def test_a_range_is_one_wide_state(text: str) -> None:
    """A range never becomes grading, whichever side stands first."""
    assert labels(text) == ["f-m"]


@pytest.mark.parametrize(
    ("text", "states"),
    [("m→f", ["m", "f"]), ("m>f", ["m", "f"]), ("m -> f", ["m", "f"]), ("m to f", ["m", "f"]),
     ("f up to m", ["f", "m"]), ("f→m→vf", ["f", "m", "vf"]), ("f-m → vfL", ["f-m", "vfL"]),
     ("m base, f top", ["m", "f"]), ("fining up m-f", ["m", "f"]), ("coarsening up m-f", ["f", "m"])],
)  # fmt: skip
def test_written_direction_is_grading_upward(text: str, states: list[str]) -> None:
    """Arrows and words of direction give states from base to top."""
    assert labels(text) == states


def test_words_of_direction_are_said() -> None:
    """`m to f` is read as grading with a note, an arrow without."""
    assert [r.code for r in read_grain("m to f").remarks] == ["grain.graded_by_words"]
    assert read_grain("m→f").remarks == ()


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [("0.25 mm", 0.25, 0.25), ("250 µm", 0.25, 0.25), ("250um", 0.25, 0.25), ("2.0 phi", 0.25, 0.25),
     ("0.2-0.4 mm", 0.2, 0.4), ("0.2 to 0.4 mm", 0.2, 0.4), ("1-2 phi", 0.25, 0.5), ("-2 phi", 4, 4),
     ("0,25 mm", 0.25, 0.25), ("c. 2 mm", 2, 2)],
)  # fmt: skip
def test_measured_sizes(text: str, low: float, high: float) -> None:
    """Sizes with mm, micrometres or phi, also as ranges and with a decimal comma."""
    size = read_size(text).value
    assert size is not None
    assert (size.low_mm, size.high_mm) == (pytest.approx(low), pytest.approx(high))


@pytest.mark.parametrize(
    ("text", "choices"),
    [("f/m", ("f or m, uncertain", "f and m alternating")), ("f(m)", ("f, some m", "range f-m")),
     ("f? or m", ("f", "m")), ("0.25", ("0.25 mm", "0.25 phi", "0.25 µm")), ("FU", ("fU", "fining upward")),
     ("ms", ("medium sand", "mudstone")), ("m-f FU", ("m → f", "range f-m"))],
)  # fmt: skip
def test_two_meanings_are_a_question(text: str, choices: tuple[str, ...]) -> None:
    """Each ambiguous cell asks, and the first choice is the one taken."""
    reading = read_grain(text)
    assert reading.value is not None
    assert only_question(reading) == choices


def test_slash_keeps_both_as_unsure() -> None:
    """f/m is one unsure state over both classes."""
    cell = read_grain("f/m").value
    assert cell is not None
    assert (cell.states[0].size.label, cell.states[0].size.sure) == ("f-m", False)


def test_a_measured_size_outside_its_class_is_asked() -> None:
    """`m 2 mm` names the class and the size that do not fit."""
    assert only_question(read_grain("m 2 mm")) == ("m", "2 mm")
    assert not [r for r in read_grain("m 0.3 mm").remarks if r.level == "question"]


@pytest.mark.parametrize("text", ["01-May", "2024-05-01", "2024-05-01 00:00:00", "May-24", "1/2/2024"])
def test_a_date_is_refused(text: str) -> None:
    """A size that a spreadsheet turned into a date is an error with its remedy."""
    reading = read_grain(text)
    assert reading.value is None
    assert [r.code for r in reading.remarks] == ["cell.date"]
    assert "as text" in reading.remarks[0].remedy


def test_an_unknown_size_names_the_nearest_and_the_allowed() -> None:
    """`mediun` is refused, with m as nearest and the classes as allowed."""
    reading = read_grain("mediun")
    assert reading.value is None
    assert reading.remarks[-1].level == "error"
    assert reading.remarks[-1].nearest == "m"
    assert "vfL" in reading.remarks[-1].allowed


@pytest.mark.parametrize("text", ["fU→vfK", "f-x"])
def test_half_a_range_is_not_read_silently(text: str) -> None:
    """A grading or a range with one side unknown is an error."""
    assert any(r.level == "error" for r in read_grain(text).remarks)


def test_places_behind_states() -> None:
    """@ gives the height of a state in the bed; heights that do not rise are refused."""
    cell = read_grain("fU @0 → mL @0.3 → vfL @1").value
    assert cell is not None
    assert [s.fraction for s in cell.states] == [0, 0.3, 1]
    assert any(r.code == "grain.fractions" for r in read_grain("f@0.8 → m@0.2").remarks)


def test_rock_words_in_a_size_cell() -> None:
    """A rock without a size gives its class with a note; sorting does not eat the size before it."""
    reading = read_grain("mdst")
    assert reading.value is not None
    assert reading.value.lithology == "mudstone"
    assert [r.code for r in reading.remarks] == ["grain.from_rock"]
    cell = read_grain("m w srt rd").value
    assert cell is not None
    assert (cell.states[0].size.label, cell.sorting, cell.rounding) == ("m", "well", "rounded")


def test_one_size_is_asked_for_at_the_base() -> None:
    """Grading in a cell for one place is refused."""
    assert read_size("m→f").remarks[-1].code == "grain.one_size"


def test_largest_clasts_with_axis_and_doubtful_comma() -> None:
    """The axis is kept; `9,5 cm` may be two clasts or one."""
    one = read_largest("max 12 cm b-axis").value
    assert one is not None
    assert (one.sizes_mm, one.axis) == ((120.0,), "b")
    reading = read_largest("9,5 cm")
    assert [r.choices for r in reading.remarks if r.level == "question"] == [("9 and 5 cm", "9.5 cm")]


@pytest.mark.parametrize(
    ("text", "id"),
    [("m srt", "moderate"), ("mod well", "moderately_well"), ("vp sorted", "very_poor"), ("0.6 phi", "moderately_well"),
     ("w", "well")],
)  # fmt: skip
def test_sorting_words_and_values(text: str, id: str) -> None:
    """Sorting is read from words and from a spread in phi."""
    assert read_sorting(text).value == id


def test_medium_sand_follows_the_scale_of_the_log() -> None:
    """The same word has other limits on the engineering scale."""
    cell = read_grain("medium sand", "iso14688").value
    assert cell is not None
    assert (cell.states[0].size.low_mm, cell.states[0].size.high_mm) == (0.2, 0.63)


@given(st.sampled_from(sorted(scale())))
def test_canonical_labels_round_trip(label: str) -> None:
    """A canonical label reads back as its own class, sure and without remarks."""
    reading = read_size(label)
    assert reading.value == scale()[label].interval
    assert reading.remarks == ()


@given(st.sampled_from(sorted(scale())), st.sampled_from(sorted(scale())))
def test_ranges_of_canonical_labels_round_trip(one: str, other: str) -> None:
    """The label of a range reads back as the same interval."""
    first = read_size(f"{one}-{other}").value
    assert first is not None
    again = read_size(first.label).value
    assert again is not None
    assert (again.low_mm, again.high_mm, again.label) == (first.low_mm, first.high_mm, first.label)


@given(st.floats(min_value=1e-3, max_value=999), st.sampled_from(["mm", "µm", "phi"]))
def test_measured_labels_round_trip(value: float, unit: str) -> None:
    """The label of a measured size reads back as exactly the same size."""
    first = read_size(f"{value if unit != 'phi' else value / 100:.6g} {unit}").value
    if first is not None:
        assert read_size(first.label).value == first


def test_fine_to_medium_is_graded_but_asked() -> None:
    """The order of a range with the word `to` is read as grading and asked; `up to` says the direction."""
    assert labels("f to m") == ["f", "m"]
    assert only_question(read_grain("f to m")) == ("f → m graded upward", "range f-m")
    assert not [r for r in read_grain("f up to m").remarks if r.level == "question"]


def test_a_bare_number_is_read_by_its_size() -> None:
    """300 is taken as micrometres, -1 as phi, 0.3 as mm, each asked."""
    for text, taken in (("300", "300 µm"), ("-1", "-1 phi"), ("0.3", "0.3 mm")):
        reading = read_grain(text)
        assert labels(text) == [taken]
        assert only_question(reading)[0] == taken


def test_boulders_with_their_largest_size() -> None:
    """`boulders to 1.2 m` is a class with a largest clast."""
    cell = read_grain("boulders to 1.2 m").value
    assert cell is not None
    assert [s.size.label for s in cell.states] == ["boulder"]
    assert cell.largest is not None
    assert cell.largest.mean_mm == pytest.approx(1200)
