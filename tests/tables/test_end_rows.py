"""Rows and marks that are no beds: headings, totals, end marks, open quotation marks, formulas without results."""

from __future__ import annotations

from pathlib import Path

import pytest
from openpyxl import Workbook

from logkit.model import Finding, Log
from logkit.tables import read_log, read_logs


def read(folder: Path, text: str) -> Log:
    """A log from text, errors kept."""
    path = folder / "a.csv"
    path.write_text(text, "utf-8")
    return read_log(path, on_errors="keep")


def only(log: Log, code: str) -> Finding:
    """The one finding of a kind."""
    (finding,) = [f for f in log.findings if f.code == code]
    return finding


HEAD = "bed,thickness (cm),lithology,grain,notes\n1,40,sst,mL,\n2,60,mdst,,\n"


@pytest.mark.parametrize(
    "row", ["TOTAL,100,,,", "Total thickness:,100,,,", ",100,,,sum", ",,,,end of section"]
)
def test_a_row_of_totals_is_no_bed(row: str, tmp_path: Path) -> None:
    """A row that says it is a total is left out, and that is said."""
    log = read(tmp_path, HEAD + row + "\n")
    assert [b.name for b in log.beds] == ["1", "2"]
    assert (only(log, "row.total").level, only(log, "row.total").row) == ("note", 4)


def test_a_bed_may_be_called_like_a_total(tmp_path: Path) -> None:
    """A described row is a bed whatever its name."""
    assert len(read(tmp_path, HEAD + "Total,100,sst,fU,\n").beds) == 3


def test_a_bare_sum_is_asked_about(tmp_path: Path) -> None:
    """A last row with nothing but the sum of the others is left out; any other number is a bed."""
    log = read(tmp_path, HEAD + ",100,,,\n")
    assert len(log.beds) == 2
    assert only(log, "row.sum").choices == ("a total, left out", "a bed")
    assert len(read(tmp_path, HEAD + ",70,,,\n").beds) == 3


def test_a_last_depth_alone_ends_the_bed_above(tmp_path: Path) -> None:
    """Depths where beds begin often end with the depth of the hole; a heading that says depth runs down."""
    log = read(tmp_path, "Depth (m),Lithology\n100,sst\n101.2,mdst\n105,\n")
    assert log.header.direction == "down"
    assert [(b.depth_top, b.depth_base) for b in log.beds[::-1]] == [(100, 101.2), (101.2, 105)]
    assert only(log, "position.end_mark").row == 4


def test_an_open_quotation_mark_does_not_swallow_rows(tmp_path: Path) -> None:
    """The row with the open mark is an error with its number; the rows below are read."""
    log = read(tmp_path, 'bed,thickness (cm),grain,notes\n1,40,mL,"open\n2,30,fU,ok\n3,20,zzz,ok\n')
    errors = [(f.row, f.code) for f in log.findings if f.level == "error"]
    assert (2, "row.open_quote") in errors
    assert 4 in [row for row, _ in errors]
    assert "3" in [b.name for b in log.beds]


def test_a_cell_that_swallows_rows_is_asked_about(tmp_path: Path) -> None:
    """Two open marks make one long cell with whole rows in it; a note of two lines is ordinary."""
    text = 'bed,thickness (cm),grain,notes\n1,40,mL,"open\n2,30,fU,\n3,20,fU,open"\n4,20,fU,\n'
    assert only(read(tmp_path, text), "file.long_cell").row == 2
    pairs = 'bed,thickness (cm),grain,notes\n1,40,mL,"open\n2,30,fU,"open\n3,20,fU,\n'
    assert only(read(tmp_path, pairs), "file.long_cell").row == 2
    two_lines = read(tmp_path, 'bed,thickness (cm),grain,notes\n1,40,mL,"one\ntwo, three"\n2,30,fU,\n')
    assert not two_lines.findings
    assert two_lines.beds[0].notes == "one\ntwo, three"


def test_a_bed_is_not_taken_for_headings(tmp_path: Path) -> None:
    """Headings nobody knows are said to be unknown, and quoted; `gS` in a row of cells is a size."""
    log = read(tmp_path, "Alpha,Beta,Gamma,Delta\nN1,1,22,gS\nN1,2,10,gS\n")
    finding = only(log, "file.no_table")
    assert (finding.row, finding.cell) == (1, "Alpha | Beta | Gamma | Delta")


def test_formulas_without_results_are_asked_about(tmp_path: Path) -> None:
    """A workbook that no spreadsheet has calculated has empty cells; each is named."""
    book = Workbook()
    for row in (["bed", "base (m)", "top (m)", "grain"], [1, 0, 1, "mL"], [2, 1, "=C2*2", "fU"]):
        book.active.append(row)
    book.save(tmp_path / "b.xlsx")
    (log,) = read_logs(tmp_path / "b.xlsx", on_errors="keep")
    finding = only(log, "cell.formula")
    assert finding.cell == "C3"
    assert "save" in finding.remedy


def test_headings_in_two_rows_are_one(tmp_path: Path) -> None:
    """`from` and `to` below a heading that spans them name the columns; the first bed stays a bed."""
    log = read(tmp_path, "Bed,Thickness,,Lithology\n,from (m),to (m),\n1,0,0.5,sst\n2,0.5,1.1,mdst\n")
    assert [(b.name, b.base_m, b.top_m) for b in log.beds] == [("1", 0, 0.5), ("2", 0.5, 1.1)]
    assert not log.count("error")


def test_columns_of_ones_own_are_named_once(tmp_path: Path) -> None:
    """Many columns that nobody knows are one note, which names them."""
    heads = ",".join(f"qq{i}" for i in range(40))
    log = read(tmp_path, f"bed,thickness (cm),grain,{heads}\n1,40,mL\n")
    assert only(log, "heading.unknown").message.startswith("40 columns of your own, kept as written")
    assert "'qq11' …" in only(log, "heading.unknown").message
