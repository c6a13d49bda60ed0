"""The command line as a person meets it: exit status, where things are printed, what is left on disk."""

from __future__ import annotations

import contextlib
import io
import json
import os
import subprocess
import sys
from pathlib import Path
from typing import NamedTuple

import pytest

from logkit.cli import VERBS, main

ROOT = Path(__file__).resolve().parents[2]
RIVER = ROOT / "examples/river/tarrow_bend.csv"
SLIPS = ROOT / "examples/river/tarrow_bend_slips.csv"


class Ran(NamedTuple):
    """What a command left: its exit status and what it printed."""

    returncode: int
    stdout: str
    stderr: str


def logkit(*arguments: str | Path, stdin: str | None = None) -> Ran:
    """Run the command line in this process, as the installed command does."""
    out, err, status = io.StringIO(), io.StringIO(), 0
    before = sys.stdin
    sys.stdin = io.TextIOWrapper(io.BytesIO((stdin or "").encode("utf-8")))
    try:
        with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
            main([str(a) for a in arguments])
    except SystemExit as end:
        status = int(end.code or 0)
    finally:
        sys.stdin = before
    return Ran(status, out.getvalue(), err.getvalue())


def installed(command: str) -> subprocess.CompletedProcess[str]:
    """Run a shell line in which `logkit` is the installed command."""
    path = f"{Path(sys.executable).parent}:{os.environ['PATH']}"
    return subprocess.run(["bash", "-c", command], capture_output=True, text=True, timeout=120,
                          env={**os.environ, "PATH": path})  # fmt: skip


@pytest.fixture(scope="module")
def small(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A table of four beds."""
    path = tmp_path_factory.mktemp("small") / "small.csv"
    path.write_text(
        "# section: S1\n# setting: river\n"
        "bed,thickness (cm),lithology,grain,structures,notes\n"
        "1,40,sst,mL,trough cross-bedding,\n"
        "2,20,sst,fU,ripples,<b>bold & loud</b>\n"
        "3,30,mdst,,,\n"
        "4,25,sst,vfU,,\n",
        encoding="utf-8",
    )
    return path


@pytest.mark.parametrize(
    "verb",
    VERBS,
)
def test_every_verb_has_help_with_an_example(verb: str) -> None:
    """`--help` of a verb ends well and shows a command to copy."""
    run = logkit(verb, "--help")
    assert run.returncode == 0
    assert f"logkit {verb}" in run.stdout
    assert "Example" in run.stdout


def test_an_unknown_verb_names_the_nearest() -> None:
    """A slip in the verb is wrong usage and gets a hint."""
    run = logkit("chekc", RIVER)
    assert run.returncode == 2
    assert "'check'" in run.stderr


def test_new_table_reads_without_findings(tmp_path: Path) -> None:
    """The empty table that `new` writes is itself a clean log, and is not overwritten by accident."""
    path = tmp_path / "mine.csv"
    assert logkit("new", path).returncode == 0
    run = logkit("check", path)
    assert run.returncode == 0
    assert run.stdout == ""
    again = logkit("new", path)
    assert again.returncode == 1
    assert "--force" in again.stderr


def test_check_prints_findings_on_stdout_and_counts_on_stderr() -> None:
    """Questions do not fail a check; under --strict they do."""
    run = logkit("check", RIVER)
    assert run.returncode == 0
    assert run.stdout.splitlines()[0].startswith("level\tfile\trow")
    assert "questions" in run.stderr
    assert logkit("check", "--strict", RIVER).returncode == 1


def test_errors_fail_and_leave_nothing_behind(tmp_path: Path) -> None:
    """A log with errors stops every verb with status 1 and writes no file."""
    target = tmp_path / "out.svg"
    run = logkit("draw", SLIPS, "-o", target)
    assert run.returncode == 1
    assert "row" in run.stderr
    assert "Traceback" not in run.stderr
    assert list(tmp_path.iterdir()) == []


def test_check_as_json_has_every_field(small: Path) -> None:
    """`--json` gives findings that a script can read."""
    data = json.loads(logkit("check", "--json", SLIPS).stdout)
    assert {"level", "row", "column", "cell", "message", "remedy"} <= set(data["findings"][0])
    assert any(f["level"] == "error" for f in data["findings"])


def test_standard_input_works(small: Path) -> None:
    """`-` reads the table from standard input."""
    run = logkit("flow", "-", "-q", stdin=small.read_text(encoding="utf-8"))
    assert run.returncode == 0, run.stderr
    assert run.stdout.splitlines()[0].startswith("section\tbed\tphase")


@pytest.mark.parametrize("ending", ["svg", "pdf", "png"])
def test_draw_writes_what_the_ending_says(small: Path, tmp_path: Path, ending: str) -> None:
    """A column lands on disk in the form asked for, the same bytes each time."""
    first, second = tmp_path / f"a.{ending}", tmp_path / f"b.{ending}"
    for target in (first, second):
        run = logkit("draw", small, "-o", target)
        assert run.returncode == 0, run.stderr
    magic = {"svg": b"<?xml", "pdf": b"%PDF", "png": b"\x89PNG"}[ending]
    assert first.read_bytes().startswith(magic)
    assert first.read_bytes() == second.read_bytes()


def test_flow_writes_csv_json_and_parquet(small: Path, tmp_path: Path) -> None:
    """The history is the same in each form, and the caution goes with it."""
    import pandas as pd

    for ending in ("csv", "json", "parquet"):
        assert logkit("flow", small, "-o", tmp_path / f"f.{ending}").returncode == 0
    csv = (tmp_path / "f.csv").read_text(encoding="utf-8")
    assert csv.startswith("# logkit")
    assert "not design floods" in csv
    table = pd.read_csv(tmp_path / "f.csv", comment="#")
    parquet = pd.read_parquet(tmp_path / "f.parquet")
    rows = json.loads((tmp_path / "f.json").read_text(encoding="utf-8"))["rows"]
    assert len(table) == len(parquet) == len(rows) == 4
    assert table["velocity_p50_m_s"].tolist() == pytest.approx(
        parquet["velocity_p50_m_s"].tolist(), nan_ok=True
    )


def test_why_names_criteria_and_the_nearest_bed(small: Path) -> None:
    """The ledger of a bed is readable; a bed that is not there is wrong usage."""
    run = logkit("why", small, "--bed", "1")
    assert run.returncode == 0, run.stderr
    assert "m/s" in run.stdout
    missing = logkit("why", small, "--bed", "11")
    assert missing.returncode == 2
    assert "'1'" in missing.stderr


def test_sources_lists_and_explains() -> None:
    """Every formula has a line; one id prints its checks."""
    listing = logkit("sources")
    assert listing.returncode == 0
    assert "settling.ferguson_church" in listing.stdout
    one = logkit("sources", "water.density")
    assert "UNESCO" in one.stdout
    assert logkit("sources", "water.densty").returncode == 2


def test_styles_can_be_dumped_and_used(small: Path, tmp_path: Path) -> None:
    """A dumped style draws the same picture as the style itself."""
    assert "report" in logkit("styles").stdout
    mine = tmp_path / "mine.toml"
    assert logkit("styles", "report", "-o", mine).returncode == 0
    for style, name in (("report", "a.svg"), (str(mine), "b.svg")):
        run = logkit("draw", small, "-o", tmp_path / name, "--style", style)
        assert run.returncode == 0, run.stderr
    assert (tmp_path / "a.svg").read_bytes() == (tmp_path / "b.svg").read_bytes()


def test_a_wrong_ending_is_wrong_usage(small: Path, tmp_path: Path) -> None:
    """An output that cannot be written in that form says what can."""
    run = logkit("draw", small, "-o", tmp_path / "x.bmp")
    assert run.returncode == 2
    assert ".svg" in run.stderr


def test_a_reader_that_goes_away_is_no_traceback(small: Path) -> None:
    """A closed pipe ends the command quietly."""
    run = installed("logkit sources | head -n 1")
    assert run.stdout.startswith("id\t")
    assert "Traceback" not in run.stderr
    assert "Exception ignored" not in run.stderr


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="needs /dev/full")
def test_a_full_disk_is_a_sentence(small: Path) -> None:
    """Output that cannot be stored gives an error in words."""
    run = installed(f"logkit check '{RIVER}' -q > /dev/full")
    assert run.returncode == 1
    assert "Traceback" not in run.stderr
    assert "logkit:" in run.stderr


def test_a_folder_that_is_not_there_is_said(small: Path, tmp_path: Path) -> None:
    """Writing into a missing folder names it."""
    run = logkit("draw", small, "-o", tmp_path / "nowhere" / "x.svg")
    assert run.returncode == 1
    assert "nowhere" in run.stderr
    assert "Traceback" not in run.stderr


def test_numbers_of_the_input_are_checked(small: Path, tmp_path: Path) -> None:
    """Bad scales and ranges are wrong usage with the option's name."""
    for arguments in (("--scale", "0"), ("--scale", "fifty"), ("--flow-depth", "3-2")):
        run = logkit("draw", small, "-o", tmp_path / "x.svg", *arguments)
        assert run.returncode == 2, arguments
        assert arguments[0] in run.stderr
