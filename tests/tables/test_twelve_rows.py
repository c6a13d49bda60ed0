"""Twelve invented rows as notebooks and core sheets have them: each is read, or asked about, as a person would."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from logkit.errors import LogErrors
from logkit.model import Bed, Finding, Log
from logkit.tables import read_log

ROWS = Path(__file__).parent / "twelve_rows"


@pytest.fixture(scope="module")
def outcrop() -> Log:
    """Rows 1 to 8, 11 and 12."""
    return read_log(ROWS / "outcrop.csv", on_errors="keep")


@pytest.fixture(scope="module")
def core() -> Log:
    """Rows 9 and 10."""
    return read_log(ROWS / "core.csv", on_errors="keep")


def said(log: Log, row: int, code: str) -> Finding:
    """The finding of a kind in a row."""
    found = [f for f in log.findings if f.row == row and f.code == code]
    assert len(found) == 1, [str(f) for f in log.findings if f.row == row]
    return found[0]


def sizes(bed: Bed) -> list[tuple[float, float]]:
    """Limits of the size states, µm, whole numbers (with halves rounded up as printed in tables)."""
    return [(round(s.size.low_mm * 1000, 1), round(s.size.high_mm * 1000, 1)) for s in bed.grain]


def test_row_1_graded_with_divisions(outcrop: Log) -> None:
    """`0-45`, fU→vfL, Ta-c: 0.45 m, graded, divisions without thicknesses, the flute as read."""
    bed = outcrop.bed("1")
    assert (bed.base_m, bed.top_m) == (0.0, 0.45)
    assert sizes(bed) == [(176.8, 250.0), (62.5, 88.4)]
    assert [s.code for s in bed.structures if s.code] == ["Ta", "Tb", "Tc"]
    assert all(s.base_fraction is None for s in bed.structures)
    assert bed.contact is not None
    assert bed.contact.kind == "sharp"
    assert [(c.indicator, c.azimuth_deg, c.dip_deg) for c in bed.currents] == [("flute", 75.0, None)]
    assert "without their thicknesses" in said(outcrop, 8, "codes.divisions").message
    assert "as read" in said(outcrop, 8, "currents.azimuth_as_read").message
    assert bed.bioturbation is not None
    assert (bed.bioturbation.low, bed.bioturbation.high) == (0, 0)


def test_row_2_the_unit_flips(outcrop: Log) -> None:
    """`45 - 1.32` is 45 cm to 1.32 m and asked; a range is no grading, a range of sets gets no mean."""
    bed = outcrop.bed("2")
    assert bed.thickness_m == pytest.approx(0.87)
    asked = said(outcrop, 9, "span.unit_flip")
    assert asked.level == "question"
    assert asked.choices[0] == "45 cm to 1.32 m"
    assert sizes(bed) == [(250.0, 500.0)]
    sets = bed.set_thickness
    assert sets is not None
    assert (sets.low_m, sets.high_m, sets.mean_m, sets.count) == (0.08, 0.22, None, 4)
    assert [(c.dip_deg, c.azimuth_deg) for c in bed.currents] == [(38, 95), (33, 102)]
    assert not [f for f in outcrop.findings if f.row == 9 and f.code == "structures.code_size"]


def test_row_2b_no_exposure(outcrop: Log) -> None:
    """`NE 0,6m` is a gap of 0.6 m that counts in height and breaks the run."""
    gap = outcrop.bed("2b")
    assert gap.is_gap
    assert gap.gap_reason == "no_exposure"
    assert gap.thickness_m == pytest.approx(0.6)
    assert gap.notes == "grass"
    assert not gap.grain
    assert len(outcrop.runs) == 2
    assert said(outcrop, 10, "length.decimal_comma").level == "note"


def test_row_3_largest_clasts(outcrop: Log) -> None:
    """`1'6"` is 0.457 m; the mean of five clasts and the median ask for their unit; relief 35 cm."""
    bed = outcrop.bed("3")
    assert bed.thickness_m == pytest.approx(0.4572)
    assert bed.largest is not None
    assert bed.largest.mean_mm == pytest.approx(66.0)
    assert bed.size is not None
    assert bed.size.middle_mm == pytest.approx(20.0)
    assert said(outcrop, 11, "largest.no_unit").choices[0] == "mean 6.6 cm"
    assert said(outcrop, 11, "grain.d50_no_unit").choices[0] == "2 cm"
    assert bed.contact is not None
    assert bed.contact.relief_m == pytest.approx(0.35)
    reading = bed.currents[0]
    assert (reading.indicator, reading.dip_deg, reading.azimuth_deg) == ("imbrication", 30, 220)
    assert "towards about 40" in said(outcrop, 11, "currents.upstream").message


def test_row_4_unit_after_feet(outcrop: Log) -> None:
    """`12` below a row in feet is asked; `f sst? poss m` keeps its alternative and is unsure."""
    bed = outcrop.bed("4")
    assert bed.thickness_m == pytest.approx(0.12)
    assert said(outcrop, 12, "thickness.unit_before").choices == ("12 cm", "12 in")
    assert sizes(bed) == [(125.0, 250.0)]
    assert not bed.grain[0].size.sure
    assert said(outcrop, 12, "grain.alternative").choices == ("f", "m")


def test_row_5_a_pattern(outcrop: Log) -> None:
    """`6 x (8 vfs Tc / 4 mdst)` gives twelve layers, 0.72 m, sand 0.48 m, not measured."""
    layers = [bed for bed in outcrop.beds if bed.name.startswith("5.")]
    assert [bed.name for bed in layers] == [f"5.{n}" for n in range(1, 13)]
    assert sum(bed.thickness_m for bed in layers) == pytest.approx(0.72)
    sand = sum(bed.thickness_m for bed in layers if bed.size is not None and bed.size.high_mm > 0.0625)
    assert sand == pytest.approx(0.48)
    assert sand / 0.72 == pytest.approx(0.667, abs=5e-4)
    assert not any(bed.measured for bed in layers)
    assert said(outcrop, 13, "pattern.not_measured").level == "note"


def test_row_7_hummocks(outcrop: Log) -> None:
    """Bed 6 is missing and asked; the wavelength is 1.1 m on a sheet in cm; the grade is a range."""
    bed = outcrop.bed("7")
    assert "bed 6 is missing" in said(outcrop, 14, "bed.skipped").message
    assert [s.term for s in bed.structures] == ["hummocky"]
    assert bed.ripple_wavelength_m == pytest.approx(1.1)
    assert bed.bioturbation is not None
    assert (bed.bioturbation.low, bed.bioturbation.high) == (2, 3)
    assert bed.notes == "fizz"


def test_row_8_set_and_datum(outcrop: Log) -> None:
    """A set of 0.9 m in 0.3 m is refused; a height of 2.1 m below the running 3.517 m is asked."""
    bed = outcrop.bed("8")
    assert bed.thickness_m == pytest.approx(0.30)
    assert bed.base_m == pytest.approx(3.5172)
    refused = said(outcrop, 15, "sets.thicker_than_bed")
    assert refused.level == "error"
    assert bed.set_thickness is None
    asked = said(outcrop, 15, "position.overlap")
    assert asked.level == "question"
    assert asked.choices[0] == "placed at 3.517 m by the thicknesses"


def test_row_9_core(core: Log) -> None:
    """Feet and inches of depth, recovery 91.3 %, 2.6 ft lost at the base of the run, `sh lam` asked."""
    bed = core.bed("1")
    assert -bed.top_m == pytest.approx(641.452, abs=5e-4)
    assert -bed.base_m == pytest.approx(643.814, abs=5e-4)
    assert bed.thickness_m == pytest.approx(2.362, abs=5e-4)
    assert (bed.depth_top, bed.depth_base) == (2104.5, 2112.25)
    assert said(core, 6, "word.ambiguous").choices[0] == "subhorizontal lamination"
    lost = said(core, 6, "core.lost")
    assert "recovery 91.3 %" in lost.message
    assert "2.6 ft lost" in lost.message
    gap = next(b for b in core.beds if b.gap_reason == "lost_core")
    assert (gap.depth_top, gap.depth_base) == (2131.9, 2134.5)


def test_row_10_top_below_base(core: Log) -> None:
    """`2112.3 – 2109.8 ft`: a swap is offered, and the overlap with the row above is named."""
    swapped = said(core, 7, "position.swapped")
    assert swapped.level == "error"
    assert "swap them: top 2109.8 ft, base 2112.3 ft" in swapped.remedy
    overlap = said(core, 7, "position.overlap")
    assert "row 6" in overlap.message
    assert core.bed("2").lithology == "claystone"


def test_row_11_comma_codes_colour(outcrop: Log) -> None:
    """`1,2` is asked; 0.8 mm lies inside cU-vcU; two codes are kept; N5 and `dk gry` do not agree."""
    bed = outcrop.bed("9")
    assert said(outcrop, 16, "length.comma_unit").choices == ("1.2 cm", "1.2 m")
    assert sizes(bed) == [(707.1, 2000.0)]
    assert [(s.code, s.sure) for s in bed.structures] == [("Sh", False), ("Sl", False)]
    assert bed.sorting == "moderate"
    assert "medium grey" in said(outcrop, 16, "colour.name_clash").message
    assert not [f for f in outcrop.findings if f.row == 16 and f.level == "error"]


def test_row_12_opposed_ripples(outcrop: Log) -> None:
    """350, 010 and 185: mean 355, R 0.33, N 3, opposed; correction asked; four photos; climb needs a height."""
    bed = outcrop.bed("10")
    azimuths = [math.radians(c.azimuth_deg) for c in bed.currents]
    assert [c.azimuth_deg for c in bed.currents] == [350, 10, 185]
    mean = math.degrees(math.atan2(sum(map(math.sin, azimuths)), sum(map(math.cos, azimuths)))) % 360
    assert mean == pytest.approx(354.9, abs=0.1)
    assert "vector mean 355, R 0.33, N 3" in said(outcrop, 17, "currents.opposed").message
    assert "no declination" in said(outcrop, 8, "currents.correction").message
    assert bed.photos == ("231", "232", "233", "234")
    assert bed.samples == ("S7",)
    assert bed.climb_angle_deg == 18
    assert "ripple height" in said(outcrop, 17, "ripples.climb").message


def test_all_findings_come_at_once() -> None:
    """Reading the outcrop raises one error that carries every finding and the partial log."""
    with pytest.raises(LogErrors) as caught:
        read_log(ROWS / "outcrop.csv")
    assert caught.value.log is not None
    assert len(caught.value.log.beds) == 21
    assert {f.level for f in caught.value.findings} == {"error", "question", "note"}
    assert caught.value.findings[0].level == "error"
