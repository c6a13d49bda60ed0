"""What is written reads back as the same log, whatever it holds and in whichever form."""

from __future__ import annotations

import importlib.util
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from logkit.model import Log
from logkit.tables import log_from_frame, read_log, write_log

HERE = Path(__file__).parent
EXAMPLES = HERE.parents[1] / "examples"
ALL_EXAMPLES = sorted(
    path.relative_to(EXAMPLES)
    for path in [*EXAMPLES.glob("*/*.csv"), *EXAMPLES.glob("*/*.xlsx")]
    if path.suffixes in ([".csv"], [".xlsx"]) and "slips" not in path.stem  # that one has errors on purpose
)

_spec = importlib.util.spec_from_file_location("generated", HERE / "generated.py")
assert _spec is not None
assert _spec.loader is not None
generated = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(generated)

QUICK = settings(
    max_examples=50,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow],
)
FEWER = settings(QUICK, max_examples=15)


def differences(log: Log, back: Log) -> list[tuple[object, object]]:
    """Header fields and beds that came back otherwise, for a message."""
    found: list[tuple[object, object]] = []
    if log.header != back.header:
        found.append((log.header, back.header))
    found += [(a, b) for a, b in zip(log.beds, back.beds, strict=False) if a != b]
    if len(log.beds) != len(back.beds):
        found.append((len(log.beds), len(back.beds)))
    return found


@QUICK
@given(log=generated.logs())
def test_csv_gives_the_same_log(log: Log, tmp_path: Path) -> None:
    """A log written as CSV reads back equal, header included, without errors."""
    back = read_log(write_log(log, tmp_path / "log.csv"), on_errors="keep")
    assert differences(log, back) == []
    assert back == log


@FEWER
@given(log=generated.logs(), ending=st.sampled_from((".tsv", ".xlsx")))
def test_other_forms_give_the_same_log(log: Log, ending: str, tmp_path: Path) -> None:
    """A log written as TSV or workbook reads back equal, header included."""
    back = read_log(write_log(log, tmp_path / f"log{ending}"), on_errors="keep")
    assert differences(log, back) == []


@FEWER
@given(log=generated.logs())
def test_writing_twice_gives_the_same_bytes(log: Log, tmp_path: Path) -> None:
    """The same log gives the same bytes, and what was read back is written the same again."""
    first = write_log(log, tmp_path / "first.csv").read_bytes()
    assert write_log(log, tmp_path / "second.csv").read_bytes() == first
    back = read_log(tmp_path / "first.csv", on_errors="keep")
    again = read_log(write_log(back, tmp_path / "third.csv"), on_errors="keep")
    assert again == back


@FEWER
@given(log=generated.logs())
def test_a_frame_gives_the_same_beds(log: Log) -> None:
    """A data frame gives the beds back, without the in-bed sizes that it does not carry."""
    back = log_from_frame(log.to_frame(), on_errors="keep", direction=log.header.direction,
                          unit=log.header.unit or None, size_scale=log.header.size_scale)  # fmt: skip
    assert tuple(replace(bed, sizes=()) for bed in log.beds) == back.beds


@pytest.mark.parametrize("name", ALL_EXAMPLES, ids=str)
@pytest.mark.parametrize("ending", [".csv", ".xlsx"])
def test_examples_come_back(name: Path, ending: str, tmp_path: Path) -> None:
    """Every example log, written and read again, is the same log with the same original wording."""
    log = read_log(EXAMPLES / name, on_errors="keep")
    back = read_log(log.write(tmp_path / f"tidy{ending}"))
    assert back == log
    assert [bed.written for bed in back.beds] == [bed.written for bed in log.beds]


def test_an_edited_cell_counts_before_its_details(tmp_path: Path) -> None:
    """A person's edit in a canonical cell is read; exact values of the cell as it was are dropped and noted."""
    path = tmp_path / "edited.csv"
    path.write_text("bed,thickness (m),grain,structures\n1,2.0,mU,St\n", encoding="utf-8")
    log = read_log(path)
    assert log.beds[0].structures[0].code == "St"
    text = log.write(path).read_text(encoding="utf-8")
    assert read_log(path) == log
    assert ",trough cross-bedding," in text
    path.write_text(text.replace(",trough cross-bedding,", ",planar cross-bedding,"), encoding="utf-8")
    edited = read_log(path)
    assert [(s.term, s.code) for s in edited.beds[0].structures] == [("planar_cross_bedding", "")]
    assert [f.code for f in edited.findings] == ["details.edited"]


def test_original_wording_survives(tmp_path: Path) -> None:
    """The cells as typed stay on the bed through writing and reading."""
    path = tmp_path / "a.csv"
    path.write_text("Bed,Thk (cm),GS,my own\n1,45,m→f,blue flag\n", encoding="utf-8")
    back = read_log(read_log(path).write(tmp_path / "b.csv"))
    assert back.beds[0].written == (
        ("bed", "1"),
        ("thickness", "45"),
        ("grain", "m→f"),
        ("my own", "blue flag"),
    )
    assert back.beds[0].written_in("my own") == "blue flag"


def test_nothing_becomes_a_formula(tmp_path: Path) -> None:
    """Text that begins like a formula is text again in a spreadsheet, and reads back without the mark."""
    from openpyxl import load_workbook

    path = tmp_path / "a.csv"
    path.write_text('bed,thickness (cm),lithology,notes\n=1+1,45,sst,"=HYPERLINK(""x"")"\n', encoding="utf-8")
    log = read_log(path)
    text = log.write(tmp_path / "b.csv").read_text(encoding="utf-8")
    assert "'=1+1" in text
    assert "\"'=HYPERLINK" in text
    book = load_workbook(log.write(tmp_path / "b.xlsx"))
    kinds = {cell.value: cell.data_type for row in book["beds"].iter_rows() for cell in row if cell.value}
    assert kinds["=1+1"] == "s"
    assert "f" not in kinds.values()
    for written in ("b.csv", "b.xlsx"):
        assert read_log(tmp_path / written) == log
