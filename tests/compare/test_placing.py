"""Hanging wells on a datum, and the ties between them."""

from __future__ import annotations

import itertools
from dataclasses import replace

import pytest
from synthetic_wells import bed, section

from logkit.compare import Companions, ShiftTable, Survey, compare_logs
from logkit.compare.placing import place_logs
from logkit.errors import ArgumentError, LogkitError, UnknownNameError
from logkit.model import Bed, Header, Log

NONE = Companions()


def well(name: str, beds: list[Bed], **header: object) -> Log:
    """A log with a name."""
    return Log(Header(section=name, **header), tuple(beds))  # type: ignore[arg-type]


def marked(
    name: str, marks: dict[int, str], thickness: float = 1.0, count: int = 10, **header: object
) -> Log:
    """Ten beds of equal thickness with markers at some."""
    beds = [
        bed(str(i + 1), i * thickness, thickness, 2.0, "massive", marker=marks.get(i, ""))
        for i in range(count)
    ]
    return well(name, beds, **header)


def cored(name: str, tops_m: list[float], **header: object) -> Log:
    """A downward log between depths, m."""
    beds = [
        bed(str(i + 1), -base, base - top, 2.0, "massive")
        for i, (top, base) in enumerate(itertools.pairwise(tops_m))
    ]
    return well(name, beds[::-1], direction="down", **header)


def hang(logs: list[Log], datum: str | float | None = None, thickness: str = "true", beside: object = None):  # type: ignore[no-untyped-def]
    """Placed logs and datum."""
    return place_logs(logs, datum, thickness, beside or [NONE] * len(logs))  # type: ignore[arg-type]


def test_the_base_of_the_marker_is_zero_in_every_well() -> None:
    """Wells hang on the base of the marker, in any case and spacing of its name."""
    placed, datum = hang([marked("A", {3: "Ash  2"}), marked("B", {6: "ash 2"}, 2.0)], "ASH 2")
    assert datum == "Ash  2"
    assert placed[0].hung.beds[3].base_m == 0.0
    assert placed[1].hung.beds[6].base_m == 0.0
    assert placed[1].hung.beds[0].base_m == -12.0


def test_without_a_wish_the_most_shared_marker_is_taken() -> None:
    """The marker most wells share is the datum; with none shared, the base."""
    logs = [marked("A", {1: "x", 3: "y"}), marked("B", {4: "y"}), marked("C", {2: "x", 5: "y"})]
    assert hang(logs)[1] == "y"
    assert hang([marked("A", {1: "x"}), marked("B", {1: "z"})])[1] == "base"


def test_an_unknown_marker_names_the_nearest() -> None:
    """A misspelt datum is an error with the nearest marker."""
    with pytest.raises(UnknownNameError, match="Did you mean 'ash 2'"):
        hang([marked("A", {1: "ash 2"}), marked("B", {1: "ash 2"})], "ahs 2")


def test_a_datum_in_a_gap_is_worked_out_and_said() -> None:
    """A well with lost core at the datum hangs by the markers around it, and says so."""
    gap = Bed("gap 1", 4.0, 6.0, kind="gap", gap_reason="lost_core")
    beds = [bed("1", 0, 1, 2, "massive", marker="low"), bed("2", 1, 3, 2, "massive"), gap]
    beds += [bed("3", 6, 2, 2, "massive"), bed("4", 8, 1, 2, "massive", marker="high")]
    full = marked("A", {0: "low", 4: "ash", 8: "high"})
    placed, _ = hang([full, well("B", beds)], "ash")
    assert placed[1].datum_m == pytest.approx(4.0)
    assert not placed[1].datum_sure
    assert placed[1].datum_how == (
        "not seen: placed between low and high in the proportion of the other wells, inside gap 1"
    )
    assert any("datum not seen" in note for note in placed[1].notes)


def test_vertical_hole_through_dipping_beds_is_thinned() -> None:
    """Ten metres in a vertical hole through beds dipping 30 degrees are 8.660 m thick."""
    log = cored("A", [1000.0, 1010.0], thickness_type="measured", bedding=(90.0, 30.0))
    placed, _ = hang([log], "base")
    assert placed[0].hung.thickness_m == pytest.approx(8.660, abs=5e-4)
    assert "no survey, the hole is taken as vertical" in placed[0].notes[0]
    vertical, _ = hang([log], "base", "vertical")
    assert vertical[0].hung.thickness_m == pytest.approx(10.0)
    measured, _ = hang([log], "base", "measured")
    assert measured[0].hung.thickness_m == pytest.approx(10.0)


def test_a_deviated_hole_is_thinned_by_its_survey() -> None:
    """A hole 30 degrees toward the dip of 20 degrees gives 6.428 m for 10 m."""
    log = cored("A", [1000.0, 1010.0], thickness_type="measured", bedding=(90.0, 20.0))
    placed, _ = hang([log], "base", "true", [Companions(Survey.straight(30.0, 90.0))])
    assert placed[0].hung.thickness_m == pytest.approx(6.428, abs=5e-4)


def test_a_hole_that_climbs_through_the_beds_is_refused() -> None:
    """Negative thickness is an error that offers measured thickness."""
    log = cored("A", [1000.0, 1010.0], thickness_type="measured", bedding=(90.0, 40.0))
    with pytest.raises(LogkitError, match=r"has no positive thickness.*thickness='measured'"):
        hang([log], "base", "true", [Companions(Survey.straight(80.0, 90.0))])


def test_logged_true_thickness_is_left_alone() -> None:
    """A log whose thickness is true already is not thinned a second time."""
    log = cored("A", [1000.0, 1010.0], thickness_type="true", bedding=(90.0, 40.0))
    assert hang([log], "base")[0][0].hung.thickness_m == pytest.approx(10.0)


def test_elevation_needs_and_uses_the_kelly_bushing() -> None:
    """Structural panels show elevation: kelly bushing less vertical depth."""
    log = cored("A", [1000.0, 1010.0], kb_elevation_m=30.0)
    assert hang([log], "elevation")[0][0].hung.top_m == pytest.approx(-970.0)
    with pytest.raises(LogkitError, match=r"gives no elevation.*kb_elevation"):
        hang([cored("B", [1.0, 2.0])], "elevation")
    with pytest.raises(LogkitError, match="measured upwards and has no depth"):
        hang([marked("C", {})], "depth")


def test_a_number_is_a_depth_in_wells_and_a_height_in_sections() -> None:
    """Hanging on 1004 puts that depth at zero."""
    placed, _ = hang([cored("A", [1000.0, 1004.0, 1010.0])], 1004.0)
    assert placed[0].hung.beds[0].top_m == pytest.approx(0.0)
    assert hang([marked("B", {})], "3 m")[0][0].hung.base_m == -3.0


def test_core_shift_moves_beds_and_opens_a_hole_between_intervals() -> None:
    """Beds move with their interval; two shifts leave the difference between them open."""
    table = ShiftTable("per interval", ((1000.0, 1004.0, 0.5), (1004.0, 1010.0, 0.8)))
    log = cored("A", [1000.0, 1004.0, 1010.0])
    placed, _ = hang([log], "top", "true", [Companions(shifts=table)])
    low, high = placed[0].hung.beds
    assert high.base_m - low.top_m == pytest.approx(0.3)
    assert any("moved to logged depths (per interval)" in note for note in placed[0].notes)


def test_core_shift_that_makes_beds_overlap_is_refused() -> None:
    """A shift that pushes one bed into the next is an error, not a silent overlap."""
    table = ShiftTable("per interval", ((1000.0, 1004.0, 0.8), (1004.0, 1010.0, 0.5)))
    with pytest.raises(LogkitError, match="after the depth shift bed 1 overlaps bed 2"):
        hang([cored("A", [1000.0, 1004.0, 1010.0])], "top", "true", [Companions(shifts=table)])


def test_shared_markers_are_tied_and_ash_is_a_time_tie() -> None:
    """Neighbours are tied at shared markers; ash is told apart from other rocks; a queried one is not sure."""
    one = marked("A", {2: "coal", 5: "ash 1"})
    two = marked("B", {3: "coal", 6: "ash 1"})
    two = replace(two, beds=tuple(replace(b, marker_sure=b.marker != "coal") for b in two.beds))
    ties = compare_logs([one, two], histories=[None] * 2, trends=[None] * 2).ties
    assert [(t.marker, t.kind, t.sure) for t in ties] == [
        ("coal", "lithological", False),
        ("ash 1", "time", True),
    ]


def test_crossing_and_doubled_markers_are_not_tied() -> None:
    """Markers in another order, or twice in a well, are named and not tied."""
    one = marked("A", {1: "a", 3: "b", 5: "c", 7: "d"})
    two = marked("B", {1: "a", 3: "c", 5: "b", 7: "d", 9: "d"})
    found = compare_logs([one, two], "a", histories=[None] * 2, trends=[None] * 2)
    assert {t.marker for t in found.ties} in ({"a", "b"}, {"a", "c"})
    assert any("in another order" in note for note in found.notes)
    assert any("marker d stands more than once in B" in note for note in found.notes)


def test_one_log_or_two_of_a_name_cannot_be_compared() -> None:
    """A comparison needs two logs with different names, and lists that fit."""
    log = section(1, 10)
    with pytest.raises(ArgumentError, match="two logs or more"):
        compare_logs([log])
    with pytest.raises(LogkitError, match="Two logs are called"):
        compare_logs([log, log])
    with pytest.raises(ArgumentError, match="histories is '1 items'"):
        compare_logs([log, replace(log, header=Header(section="B"))], histories=[None])
