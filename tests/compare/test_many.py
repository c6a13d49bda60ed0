"""Many wells in one go: progress, failures that stop nothing, the same files as one by one."""

from __future__ import annotations

from pathlib import Path

import pandas as pd
import pytest
from synthetic_wells import section

from logkit.compare import ManyWells, export, process_wells
from logkit.errors import ArgumentError
from logkit.tables import read_log


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """Three good tables and a bad one."""
    for number in range(3):
        section(number, 12, name=f"W{number}").write(tmp_path / f"w{number}.csv")
    (tmp_path / "w1b.csv").write_text("bed,thickness,grain\n1,abc,blorb\n")
    return tmp_path


@pytest.mark.parametrize("processes", [1, 2])
def test_one_bad_file_does_not_stop_the_others(folder: Path, processes: int) -> None:
    """Progress comes in order, the failure is told, the other wells are written."""
    kept = ManyWells()
    sources = sorted(folder.glob("*.csv"))
    steps = list(process_wells(sources, folder / "out", kept, processes=processes))
    assert [(Path(s.source).name, s.done, s.of) for s in steps] == [
        ("w0.csv", 1, 4), ("w1.csv", 2, 4), ("w1b.csv", 3, 4), ("w2.csv", 4, 4),
    ]  # fmt: skip
    assert [s.sections for s in steps] == [("W0",), ("W1",), (), ("W2",)]
    assert steps[2].problem.startswith("The log has")
    assert kept.summary()[0] == "3 wells written, 1 file could not be used."
    assert "w1b.csv" in kept.summary()[1]
    table = pd.read_csv(folder / "out" / "intervals.csv")
    assert table.section.value_counts().to_dict() == {"W0": 12, "W1": 12, "W2": 12}
    assert pd.read_csv(folder / "out" / "tables" / "wells.csv").section.tolist() == ["W0", "W1", "W2"]


def test_the_files_are_those_of_a_single_export(folder: Path) -> None:
    """Written well by well or all at once, the tables are the same bytes."""
    sources = [folder / f"w{n}.csv" for n in range(3)]
    list(process_wells(sources, folder / "many", processes=2, flow=False, trends=False))
    export([read_log(s) for s in sources], folder / "single")
    for name in ("intervals.csv", "tops.csv", "points.csv", "findings.csv", "las/W1.las", "json/W2.json"):
        assert (folder / "many" / name).read_bytes() == (folder / "single" / name).read_bytes()


def test_a_run_that_is_given_up_leaves_no_half_files(folder: Path) -> None:
    """A front that stops listening leaves neither tables nor temporary files."""
    steps = process_wells(sorted(folder.glob("w?.csv")), folder / "out", processes=1)
    next(steps)
    steps.close()
    assert not list((folder / "out").glob("*.csv"))
    assert not list((folder / "out").glob(".*"))


def test_nothing_to_do_is_an_error(tmp_path: Path) -> None:
    """An empty list and no process are named."""
    with pytest.raises(ArgumentError, match="sources is 'an empty list'"):
        list(process_wells([], tmp_path))
    with pytest.raises(ArgumentError, match="processes is 0"):
        list(process_wells(["a.csv"], tmp_path, processes=0))


def test_packages_are_looked_for_on_wish(folder: Path) -> None:
    """Grading is always there; packages only when asked for."""
    section(5, 60, "cycles", "P").write(folder / "p.csv")
    kept = ManyWells()
    list(process_wells([folder / "p.csv"], folder / "with", kept, packages=True))
    assert len(kept.tables()["packages"]) > 0
    kept = ManyWells()
    list(process_wells([folder / "p.csv"], folder / "without", kept))
    assert "packages" not in kept.tables()
    assert kept.tables()["grading"]["count"].sum() == 60
