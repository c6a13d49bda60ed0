"""The cut of the house: imports go only downward, siblings leave each other alone."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

PACKAGE = Path(__file__).resolve().parents[1] / "logkit"

LAYERS = [
    {"errors", "units", "references", "registry", "resources", "files", "words"},
    {"model"},
    {"vocabulary", "grains"},
    {"hydraulics", "tables", "trends"},
    {"flow"},
    {"drawing"},
    {"compare"},
    {"report"},
    {"pipeline"},
    {"cli"},
]
RANK = {name: rank for rank, names in enumerate(LAYERS) for name in names}

MODULES = sorted(p for p in PACKAGE.rglob("*.py") if p != PACKAGE / "__init__.py")


def part_of(path: Path) -> str:
    """First folder or module name below the package."""
    return path.relative_to(PACKAGE).parts[0].removesuffix(".py")


def imported_parts(path: Path) -> set[str]:
    """Parts of logkit that a module imports, also inside functions; type-checking imports do not count."""
    parts: set[str] = set()

    def visit(node: ast.AST) -> None:
        if isinstance(node, ast.If) and "TYPE_CHECKING" in ast.dump(node.test):
            return
        if isinstance(node, ast.ImportFrom) and node.module:
            names = [node.module]
            if node.module == "logkit":
                names = [f"logkit.{alias.name}" for alias in node.names]
            parts.update(n.split(".")[1] for n in names if n.startswith("logkit."))
        elif isinstance(node, ast.Import):
            parts.update(a.name.split(".")[1] for a in node.names if a.name.startswith("logkit."))
        for child in ast.iter_child_nodes(node):
            visit(child)

    visit(ast.parse(path.read_text(encoding="utf-8")))
    return parts


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_imports_go_only_downward(path: Path) -> None:
    """A module imports its own part and lower layers, never a sibling or anything above."""
    own = part_of(path)
    assert own in RANK, f"{own} has no layer"
    siblings_ok = RANK[own] == 0  # the first layer is flat modules that serve each other
    wrong = [
        part
        for part in imported_parts(path)
        if part != own
        and part in RANK
        and (RANK[part] > RANK[own] or (RANK[part] == RANK[own] and not siblings_ok))
    ]
    assert not wrong, f"{path.name} reaches up or sideways to {wrong}"


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_modules_stay_small_and_say_what_they_hold(path: Path) -> None:
    """No module passes 500 lines, and each opens with a paragraph on what belongs there."""
    text = path.read_text(encoding="utf-8")
    assert len(text.splitlines()) <= 500
    assert ast.get_docstring(ast.parse(text)), f"{path} has no opening paragraph"


def test_the_first_import_is_light() -> None:
    """`import logkit` loads no heavy library."""
    import subprocess
    import sys

    heavy = ["pandas", "scipy", "matplotlib", "ruptures", "typst", "numpy", "svgwrite"]
    code = f"import sys, logkit; print([m for m in {heavy!r} if m in sys.modules])"
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert out.stdout.strip() == "[]"
