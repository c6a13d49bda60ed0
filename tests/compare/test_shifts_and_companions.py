"""Depth shifts and the files that lie beside a log."""

from __future__ import annotations

from pathlib import Path

import pytest

from logkit.compare import ShiftTable, find_companions, read_curves, read_shifts, read_survey
from logkit.compare.companions import panel_distance_m
from logkit.errors import ArgumentError, DataFileError, LogkitError, UnknownNameError
from logkit.model import Header, Log

EXAMPLES = Path(__file__).parents[2] / "examples"


def test_constant_shift_moves_everything() -> None:
    """A constant shift moves top and base alike."""
    assert ShiftTable.constant(0.8).move(100.0, 101.0) == (100.8, 101.8)


def test_interval_shift_moves_whole_beds_and_leaves_the_rest() -> None:
    """A bed moves with the interval its middle lies in; outside of all intervals nothing moves."""
    table = ShiftTable("per interval", ((100.0, 110.0, 0.5), (110.0, 120.0, 0.9)))
    assert table.move(108.0, 111.0) == (108.5, 111.5)
    assert table.move(112.0, 113.0) == pytest.approx((112.9, 113.9))
    assert table.move(130.0, 131.0) == (130.0, 131.0)


def test_points_stretch_between_them() -> None:
    """Point by point the shift is linear between points and constant beyond the last."""
    table = ShiftTable.points((100.0, 110.0), (0.0, 1.0))
    assert table.move(100.0, 105.0) == (100.0, 105.5)
    assert table.move(110.0, 120.0) == (111.0, 121.0)


def test_points_that_would_change_places_are_refused() -> None:
    """A shift that turns the order of two points is an error."""
    with pytest.raises(ArgumentError, match="keep their order after the shift"):
        ShiftTable.points((100.0, 101.0), (3.0, 0.0))


@pytest.mark.parametrize(
    ("text", "kind"),
    [
        ("shift_m\n0.5\n", "constant"),
        ("from_m,to_m,shift_m\n10,20,0.5\n20,30,0.7\n", "per interval"),
        ("depth_ft;shift_ft\n100;1,5\n200;2\n", "point by point"),
    ],
)
def test_shift_tables_are_told_apart_by_their_columns(tmp_path: Path, text: str, kind: str) -> None:
    """One column is a constant, from and to are intervals, a depth is points; feet become metres."""
    path = tmp_path / "a.shifts.csv"
    path.write_text(text)
    table = read_shifts(path)
    assert table.kind == kind
    if kind == "point by point":
        assert table.rows[0][2] == pytest.approx(1.5 * 0.3048)


def test_survey_in_feet(tmp_path: Path) -> None:
    """Depths of a survey in feet are converted."""
    path = tmp_path / "a.survey.csv"
    path.write_text("# a note\nmeasured_depth_ft,inclination_deg,azimuth_deg\n0,0,0\n1000,10,90\n")
    assert read_survey(path).measured_depth_m[1] == pytest.approx(304.8)


def test_a_bad_cell_names_file_and_line(tmp_path: Path) -> None:
    """The line a person sees is named, notes counted."""
    path = tmp_path / "a.survey.csv"
    path.write_text("# a note\nmeasured_depth_m,inclination_deg,azimuth_deg\n0,0,0\n10,steep,0\n")
    with pytest.raises(
        DataFileError, match=r"line 4: 'steep' is no number in column inclination\. Correct it\."
    ):
        read_survey(path)
    path.write_text("measured_depth_m,inclination_deg\n0,0\n")
    with pytest.raises(DataFileError, match="lacks azimuth"):
        read_survey(path)


def test_files_beside_the_example_wells_are_found() -> None:
    """Survey, shifts and curves are found by the name of the log."""
    wells = EXAMPLES / "wells"
    assert find_companions(Log(source=str(wells / "plover_2.csv"))).survey is not None
    assert find_companions(Log(source=str(wells / "sandling_1.csv"))).shifts is not None
    curves = find_companions(Log(source=str(wells / "teal_1.csv"))).curves
    assert [c.mnemonic for c in curves] == ["GR", "RHOB"]
    nothing = find_companions(Log(source=str(wells / "plover_1.csv")))
    assert nothing.survey is None
    assert nothing.curves == ()


def test_curves_hold_the_values_of_the_file() -> None:
    """A curve has the depths of the file and NaN where the file has its null value."""
    gamma, density = read_curves(EXAMPLES / "wells" / "teal_1.las", ("gr", "RHOB"))
    assert gamma.depth_m[0] == 1450.0
    assert gamma.unit == "API"
    assert len(gamma.depth_m) == len(gamma.values)
    assert str(density.values[0]) == "nan"
    assert density.values[5] > 2


def test_a_damaged_curve_file_is_told_in_words(tmp_path: Path) -> None:
    """Anything that is not LAS, and a curve that is not there, ends in an error with a remedy."""
    path = tmp_path / "a.las"
    path.write_text("this is no log\n")
    with pytest.raises(LogkitError, match=r"a\.las cannot be read as a LAS file"):
        read_curves(path)
    with pytest.raises(UnknownNameError, match="Did you mean 'gr'"):
        read_curves(EXAMPLES / "wells" / "teal_1.las", ("grr",))
    with pytest.raises(LogkitError, match="There is no file"):
        read_curves(tmp_path / "none.las")


def test_distance_comes_from_the_header() -> None:
    """Distance along the panel is read with its unit, and a word in its place is an error."""
    assert panel_distance_m(Log(Header(extra=(("distance_km", "1,5"),)))) == 1500.0
    assert panel_distance_m(Log(Header())) is None
    with pytest.raises(ArgumentError, match="distance_m is 'far'"):
        panel_distance_m(Log(Header(extra=(("distance_m", "far"),))))
