"""Splitting beds into phases."""

from __future__ import annotations

import pytest
from make import bed, log, size

from logkit.flow import split_phases
from logkit.model import Bed, GrainState, LargestClasts, SetThickness, SizeReading, Structure


def test_a_plain_bed_is_one_phase() -> None:
    """One size and one structure make one phase over the whole bed."""
    (phase,) = split_phases(log(bed("mL", "trough_cross_bedding")))
    assert (phase.boundary, phase.base_m, phase.top_m) == ("bed", 0.0, 0.8)
    assert phase.size == size("mL")


def test_written_grading_makes_a_phase_of_each_state() -> None:
    """Base and top states become two phases; where they pass was not recorded."""
    first, second = split_phases(log(bed("mU fL")))
    assert (first.size, second.size) == (size("mU"), size("fL"))
    assert first.boundary == second.boundary == "unknown"
    assert first.top_m == second.base_m == pytest.approx(0.4)


def test_a_structure_sequence_shares_out_the_grading() -> None:
    """Plane beds passing up into ripples in a graded bed: sizes run on from base to top."""
    first, second = split_phases(
        log(bed("fU vfL", "upper_plane_lamination current_ripples", structures_upward=True))
    )
    assert (first.structure, second.structure) == ("upper_plane_lamination", "current_ripples")
    assert first.base_size == size("fU")
    assert second.top_size == size("vfL")
    assert first.top_size == second.base_size
    assert first.boundary == "unknown"


def test_recorded_extents_are_kept_and_holes_stay_without_structure() -> None:
    """Structures with fractions give recorded boundaries; what lies between has none."""
    terms = (
        Structure("current_ripples", base_fraction=0.75, top_fraction=1.0),
        Structure("trough_cross_bedding", base_fraction=0.0, top_fraction=0.5),
    )
    phases = split_phases(log(bed("mL", terms=terms)))
    assert [p.structure for p in phases] == ["trough_cross_bedding", "", "current_ripples"]
    assert {p.boundary for p in phases} == {"recorded"}
    assert phases[1].base_m == pytest.approx(0.4)


def test_structures_without_order_stay_in_one_phase() -> None:
    """A list without an order is not a sequence."""
    (phase,) = split_phases(log(bed("mL", "massive trough_cross_bedding current_ripples")))
    assert phase.structure == "trough_cross_bedding"


def test_readings_in_the_bed_make_as_many_states_as_they_support() -> None:
    """Readings within half a phi are one state; a larger step begins another."""
    readings = tuple(
        SizeReading(position, d50) for position, d50 in ((0.1, 0.5), (0.2, 0.48), (0.5, 0.3), (0.7, 0.15))
    )
    phases = split_phases(log(bed("", sizes=readings)))
    assert len(phases) == 3
    assert [round(p.size.middle_mm, 2) for p in phases if p.size] == [0.49, 0.30, 0.15]
    assert {p.boundary for p in phases} == {"recorded"}


def test_a_gap_is_a_phase_without_anything() -> None:
    """Gaps stay in the history as themselves."""
    gap = Bed("gap 1", 1.0, 2.0, kind="gap", gap_reason="no_exposure")
    (phase,) = split_phases(log(gap))
    assert phase.size is None
    assert phase.structure == ""


def test_sets_belong_to_dunes_and_clasts_to_the_coarsest_part() -> None:
    """Set thickness goes to the cross-bedded phase, the largest clast to the coarsest one."""
    first, second = split_phases(
        log(
            bed(
                "mU fL", "trough_cross_bedding current_ripples", structures_upward=True,
                set_thickness=SetThickness(0.1, 0.2), largest=LargestClasts((20.0,), 20.0),
            )
        )
    )  # fmt: skip
    assert first.set_thickness is not None
    assert second.set_thickness is None
    assert (first.largest_mm, second.largest_mm) == (20.0, None)


def test_bouma_letters_name_the_setting_only_where_none_is_named() -> None:
    """Ta in a log of unknown setting is a turbidity current; a named setting is kept."""
    ta = bed("fL", terms=(Structure("massive", code="Ta"),))
    assert split_phases(log(ta, setting="unknown"))[0].setting == "turbidity"
    assert split_phases(log(ta, setting="river"))[0].setting == "river"
    assert split_phases(log(ta), setting="turbidity")[0].setting == "turbidity"


def test_one_state_written_twice_is_no_grading() -> None:
    """Two equal states at equal places still divide the bed without empty phases."""
    same = (GrainState(0.5, size("mL")), GrainState(0.5, size("fL")))
    phases = split_phases(log(Bed("1", 0.0, 1.0, grain=same)))
    assert [p.top_m - p.base_m for p in phases] == pytest.approx([0.5, 0.5])
