"""Lint, format and types are part of done: the same commands a contributor runs by hand."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]

COMMANDS = {
    "lint": ["ruff", "check", "."],
    "format": ["ruff", "format", "--check", "."],
    "types": ["mypy"],
}


@pytest.mark.parametrize("command", COMMANDS.values(), ids=COMMANDS)
def test_the_tree_passes(command: list[str]) -> None:
    """Lint, format and type checks find nothing in the whole tree."""
    run = subprocess.run([sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True)
    assert run.returncode == 0, run.stdout + run.stderr
