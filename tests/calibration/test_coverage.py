"""The ranges hold the measured velocities, where the measured rivers are at hand."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest

HERE = Path(__file__).parent


def load(name: str) -> ModuleType:
    """A script of this folder as a module of another name, so that nothing installed is shadowed."""
    sys.path.insert(0, str(HERE))
    try:
        spec = importlib.util.spec_from_file_location(f"calibration_{name}", HERE / f"{name}.py")
        assert spec is not None
        assert spec.loader is not None
        module = importlib.util.module_from_spec(spec)
        sys.modules[spec.name] = module
        spec.loader.exec_module(module)
    finally:
        sys.path.remove(str(HERE))
    return module


RIVERS = load("rivers")
needs_data = pytest.mark.skipif(not RIVERS.DATA.exists(), reason="the measured rivers are not at hand")


@needs_data
def test_ranges_hold_the_measured_velocities() -> None:
    """Coverage, width and middle of the three stated cases are what they should be."""
    coverage = load("coverage")
    rows = {row.key: row for row in coverage.table(RIVERS.read_rivers())}
    with_depth, without, moved = (rows[k] for k in ("cross_bedded_with_depth", "cross_bedded", "moved"))
    assert 0.75 <= with_depth.coverage <= 0.86
    assert with_depth.width <= 3.2
    assert abs(with_depth.bias - 1) <= 0.15
    assert 0.72 <= without.coverage <= 0.85
    assert without.width <= 3.8
    assert moved.coverage >= 0.80
    assert moved.width <= 5.5


@needs_data
def test_naive_readings_do_worse() -> None:
    """The band between the classical lines holds next to none; a constant answer needs a wider range."""
    coverage = load("coverage")
    rivers = RIVERS.read_rivers()
    band, constant = coverage.naive_rows(rivers)
    engine = coverage.engine_row("cross_bedded_with_depth", rivers)
    assert band.coverage < 0.1
    assert constant.width > 1.2 * engine.width


def test_without_the_data_the_scripts_say_so(tmp_path: Path, monkeypatch: pytest.MonkeyPatch,
                                             capsys: pytest.CaptureFixture[str]) -> None:  # fmt: skip
    """A clone without the rivers gets a sentence and exit code 1, no half-written file."""
    monkeypatch.setattr(RIVERS, "DATA", tmp_path / "none.csv")
    with pytest.raises(SystemExit) as stopped:
        RIVERS.read_rivers()
    assert stopped.value.code == 1
    assert "does not exist. Nothing was done." in capsys.readouterr().err
