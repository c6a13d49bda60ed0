"""The reference list and what cites it: no key that is not known, no reference that nothing cites."""

from __future__ import annotations

import ast
import inspect
import re
from pathlib import Path

import pytest

from logkit.references import all_references
from logkit.registry import FORMULAS, Formula

PACKAGE = Path(__file__).resolve().parents[1] / "logkit"
LIST = PACKAGE / "data" / "references.toml"
KEY = re.compile(r"[a-z][a-z0-9]*(?:_[a-z0-9]+)+")
NO_WORK = {"ours", "definition"}


def keys_of(docstring: str) -> list[str]:
    """Keys in the References section of a docstring."""
    found = re.search(r"^References\n-+\n((?:.+\n?)+)", inspect.cleandoc(docstring), re.MULTILINE)
    return KEY.findall(found.group(1)) if found else []


def cited() -> list[tuple[str, str]]:
    """Place and key of every citation in a docstring."""
    places = []
    for path in sorted(PACKAGE.rglob("*.py")):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Module | ast.ClassDef | ast.FunctionDef):
                text = ast.get_docstring(node, clean=False) or ""
                places += [
                    (f"{path.relative_to(PACKAGE)}:{getattr(node, 'name', '')}", k) for k in keys_of(text)
                ]
    return places


def test_every_key_in_a_docstring_is_known() -> None:
    """A docstring cites works of the reference list only."""
    known = all_references()
    assert [(place, key) for place, key in cited() if key not in known] == []


@pytest.mark.parametrize("record", [r for _, r in FORMULAS.items()], ids=lambda r: r.id)
def test_source_of_a_formula_is_known(record: Formula) -> None:
    """A formula's record names a work of the reference list, or says that it is ours or a definition."""
    assert record.source in NO_WORK or record.source in all_references()


def test_every_reference_is_cited() -> None:
    """Nothing is in the list that no code, docstring or data file cites."""
    files = [p for p in PACKAGE.rglob("*") if p.suffix in {".py", ".toml"} and p != LIST]
    words = {word for p in files for word in KEY.findall(p.read_text(encoding="utf-8"))}
    assert sorted(set(all_references()) - words) == []


@pytest.mark.parametrize("key", all_references())
def test_reference_is_complete(key: str) -> None:
    """A reference has authors, a year of the printed age, a place, and says how it is known."""
    work = all_references()[key]
    assert work.authors
    assert work.where
    assert 1800 < work.year <= 2030
    assert work.status in {"seen", "secondary", "memory"}
