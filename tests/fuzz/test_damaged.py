"""Damaged tables: every one gives a log or findings, never another exception and never half a file."""

from __future__ import annotations

import importlib.util
import math
import random
from pathlib import Path
from types import ModuleType

import pytest

from logkit.errors import LogErrors, LogkitError
from logkit.tables import read_log, read_logs

HERE = Path(__file__).parent
EXAMPLES = HERE.parents[1] / "examples"
SOURCES = (
    "river/tarrow_bend.csv", "river/tarrow_bend_slips.csv", "turbidites/skerry_point.csv", "well/kestrel_1.xlsx",
    "wells/plover_1.csv",
)  # fmt: skip
FAST, ALL = 200, 2000


def load_damage() -> ModuleType:
    """The module that damages files, from beside this test."""
    spec = importlib.util.spec_from_file_location("damage", HERE / "damage.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def bodies(tmp_path: Path) -> list[tuple[str, bytes]]:
    """The examples, a table that logkit wrote itself, and the twelve rows."""
    paths = [EXAMPLES / name for name in SOURCES] + sorted((HERE.parent / "tables/twelve_rows").glob("*.csv"))
    tidy = read_log(EXAMPLES / SOURCES[0]).write(tmp_path / "tidy.csv")
    return [(path.name, path.read_bytes()) for path in [*paths, tidy]]


def check_one(path: Path, folder: Path, write: bool) -> str:
    """Read a damaged file (and write what was read); anything but a log, findings or a logkit error fails."""
    try:
        logs = read_logs(path, on_errors="keep")
    except LogErrors as problem:
        return "findings" if problem.findings else "an error without findings"
    except LogkitError as problem:
        return "refused" if str(problem) else "an error without words"
    for log in logs:
        assert log.beds or log.findings
        for bed in log.beds:
            assert math.isfinite(bed.base_m)
            assert math.isfinite(bed.top_m)
            assert bed.base_m < bed.top_m
        assert all(str(finding) for finding in log.findings)
    first = next((log for log in logs if log.beds), None)
    if first is None or not write or len(first.beds) > 300:
        return "log"
    out = folder / "out.csv"
    first.write(out)
    again = read_log(out, on_errors="keep", section=first.header.section or None)
    assert len(again.beds) >= len(first.beds)
    for written in folder.glob("out.*"):
        written.unlink()
    return "log"


def run(count: int, seed: int, tmp_path: Path) -> dict[str, int]:
    """Damage and read `count` copies."""
    damage = load_damage()
    rng = random.Random(seed)
    sources = bodies(tmp_path)
    folder = tmp_path / "damaged"
    folder.mkdir()
    outcomes: dict[str, int] = {}
    for number in range(count):
        name, body = sources[number % len(sources)]
        path = folder / f"{number}{Path(name).suffix}"
        path.write_bytes(damage.damaged(body, rng))
        try:
            outcome = check_one(path, folder, write=number % 4 == 0)
        except Exception as problem:
            raise AssertionError(f"copy {number} of {name} with seed {seed}: {problem!r}") from problem
        outcomes[outcome] = outcomes.get(outcome, 0) + 1
        path.unlink()
    assert not list(folder.iterdir()), "something was left behind"
    assert set(outcomes) <= {"log", "findings", "refused"}
    return outcomes


def test_200_damaged_copies(tmp_path: Path) -> None:
    """Two hundred damaged copies give logs, findings or refusals; some of each, and no traceback."""
    outcomes = run(FAST, 20240514, tmp_path)
    assert sum(outcomes.values()) == FAST
    assert outcomes.get("log", 0) > FAST // 4


@pytest.mark.slow
def test_2000_damaged_copies(tmp_path: Path) -> None:
    """Two thousand damaged copies give logs, findings or refusals, and no traceback."""
    outcomes = run(ALL, 77, tmp_path)
    assert sum(outcomes.values()) == ALL
    print(outcomes)
