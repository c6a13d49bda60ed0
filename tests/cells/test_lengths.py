"""Lengths, spans, intervals and numbers."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.tables.cells import read_interval, read_length, read_number, read_sets, read_span

METRES = [
    ("45 cm", 0.45), ("1.32 m", 1.32), ("1,32 m", 1.32), ("1'6\"", 0.4572), ("1’6”", 0.4572), ("6\"", 0.1524),
    ("6 1/2\"", 0.1651), ("1 1/2 ft", 0.4572), ("5'", 1.524), ("5 ft 6 in", 1.6764), ("2104.5 ft", 641.4516),
    ("45", 0.45), ("~30", 0.3), ("1.234,5 m", 1234.5), ("250 mm", 0.25), ("-3.2 m", -3.2),
    ("½ m", 0.5), ("12 CM", 0.12),
]  # fmt: skip


@pytest.mark.parametrize(("text", "metres"), METRES)
def test_lengths_of_one_column(text: str, metres: float) -> None:
    """Units may change from cell to cell; a number without one takes the unit of the sheet."""
    length = read_length(text, "cm").value
    assert length is not None
    assert length.metres == pytest.approx(metres)


def test_a_length_without_any_unit_is_asked() -> None:
    """Without a unit in cell and sheet, metres are taken and asked."""
    reading = read_length("45", None)
    assert reading.value is not None
    assert reading.value.metres == 45
    assert reading.remarks[0].choices == ("45 m", "45 cm", "45 ft")


@pytest.mark.parametrize(
    ("text", "code"),
    [("abc", "length.unreadable"), ("nan", "length.unreadable"), ("12 foo", "length.unknown_unit"),
     ("1e999", "length.unreadable"), ("1e300 km", "length.absurd"), ("01-May", "cell.date"),
     ("1/0 in", "length.unreadable"),
     ("x" * 1500, "cell.too_long")],
)  # fmt: skip
def test_what_is_not_a_length_is_refused(text: str, code: str) -> None:
    """The refusal says what to do."""
    reading = read_length(text, "cm")
    assert reading.value is None
    assert [r.code for r in reading.remarks] == [code]
    assert reading.remarks[0].remedy


def test_a_comma_with_three_digits_is_asked() -> None:
    """1,234 may be a decimal or thousands."""
    assert read_length("1,234", "m").remarks[0].choices == ("1.234 m", "1234 m")


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [("0-45", 0, 0.45), ("45 to 60 cm", 0.45, 0.6), ("1.2–1.5 m", 1.2, 1.5), ("2104'6\"–2112'3\"", 641.4516, 643.8138),
     ("-3 - 2", -0.03, 0.02), ("1 m - 1.5 m", 1, 1.5)],
)  # fmt: skip
def test_spans(text: str, low: float, high: float) -> None:
    """Two lengths; a unit written once counts for both."""
    span = read_span(text, "cm").value
    assert span is not None
    assert span.low.metres == pytest.approx(low)
    assert span.high.metres == pytest.approx(high)


def test_heights_on_a_sheet_in_metres_do_not_flip() -> None:
    """Plain heights in metres are not taken for a slip of unit."""
    reading = read_span("2.1-2.4", "m")
    assert reading.value is not None
    assert reading.remarks == ()
    assert read_span("2112.3-2109.8", "ft").remarks == ()


@given(st.floats(min_value=0.001, max_value=9999), st.sampled_from(["m", "cm", "mm", "ft", "in"]))
def test_a_written_length_reads_back(value: float, unit: str) -> None:
    """A number with its unit reads as that number times the unit."""
    factor = {"m": 1, "cm": 0.01, "mm": 0.001, "ft": 0.3048, "in": 0.0254}[unit]
    length = read_length(f"{value!r} {unit}").value
    assert length is not None
    assert length.metres == pytest.approx(value * factor)


@pytest.mark.parametrize(
    ("text", "unit", "low", "high"),
    [("2-3 m", "m", 2, 3), ("2.5", "m", 2.5, 2.5), ("200-300 cm", "m", 2, 3), ("2 ± 0.5 m", "m", 1.5, 2.5),
     ("0.0002-0.0004", None, 0.0002, 0.0004), ("0.02 %", None, 0.0002, 0.0002), ("1e-4", None, 1e-4, 1e-4)],
)  # fmt: skip
def test_intervals(text: str, unit: str | None, low: float, high: float) -> None:
    """Flow depths in m, slopes as pure numbers."""
    assert read_interval(text, unit).value == (pytest.approx(low), pytest.approx(high))


@pytest.mark.parametrize("text", ["0", "-2", "abc", "2-3 m"])
def test_slopes_that_cannot_be_are_refused(text: str) -> None:
    """A slope is above zero and has no length unit."""
    assert read_interval(text).value is None
    assert read_interval(text).remarks[-1].level == "error"


def test_numbers_have_limits() -> None:
    """A number outside its limits says the limits."""
    assert read_number("18°", 0, 90).value == 18
    assert "from 0 to 90" in read_number("100", 0, 90).remarks[0].remedy


@pytest.mark.parametrize(
    ("text", "expected"),
    [("8-22 n=4", (0.08, 0.22, None, 4)), ("0.9 m", (0.9, 0.9, 0.9, None)),
     ("mean 12 (8-22), n=4", (0.08, 0.22, 0.12, 4)),
     ("8-22 cm mean 12 n=5", (0.08, 0.22, 0.12, 5))],
)  # fmt: skip
def test_set_thickness(text: str, expected: tuple[float | None, ...]) -> None:
    """A range, a value, a mean and a count; a mean is never invented for a range."""
    sets = read_sets(text, "cm").value
    assert sets is not None
    assert (sets.low_m, sets.high_m, sets.mean_m, sets.count) == pytest.approx(expected)


@pytest.mark.parametrize(
    ("text", "metres"), [("15±2", 0.15), ("15 +/- 2 cm", 0.15), ("1.2 m ± 0,1", 1.2), ("1.2±.1", None)]
)
def test_a_spread_is_left_to_the_text(text: str, metres: float | None) -> None:
    """A thickness with its spread is the thickness, approximately, and that is said."""
    reading = read_length(text, "cm")
    assert (reading.value.metres if reading.value else None) == (pytest.approx(metres) if metres else None)
    if reading.value:
        assert reading.value.approximate
        assert "length.spread" in [r.code for r in reading.remarks]
