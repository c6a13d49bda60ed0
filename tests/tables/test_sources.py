"""Every kind of file people bring: encodings, separators, workbooks, standard input, and files that are no table."""

from __future__ import annotations

import io
import sys
from collections.abc import Callable
from datetime import date
from pathlib import Path
from typing import Any

import pandas as pd
import pytest

from logkit.errors import ArgumentError, LogErrors, LogkitError
from logkit.model import Log
from logkit.tables import log_from_frame, new_table, read_log, read_logs

TABLE = "# title: Fjällbäck\n# unit: cm\nBed,Thickness,Lith,Grain,Notes\n1,45,sst,mU,ångström\n2,30,mdst,,\n"


def texts(log: Log) -> list[tuple[str, float, str, str]]:
    """What a log says, in short."""
    return [(bed.name, bed.thickness_m, bed.lithology, bed.notes) for bed in log.beds]


EXPECTED = [("1", 0.45, "sandstone", "ångström"), ("2", pytest.approx(0.30), "mudstone", "")]


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-16-be", "cp1252"])
@pytest.mark.parametrize("line_end", ["\n", "\r\n", "\r"])
def test_encodings_and_line_ends(encoding: str, line_end: str, tmp_path: Path) -> None:
    """UTF-8 with and without mark, UTF-16 and Windows-1252 give the same log, whatever the line ends."""
    path = tmp_path / "a.csv"
    path.write_bytes(TABLE.replace("\n", line_end).encode(encoding))
    log = read_log(path)
    assert log.header.title == "Fjällbäck"
    assert texts(log) == EXPECTED


@pytest.mark.parametrize("mark", [";", "\t", "|"])
def test_separators_and_decimal_commas(mark: str, tmp_path: Path) -> None:
    """Semicolons, tabs and bars part cells; decimal commas then are numbers."""
    path = tmp_path / "a.csv"
    path.write_text(
        TABLE.replace(",", mark).replace("45", "0,45").replace("30", "0,3").replace(": cm", ": m"), "utf-8"
    )
    assert texts(read_log(path)) == EXPECTED


def test_header_lines_as_a_spreadsheet_saves_them(tmp_path: Path) -> None:
    """Header lines padded with separators and put into quotation marks are read."""
    path = tmp_path / "a.csv"
    path.write_text(
        '"# location: bank, 400 m up",,,,\n# unit: cm,,,,\nbed,thickness,lith,grain,notes\n1,45,sst,mU,\n',
        "utf-8",
    )
    log = read_log(path)
    assert log.header.location == "bank, 400 m up"
    assert log.header.unit == "cm"


def test_standard_input(monkeypatch: pytest.MonkeyPatch) -> None:
    """`-` reads standard input."""

    class Stdin:
        buffer = io.BytesIO(TABLE.encode())

    monkeypatch.setattr(sys, "stdin", Stdin())
    log = read_log("-")
    assert texts(log) == EXPECTED
    assert log.source == ""


def make_book(path: Path, fill: Callable[[Any], None]) -> Path:
    """A workbook filled by a function."""
    from openpyxl import Workbook

    book = Workbook()
    fill(book)
    book.save(path)
    return path


def test_workbook_with_header_merged_cells_and_sizes(tmp_path: Path) -> None:
    """A header sheet, a merged section cell and a sheet of sizes are read; a merge is noted once a column."""

    def fill(book: Any) -> None:
        sheet = book.active
        sheet.title = "Header"
        sheet.append(["title", "Book"])
        sheet.append(["unit", "cm"])
        beds = book.create_sheet("beds")
        for row in (["Section", "Bed", "Thickness", "Lith", "Grain", "Samples"], ["A", "1", 45, "sst", "mU", "S1"],
                    [None, "2", 30, "sst", "fL", None], ["B", "1", 20, "sst", "fL", None]):  # fmt: skip
            beds.append(row)
        beds.merge_cells("A2:A3")
        beds.merge_cells("F2:F3")
        sizes = book.create_sheet("sizes")
        for row in (
            ["section", "bed", "height_in_bed (cm)", "d50 (mm)"],
            ["A", "1", 5, 0.4],
            ["A", "1", 40, 0.3],
        ):
            sizes.append(row)

    logs = read_logs(make_book(tmp_path / "b.xlsx", fill))
    assert [(log.header.section, log.header.title, len(log.beds)) for log in logs] == [
        ("A", "Book", 2),
        ("B", "Book", 1),
    ]
    first = logs[0].beds
    assert [bed.samples for bed in first] == [("S1",), ()]
    assert [(r.position_m, r.d50_mm) for r in first[0].sizes] == [(0.05, 0.4), (0.40, 0.3)]
    merged = [(f.column, f.message) for f in logs[0].findings if f.code == "cell.merged"]
    assert [column for column, _ in merged] == ["section", "samples"]
    assert "top row only" in merged[1][1]


def test_a_date_in_a_size_column_is_refused_by_address(tmp_path: Path) -> None:
    """A size that the spreadsheet turned into a date is refused with the address of its cell; other dates are text."""

    def fill(book: Any) -> None:
        for row in (["bed", "thickness (cm)", "lith", "grain", "notes"], ["1", 45, "sst", "mU", date(2024, 5, 1)],
                    ["2", 30, "sst", date(2024, 3, 2), None], ["3", date(2024, 1, 8), "sst", "fL", None]):  # fmt: skip
            book.active.append(row)

    log = read_log(make_book(tmp_path / "b.xlsx", fill), on_errors="keep")
    refused = [(f.row, f.column, f.cell) for f in log.findings if f.code == "cell.date"]
    assert refused == [(3, "grain", "D3: 2024-03-02"), (4, "thickness", "B4: 2024-01-08")]
    assert log.beds[0].notes == "2024-05-01"
    assert [f.level for f in log.findings] == ["error", "error"]


def test_several_sheets_are_several_sections(tmp_path: Path) -> None:
    """Sheets with tables of beds are sections named by the sheet; other sheets are passed over."""

    def fill(book: Any) -> None:
        book.active.title = "North"
        for sheet in (book.active, book.create_sheet("South")):
            sheet.append(["bed", "thickness (cm)", "lith"])
            sheet.append(["1", 45, "sst"])
        book.create_sheet("scratch").append(["remember to call"])

    path = make_book(tmp_path / "b.xlsx", fill)
    assert [log.header.section for log in read_logs(path)] == ["North", "South"]
    with pytest.raises(LogkitError, match="holds 2 sections: North, South"):
        read_log(path)
    assert read_log(path, section="South").header.section == "South"


def test_ods(tmp_path: Path) -> None:
    """An ODS workbook is read like any other."""
    pytest.importorskip("odf")
    path = tmp_path / "b.ods"
    pd.DataFrame({"bed": ["1"], "thickness (cm)": [45], "lith": ["sst"]}).to_excel(
        path, engine="odf", index=False
    )
    assert read_log(path).beds[0].thickness_m == pytest.approx(0.45)


def test_several_sections_in_one_file(tmp_path: Path) -> None:
    """Sections are told apart by their column; rows that come back later are asked about; blanks belong above."""
    path = tmp_path / "a.csv"
    path.write_text(
        "section,bed,thickness (cm),lith\nA,1,10,sst\n,2,20,sst\nB,1,30,sst\nA,3,40,sst\n", "utf-8"
    )
    logs = read_logs(path)
    assert [(log.header.section, [b.name for b in log.beds]) for log in logs] == [
        ("A", ["1", "2", "3"]),
        ("B", ["1"]),
    ]
    assert [f.code for f in logs[0].findings] == ["section.carried", "section.mixed"]
    with pytest.raises(ArgumentError, match="section is 'C'"):
        read_log(path, section="C")


NOT_TABLES = {
    "empty": (b"", "the file is empty"),
    "only spaces": (b" \n\n", "the file is empty"),
    "only headings": (b"bed,thickness (cm),lith\n", "no rows below"),
    "only header lines": (b"# title: x\n# unit: cm\n", "no row of headings"),
    "prose": (b"We walked up the gorge and it rained.\nThen it stopped.\n", "no row of headings"),
    "no position": (b"bed,lith\n1,sst\n", "no column for a position"),
    "neither size nor rock": (b"bed,base (m),top (m)\n1,0,1\n", "no column for a grain size or a lithology"),
    "null bytes": (b"bed,thickness,lith\n" + b"\0" * 500, "not text"),
}


@pytest.mark.parametrize("name", NOT_TABLES)
def test_files_that_are_no_table(name: str, tmp_path: Path) -> None:
    """A file without beds is an error that says what is wrong and what is needed."""
    body, words = NOT_TABLES[name]
    path = tmp_path / "a.csv"
    path.write_bytes(body)
    with pytest.raises(LogErrors) as caught:
        read_log(path)
    errors = [f for f in caught.value.findings if f.level == "error"]
    assert len(errors) == 1
    assert words in errors[0].message
    assert errors[0].remedy
    assert errors[0].file == "a.csv"
    kept = read_log(path, on_errors="keep")
    assert kept.beds == ()
    assert kept.count("error") == 1


def test_what_cannot_be_opened(tmp_path: Path) -> None:
    """Missing files, folders, damaged and protected workbooks are refused in words."""
    (tmp_path / "log.csv").write_text(TABLE, "utf-8")
    with pytest.raises(LogkitError, match=r"There is no file .*lug\.csv\. Did you mean .*log\.csv\?"):
        read_log(tmp_path / "lug.csv")
    with pytest.raises(LogkitError, match="is a folder, not a file"):
        read_log(tmp_path)
    (tmp_path / "text.xlsx").write_text(TABLE, "utf-8")
    with pytest.raises(LogkitError, match=r"text\.xlsx is not a workbook"):
        read_log(tmp_path / "text.xlsx")
    (tmp_path / "cut.xlsx").write_bytes(new_table(tmp_path / "n.xlsx").read_bytes()[:900])
    with pytest.raises(LogkitError, match="cannot be opened as a workbook"):
        read_log(tmp_path / "cut.xlsx")
    protected = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + b"\0" * 600 + "EncryptedPackage".encode("utf-16-le")
    (tmp_path / "locked.xlsx").write_bytes(protected)
    with pytest.raises(LogkitError, match="protected by a password"):
        read_log(tmp_path / "locked.xlsx")


def test_a_workbook_under_a_text_name(tmp_path: Path) -> None:
    """A workbook that is called .csv is read as what it is."""
    path = tmp_path / "n.csv"
    path.write_bytes(new_table(tmp_path / "n.xlsx").read_bytes())
    assert len(read_log(path).beds) == 1


def test_options_count_before_the_file(tmp_path: Path) -> None:
    """Header keys given by the caller count before those of the file; an unknown one names the nearest."""
    path = tmp_path / "a.csv"
    path.write_text(TABLE, "utf-8")
    log = read_log(path, setting="river", unit="mm", bedding=(140, 22), water_temperature_c=12, section="X")
    assert log.header.setting == "river"
    assert log.header.bedding == (140, 22)
    assert log.header.water_temperature_c == 12
    assert log.header.section == "X"
    assert log.beds[0].thickness_m == pytest.approx(0.045)
    with pytest.raises(ArgumentError, match="did you mean 'setting'"):
        read_log(path, seting="river")
    with pytest.raises(ArgumentError, match="setting is 'brook'"):
        read_log(path, setting="brook")
    with pytest.raises(ArgumentError, match="on_errors"):
        read_log(path, on_errors="ignore")
    with pytest.raises(LogkitError, match="Did you mean 'fluvial'"):
        read_log(path, codes="fluvail")


def test_strict_turns_questions_into_errors(tmp_path: Path) -> None:
    """Under strict reading a question stops the reading."""
    path = tmp_path / "a.csv"
    path.write_text("bed,thickness,lith\n1,45,sst\n", "utf-8")
    assert read_log(path).count("question") == 1
    with pytest.raises(LogErrors):
        read_log(path, strict=True)


def test_companion_and_named_sizes(tmp_path: Path) -> None:
    """Sizes come from the companion file, or from the one named; readings outside their bed are refused."""
    path = tmp_path / "a.csv"
    path.write_text(TABLE, "utf-8")
    (tmp_path / "a.sizes.csv").write_text("bed,height_in_bed (cm),d50 (phi)\n1,10,2\n", "utf-8")
    other = tmp_path / "other.csv"
    other.write_text("bed;height_in_bed (m);d50;count\n1;0,1;0,3;60\n9;0,1;0,3;\n1;0,9;0,3;\n", "utf-8")
    assert [r.d50_mm for r in read_log(path).beds[0].sizes] == [0.25]
    log = read_log(path, sizes=other, on_errors="keep")
    assert [(r.position_m, r.d50_mm, r.count) for r in log.beds[0].sizes] == [(0.1, 0.3, 60)]
    assert [(f.file, f.row, f.code) for f in log.findings] == [
        ("other.csv", 3, "sizes.no_bed"), ("other.csv", 4, "sizes.outside_bed"),
    ]  # fmt: skip


def test_frames_as_people_make_them() -> None:
    """A data frame with columns as people name them is read like a file; rows are counted from 1."""
    frame = pd.DataFrame(
        {"Bed": [1, 2], "Thickness (cm)": [45, None], "Lith": ["sst", "mdst"], "GS": ["mU", None]}
    )
    with pytest.raises(LogErrors) as caught:
        log_from_frame(frame, setting="river")
    assert [(f.row, f.code) for f in caught.value.findings] == [(2, "position.missing")]
    log = log_from_frame(frame.fillna({"Thickness (cm)": 10}), setting="river", section="S")
    assert log.header.section == "S"
    assert [bed.thickness_m for bed in log.beds] == pytest.approx([0.45, 0.1])


@pytest.mark.parametrize("ending", ["csv", "tsv", "xlsx"])
def test_a_new_table_reads_without_findings(ending: str, tmp_path: Path) -> None:
    """The empty table with its example row is a log of one bed and nothing to say about it."""
    log = read_log(new_table(tmp_path / f"new.{ending}"))
    assert log.findings == ()
    assert len(log.beds) == 1
    assert log.beds[0].thickness_m == pytest.approx(0.45)


def test_unknown_endings_and_read_only_folders(tmp_path: Path) -> None:
    """An ending that is not written and a folder that does not exist are refused before anything is written."""
    log = read_log(new_table(tmp_path / "n.csv"))
    with pytest.raises(LogkitError, match=r"no form of table called '\.doc'"):
        log.write(tmp_path / "a.doc")
    with pytest.raises(LogkitError, match="the folder does not exist"):
        log.write(tmp_path / "none" / "a.csv")
    assert sorted(p.name for p in tmp_path.iterdir()) == ["n.csv"]


def test_five_thousand_beds(tmp_path: Path) -> None:
    """A long table is read whole."""
    path = tmp_path / "a.csv"
    rows = "".join(f"{n},{10 + n % 7},sst,mU\n" for n in range(1, 5001))
    path.write_text("bed,thickness (cm),lith,grain\n" + rows, "utf-8")
    log = read_log(path)
    assert len(log.beds) == 5000
    assert log.findings == ()
