"""What one row gives to its bed when several cells speak of the same thing, and rows of several sections."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from openpyxl import Workbook

from logkit.errors import LogErrors, LogkitError
from logkit.model import Log
from logkit.tables import read_log, read_logs, write_logs
from logkit.tables.headings import match_heading
from logkit.vocabulary import vocabulary


@pytest.fixture
def read(tmp_path: Path):  # type: ignore[no-untyped-def]
    """Reads a table given as text and keeps logs with errors."""

    def reader(text: str) -> Log:
        path = tmp_path / "a.csv"
        path.write_text(text, "utf-8")
        return read_log(path, on_errors="keep")

    return reader


def test_fossils_beside_a_bioturbation_grade_reach_the_bed(read) -> None:  # type: ignore[no-untyped-def]
    """`BI 2-3 Oph.` is a grade and a trace, together with what the fossils column names."""
    bed = read("bed,thickness (cm),lithology,bioturbation,fossils\n1,40,sst,BI 2-3 Oph.,Skolithos\n").beds[0]
    assert (bed.bioturbation.low, bed.bioturbation.high) == (2, 3)
    assert bed.fossils == ("ophiomorpha", "skolithos")


def test_a_reading_beside_a_structure_is_on_it_and_that_is_said(read) -> None:  # type: ignore[no-untyped-def]
    """A dip beside trough cross-beds is that of a foreset."""
    log = read(
        "bed,thickness (cm),lithology,structures,palaeocurrent\n1,40,sst,St,29/094\n2,40,sst,Sm,29/094\n"
    )
    assert [bed.currents[0].indicator for bed in log.beds] == ["cross_bedding", "unspecified"]
    assert [f.row for f in log.findings if f.code == "currents.on_structure"] == [2]


@pytest.mark.parametrize(
    ("heading", "grain", "median", "d50", "label"),
    [
        ("grain,d50 (mm)", "mL", "0.3", 0.3, "mL"),
        ("grain,D50 [µm]", "mL", "300", 0.3, "mL"),
        ("grain,median", "mL", "2 phi", 0.25, "mL"),
        ("grain,notes", '"mL, D50 0.3 mm"', "", 0.3, "mL"),
        ("grain,d50", "", "0.3 mm", 0.3, "0.3 mm"),
    ],
)
def test_a_measured_median_is_kept_beside_the_class(  # type: ignore[no-untyped-def]
    heading: str, grain: str, median: str, d50: float, label: str, read, tmp_path: Path
) -> None:
    """The median comes from its column or the size cell, stands for the size alone, and is written back."""
    log = read(f"bed,thickness (cm),lithology,{heading}\n1,40,sst,{grain},{median}\n")
    bed = log.beds[0]
    assert bed.d50_mm == pytest.approx(d50)
    assert bed.grain[0].size.label == label
    assert read_log(log.write(tmp_path / "tidy.csv")) == log


def test_a_class_is_no_median_and_grading_has_none(read) -> None:  # type: ignore[no-untyped-def]
    """A class in the column of medians is refused; one median cannot speak for a graded bed."""
    log = read("bed,thickness (cm),grain,d50\n1,40,mL,fU\n")
    assert [(f.code, f.column) for f in log.findings if f.level == "error"] == [("d50.not_measured", "d50")]
    assert read("bed,thickness (cm),grain\n1,40,1 mm→0.25 mm\n").beds[0].d50_mm is None


def test_every_word_for_a_column_leads_to_that_column() -> None:
    """What the data files say is what the reader does, for both kinds of sheet."""
    for name, sizes in (("columns", False), ("size_columns", True)):
        for term in vocabulary(name).values():
            for words in (term.id, term.label, *term.synonyms):
                assert match_heading(words, sizes)[0] == term.id, words


TWO = "section,bed,thickness (cm),grain\nA,1,40,mL\nA,2,30,fU\nB,1,50,cL\nB,3,50,cL\n"
SIZES = "bed,height_in_bed (cm),d50 (mm)\n"


def two_sections(folder: Path, sizes: str) -> list[Log]:
    """Two sections with in-bed sizes in the file beside them."""
    (folder / "two.csv").write_text(TWO, "utf-8")
    (folder / "two.sizes.csv").write_text(sizes, "utf-8")
    return read_logs(folder / "two.csv", on_errors="keep")


def test_sizes_without_a_section_go_to_the_only_bed_of_that_name(tmp_path: Path) -> None:
    """Bed 2 is only in A, bed 3 only in B; bed 1 is in both and must be told apart."""
    logs = two_sections(tmp_path, SIZES + "2,10,0.2\n3,10,0.6\n")
    assert [[len(b.sizes) for b in log.beds] for log in logs] == [[0, 1], [0, 1]]
    assert not any(log.count("error") for log in logs)
    doubted = two_sections(tmp_path, SIZES + "1,10,0.2\n")
    (error,) = [f for f in doubted[0].findings if f.level == "error"]
    assert (error.code, error.row, error.allowed) == ("sizes.which_section", 2, ("A", "B"))
    assert error.remedy


def test_sizes_of_a_section_that_is_not_in_the_table_are_refused(tmp_path: Path) -> None:
    """A slip in the name of a section is not dropped silently."""
    logs = two_sections(tmp_path, "section," + SIZES + "A,1,10,0.3\nC,1,10,0.2\n")
    assert [len(log.beds[0].sizes) for log in logs] == [1, 0]
    assert [f.code for f in logs[1].findings if f.level == "error"] == ["sizes.no_section"]


def test_errors_of_another_section_do_not_block_the_one_wanted(tmp_path: Path) -> None:
    """A section can be read while the other is still full of slips; a row without a name belongs above."""
    path = tmp_path / "two.csv"
    path.write_text(TWO + ",4,50,zzz\n", "utf-8")
    assert len(read_log(path, section="A").beds) == 2
    with pytest.raises(LogErrors, match="zzz"):
        read_log(path, section="B")


def workbook(folder: Path, sheets: dict[str, list[list[object]]]) -> Path:
    """A workbook with these sheets."""
    book = Workbook()
    book.remove(book.active)
    for name, rows in sheets.items():
        sheet = book.create_sheet(name)
        for row in rows:
            sheet.append(row)
    book.save(folder / "b.xlsx")
    return folder / "b.xlsx"


BEDS: list[list[object]] = [["bed", "thickness (cm)", "grain"], [1, 40, "mL"], [2, 30, "fU"]]


def test_a_sheet_that_is_no_table_of_beds_is_noted(tmp_path: Path) -> None:
    """A legend beside the beds is no reason to refuse the workbook, but it is said."""
    path = workbook(tmp_path, {"Beds": BEDS, "Legend": [["code", "description"], ["St", "trough"]]})
    (log,) = read_logs(path)
    assert len(log.beds) == 2
    noted = [f for f in log.findings if f.sheet == "Legend"]
    assert [(f.level, f.code) for f in noted] == [("note", "heading.missing")]


def test_one_sheet_of_several_can_be_chosen(tmp_path: Path) -> None:
    """Sheets are sections; sizes find theirs, and findings stay with their sheet."""
    second = [["bed", "thickness (cm)", "grain"], [7, 50, "zzz"]]
    sizes = [["section", "bed", "height_in_bed (cm)", "d50 (mm)"], ["North", 1, 10, 0.3]]
    path = workbook(tmp_path, {"North": BEDS, "South": second, "sizes": sizes})
    log = read_log(path, section="North")
    assert (log.header.section, len(log.beds), len(log.beds[0].sizes)) == ("North", 2, 1)
    assert not [f for f in log.findings if f.sheet == "South"]
    with pytest.raises(LogErrors):
        read_log(path, section="South")


@pytest.mark.parametrize("ending", ["csv", "tsv", "xlsx"])
def test_sections_are_written_into_one_table_again(ending: str, tmp_path: Path) -> None:
    """What was read from one table goes into one table, sizes and all, and reads back the same."""
    logs = two_sections(tmp_path, "section," + SIZES + "A,1,10,0.3\nB,1,20,0.7\n")
    back = read_logs(write_logs(logs, tmp_path / f"tidy.{ending}"))
    assert back == logs
    assert [len(log.beds[0].sizes) for log in back] == [1, 1]


def test_logs_of_different_headers_do_not_fit_into_one_table(tmp_path: Path) -> None:
    """One header cannot speak for a river and a turbidite section."""
    one, two = two_sections(tmp_path, SIZES)
    other = replace(two, header=replace(two.header, setting="turbidity"))
    with pytest.raises(LogkitError, match="A and B have different headers"):
        write_logs([one, other], tmp_path / "tidy.csv")
    with pytest.raises(LogkitError, match="a section each"):
        write_logs([one, one], tmp_path / "tidy.csv")
    assert not (tmp_path / "tidy.csv").exists()
