"""The hand-over set: tables, LAS that other readers read, JSON, Parquet; whole or not at all."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from pathlib import Path

import lasio
import numpy as np
import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from synthetic_wells import bed, section

from logkit.compare import export, las_text
from logkit.compare.codes import codes_table, facies_number, facies_numbers
from logkit.compare.intervals import INTERVAL_TYPES
from logkit.compare.las import ascii_text
from logkit.errors import ArgumentError, LogkitError, UnknownNameError
from logkit.model import Bed, CurrentReading, Finding, Header, Log
from logkit.vocabulary import vocabulary


def well(**header: object) -> Log:
    """Three beds and lost core, downward from 1000 m."""
    gap = Bed("gap 1", -1003.0, -1002.0, kind="gap", gap_reason="lost_core")
    beds = (
        bed("3", -1004.05, 1.05, 3.0, "plane_lamination"),
        gap,
        bed("2", -1002.0, 0.04, 2.0, "massive"),
        bed("1", -1001.96, 1.96, 1.0, "trough_cross_bedding", marker="ash 2", notes="=1+1, <b>"),
    )
    return Log(Header(section="Well µ-1", direction="down", unit="m", location="Ångö: east", **header), beds)  # type: ignore[arg-type]


def read_las(path: Path) -> lasio.LASFile:
    """Read with an independent reader that is told not to forgive."""
    return lasio.read(str(path), ignore_header_errors=False)


def test_las_reads_back_with_equal_values(tmp_path: Path) -> None:
    """Every sample of the file is the value of the bed at that depth; gaps are null."""
    log = well()
    (path,) = export(log, tmp_path / "a.las")
    las = read_las(path)
    depths = las.index
    assert depths[0] == 1000.0
    assert depths[-1] == 1004.0
    assert np.allclose(np.diff(depths), 0.1)
    for depth, facies, phi in zip(depths, las["FACIES"], las["GRAIN_PHI"], strict=True):
        here = next(
            b for b in log.beds if b.base_m < -depth <= b.top_m or (b is log.beds[0] and -depth == b.base_m)
        )
        if here.is_gap:
            assert math.isnan(facies)
            assert math.isnan(phi)
        else:
            assert facies == facies_number(here)
            assert phi == pytest.approx(here.size.middle_phi, abs=5e-4)  # type: ignore[union-attr]


def test_las_keeps_to_the_standard(tmp_path: Path) -> None:
    """Required sections and items stand in order, all is ASCII, lines are short, the legend is there."""
    text = las_text(well())
    raw = text.encode("ascii")
    assert max(len(line) for line in raw.splitlines()) <= 256
    sections = [line[:2] for line in text.splitlines() if line.startswith("~")]
    assert sections == ["~V", "~W", "~C", "~P", "~O", "~A"]
    path = tmp_path / "a.las"
    path.write_bytes(raw)
    las = read_las(path)
    for item in ("STRT", "STOP", "STEP", "NULL", "COMP", "WELL", "FLD", "LOC", "PROV", "SRVC", "DATE", "UWI"):
        assert item in las.well
    assert las.version["VERS"].value == 2.0
    assert las.well["WELL"].value == "Well u-1"
    assert las.well["LOC"].value == "Ango- east"
    assert las.curves[0].mnemonic == "DEPT"
    legend = {p.mnemonic: p.descr for p in las.params}
    assert legend[f"F{facies_number(well().beds[3])}"] == "FACIES sandstone, trough cross-bedding"
    assert "1 bed thin enough to fall between two steps of 0.1 m" in " ".join(las.other.split())
    assert "not design floods" in " ".join(las.other.split())


def test_las_of_an_outcrop_runs_upward_under_index(tmp_path: Path) -> None:
    """Heights stand under INDEX and grow."""
    (path,) = export(section(1, 20), tmp_path / "a.las", step_m=0.25)
    las = read_las(path)
    assert las.curves[0].mnemonic == "INDEX"
    assert las.well["STEP"].value == 0.25
    assert (np.diff(las.index) > 0).all()


def test_las_of_a_well_in_feet_stays_in_feet(tmp_path: Path) -> None:
    """Depths and step of a log in feet are feet."""
    beds = (
        bed("2", -1010 * 0.3048, 5 * 0.3048, 2, "massive"),
        bed("1", -1005 * 0.3048, 5 * 0.3048, 1, "massive"),
    )
    log = Log(Header(section="F", direction="down", unit="ft"), beds)
    (path,) = export(log, tmp_path / "a.las")
    las = read_las(path)
    assert las.well["STRT"].unit == "FT"
    assert (las.index[0], las.index[-1]) == (1000.0, 1010.0)
    assert las.well["STEP"].value == 0.25


@given(st.text(max_size=80))
def test_any_text_becomes_one_ascii_line(text: str) -> None:
    """No character can break a header line."""
    plain = ascii_text(text)
    assert plain.isascii()
    assert plain.isprintable() or plain == ""


@given(st.integers(0, 10_000), st.sampled_from([0.05, 0.1, 0.125, 0.25, 0.5]))
@settings(max_examples=25, deadline=None)
def test_las_index_is_whole_steps(seed: int, step: float) -> None:
    """STRT and STOP are whole multiples of STEP, and the number of rows fits them."""
    text = las_text(section(seed, 15), step_m=step)
    las = lasio.read(text, ignore_header_errors=False)
    start, stop = las.well["STRT"].value, las.well["STOP"].value
    assert start / step == pytest.approx(round(start / step), abs=1e-6)
    assert len(las.index) == round((stop - start) / step) + 1


def test_the_whole_set_is_written(tmp_path: Path) -> None:
    """Every file of the set is there, tables agree with the log, limits are stated."""
    log = well(kb_elevation_m=30.0)
    other = section(4, 20, name="B")
    written = export([log, other], tmp_path / "set", datum="ash 2")
    names = {p.relative_to(tmp_path / "set").as_posix() for p in written}
    assert names >= {
        "intervals.csv", "intervals.parquet", "tops.csv", "points.csv", "depth_shifts.csv", "codes.csv",
        "findings.csv", "limits.txt", "las/Well_µ-1.las", "las/B.las", "json/Well_µ-1.json", "json/B.json",
    }  # fmt: skip
    assert not list((tmp_path / "set").rglob("*.tmp"))
    table = pd.read_csv(tmp_path / "set" / "intervals.csv")
    assert list(table.columns) == list(INTERVAL_TYPES)
    assert len(table) == len(log.beds) + len(other.beds)
    assert table.kind.tolist().count("gap") == 1
    assert table[table.kind == "gap"].grain_middle_phi.isna().all()
    tops = pd.read_csv(tmp_path / "set" / "tops.csv")
    assert tops.marker.tolist() == ["ash 2"]
    assert tops.base_elevation_m[0] == pytest.approx(30 - 1001.96)
    assert tops.base_above_datum_m[0] == 0.0
    assert "not design floods" in (tmp_path / "set" / "limits.txt").read_text().replace("\n", " ")


def test_parquet_and_csv_hold_the_same(tmp_path: Path) -> None:
    """The two forms of the interval table agree in every number."""
    logs = [well(), section(4, 20, name="B")]
    export(logs, tmp_path / "a.csv")
    export(logs, tmp_path / "a.parquet")
    one, two = pd.read_csv(tmp_path / "a.csv"), pd.read_parquet(tmp_path / "a.parquet")
    for column in ("base_m", "top_m", "grain_middle_phi", "facies"):
        assert np.allclose(one[column].astype(float), two[column].astype(float), equal_nan=True)


def test_text_stays_text_in_a_spreadsheet(tmp_path: Path) -> None:
    """A note that begins like a formula gets an apostrophe; JSON keeps it as written."""
    export(well(), tmp_path / "set")
    table = pd.read_csv(tmp_path / "set" / "intervals.csv")
    assert "'=1+1, <b>" in table.notes.tolist()
    record = json.loads((tmp_path / "set" / "json" / "Well_µ-1.json").read_text())
    assert record["beds"][3]["notes"] == "=1+1, <b>"


def test_json_holds_no_number_that_is_none(tmp_path: Path) -> None:
    """NaN and infinity become null, so that every reader can read it."""
    log = section(1, 5)
    first = replace(log.beds[0], ripple_height_m=math.nan)
    (path,) = export(replace(log, beds=(first, *log.beds[1:])), tmp_path / "a.json")
    record = json.loads(path.read_text(), parse_constant=lambda text: pytest.fail(f"{text} in JSON"))
    assert record[0]["beds"][0]["ripple_height_m"] is None
    assert "ripple_height_m" not in record[0]["beds"][1]


def test_points_hold_readings_samples_and_photos(tmp_path: Path) -> None:
    """Palaeocurrents stand as written beside samples and photos."""
    log = well()
    reading = CurrentReading("cross_bedding", "plane", "direction", 95.0, 22.0, "22/095")
    top = replace(log.beds[-1], currents=(reading,), samples=("S1",), photos=("7", "8"))
    export(replace(log, beds=(*log.beds[:-1], top)), tmp_path / "set")
    points = pd.read_csv(tmp_path / "set" / "points.csv")
    assert points.kind.tolist() == ["palaeocurrent", "sample", "photo", "photo"]
    assert points.azimuth_deg[0] == 95.0
    assert points.depth[0] == pytest.approx(1000.98)


def test_open_questions_are_flagged(tmp_path: Path) -> None:
    """A bed with a question carries a flag, and the finding is listed."""
    log = replace(well(), findings=(Finding("question", "which one", row=4, bed="2"),))
    export(log, tmp_path / "set")
    table = pd.read_csv(tmp_path / "set" / "intervals.csv").set_index("bed")
    assert table["flags"]["2"] == "open questions: 1"
    assert pd.read_csv(tmp_path / "set" / "findings.csv").message.tolist() == ["which one"]


def test_two_wells_of_a_name_do_not_overwrite_each_other(tmp_path: Path) -> None:
    """File names are made unique and safe."""
    logs = [section(1, 10, name="a/b"), section(2, 10, name="a b")]
    written = export(logs, tmp_path / "set")
    assert {p.name for p in written if p.suffix == ".las"} == {"a_b.las", "a_b_2.las"}


def test_wrong_wishes_are_named(tmp_path: Path) -> None:
    """No log, an unknown ending, two wells in one LAS file, an unknown marker, a step of zero."""
    log = section(1, 10)
    with pytest.raises(ArgumentError, match="logs is 'an empty list'"):
        export([], tmp_path / "set")
    with pytest.raises(
        ArgumentError, match=r"a folder, or a file that ends in \.csv, \.las, \.json, \.parquet"
    ):
        export(log, tmp_path / "a.doc")
    with pytest.raises(ArgumentError, match="LAS holds one well"):
        export([log, section(2, 5, name="B")], tmp_path / "a.las")
    with pytest.raises(UnknownNameError, match="marker or datum"):
        export(log, tmp_path / "set", datum="ash")
    with pytest.raises(ArgumentError, match="step_m is 0"):
        export(log, tmp_path / "a.las", step_m=0)
    with pytest.raises(LogkitError, match="thinner than two steps"):
        export(Log(Header(), (bed("1", 0, 0.05, 2, "massive"),)), tmp_path / "a.las")
    assert list(tmp_path.iterdir()) == []


def test_a_failed_set_leaves_the_old_one(tmp_path: Path) -> None:
    """An error half-way leaves the files of an earlier set and no temporary ones."""
    folder = tmp_path / "set"
    export(section(1, 10), folder)
    before = (folder / "intervals.csv").read_bytes()
    with pytest.raises(ArgumentError):
        export(section(2, 12), folder, step_m=-1)
    assert (folder / "intervals.csv").read_bytes() == before
    assert not list(folder.glob(".*"))


def test_a_folder_that_cannot_be_made_is_told(tmp_path: Path) -> None:
    """A file where the folder should be ends in an error with a remedy."""
    (tmp_path / "file").write_text("x")
    with pytest.raises(LogkitError, match=r"part of the path is a file, not a folder\. Correct the path\."):
        export(section(1, 10), tmp_path / "file" / "set")


def test_every_term_has_a_number_of_its_own() -> None:
    """Facies numbers cover the vocabulary and never repeat."""
    numbers = facies_numbers()
    for kind in ("lithologies", "structures"):
        assert set(vocabulary(kind)) <= set(numbers[kind])
    assert len(codes_table()) == sum(len(vocabulary(kind)) for kind in numbers)
