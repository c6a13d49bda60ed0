"""The examples: they read, and the workbook is made from its rows."""

from __future__ import annotations

import importlib.util
from pathlib import Path

import pytest
from openpyxl import load_workbook

from logkit.compare import compare_logs
from logkit.model import Log
from logkit.tables import read_log

EXAMPLES = Path(__file__).parents[2] / "examples"
INPUTS = sorted(
    p
    for p in EXAMPLES.glob("*/*")
    if p.suffix in (".csv", ".xlsx") and not p.with_suffix("").suffix and "slips" not in p.name
)


@pytest.fixture(scope="module")
def river() -> Log:
    """The river section."""
    return read_log(EXAMPLES / "river" / "tarrow_bend.csv")


@pytest.mark.parametrize("path", INPUTS, ids=lambda p: p.stem)
def test_every_example_reads_without_an_error_and_says_it_is_invented(path: Path) -> None:
    """Examples can be drawn, and none may be taken for a real place."""
    log = read_log(path)
    assert not log.count("error")
    assert len(log.real_beds) >= 40
    assert "invented" in " ".join((log.header.location, *(v for _, v in log.header.extra)))


def test_the_gaps_of_the_river_count_in_height_only(river: Log) -> None:
    """Three covered intervals of 1.4, 0.9 and 0.65 m, decimal comma and all."""
    gaps = [b for b in river.beds if b.is_gap]
    assert [round(b.thickness_m, 3) for b in gaps] == [1.4, 0.9, 0.65]


def test_in_bed_sizes_of_the_river_are_found(river: Log) -> None:
    """The companion file belongs to its beds."""
    assert [len(river.bed(name).sizes) for name in ("13", "29", "34", "43")] == [5, 4, 6, 4]


def test_the_turbidites_have_forty_rows_and_their_packet() -> None:
    """Forty numbered rows; the counted packet became twelve layers that are not measured."""
    log = read_log(EXAMPLES / "turbidites" / "skerry_point.csv")
    assert {b.name.split(".")[0] for b in log.real_beds} == {str(n) for n in range(1, 41)}
    assert sum(not b.measured for b in log.real_beds) == 12
    assert log.header.setting == "turbidity"


def test_the_cored_well_is_in_feet_downward() -> None:
    """120 rows, feet, top down, five runs with lost core, sizes from their sheet."""
    log = read_log(EXAMPLES / "well" / "kestrel_1.xlsx")
    assert len(log.beds) == 120
    assert log.header.direction == "down"
    assert log.beds[-1].depth_top == 6104.5
    assert log.top_m == pytest.approx(-6104.5 * 0.3048)
    assert sum(b.is_gap for b in log.beds) == 5
    assert len(log.bed("61").sizes) == 3


def test_the_workbook_is_what_its_rows_make(tmp_path: Path) -> None:
    """The committed workbook has the cells that the script writes today."""
    spec = importlib.util.spec_from_file_location("make_workbook", EXAMPLES / "well" / "make_workbook.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    new = load_workbook(module.write(tmp_path / "k.xlsx"))
    old = load_workbook(EXAMPLES / "well" / "kestrel_1.xlsx")
    for name in ("header", "beds", "sizes"):
        assert [[c.value for c in row] for row in new[name]] == [[c.value for c in row] for row in old[name]]
        assert sorted(map(str, new[name].merged_cells.ranges)) == sorted(
            map(str, old[name].merged_cells.ranges)
        )


def test_the_four_wells_share_their_markers() -> None:
    """Hung on the ash, one well has its datum in lost core, one is deviated, one has curves."""
    logs = [read_log(p) for p in INPUTS if p.parent.name == "wells"]
    found = compare_logs(logs, "ash 2", histories=[None] * 4, trends=[None] * 4)
    by_name = {p.name: p for p in found.placed}
    assert not by_name["Sandling-1"].datum_sure
    assert by_name["Plover-2"].factors[1] < 0.85
    assert [c.mnemonic for c in by_name["Teal-1"].curves] == ["GR", "RHOB"]
    assert {t.kind for t in found.ties} == {"time", "lithological"}
