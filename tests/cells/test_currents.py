"""Palaeocurrents and attitudes in the notations of the trade."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.tables.cells import read_attitude, read_currents


@pytest.mark.parametrize(
    ("text", "azimuth", "dip"),
    [("22/140", 140, 22), ("140/22", 140, 22), ("N30E 40SE", 120, 40), ("N50W 20NE", 40, 20), ("030/40 SE", 120, 40),
     ("38/095", 95, 38), ("22/045", 45, 22), ("22°/140°", 140, 22), ("30→220", 220, 30), ("S30W 10NW", 300, 10)],
)  # fmt: skip
def test_dip_and_direction(text: str, azimuth: float, dip: float) -> None:
    """Either order, strike with a dip quadrant, plunge and trend."""
    readings = read_currents(text).value
    assert readings is not None
    assert [(r.azimuth_deg, r.dip_deg, r.sure) for r in readings] == [(azimuth, dip, True)]


def test_which_is_the_dip() -> None:
    """Two numbers up to 90 are asked, unless another pair in the cell or three digits settle it."""
    reading = read_currents("30/60")
    assert [r.choices for r in reading.remarks] == [("dip 30 towards 60", "dip 60 towards 30")]
    settled = read_currents("140/22, 60/30").value
    assert settled is not None
    assert [(r.azimuth_deg, r.dip_deg) for r in settled] == [(140, 22), (60, 30)]


@pytest.mark.parametrize(
    ("text", "indicator", "nature", "sense"),
    [("flutes 075", "flute", "azimuth", "direction"), ("grooves 030-210", "groove", "azimuth", "axis"),
     ("PL 045", "parting_lineation", "azimuth", "axis"), ("imbr 30→220", "imbrication", "plane", "direction"),
     ("groove 5→120", "groove", "line", "axis"), ("fs 31/272", "cross_bedding", "plane", "direction"),
     ("wave rip crests 120", "wave_ripple_crest", "azimuth", "axis"), ("NE-SW", "unspecified", "azimuth", "axis")],
)  # fmt: skip
def test_indicators(text: str, indicator: str, nature: str, sense: str) -> None:
    """The word before a reading says what was measured, and whether it is a direction or only a line."""
    readings = read_currents(text).value
    assert readings is not None
    assert [(r.indicator, r.nature, r.sense) for r in readings] == [(indicator, nature, sense)]


def test_an_indicator_counts_until_the_next() -> None:
    """Several readings behind one word, then another word."""
    readings = read_currents("flutes 075, 080; grooves 030").value
    assert readings is not None
    assert [r.indicator for r in readings] == ["flute", "flute", "groove"]


def test_a_hint_names_what_the_cell_does_not() -> None:
    """The structure of the bed stands in when the cell names none, by structure or indicator id."""
    for hint in ("trough_cross_bedding", "cross_bedding"):
        readings = read_currents("22/140", hint).value
        assert readings is not None
        assert readings[0].indicator == "cross_bedding"


def test_imbrication_is_kept_as_measured() -> None:
    """The dip direction stays; the note says the flow went the other way."""
    reading = read_currents("imbr 30→220")
    assert reading.value is not None
    assert reading.value[0].azimuth_deg == 220
    assert "currents.upstream" in [r.code for r in reading.remarks]


@pytest.mark.parametrize(
    ("text", "code"),
    [("400", "currents.azimuth"), ("120/130", "currents.two_azimuths"), ("asdf", "currents.unreadable"),
     ("N30E 40NE", "currents.dip_side"), ("N95E", "currents.azimuth"), ("01-May", "cell.date")],
)  # fmt: skip
def test_what_cannot_be_a_direction_is_refused(text: str, code: str) -> None:
    """Impossible angles and sides are errors with a remedy."""
    reading = read_currents(text)
    assert reading.value is None
    assert [r.code for r in reading.remarks] == [code]
    assert reading.remarks[0].remedy


def test_from_is_asked() -> None:
    """`from 090` is kept as written, and asked."""
    assert read_currents("from 090").remarks[0].choices == ("towards 90", "towards 270")


@pytest.mark.parametrize("text", ["140/22", "22/140", "140 22", "N50E 22SE"])
def test_bedding(text: str) -> None:
    """The attitude of bedding in any notation is (dip direction, dip)."""
    assert read_attitude(text).value == (140, 22)


@given(st.integers(0, 360), st.integers(0, 90))
def test_three_digits_are_the_azimuth(azimuth: int, dip: int) -> None:
    """A dip with two digits and an azimuth with three is never doubtful, in either order."""
    for text in (f"{dip:02d}/{azimuth:03d}", f"{azimuth:03d}/{dip:02d}"):
        readings = read_currents(text).value
        assert readings is not None
        assert [(r.azimuth_deg, r.dip_deg, r.sure) for r in readings] == [(azimuth % 360, dip, True)]


@pytest.mark.parametrize(
    ("text", "bearings"),
    [("350,10,185", [350, 10, 185]), ("045 ± 10", [45]), ("090(3)", [90, 90, 90]), ("PCL 030/210", [30])],
)
def test_lists_spreads_and_counts(text: str, bearings: list[float]) -> None:
    """A comma parts bearings, a spread is left out, a count repeats, opposite bearings are one line."""
    readings = read_currents(text).value
    assert readings is not None
    assert [r.azimuth_deg for r in readings] == bearings
    assert all(r.dip_deg is None for r in readings)


@pytest.mark.parametrize("text", ["fs 25 to 130", "fs 25° to 130°", "fs 25 @ 130", "fs 25/130"])
def test_dip_towards(text: str) -> None:
    """A dip with the word `to` before a three-digit azimuth is one reading of a plane."""
    readings = read_currents(text).value
    assert readings is not None
    assert [(r.nature, r.azimuth_deg, r.dip_deg) for r in readings] == [("plane", 130, 25)]


@pytest.mark.parametrize(
    ("text", "read"),
    [
        ("22,5/140", [(140, 22.5)]),
        ("140/22,5", [(140, 22.5)]),
        ("fs 12,5/090; 14/100", [(90, 12.5), (100, 14)]),
        ("38/095,33/102", [(95, 38), (102, 33)]),
        ("350,10,185", [(350, None), (10, None), (185, None)]),
    ],
)
def test_a_decimal_comma_is_told_from_a_list(text: str, read: list[tuple[float, float | None]]) -> None:
    """One digit behind a comma is a decimal, and asked; anything else parts readings."""
    reading = read_currents(text)
    assert reading.value is not None
    assert [(r.azimuth_deg, r.dip_deg) for r in reading.value] == read
    assert any(r.code == "currents.decimal_comma" for r in reading.remarks) == any(
        dip is not None and dip % 1 for _, dip in read
    )


def test_readings_without_a_name_are_on_the_structure_they_stand_beside() -> None:
    """The hint names the feature; a name in the cell counts before it."""
    (unnamed,) = read_currents("29/094", "trough_cross_bedding").value or ()
    assert (unnamed.indicator, unnamed.nature) == ("cross_bedding", "plane")
    (named,) = read_currents("flute 094", "trough_cross_bedding").value or ()
    assert named.indicator == "flute"
    (other,) = read_currents("29/094", "massive").value or ()
    assert other.indicator == "unspecified"
