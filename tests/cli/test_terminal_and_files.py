"""What a person sees in a terminal of 100 columns, what the shell completes, and which files are spared."""

from __future__ import annotations

import contextlib
import io
import json
import os
import shutil
import subprocess
import sys
from dataclasses import fields
from pathlib import Path

import pytest

from logkit.cli import VERBS, main
from logkit.model import Finding

ROOT = Path(__file__).resolve().parents[2]
RIVER = ROOT / "examples/river/tarrow_bend.csv"
SLIPS = ROOT / "examples/river/tarrow_bend_slips.csv"
TABLE = "bed,thickness (cm),grain,notes\n1,40,mL,a field note\n2,30,fU,\n"


class Terminal(io.StringIO):
    """Standard output that is a terminal."""

    def isatty(self) -> bool:
        return True


def run(*arguments: str | Path, screen: Terminal | None = None) -> int:
    """Exit status of a command run in this process, printing to a terminal where one is given."""
    with pytest.raises(SystemExit) as end, contextlib.redirect_stdout(screen or sys.stdout):
        main([str(a) for a in arguments])
    return int(end.value.code or 0)


@pytest.fixture
def terminal(monkeypatch: pytest.MonkeyPatch) -> Terminal:
    """A terminal of 100 columns."""
    monkeypatch.setenv("COLUMNS", "100")
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.delenv("NO_COLOR", raising=False)
    return Terminal()


def test_findings_are_readable_in_a_terminal(terminal: Terminal, monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing is wider than the terminal; message and remedy have room for whole phrases."""
    monkeypatch.setenv("NO_COLOR", "1")
    assert run("check", RIVER, SLIPS, screen=terminal) == 1
    text = terminal.getvalue()
    lines = [line.rstrip() for line in text.splitlines()]
    assert max(map(len, lines)) <= 100
    assert "\x1b" not in text
    assert lines.count("tarrow_bend.csv") == lines.count("tarrow_bend_slips.csv") == 1
    assert any("read as 0.72 m: with 0.72 cm the heights" in line for line in lines)
    assert any("→ write the unit into the cell" in line for line in lines)


def test_a_terminal_gets_colour(terminal: Terminal) -> None:
    """Levels are coloured where nobody asked for none."""
    assert run("check", SLIPS, screen=terminal) == 1
    assert "\x1b[31merror" in terminal.getvalue()


def test_control_characters_of_a_table_do_not_reach_the_terminal(terminal: Terminal, tmp_path: Path) -> None:
    """An escape sequence typed into a cell is shown as text."""
    path = tmp_path / "a.csv"
    path.write_text("bed,thickness (cm),grain\n1,40,\x1b[31mzzz\x07\n", "utf-8")
    assert run("check", path, screen=terminal) == 1
    assert "\x1b[31mzzz" not in terminal.getvalue()
    assert "\x07" not in terminal.getvalue()


@pytest.mark.parametrize("verb", ["", *VERBS])
def test_help_fits_the_terminal(verb: str, terminal: Terminal) -> None:
    """Help of every verb has an example and is not wider than 100 columns."""
    assert run(*filter(None, (verb, "--help")), screen=terminal) == 0
    lines = terminal.getvalue().splitlines()
    assert max(map(len, lines)) <= 100
    assert any("Example" in line for line in lines)


def test_json_holds_every_field_of_a_finding(capsys: pytest.CaptureFixture[str]) -> None:
    """A script gets all that the table shows, and what could not be read at all."""
    assert run("check", "--json", SLIPS, ROOT / "nothing.csv") == 1
    data = json.loads(capsys.readouterr().out)
    assert set(data["findings"][0]) == {f.name for f in fields(Finding)}
    assert [entry["source"] for entry in data["unread"]] == [str(ROOT / "nothing.csv")]


@pytest.mark.parametrize(
    ("words", "expected"),
    [("logkit ch", "plain,check"), ("logkit check --s", "plain,--strict"), ("logkit check ex", "file,ex"),
     ("logkit draw x -o ou", "file,ou"), ("logkit check --setting ri", "plain,river"),
     ("logkit draw --style re", "plain,report")],
)  # fmt: skip
def test_the_shell_completes(words: str, expected: str) -> None:
    """Verbs, options, files and words with a fixed list are completed in bash."""
    environment = {
        **os.environ, "_LOGKIT_COMPLETE": "bash_complete", "COMP_WORDS": words,
        "COMP_CWORD": str(len(words.split()) - 1),
    }  # fmt: skip
    command = str(Path(sys.executable).with_name("logkit"))
    done = subprocess.run([command], capture_output=True, text=True, env=environment)
    assert expected in done.stdout.splitlines(), done.stderr


@pytest.mark.parametrize("verb", ["tidy", "flow", "export"])
@pytest.mark.parametrize("way", ["name", "link", "folder"])
def test_a_log_is_not_written_over(
    verb: str, way: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """The field table stays when the output is the table itself, by any name."""
    table = tmp_path / "logs" / "a.csv"
    table.parent.mkdir()
    table.write_text(TABLE, "utf-8")
    target, source = table, table
    if way == "link":
        target = tmp_path / "link.csv"
        target.symlink_to(table)
    elif way == "folder" and verb != "tidy":
        source = table.parent
    assert run(verb, source, "-o", target) == 2
    assert table.read_text("utf-8") == TABLE
    assert "another file than the log" in capsys.readouterr().err


@pytest.mark.parametrize("verb", ["tidy", "draw", "flow", "report"])
def test_a_folder_named_like_the_output_is_said(
    verb: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """A folder is not replaced by a file, and nothing is left beside it."""
    (tmp_path / "a.csv").write_text(TABLE, "utf-8")
    ending = {"tidy": "csv", "draw": "svg", "flow": "csv", "report": "html"}[verb]
    target = tmp_path / f"out.{ending}"
    target.mkdir()
    assert run(verb, tmp_path / "a.csv", "-o", target) == 1
    assert "it is a folder" in capsys.readouterr().err
    assert sorted(p.name for p in tmp_path.iterdir()) == sorted(["a.csv", target.name])


@pytest.mark.skipif(
    os.name != "posix" or os.geteuid() != 0 or not shutil.which("setpriv"), reason="drops the rights of root"
)
def test_without_rights_the_reason_is_said(tmp_path: Path) -> None:
    """A folder that may not be written and a file that may not be read give sentences and status 1."""
    table = tmp_path / "a.csv"
    table.write_text(TABLE, "utf-8")
    shut = tmp_path / "shut"
    shut.mkdir(mode=0o700)
    (shut / "b.csv").write_text(TABLE, "utf-8")
    tmp_path.chmod(0o555)
    for parent in list(tmp_path.parents)[:2]:
        parent.chmod(0o755)
    nobody = ["setpriv", "--reuid=65534", "--regid=65534", "--clear-groups"]
    command = [*nobody, str(Path(sys.executable).with_name("logkit"))]
    for arguments in (("tidy", table, "-o", tmp_path / "x.csv"), ("check", shut / "b.csv")):
        done = subprocess.run([*command, *map(str, arguments)], capture_output=True, text=True)
        assert done.returncode == 1, done.stderr
        assert "ermission" in done.stderr
        assert "Traceback" not in done.stderr
        assert "Free some space" not in done.stderr
    assert sorted(p.name for p in tmp_path.iterdir()) == ["a.csv", "shut"]
