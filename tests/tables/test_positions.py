"""Where beds lie: stacked thicknesses, bases and tops, running heights, depths, spans, gaps, lost core."""

from __future__ import annotations

from pathlib import Path

import pandas as pd
import pytest

from logkit.model import Finding, Log
from logkit.tables import log_from_frame, read_log


@pytest.fixture
def read(tmp_path: Path):  # type: ignore[no-untyped-def]
    """Reads a table given as text and keeps logs with errors."""

    def reader(text: str, **options: object) -> Log:
        path = tmp_path / "a.csv"
        path.write_text(text, "utf-8")
        return read_log(path, on_errors="keep", **options)

    return reader


def places(log: Log) -> list[tuple[str, float, float]]:
    """Name, base and top of each bed, mm exact."""
    return [(bed.name, round(bed.base_m, 3), round(bed.top_m, 3)) for bed in log.beds]


def codes(log: Log) -> list[tuple[str, str, int | None]]:
    """Level, code and row of the findings."""
    return [(f.level, f.code, f.row) for f in log.findings]


def only(log: Log, code: str) -> Finding:
    """The one finding of a kind."""
    found = [f for f in log.findings if f.code == code]
    assert len(found) == 1, codes(log)
    return found[0]


def test_thicknesses_are_stacked(read) -> None:  # type: ignore[no-untyped-def]
    """Thicknesses in several units stack from zero; gaps count in height."""
    log = read("bed,thickness (cm),lith\n1,45,sst\n2,1.2 m,sst\n,NE 60,\n3,1'6\",sst\n")
    assert places(log) == [("1", 0, 0.45), ("2", 0.45, 1.65), ("gap 1", 1.65, 2.25), ("3", 2.25, 2.707)]
    assert log.thickness_m == pytest.approx(2.7072)
    assert [len(run) for run in log.runs] == [2, 1]


def test_base_and_top(read) -> None:  # type: ignore[no-untyped-def]
    """Bases and tops are taken as written, with their own units."""
    log = read("bed,base (m),top (cm),lith\n1,2,250,sst\n2,2.5,300,mdst\n")
    assert places(log) == [("1", 2, 2.5), ("2", 2.5, 3)]
    assert log.findings == ()


def test_base_and_thickness(read) -> None:  # type: ignore[no-untyped-def]
    """Written bases start the stack and agree with it without a word."""
    log = read(
        "bed,base (m),thickness (cm),lith\n1,10.00,45,sst\n2,10.45,30,sst\n3,,25,sst\n4,11.00,10,sst\n"
    )
    assert places(log)[0] == ("1", 10, 10.45)
    assert places(log)[-1] == ("4", 11, 11.1)
    assert log.findings == ()


def test_heights_that_do_not_add_up(read) -> None:  # type: ignore[no-untyped-def]
    """A written height away from the sum of thicknesses is asked once, not at every later height."""
    text = "bed,base (m),thickness (cm),lith\n1,0,50,sst\n2,0.5,50,sst\n3,1.3,50,sst\n4,1.8,50,sst\n5,2.3,50,sst\n"
    log = read(text)
    asked = only(log, "thickness.sum")
    assert (asked.row, asked.column, asked.cell) == (4, "base", "1.3")
    assert asked.choices == ("1 m by the thicknesses", "1.3 m as written")
    assert places(log)[2] == ("3", 1.0, 1.5)


def test_one_wrong_height_is_asked_once(read) -> None:  # type: ignore[no-untyped-def]
    """A single wrong height between right ones is one question."""
    rows = "".join(f"{n},{(n - 1) * 0.5 + (0.3 if n == 3 else 0):g},50,sst\n" for n in range(1, 7))
    log = read("bed,base (m),thickness (cm),lith\n" + rows)
    assert [(f.code, f.row) for f in log.findings] == [("thickness.sum", 4)]


def test_a_unit_slip_betrayed_by_heights(read) -> None:  # type: ignore[no-untyped-def]
    """A thickness in the wrong unit that heights on both sides betray is read right, and asked."""
    log = read("bed,base (m),thickness (cm),lith\n1,0,50,sst\n2,0.5,0.72,sst\n3,1.22,50,sst\n")
    asked = only(log, "thickness.unit_slip")
    assert (asked.row, asked.choices) == (3, ("0.72 m", "0.72 cm"))
    assert places(log) == [("1", 0, 0.5), ("2", 0.5, 1.22), ("3", 1.22, 1.72)]


def test_running_heights_alone(read) -> None:  # type: ignore[no-untyped-def]
    """A column of heights from zero gives where beds begin, and asks; the last bed needs an end."""
    log = read("bed,height (m),lith\n1,0,sst\n2,0.5,sst\n3,1.5,sst\n")
    assert only(log, "position.which_end").choices[0] == "heights where beds begin"
    assert places(log) == [("1", 0, 0.5), ("2", 0.5, 1.5)]
    assert only(log, "position.missing").row == 4


def test_running_heights_as_tops(read) -> None:  # type: ignore[no-untyped-def]
    """Heights that do not begin at zero are read as tops, and asked."""
    log = read("bed,height (m),lith\n1,0.4,sst\n2,0.5,sst\n3,1.5,sst\n")
    assert only(log, "position.which_end").choices[0] == "heights where beds end"
    assert places(log) == [("1", 0, 0.4), ("2", 0.4, 0.5), ("3", 0.5, 1.5)]


def test_heights_beside_thicknesses_tell_their_end(read) -> None:  # type: ignore[no-untyped-def]
    """Heights beside thicknesses are tops or bases by what fits; nothing is asked."""
    log = read("bed,height (m),thickness (cm),lith\n1,0.4,40,sst\n2,0.5,10,sst\n3,1.5,100,sst\n")
    assert places(log) == [("1", 0, 0.4), ("2", 0.4, 0.5), ("3", 0.5, 1.5)]
    assert log.findings == ()


def test_spans_and_varying_thickness(read) -> None:  # type: ignore[no-untyped-def]
    """Spans that follow one another are heights; a lone range of thickness is its mean, and asked."""
    chained = read("bed,thickness (cm),lith\n1,0-45,sst\n2,45-60,sst\n")
    assert places(chained) == [("1", 0, 0.45), ("2", 0.45, 0.6)]
    varying = read("bed,thickness (cm),lith\n1,20,sst\n2,8-12,sst\n3,30,sst\n")
    assert places(varying) == [("1", 0, 0.2), ("2", 0.2, 0.3), ("3", 0.3, 0.6)]
    assert only(varying, "thickness.varies").choices == ("thickness 0.1 m", "from 0.08 m to 0.12 m")


def test_depths_downward(read) -> None:  # type: ignore[no-untyped-def]
    """A core in feet: base_m is minus the depth, depths stay as written, beds run upward."""
    log = read(
        "# direction: down\n# unit: ft\nbed,top,base,lith\n1,6104.5,6105.25,sst\n2,6105.25,6106,mdst\n"
    )
    assert [bed.name for bed in log.beds] == ["2", "1"]
    assert log.bed("1").base_m == pytest.approx(-6105.25 * 0.3048)
    assert (log.bed("1").depth_top, log.bed("1").depth_base) == (6104.5, 6105.25)
    assert log.bed("2").top_m == log.bed("1").base_m
    assert log.findings == ()


def test_direction_is_found_and_asked(read) -> None:  # type: ignore[no-untyped-def]
    """Bases larger than tops in every row are depths; it is asked, also against a header that says up."""
    table = "bed,top (m),base (m),lith\n1,10,11,sst\n2,11,12,sst\n3,12,14,sst\n"
    log = read(table)
    assert log.header.direction == "down"
    assert "no direction is given" in only(log, "direction.depths").message
    assert "the header says upward" in only(read("# direction: up\n" + table), "direction.depths").message
    assert codes(read("# direction: down\n" + table)) == []
    assert read(table, direction="down").findings == ()


def test_negative_depths_and_exchanged_headings(read) -> None:  # type: ignore[no-untyped-def]
    """Depths with minus signs and exchanged headings are read as depths, and asked."""
    negative = read("# direction: down\nbed,top (m),base (m),lith\n1,-10,-11,sst\n2,-11,-12,sst\n")
    assert places(negative) == [("2", -12, -11), ("1", -11, -10)]
    assert only(negative, "direction.negative").level == "question"
    exchanged = read("# direction: down\nbed,base (m),top (m),lith\n1,10,11,sst\n2,11,12,sst\n")
    assert places(exchanged) == [("2", -12, -11), ("1", -11, -10)]
    assert only(exchanged, "direction.mismatch").level == "question"


def test_from_and_to(read) -> None:  # type: ignore[no-untyped-def]
    """`from` and `to` follow the rows, in outcrop and in core."""
    rows = "bed,from (m),to (m),lith\n1,10,11,sst\n2,11,12,sst\n"
    assert places(read(rows)) == [("1", 10, 11), ("2", 11, 12)]
    assert places(read("# direction: down\n" + rows)) == [("2", -12, -11), ("1", -11, -10)]


def test_rows_from_the_top_down_in_heights(read) -> None:  # type: ignore[no-untyped-def]
    """An outcrop typed from its top is turned round, and noted."""
    log = read("# direction: up\nbed,base (m),top (m),lith\n3,2,3,sst\n2,1,2,sst\n1,0,1,sst\n")
    assert [bed.name for bed in log.beds] == ["1", "2", "3"]
    assert [f.code for f in log.findings] == ["position.order"]


def test_overlap_hole_and_swap(read) -> None:  # type: ignore[no-untyped-def]
    """Overlaps and swapped ends are errors; a hole becomes a gap and is asked."""
    log = read("bed,base (m),top (m),lith\n1,0,1,sst\n2,0.9,2,sst\n3,3,2,sst\n4,3.5,4,sst\n")
    assert only(log, "position.overlap").row == 3
    assert "overlap by 0.1 m" in only(log, "position.overlap").message
    assert only(log, "position.swapped").remedy == "swap them: base 2 m, top 3 m"
    hole = only(log, "position.hole")
    assert (hole.level, hole.row, hole.choices) == ("question", 5, ("a gap", "a wrong position"))
    gap = log.bed("gap 1")
    assert (gap.gap_reason, gap.base_m, gap.top_m) == ("not_logged", 3.0, 3.5)
    assert places(log)[2] == ("3", 2, 3)


def test_rounded_heights_are_no_holes(read) -> None:  # type: ignore[no-untyped-def]
    """Positions that differ by less than their last place are neither holes nor overlaps."""
    log = read("bed,base (ft),top (ft),lith\n1,0,1'4\",sst\n2,1.33,2.5,sst\n3,2'6\",3.25,sst\n")
    assert [f.code for f in log.findings] == []


def test_a_row_in_the_wrong_place(read) -> None:  # type: ignore[no-untyped-def]
    """A row whose position belongs elsewhere is put there, and asked."""
    log = read("bed,base (m),top (m),lith\n1,0,1,sst\n3,2,3,sst\n2,1,2,sst\n4,3,4,sst\n")
    assert [bed.name for bed in log.beds] == ["1", "2", "3", "4"]
    assert only(log, "position.order").row == 4


def test_thickness_against_base_and_top(read) -> None:  # type: ignore[no-untyped-def]
    """A thickness that is not the distance of base and top is asked; base and top are taken."""
    log = read("bed,base (m),top (m),thickness (cm),lith\n1,0,1,100,sst\n2,1,2,150,sst\n")
    assert only(log, "thickness.sum").choices == ("1 m from base and top", "1.5 m as written")
    assert log.bed("2").thickness_m == 1


@pytest.mark.parametrize("cell", ["0", "-5", "abc", "1e400", "nan", "5 furlongs"])
def test_thicknesses_that_cannot_be(cell: str, read) -> None:  # type: ignore[no-untyped-def]
    """Zero, negative and unreadable thicknesses are errors; the bed is left out and the rest is read."""
    log = read(f"bed,thickness (cm),lith\n1,10,sst\n2,{cell},sst\n3,20,sst\n")
    errors = [f for f in log.findings if f.level == "error"]
    assert [(f.row, f.column) for f in errors] == [(3, "thickness")]
    assert errors[0].remedy
    assert [bed.name for bed in log.beds] == ["1", "3"]


def test_no_unit_is_asked_once(read) -> None:  # type: ignore[no-untyped-def]
    """A table without units asks once a column, and reads thicknesses of tens as centimetres."""
    log = read("bed,thickness,lith\n1,45,sst\n2,30,sst\n3,25,sst\n")
    assert [(f.code, f.choices[0]) for f in log.findings] == [("unit.none", "cm")]
    assert log.beds[0].thickness_m == pytest.approx(0.45)
    assert read("bed,thickness,lith\n1,0.45,sst\n2,0.3,sst\n").beds[0].thickness_m == pytest.approx(0.45)


def test_lost_core(read) -> None:  # type: ignore[no-untyped-def]
    """Core not recovered becomes a gap at the base of its run; a row that is the gap already is left alone."""
    head = "# direction: down\n# unit: ft\ncore,bed,top,base,lith\n"
    log = read(head + "core 1 cut 30' rec 27',1,100,127,sst\n,2,130,140,sst\n")
    asked = only(log, "core.lost")
    assert "recovery 90.0 %: 3 ft lost, placed at the base of the run (127 to 130 ft)" in asked.message
    gap = next(bed for bed in log.beds if bed.is_gap)
    assert (gap.gap_reason, gap.depth_top, gap.depth_base) == ("lost_core", 127, 130)
    assert not [f for f in log.findings if f.code == "position.hole"]
    stated = read(head + "core 1 cut 30' rec 27',1,100,127,sst\n,,127,130,lost core\n,2,130,140,sst\n")
    assert len([bed for bed in stated.beds if bed.is_gap]) == 1
    assert only(stated, "core.lost").level == "note"
    filled = read(head + "core 1 cut 30' rec 27',1,100,127,sst\n,2,127,140,sst\n")
    assert only(filled, "core.lost_described").level == "question"


def test_lost_core_of_a_table_of_thicknesses(read) -> None:  # type: ignore[no-untyped-def]
    """What was cut and not recovered lies at the base of its run, before the next run begins."""
    head = "# direction: down\n# unit: m\ncore,bed,thickness,lith\n"
    log = read(head + "cut 9 m rec 8.5 m,1,4,sst\n,2,4.5,mdst\ncut 9 m rec 9 m,3,9,sst\n")
    assert [(b.gap_reason, b.depth_top, b.depth_base) for b in log.beds[::-1]] == [
        ("", 0, 4), ("", 4, 8.5), ("lost_core", 8.5, 9), ("", 9, 18),
    ]  # fmt: skip
    assert (only(log, "core.lost").level, only(log, "core.lost").row) == ("question", 4)
    stated = read(head + "cut 9 m rec 8.5 m,1,8.5,sst\n,,0.5,lost core\n")
    assert sum(b.is_gap for b in stated.beds) == 1
    assert only(stated, "core.lost").level == "note"
    filled = read(head + "cut 9 m rec 8 m,1,9,sst\n")
    assert not any(b.is_gap for b in filled.beds)
    assert only(filled, "core.lost_described").level == "question"


def test_a_single_bed_and_a_log_of_gaps(read) -> None:  # type: ignore[no-untyped-def]
    """One bed is a log; so are gaps alone."""
    assert places(read("bed,thickness (m),lith\n1,2,sst\n")) == [("1", 0, 2)]
    gaps = read("bed,thickness (m),lith\n,2,covered\n,1,NE\n")
    assert [(bed.name, bed.gap_reason) for bed in gaps.beds] == [
        ("gap 1", "covered"),
        ("gap 2", "no_exposure"),
    ]
    assert gaps.real_beds == ()


def test_a_pattern_downward_keeps_the_order_of_the_rows(read) -> None:  # type: ignore[no-untyped-def]
    """In a log of depths the first layer of a pattern lies uppermost and is named first."""
    log = read("# direction: down\nbed,thickness (cm),lith\n1,100,sst\n2,2 x (8 vfs / 4 mdst),\n")
    assert [bed.name for bed in log.beds] == ["2.4", "2.3", "2.2", "2.1", "1"]
    assert log.bed("2.1").thickness_m == pytest.approx(0.08)
    assert log.bed("2.1").top_m == log.bed("1").base_m


def test_a_flow_depth_is_no_position() -> None:
    """A column `flow_depth` says nothing about the direction of the log: it stays upward, without a question."""
    frame = pd.DataFrame(
        {"bed": ["1", "2"], "thickness (m)": [1, 2], "grain": ["mL", "fU"], "flow_depth (m)": ["2-3", ""]}
    )
    log = log_from_frame(frame, setting="river")
    assert [bed.base_m for bed in log.beds] == [0.0, 1.0]
    assert [bed.name for bed in log.beds] == ["1", "2"]
    assert not log.count("question")
    assert log.beds[0].flow_depth_m == (2.0, 3.0)


def test_a_flow_depth_is_in_metres_on_a_centimetre_sheet(read) -> None:  # type: ignore[no-untyped-def]
    """The unit of thicknesses is not that of flow depths, and this is said."""
    log = read("# unit: cm\nbed,thickness,grain,flow_depth\n1,40,mL,1.5\n2,40,mL,2 m\n")
    assert [bed.flow_depth_m for bed in log.beds] == [(1.5, 1.5), (2.0, 2.0)]
    assert [f.row for f in log.findings if f.code == "flow_depth.metres"] == [3]
