"""The cells of twelve messy rows of an invented outcrop and core, read as a careful geologist would."""

from __future__ import annotations

import pytest

from logkit.tables import cells


def codes(reading: cells.Reading, level: str = "question") -> set[str]:
    """Codes of the remarks of a level."""
    return {r.code for r in reading.remarks if r.level == level}


def test_row_1_divisions_grading_and_a_flute() -> None:
    """0-45 cm; graded fU to vfL; three divisions without thicknesses; sharp base; a flute without a plunge."""
    span = cells.read_span("0-45", "cm").value
    assert span is not None
    assert (span.low.metres, span.high.metres) == (0, pytest.approx(0.45))
    grain = cells.read_grain("fU→vfL").value
    assert grain is not None
    assert [s.size.label for s in grain.states] == ["fU", "vfL"]
    assert grain.states[0].size.low_mm == pytest.approx(0.177, abs=1e-3)
    assert grain.states[1].size.high_mm == pytest.approx(0.088, abs=1e-3)
    reading = cells.read_structures("Ta-c")
    assert reading.value is not None
    assert [s.code for s in reading.value.structures] == ["Ta", "Tb", "Tc"]
    assert reading.value.upward
    assert all(s.base_fraction is None for s in reading.value.structures)
    assert "codes.divisions" in codes(reading, "note")
    contact = cells.read_contact_cell("base sharp, flutes 075")
    assert contact.value is not None
    assert contact.value.contact is not None
    assert contact.value.contact.kind == "sharp"
    (flute,) = contact.value.currents
    assert (flute.indicator, flute.nature, flute.azimuth_deg, flute.dip_deg) == ("flute", "azimuth", 75, None)
    assert "currents.azimuth_as_read" in codes(contact, "note")
    bioturbation = cells.read_bioturbation_cell("BI0").value.bioturbation
    assert bioturbation is not None
    assert (bioturbation.low, bioturbation.high) == (0, 0)


def test_row_2_unit_flip_range_and_sets() -> None:
    """45 cm to 1.32 m is asked; mL-mU is one wide state; sets keep range and count without a mean."""
    reading = cells.read_span("45 - 1.32", "cm")
    assert reading.value is not None
    assert reading.value.high.metres - reading.value.low.metres == pytest.approx(0.87)
    assert codes(reading) == {"span.unit_flip"}
    grain = cells.read_grain("mL-mU").value
    assert grain is not None
    (state,) = grain.states
    assert (state.size.low_mm, state.size.high_mm) == (0.25, 0.5)
    cell = cells.read_structures("St sets 8-22 n=4", "fluvial", "cm").value
    assert cell is not None
    assert [s.term for s in cell.structures] == ["trough_cross_bedding"]
    sets = cell.set_thickness
    assert sets is not None
    assert (sets.low_m, sets.high_m, sets.mean_m, sets.count) == (
        pytest.approx(0.08),
        pytest.approx(0.22),
        None,
        4,
    )
    currents = cells.read_currents("fs 38/095, 33/102").value
    assert currents is not None
    assert [(c.indicator, c.azimuth_deg, c.dip_deg) for c in currents] == [
        ("cross_bedding", 95, 38),
        ("cross_bedding", 102, 33),
    ]
    colour = cells.read_colour("10YR 6/4").value
    assert colour is not None
    assert colour.munsell == "10YR 6/4"


def test_row_3_no_exposure_with_a_decimal_comma() -> None:
    """NE is a gap; 0,6m is 0.6 m with a note."""
    assert cells.read_gap("NE").value == "no_exposure"
    assert cells.read_gap("NE 0,6m").value == "no_exposure"
    reading = cells.read_length("0,6m", "cm")
    assert reading.value is not None
    assert reading.value.metres == pytest.approx(0.6)
    assert codes(reading, "note") == {"length.decimal_comma"}


def test_row_4_feet_clasts_and_imbrication() -> None:
    """1'6" is 0.457 m; five clasts have a mean of 6.6 cm; D50 without a unit is asked; imbrication stays a plane."""
    length = cells.read_length("1'6\"", "cm").value
    assert length is not None
    assert length.metres == pytest.approx(0.4572)
    for reading in (
        cells.read_grain("cgl clst-supp, MPS 9,7,6,6,5 D50~2"),
        cells.read_lithology("cgl clst-supp, MPS 9,7,6,6,5 D50~2"),
    ):
        assert reading.value is not None
        assert reading.value.largest is not None
        assert reading.value.largest.mean_mm == pytest.approx(66)
        assert reading.value.d50_mm == pytest.approx(20)
        assert reading.value.lithology == "conglomerate"
        assert reading.value.qualifiers == ("clast_supported",)
        assert codes(reading) == {"largest.no_unit", "grain.d50_no_unit"}
    largest = cells.read_largest("MPS 9,7,6,6,5 cm")
    assert largest.value is not None
    assert largest.value.mean_mm == pytest.approx(66)
    assert not codes(largest)
    reading = cells.read_currents("imbr 30→220")
    assert reading.value is not None
    (current,) = reading.value
    assert (current.indicator, current.nature, current.azimuth_deg, current.dip_deg) == (
        "imbrication",
        "plane",
        220,
        30,
    )
    assert any("flow towards about 40" in r.message for r in reading.remarks)
    contact = cells.read_contact("ero, relief 35", "cm").value
    assert contact is not None
    assert (contact.kind, contact.relief_m) == ("erosive", pytest.approx(0.35))


def test_row_5_doubtful_size() -> None:
    """f with a doubt, m kept as the alternative, in either column."""
    for reading in (cells.read_grain("f sst? poss m"), cells.read_lithology("f sst? poss m")):
        assert reading.value is not None
        assert reading.value.lithology == "sandstone"
        states = reading.value.states if isinstance(reading.value, cells.GrainCell) else reading.value.grain
        assert [(s.size.label, s.size.sure) for s in states] == [("f", False)]
        (asked,) = [r for r in reading.remarks if r.level == "question"]
        assert asked.choices == ("f", "m")


def test_row_6_pattern() -> None:
    """12 layers, 0.72 m, sand 0.48 m, said to be a pattern and not measured."""
    reading = cells.read_pattern("6 x (8 vfs Tc / 4 mdst)", "cm")
    pattern = reading.value
    assert pattern is not None
    assert pattern.layers == 12
    assert pattern.thickness_m == pytest.approx(0.72)
    assert pattern.count * pattern.parts[0].thickness_m == pytest.approx(0.48)
    assert pattern.parts[0].structures[0].code == "Tc"
    assert pattern.parts[1].lithology == "mudstone"
    assert "pattern.not_measured" in codes(reading, "note")


def test_row_7_hummocks_traces_and_acid() -> None:
    """A wavelength in m on a sheet in cm; grade 2 to 3 with Ophiomorpha; fizz is calcareous; slty f is silty fine."""
    cell = cells.read_structures("HCS λ1.1m", "fluvial", "cm").value
    assert cell is not None
    assert cell.structures[0].term == "hummocky"
    assert cell.ripple_wavelength_m == pytest.approx(1.1)
    traces = cells.read_bioturbation_cell("BI 2-3 Oph.").value
    assert traces is not None
    assert traces.bioturbation is not None
    assert (traces.bioturbation.low, traces.bioturbation.high) == (2, 3)
    assert traces.fossils == ("ophiomorpha",)
    grain = cells.read_grain("slty f").value
    assert grain is not None
    assert grain.qualifiers == ("silty",)
    rock = cells.read_lithology("fizz").value
    assert rock is not None
    assert rock.qualifiers == ("calcareous",)


def test_row_8_metres_on_a_sheet_in_centimetres() -> None:
    """2.1–2.4 on a sheet in cm is read as metres and asked; the set and the foreset beside the code are read."""
    reading = cells.read_span("2.1–2.4", "cm")
    assert reading.value is not None
    assert reading.value.high.metres - reading.value.low.metres == pytest.approx(0.3)
    assert codes(reading) == {"span.unit_decimals"}
    cell = cells.read_structures("Sp set 0.9m 31/272", "fluvial", "cm").value
    assert cell is not None
    assert cell.set_thickness is not None
    assert cell.set_thickness.mean_m == pytest.approx(0.9)
    (current,) = cell.currents
    assert (current.indicator, current.azimuth_deg, current.dip_deg) == ("cross_bedding", 272, 31)


def test_row_9_core_run() -> None:
    """641.452 to 643.814 m, recovery 91.3 %, 2.6 ft lost, driller's depths assumed; `sh lam` is asked."""
    reading = cells.read_core_note("KG-C2 core 3, 2104'6\"–2112'3\", cut 30' rec 27.4', vfU sh lam")
    run = reading.value
    assert run is not None
    assert run.span is not None
    assert run.span.low.metres == pytest.approx(641.452, abs=5e-4)
    assert run.span.high.metres == pytest.approx(643.814, abs=5e-4)
    assert run.lost_m == pytest.approx(2.6 * 0.3048)
    assert (run.name, run.rest) == ("KG-C2 core 3", "vfU sh lam")
    assert codes(reading, "note") == {"core.recovery", "core.depth_reference"}
    assert any("91.3%" in r.message for r in reading.remarks)
    words = cells.read_grain("vfU sh lam")
    assert words.value is not None
    assert words.value.states[0].size.label == "vfU"
    (asked,) = [r for r in words.remarks if r.level == "question"]
    assert asked.choices == ("subhorizontal lamination", "shale laminae", "shale, laminated")


def test_row_10_top_below_base_is_left_to_the_rows() -> None:
    """The span keeps the order written, both in feet."""
    span = cells.read_span("2112.3 – 2109.8 ft").value
    assert span is not None
    assert span.low.metres > span.high.metres
    assert span.low.metres == pytest.approx(2112.3 * 0.3048)
    rock = cells.read_lithology("clyst").value
    assert rock is not None
    assert rock.lithology == "claystone"


def test_row_11_comma_size_inside_two_codes_and_colour_name() -> None:
    """1,2 is asked; 0.8 mm lies inside 0.707-2 mm; both codes stay unsure; N5 is not called dark grey."""
    reading = cells.read_length("1,2", "cm")
    assert reading.value is not None
    assert reading.value.comma
    assert codes(reading) == {"length.comma_unit"}
    assert reading.remarks[0].choices == ("1.2 cm", "1.2 m")
    grain = cells.read_grain("pbly cU-vcU GS 0.8mm m srt sbr")
    assert grain.value is not None
    assert grain.value.states[0].size.low_mm == pytest.approx(0.7071, abs=1e-4)
    assert grain.value.states[0].size.high_mm == 2.0
    assert grain.value.d50_mm == pytest.approx(0.8)
    assert (grain.value.sorting, grain.value.rounding) == ("moderate", "subrounded")
    assert grain.value.qualifiers == ("pebbly",)
    assert not codes(grain)
    structures = cells.read_structures("Sh/Sl?")
    assert structures.value is not None
    assert [(s.code, s.sure) for s in structures.value.structures] == [("Sh", False), ("Sl", False)]
    assert codes(structures) == {"codes.alternatives"}
    colour = cells.read_colour("N5 dk gry")
    assert colour.value is not None
    assert colour.value.munsell == "N5"
    assert codes(colour) == {"colour.name_clash"}


def test_row_12_climb_bearings_photos_sample() -> None:
    """18 degrees of climb, three bearings, four photos and a sample."""
    cell = cells.read_structures("rip xl climb 18°").value
    assert cell is not None
    assert cell.climb_angle_deg == 18
    assert cell.structures[0].term == "climbing_ripples"
    currents = cells.read_currents("PC 350 & 010 & 185").value
    assert currents is not None
    assert [(c.azimuth_deg, c.nature, c.dip_deg) for c in currents] == [
        (350, "azimuth", None),
        (10, "azimuth", None),
        (185, "azimuth", None),
    ]
    assert cells.read_photos("ph 231-34 S7").value == ("231", "232", "233", "234")
    assert cells.read_samples("ph 231-34 S7").value == ("S7",)
