"""Every slip that examples/README.md says is planted comes up in `logkit check`, with row, column and remedy."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from logkit.cli.check import command

EXAMPLES = Path(__file__).parents[2] / "examples"
RIVER = EXAMPLES / "river" / "tarrow_bend.csv"
SLIPS = EXAMPLES / "river" / "tarrow_bend_slips.csv"

Finding = dict[str, Any]


def check(path: Path) -> tuple[int, list[Finding]]:
    """Exit status and findings of `logkit check --json`."""
    run = CliRunner().invoke(command, [str(path), "--json"], standalone_mode=False)
    return run.return_value, json.loads(run.stdout)["findings"]


@pytest.fixture(scope="module")
def river() -> list[Finding]:
    """Findings of the river section."""
    status, findings = check(RIVER)
    assert status == 0
    return findings


PLANTED = {
    # bed: what must be said: (level, row, column, words)
    "gap above 8": [("note", 26, "thickness", "decimal comma as 1.4 m")],
    "11": [("question", 29, "thickness", "read as 0.72 m")],
    "12": [("question", 30, "structures", "trough cross-bedding")],
    "15": [("note", 33, "thickness", "decimal comma as 12.5 cm"), ("question", 33, "lithology", "2 rocks")],
    "17": [("question", 35, "set_thickness", "thicker than its bed")],
    "18": [("question", 36, "grain", "coarse end first")],
    "23": [("question", 41, "structures", "may be plane lamination")],
    "24": [("question", 42, "bed", "bed 24 is missing")],
    "31": [("question", 49, "bed", "stands in row 48")],
    "35": [("question", 54, "structures", "known from 0.01-0.7 mm, not from cU")],
    "38": [("question", 57, "grain", "the notes say 'fines up'")],
    "43": [("question", 62, "base", "above the sum of the thicknesses")],
    "47": [
        ("question", 66, "grain", "alternative"),
        ("question", 66, "thickness", "the row before is in ft"),
    ],
    "51": [("question", 71, "palaeocurrent", "R 0.33, N 3")],
    "52": [("note", 72, "thickness", "12 layers, 0.42 m")],
    "55": [("question", 75, "structures", "shale laminae")],
    "all": [("note", 18, "palaeocurrent", "readings as read")],
}


def test_the_readme_lists_what_is_tested() -> None:
    """No slip is promised that is not looked for, and the other way round."""
    text = (EXAMPLES / "README.md").read_text("utf-8")
    table = text.partition("## What is planted")[2].partition("`tarrow_bend_slips.csv`:")[0]
    assert set(re.findall(r"^\| ([^|]+?) \|", table, re.M)) - {"Bed", "---"} == set(PLANTED)


@pytest.mark.parametrize(("bed", "said"), PLANTED.items())
def test_a_planted_slip_is_found(
    bed: str, said: list[tuple[str, int, str, str]], river: list[Finding]
) -> None:
    """Each stands at its row and column; a question says what to do and what it could be."""
    for level, row, column, words in said:
        found = [f for f in river if (f["level"], f["row"], f["column"]) == (level, row, column)]
        text = " ".join(f"{f['message']} {f['nearest']} {f['choices']}" for f in found)
        assert words in text, (bed, found)
        assert all(f["cell"] for f in found)
        assert level == "note" or all(f["remedy"] and f["choices"] for f in found)


def test_nothing_else_is_asked_of_the_river(river: list[Finding]) -> None:
    """Every question is about a planted slip: a sound bed is not asked about."""
    planted = {(row, column) for said in PLANTED.values() for _, row, column, _ in said}
    assert {(f["row"], f["column"]) for f in river if f["level"] == "question"} <= planted


ERRORS = [
    (15, "base", "bed 3 starts below the top of bed 2"),
    (16, "grain", "is a date"),
    (17, "top", "the top lies below the base"),
    (18, "grain", "'blorb' holds no grain size"),
    (20, "set_thickness", "a set of 0.9 m in a bed of 0.3 m"),
    (21, "grain", "'-0.25 mm' is not a grain size"),
    (21, "palaeocurrent", "between 0 and 360"),
    (22, "top", "'abc' is not a length"),
]


def test_all_errors_of_the_slips_come_at_once() -> None:
    """Eight errors, each once, with row, column, cell and remedy; the exit status says so."""
    status, findings = check(SLIPS)
    errors = [f for f in findings if f["level"] == "error"]
    assert status == 1
    assert [(f["row"], f["column"]) for f in errors] == [(row, column) for row, column, _ in ERRORS]
    for finding, (_, _, words) in zip(errors, ERRORS, strict=True):
        assert words in finding["message"]
        assert finding["remedy"]
        assert finding["cell"]


def test_the_readme_names_the_rows_of_the_errors() -> None:
    """The rows in the text are those of the file."""
    text = (
        (EXAMPLES / "README.md")
        .read_text("utf-8")
        .partition("`tarrow_bend_slips.csv`:")[2]
        .partition("##")[0]
    )
    assert [int(n) for n in re.findall(r"row (\d+)", text)] == sorted({row for row, _, _ in ERRORS})


@pytest.mark.parametrize("folder", ["river", "turbidites", "well", "wells"])
def test_a_folder_of_examples_has_no_unexpected_errors(folder: str) -> None:
    """Only the page that is meant to fail has errors."""
    _, findings = check(EXAMPLES / folder)
    assert {f["file"] for f in findings if f["level"] == "error"} == (
        {SLIPS.name} if folder == "river" else set()
    )
