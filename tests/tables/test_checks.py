"""Checks across rows and columns: slips that no single cell shows are asked about, real beds are left in peace."""

from __future__ import annotations

import random
from pathlib import Path

import pytest

from logkit.model import Finding, Log
from logkit.tables import read_log

HEAD = "# unit: cm\n# setting: river\n# declination: 0\n# bedding: 0/0\n"


@pytest.fixture
def read(tmp_path: Path):  # type: ignore[no-untyped-def]
    """Reads a table given as text and keeps logs with errors."""

    def reader(text: str, head: str = HEAD) -> Log:
        path = tmp_path / "a.csv"
        path.write_text(head + text, "utf-8")
        return read_log(path, on_errors="keep")

    return reader


def only(log: Log, code: str) -> Finding:
    """The one finding of a kind, complete enough to act on."""
    found = [f for f in log.findings if f.code == code]
    assert len(found) == 1, [(f.code, f.row) for f in log.findings]
    assert found[0].file == "a.csv"
    assert found[0].row is not None
    return found[0]


def codes(log: Log) -> set[str]:
    """Kinds of findings."""
    return {f.code for f in log.findings}


def test_bed_numbers(read) -> None:  # type: ignore[no-untyped-def]
    """Numbers skipped, doubled and out of order are asked; letters and gaps between are fine."""
    fine = read("bed,thickness,lith\n1,10,sst\n2,10,sst\n2a,10,sst\n2b,10,sst\n,NE 20,\n3,10,sst\n")
    assert codes(fine) == set()
    skipped = only(read("bed,thickness,lith\n1,10,sst\n2,10,sst\n5,10,sst\n"), "bed.skipped")
    assert (skipped.row, skipped.message) == (8, "beds 3 to 4 are missing between 2 and 5")
    doubled = only(read("bed,thickness,lith\n1,10,sst\n2,10,sst\n2,10,sst\n"), "bed.doubled")
    assert (doubled.row, doubled.message) == (8, "bed 2 stands in row 7 already")
    assert only(read("bed,thickness,lith\n1,10,sst\n3,10,sst\n2,10,sst\n4,10,sst\n"), "bed.order").row == 8


def test_numbers_that_fall_or_are_names(read) -> None:  # type: ignore[no-untyped-def]
    """Numbers that fall row by row are in order; names without order give one note at most."""
    assert codes(read("bed,thickness,lith\n3,10,sst\n2,10,sst\n1,10,sst\n")) == set()
    names = read(
        "bed,thickness,lith\n" + "".join(f"{n},10,sst\n" for n in (7, 3, 90, 12, 44, 2, 61, 8, 30, 5))
    )
    assert [(f.level, f.code) for f in names.findings] == [("note", "bed.numbering")]


def test_unit_slips_among_ordinary_beds(read) -> None:  # type: ignore[no-untyped-def]
    """A thickness a hundred times its neighbours is asked with the reading that fits them."""
    rows = [40, 35, 52, 28, 61, 45, 33, 4200, 47, 38, 55]
    log = read("bed,thickness,lith\n" + "".join(f"{n},{t},sst\n" for n, t in enumerate(rows, 1)))
    asked = only(log, "thickness.unit_slip")
    assert (asked.level, asked.row, asked.choices) == ("question", 13, ("4200 as read", "42 cm"))
    assert log.beds[7].thickness_m == 42


def test_real_beds_are_left_in_peace(read) -> None:  # type: ignore[no-untyped-def]
    """Alternating thick and thin beds, and thicknesses spread as in nature, are not taken for slips."""
    alternating = "".join(f"{n},{120 if n % 2 else 8},sst\n" for n in range(1, 41))
    assert codes(read("bed,thickness,lith\n" + alternating)) == set()
    rng = random.Random(3)
    flagged = 0
    for _ in range(20):
        rows = "".join(f"{n},{max(1, round(rng.lognormvariate(3, 1.1)))},sst\n" for n in range(1, 61))
        flagged += "thickness.unit_slip" in codes(read("bed,thickness,lith\n" + rows))
    assert flagged <= 1


def test_a_megabed_is_never_refused(read) -> None:  # type: ignore[no-untyped-def]
    """A bed of 35 m among thin ones is at most a question, and keeps its thickness."""
    rows = "".join(f"{n},{t},sst\n" for n, t in enumerate(["12", "8", "15", "9", "35 m", "11", "7", "14"], 1))
    log = read("bed,thickness,lith\n" + rows)
    assert log.count("error") == 0
    assert log.beds[4].thickness_m == 35


def test_sets_and_beds(read) -> None:  # type: ignore[no-untyped-def]
    """Sets a little thicker than the bed are asked and kept; from twice on they are refused and dropped."""
    log = read("bed,thickness,lith,sets\n1,40,sst,52\n2,30,sst,90\n3,30,sst,8-40\n4,30,sst,8-30\n")
    found = [(f.level, f.row) for f in log.findings if f.code == "sets.thicker_than_bed"]
    assert found == [("question", 6), ("error", 7), ("question", 8)]
    assert [bed.set_thickness is None for bed in log.beds] == [False, True, False, False]


def test_relief_and_minimum_thickness(read) -> None:  # type: ignore[no-untyped-def]
    """An erosive base makes the bed beneath a minimum; relief larger than the bed is asked."""
    rows = '1,40,sst,sharp\n2,30,sst,"ero, relief 12"\n3,20,sst,"ero, relief 35"\n4,9,sst,sharp\n'
    log = read("bed,thickness,lith,contact\n" + rows)
    assert [bed.minimum_thickness for bed in log.beds] == [True, True, False, False]
    assert only(log, "contact.minimum_below").row == 7
    assert only(log, "contact.relief").row == 8


def test_sizes_against_rock_and_code(read) -> None:  # type: ignore[no-untyped-def]
    """A size that its rock or its facies code does not admit is asked."""
    log = read("bed,thickness,lith,grain,structures\n1,40,mdst,cU,\n2,40,sst,fL,St\n3,40,sst,mL,St\n")
    assert only(log, "grain.lithology").row == 6
    code = only(log, "structures.code_size")
    assert code.row == 7
    assert "0.25-64 mm" in code.message


def test_a_range_where_grading_was_meant(read) -> None:  # type: ignore[no-untyped-def]
    """A range with its coarse end first, or beside a note of fining, is asked; a plain range is not."""
    log = read("bed,thickness,lith,grain,notes\n1,40,sst,mU-fL,\n2,40,sst,fL-mU,\n3,40,sst,fL-mU,fines up\n")
    asked = [(f.row, f.choices[1]) for f in log.findings if f.code == "grain.range_or_grading"]
    assert asked == [(6, "grading mU→fL"), (8, "grading mU→fL")]
    assert all(len(bed.grain) == 1 for bed in log.beds)


def test_currents_without_correction(read) -> None:  # type: ignore[no-untyped-def]
    """Palaeocurrents without declination or bedding are asked once a log; with both it is a note."""
    rows = "bed,thickness,lith,pc\n1,40,sst,fs 30/090\n2,40,sst,fs 28/100\n"
    asked = only(read(rows, "# unit: cm\n# declination: 2 W\n"), "currents.correction")
    assert "no bedding" in asked.message
    assert "declination" not in asked.message
    assert only(read(rows), "currents.as_read").level == "note"


def test_opposed_currents(read) -> None:  # type: ignore[no-untyped-def]
    """Directions against each other in one bed are asked, but not in tidal beds."""
    rows = "1,40,sst,rip xl,rip 350 & 010 & 185\n2,40,sst,herringbone xb,fs 20/080 & 20/260\n"
    rows = "bed,thickness,lith,structures,pc\n" + rows
    assert only(read(rows), "currents.opposed").row == 6
    assert "currents.opposed" not in codes(read(rows, HEAD.replace("river", "tidal")))


def test_gaps_with_data_and_beds_without(read) -> None:  # type: ignore[no-untyped-def]
    """A gap with a grain size and a bed with nothing are asked."""
    log = read("bed,thickness,lith,grain,colour\n1,40,covered,mU,\n2,40,,,5YR 4/4\n")
    assert only(log, "gap.with_data").row == 6
    assert log.beds[0].grain == ()
    assert only(log, "bed.empty").row == 7


def test_headings(read) -> None:  # type: ignore[no-untyped-def]
    """Unknown headings are kept, near ones suggested, doubled ones asked."""
    log = read("bed,thickness,lith,thicknes (m),strctures,flag,lith\n1,40,sst,,rip xl,blue,mdst\n")
    found = {(f.code, f.cell): f for f in log.findings}
    assert ("heading.doubled", "lith") in found
    assert found["heading.unknown", "strctures"].nearest == "structures"
    assert found["heading.unknown", "flag"].level in ("note", "question")
    assert log.beds[0].lithology == "sandstone"
    assert log.beds[0].written_in("flag") == "blue"


def test_rows_longer_than_the_headings(read) -> None:  # type: ignore[no-untyped-def]
    """A decimal comma that parts a cell is an error on its row; in notes at the end it is joined and noted."""
    broken = read("bed,thickness,lith\n1,40,sst\n2,12,5,sst\n")
    assert only(broken, "row.too_long").row == 7
    joined = read("bed,thickness,lith,notes\n1,40,sst,chips, some armoured\n")
    assert joined.beds[0].notes == "chips, some armoured"
    assert only(joined, "row.notes_joined").level == "note"


def test_headings_repeated_and_remark_lines(read) -> None:  # type: ignore[no-untyped-def]
    """Headings repeated on a new page and lines that begin with # are left out, and noted."""
    log = read("bed,thickness,lith\n1,40,sst\n# lunch\nbed,thickness,lith\n2,30,sst\n")
    assert [bed.name for bed in log.beds] == ["1", "2"]
    assert [(f.code, f.row) for f in log.findings] == [("row.remark_line", 7), ("row.heading_again", 8)]


def test_header_findings(read) -> None:  # type: ignore[no-untyped-def]
    """Header values that cannot be are errors with what is allowed; unknown keys are kept."""
    lines = (
        "unit: cm",
        "setting: brook",
        "declination: 500",
        "bedding: 22/140",
        "colour of tent: red",
        "seting: tidal",
    )
    log = read("bed,thickness,lith\n1,40,sst\n", "".join(f"# {line}\n" for line in lines))
    assert {f.code for f in log.findings if f.level == "error"} == {"header.setting", "header.range"}
    assert next(f for f in log.findings if f.code == "header.setting").allowed
    assert only(log, "header.bedding").choices[0] == "140/22"
    assert log.header.bedding == (140, 22)
    assert ("colour of tent", "red") in log.header.extra
    assert only(log, "header.unknown").nearest == "setting"


def test_repeated_findings_are_told_once(read) -> None:  # type: ignore[no-untyped-def]
    """One ambiguous word in many rows is one question that names the other rows; errors stay one by one."""
    log = read(
        "bed,thickness,lith,structures,grain\n" + "".join(f"{n},40,sst,lam,blorb\n" for n in range(1, 6))
    )
    asked = only(log, "word.ambiguous")
    assert asked.message.endswith("likewise in rows 7, 8, 9, 10")
    assert [f.row for f in log.findings if f.code == "grain.unknown"] == [6, 7, 8, 9, 10]


def test_a_workbook_unit_row(read) -> None:  # type: ignore[no-untyped-def]
    """A row of units below the headings gives the columns their units."""
    log = read("bed,thickness,lith\n,(m),\n1,0.4,sst\n")
    assert log.beds[0].thickness_m == 0.4


def test_cells_too_long_for_shorthand(read) -> None:  # type: ignore[no-untyped-def]
    """Text of a page in a cell for shorthand is refused at once; in the notes it is kept whole."""
    long = "rippled and " * 200
    log = read(f"bed,thickness,lith,structures,notes\n1,40,sst,{long},{long}\n2,{'1 ' * 400},sst,,\n")
    assert [(f.row, f.column) for f in log.findings if f.code == "cell.too_long"] == [
        (6, "structures"),
        (7, "thickness"),
    ]
    assert log.beds[0].notes == long.strip()
    assert len(log.beds) == 1
