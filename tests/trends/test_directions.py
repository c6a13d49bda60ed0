"""Directions, tilt and palaeocurrents of logs."""

from __future__ import annotations

import math

import numpy as np
import pytest
from astropy import units
from astropy.stats import circstats
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.model import Bed, CurrentReading, Header, Log
from logkit.trends.circular import axial_resultant, rayleigh_p, resultant, vector_mean
from logkit.trends.currents import find_currents
from logkit.trends.geometry import restored_line, restored_plane

AZIMUTHS = st.lists(st.floats(0, 359.99), min_size=5, max_size=80)
TILT = st.tuples(st.floats(0, 359), st.floats(1, 80))


def reading(
    indicator: str, nature: str, azimuth: float, dip: float | None = None, sense: str = "direction"
) -> CurrentReading:
    """A reading in short."""
    return CurrentReading(indicator, nature, sense, azimuth, dip, f"{azimuth:g}")  # type: ignore[arg-type]


def log_with(*readings: CurrentReading, beds: int = 1, **header: object) -> Log:
    """A log whose beds share out these readings."""
    shares = [readings[k::beds] for k in range(beds)]
    return Log(
        Header(**header),  # type: ignore[arg-type]
        tuple(Bed(f"b{k}", k, k + 1.0, currents=tuple(share)) for k, share in enumerate(shares)),
    )


@settings(max_examples=60, deadline=None)
@given(AZIMUTHS)
def test_rayleigh_p_equals_an_independent_library(azimuths: list[float]) -> None:
    """Rayleigh p is astropy's, for few and for many readings."""
    theirs = float(circstats.rayleightest(np.array(azimuths) * units.deg))
    if theirs > 0:
        assert rayleigh_p(azimuths) == pytest.approx(min(theirs, 1), abs=1e-9)
    else:
        assert 0 < rayleigh_p(azimuths) < 0.003


@settings(max_examples=60, deadline=None)
@given(AZIMUTHS, st.floats(0, 360))
def test_turning_all_readings_turns_the_mean(azimuths: list[float], turn: float) -> None:
    """The mean follows a common turn; resultant and p do not change."""
    turned = [(a + turn) % 360 for a in azimuths]
    assert resultant(turned) == pytest.approx(resultant(azimuths), abs=1e-9)
    if resultant(azimuths) > 0.05:
        difference = (vector_mean(turned) - vector_mean(azimuths) - turn + 180) % 360 - 180
        assert difference == pytest.approx(0, abs=1e-6)


@settings(max_examples=60, deadline=None)
@given(st.floats(0, 359), st.floats(0, 89), TILT)
def test_tilting_back_restores_any_plane(azimuth: float, dip: float, tilt: tuple[float, float]) -> None:
    """Removing a tilt and then the opposite one gives the plane back."""
    restored = restored_plane(azimuth, dip, *tilt)
    again = restored_plane(*restored, (tilt[0] + 180) % 360, tilt[1])
    assert again[1] == pytest.approx(dip, abs=1e-5)
    if dip > 1:
        assert (again[0] - azimuth + 180) % 360 - 180 == pytest.approx(0, abs=1e-4)


@settings(max_examples=40, deadline=None)
@given(TILT)
def test_bedding_itself_becomes_level(tilt: tuple[float, float]) -> None:
    """A plane parallel to bedding has no dip left; the line of dip keeps its trend."""
    assert restored_plane(*tilt, *tilt)[1] == pytest.approx(0, abs=1e-5)
    trend, plunge = restored_line(tilt[0], tilt[1], *tilt)
    assert plunge == pytest.approx(0, abs=1e-6)
    assert (trend - tilt[0] + 180) % 360 - 180 == pytest.approx(0, abs=1e-6)


def test_overturned_beds_are_turned_right_over() -> None:
    """Bedding past the vertical, written with a dip above 90, restores what its right-way twin was."""
    level = (70.0, 25.0)
    tilted = restored_plane(*level, 300.0, 130.0)  # lay it under the opposite tilt
    assert restored_plane(*tilted, 120.0, 130.0) == pytest.approx(level)


def test_foresets_and_imbrication_are_restored_to_flow() -> None:
    """Bedding 140/22: foresets 38/095 and 33/102 point to 064 and 064; imbrication 30 to 220 means flow to 076."""
    log = log_with(
        reading("cross_bedding", "plane", 95, 38), reading("cross_bedding", "plane", 102, 33),
        reading("imbrication", "plane", 220, 30), bedding=(140.0, 22.0),
    )  # fmt: skip
    rows = find_currents(log).table()
    assert [round(a) for a in rows["azimuth_deg"]] == [64, 64, 76]
    assert [round(d) for d in rows["restored_dip_deg"][:2]] == [27, 20]
    assert round(rows["restored_azimuth_deg"][2]) == 256
    assert list(rows["raw_azimuth_deg"]) == [95, 102, 220]


def test_upstream_dips_are_reversed_without_bedding_too() -> None:
    """Imbrication dipping to 220 means flow toward 040 where beds are level."""
    assert find_currents(log_with(reading("imbrication", "plane", 220, 30))).summaries[
        0
    ].mean_deg == pytest.approx(40)


def test_declination_is_added_east_positive() -> None:
    """A declination of 12 degrees east turns 355 to 007, and is said to be missing when it is."""
    known = find_currents(log_with(reading("flute", "azimuth", 355), declination_deg=12.0))
    assert known.summaries[0].mean_deg == pytest.approx(7)
    assert not any("declination" in note for note in known.summaries[0].notes)
    unknown = find_currents(log_with(reading("flute", "azimuth", 355)))
    assert "No declination given: azimuths are as read." in unknown.summaries[0].notes


def test_opposed_readings_are_called_so() -> None:
    """350, 010 and 185: mean 354.9, resultant 0.33, three readings, opposed."""
    summary = find_currents(
        log_with(*(reading("unspecified", "azimuth", a) for a in (350, 10, 185)))
    ).summaries[0]
    assert summary.mean_deg == pytest.approx(354.88, abs=0.01)
    assert summary.resultant == pytest.approx(0.326, abs=0.001)
    assert summary.rayleigh_p is None
    assert any("Opposed" in note for note in summary.notes)
    assert any("3 readings: below 10" in note for note in summary.notes)


def test_readings_that_cancel_have_no_mean() -> None:
    """0, 90, 180, 270 have no direction; nothing is invented."""
    summary = find_currents(log_with(*(reading("flute", "azimuth", a) for a in (0, 90, 180, 270)))).summaries[
        0
    ]
    assert summary.mean_deg is None
    assert summary.resultant == pytest.approx(0, abs=1e-12)


def test_axes_are_doubled_and_kept_from_directions() -> None:
    """Grooves are halves of a circle; a mean never mixes them with flutes."""
    axes = [reading("groove", "line", a, 0.0, "axis") for a in (10, 20, 195, 5, 185, 350)]
    found = find_currents(log_with(*axes, reading("flute", "azimuth", 100)))
    groove = next(s for s in found.summaries if s.indicator == "groove")
    assert groove.sense == "axis"
    assert groove.mean_deg == pytest.approx(7.604, abs=0.001)
    assert groove.resultant == pytest.approx(axial_resultant([10, 20, 195, 5, 185, 350]))
    assert all(0 <= a < 180 for a in groove.azimuths_deg)
    assert len(found.summaries) == 2


def test_ranks_are_kept_apart_and_like_kinds_put_together() -> None:
    """Dune foresets and flutes share a mean beside their own; ripples stay out of it."""
    found = find_currents(log_with(
        reading("cross_bedding", "plane", 80, 25), reading("flute", "line", 100, 0.0),
        reading("cross_lamination", "plane", 200, 20), reading("accretion_surface", "plane", 170, 12),
    ))  # fmt: skip
    merged = [s for s in found.summaries if s.indicator.startswith("all of")]
    assert [(s.n, round(s.mean_deg or 0)) for s in merged] == [(2, 90)]
    assert {s.rank for s in found.summaries} == {"medium", "low", "high"}


def test_a_level_plane_gives_no_azimuth() -> None:
    """A foreset that comes out flatter than 2 degrees stays in the table, unused, with the reason."""
    found = find_currents(log_with(reading("cross_bedding", "plane", 141, 22.5), bedding=(140.0, 22.0)))
    row = found.readings[0]
    assert not row.used
    assert row.azimuth_deg is None
    assert "gives no direction" in row.remark
    assert found.summaries[0].n == 0


def test_a_bearing_is_used_as_read_and_warned_about_above_the_limit() -> None:
    """A bare bearing cannot be restored: kept, with a warning where beds are steep."""
    found = find_currents(log_with(reading("flute", "azimuth", 75), bedding=(140.0, 40.0)))
    assert found.summaries[0].mean_deg == pytest.approx(75)
    assert any(
        "not restored although the tilt is above the limit" in note for note in found.summaries[0].notes
    )


def test_a_line_without_plunge_lies_in_the_bedding() -> None:
    """Trend 080 in bedding 120/40 restores to 087, as with its plunge of 32.7 degrees given."""
    found = find_currents(
        log_with(reading("parting_lineation", "line", 80, None, "axis"), bedding=(120.0, 40.0))
    )
    assert found.readings[0].azimuth_deg == pytest.approx(87.2676, abs=1e-3)
    assert found.readings[0].restored_dip_deg == pytest.approx(0, abs=1e-9)


def test_a_bed_may_have_its_own_bedding() -> None:
    """The bedding of a bed goes before that of the section."""
    log = log_with(reading("cross_bedding", "plane", 95, 38), bedding=(10.0, 60.0))
    found = find_currents(log, {"b0": (140.0, 22.0)})
    assert round(found.readings[0].azimuth_deg or 0) == 64


def test_a_turning_current_is_found_up_section() -> None:
    """Directions that turn 10 degrees a bed show as a trend with its rate across north."""
    readings = [reading("cross_bedding", "plane", (330 + 10 * k) % 360, 25) for k in range(9)]
    trend = find_currents(log_with(*readings, beds=9)).trends[0]
    assert trend.tau == 1
    assert trend.turn_deg_per_m == pytest.approx(10)
    assert trend.p < 0.001


def test_spread_is_the_circular_standard_deviation() -> None:
    """The spread of six published readings is 34.24 degrees."""
    azimuths = (51, 67, 40, 109, 31, 358)
    summary = find_currents(log_with(*(reading("flute", "azimuth", a) for a in azimuths))).summaries[0]
    assert summary.spread_deg == pytest.approx(math.degrees(0.5976699856))


def test_nine_readings_that_nearly_agree_have_a_small_p_and_not_none() -> None:
    """The series falls below zero there; the closed form is a few in a million (resultant 0.993)."""
    assert rayleigh_p(n=9, resultant=0.9931) == pytest.approx(3.5e-6, rel=0.1)


def test_axes_about_north_have_a_mean_of_zero_and_one_reading_is_one() -> None:
    """Rounding leaves neither a mean of 180 nor a tiny number, and the note counts in words."""
    lines = (reading("parting_lineation", "azimuth", a, sense="axis") for a in (10.0, 170.0))
    (summary,) = find_currents(log_with(*lines)).summaries
    assert summary.mean_deg == 0.0
    (single,) = find_currents(log_with(reading("groove", "azimuth", 40.0, sense="axis"))).summaries
    assert single.notes[0].startswith("1 reading: ")
    assert str(single.spread_deg) == "0.0"
