"""The build script notices a committed drawing that differs from what the code draws."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest

import logkit
from logkit.tables import read_log

EXAMPLES = Path(__file__).parents[2] / "examples"


@pytest.fixture(scope="module")
def build() -> ModuleType:
    """The script as a module."""
    spec = importlib.util.spec_from_file_location("examples_build", EXAMPLES / "build.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    return module


def test_check_fails_on_a_changed_or_missing_drawing(
    build: ModuleType, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """The same drawing passes; one changed byte and a missing file are counted and named."""
    log = read_log(EXAMPLES / "river" / "tarrow_bend.csv")

    def draw() -> object:
        return logkit.draw_column(log, from_m=0, to_m=2)

    good, changed, missing = (tmp_path / f"{n}.svg" for n in ("good", "changed", "missing"))
    draw().save(good)  # type: ignore[attr-defined]
    changed.write_text(good.read_text(encoding="utf-8").replace("</svg>", " </svg>"), encoding="utf-8")
    monkeypatch.setattr(build, "HERE", tmp_path)
    monkeypatch.setattr(
        build, "pictures", lambda only: [build.Picture(p, draw) for p in (good, changed, missing)]
    )
    assert build.check("") == 2
    said = capsys.readouterr().out
    assert "different  changed.svg" in said
    assert "missing    missing.svg" in said


def test_the_committed_pictures_are_those_drawn_today(
    build: ModuleType, capsys: pytest.CaptureFixture[str]
) -> None:
    """Every svg under examples/ is what the code draws now, none is missing and none left over."""
    assert build.check("") == 0, capsys.readouterr().out
