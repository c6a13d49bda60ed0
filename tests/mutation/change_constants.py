"""Changes every numeric constant of the hydraulics formulas by ten per cent, one at a time, and counts who notices.

Run it as a script. Each changed module is compiled and loaded in this process beside its unchanged siblings.
Three groups of tests are asked in turn: values from outside (papers, standards, libraries) with the test of
dimensions; the printed equations, tables and ranges, written down a second time; our own earlier results.
Constants that only set the fineness of a calculation are left out and listed by reason.
"""

from __future__ import annotations

import argparse
import ast
import copy
import importlib
import importlib.abc
import importlib.machinery
import importlib.util
import sys
import time
import warnings
from collections import Counter
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from types import CodeType, ModuleType

import numpy as np

TESTS = Path(__file__).resolve().parents[1]
for folder in ("published", "hydraulics"):
    sys.path.insert(0, str(TESTS / folder))

import conftest  # noqa: E402, F401  (steady examples)
import libraries  # noqa: E402
import printed  # noqa: E402
import sampling  # noqa: E402

from logkit.hydraulics.checks import outside_checks, read_checks  # noqa: E402
from logkit.registry import FAMILIES, FORMULAS, assess  # noqa: E402

PACKAGE = "logkit.hydraulics"
FOLDER = TESTS.parent / "logkit" / "hydraulics"
MACHINERY = {"__init__", "checks", "sources"}
FINENESS_CALLS = ("linspace", "geomspace", "range")
FINENESS_VALUES = {1e-12, 1e-10, 1e-9, 1e-300, 5e-324}


@dataclass(frozen=True)
class Site:
    """A constant in a module: where it is and what it is worth."""

    module: str
    line: int
    column: int
    value: float
    text: str


class Served(importlib.abc.MetaPathFinder, importlib.abc.Loader):
    """Loads the hydraulics modules from code held in memory."""

    def __init__(self, codes: dict[str, CodeType]) -> None:
        self.codes = codes

    def find_spec(
        self, name: str, path: object, target: object = None
    ) -> importlib.machinery.ModuleSpec | None:
        if name not in self.codes:
            return None
        is_package = name == PACKAGE
        spec = importlib.machinery.ModuleSpec(name, self, is_package=is_package)
        if is_package:
            spec.submodule_search_locations = [str(FOLDER)]
        return spec

    def exec_module(self, module: ModuleType) -> None:
        exec(self.codes[module.__name__], module.__dict__)


def sites_of(module: str, tree: ast.Module, left_out: Counter[str]) -> Iterator[Site]:
    """Every constant of a module that carries physics or statistics."""
    skipped: set[int] = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Subscript):
            skipped |= {id(n) for n in ast.walk(node.slice)}
        if isinstance(node, ast.keyword) and node.arg in ("axis", "dimension"):
            skipped |= {id(n) for n in ast.walk(node.value)}
        if isinstance(node, ast.Call):
            name = getattr(node.func, "attr", getattr(node.func, "id", ""))
            if name in FINENESS_CALLS:
                inner = [n for a in node.args for n in ast.walk(a) if isinstance(n, ast.Constant)]
                left_out["ends and number of steps of a table or grid"] += len(inner)
                skipped |= {id(n) for n in inner}
        if isinstance(node, ast.arguments):
            for argument, default in zip(reversed(node.args), reversed(node.defaults), strict=False):
                if argument.arg == "periods":
                    left_out["ends and number of steps of a table or grid"] += 1
                    skipped.add(id(default))
    for node in ast.walk(tree):
        if not isinstance(node, ast.Constant) or id(node) in skipped or isinstance(node.value, bool):
            continue
        if not isinstance(node.value, int | float) or node.value == 0:
            continue
        if node.value in FINENESS_VALUES:
            left_out["tolerance of a solution"] += 1
            continue
        yield Site(module, node.lineno, node.col_offset, float(node.value), repr(node.value))


def changed(tree: ast.Module, site: Site, factor: float) -> ast.Module:
    """The module with one constant changed."""
    result = copy.deepcopy(tree)
    for node in ast.walk(result):
        if (
            isinstance(node, ast.Constant)
            and (node.lineno, node.col_offset) == (site.line, site.column)
            and isinstance(node.value, int | float)
        ):
            node.value = node.value * factor
    return result


def forget() -> None:
    """Drop the loaded hydraulics modules and their formulas."""
    for name in [n for n in sys.modules if n == PACKAGE or n.startswith(PACKAGE + ".")]:
        del sys.modules[name]
    for id in [i for i, r in FORMULAS._items.items() if r.function.__module__.startswith(PACKAGE)]:
        del FORMULAS._items[id]
    FORMULAS._families.clear()


def load_families() -> None:
    """Register the hydraulics formulas anew."""
    for modules in FAMILIES.values():
        for module in modules:
            if module.startswith(PACKAGE):
                importlib.import_module(module)
    FORMULAS._families.update(FAMILIES)


def _value(formula: str, inputs: dict[str, object]) -> float:
    return float(assess(formula, **inputs).value)


def killers(hydraulic: set[str]) -> list[tuple[str, Callable[[], Iterator[bool]]]]:
    """The groups of tests, each as a function that yields whether one test after another holds."""
    outside = [c for c in outside_checks() if c.formula in hydraulic]
    golden = read_checks(TESTS / "golden" / "handbook_computed.toml")
    golden = tuple(c for c in golden if c.formula in hydraulic)
    grids, equations = libraries.load(), printed.load()
    homogeneous = [r.id for r in sampling.dimensional_records() if r.id in hydraulic]

    def from_outside() -> Iterator[bool]:
        yield from (check.accepts(_value(check.formula, check.inputs)) for check in outside)
        yield from (grid.met() for grid in grids)
        yield from (sampling.scaling_error(FORMULAS[id]) < 1e-9 for id in homogeneous)

    def from_print() -> Iterator[bool]:
        yield from (case.met() for case in equations)
        yield from (holds for _, holds in printed.ranges())
        yield from (holds for _, holds in printed.constants())

    def from_before() -> Iterator[bool]:
        yield from (check.accepts(_value(check.formula, check.inputs)) for check in golden)

    def from_laws() -> Iterator[bool]:
        yield from laws()

    return [
        ("outside values and scaling", from_outside),
        ("printed equations, tables and ranges", from_print),
        ("own earlier results", from_before),
        ("laws", from_laws),
    ]


def laws() -> Iterator[bool]:
    """The tests of laws that need no parameters, read anew so that they see the changed modules."""
    spec = importlib.util.spec_from_file_location("laws_again", TESTS / "hydraulics" / "test_laws.py")
    assert spec
    assert spec.loader
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    for name, test in vars(module).items():
        if name.startswith("test_") and not getattr(test, "pytestmark", None):
            test()  # raises where the law is broken
            yield True


def noticed(tests: Callable[[], Iterator[bool]]) -> bool:
    """Whether any test of a group fails or breaks."""
    with warnings.catch_warnings(), np.errstate(all="ignore"):
        warnings.simplefilter("ignore")
        try:
            return not all(tests())
        except Exception:
            return True


def main() -> None:
    """Change, count, print the survivors."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--module", help="only this module, for example settling")
    options = parser.parse_args()
    trees = {path.stem: ast.parse(path.read_text(encoding="utf-8")) for path in sorted(FOLDER.glob("*.py"))}
    names = {stem: PACKAGE if stem == "__init__" else f"{PACKAGE}.{stem}" for stem in trees}
    plain = {names[stem]: compile(tree, f"{stem}.py", "exec") for stem, tree in trees.items()}
    left_out: Counter[str] = Counter()
    sites = [
        site
        for stem, tree in trees.items()
        if stem not in MACHINERY and options.module in (None, stem)
        for site in sites_of(stem, tree, left_out)
    ]
    groups = killers({r.id for r in sampling.hydraulic_records()})
    served = Served(plain)
    sys.meta_path.insert(0, served)
    forget()
    load_families()
    for name, tests in groups:
        if noticed(tests):
            raise SystemExit(f"{name}: a test fails on the unchanged code; nothing can be measured.")
    begin, counts, survivors = time.perf_counter(), Counter(), []
    for site in sites:
        for factor in (0.9, 1.1):
            code = compile(changed(trees[site.module], site, factor), f"{site.module}.py", "exec")
            served.codes = plain | {names[site.module]: code}
            forget()
            try:
                load_families()
            except Exception:
                counts["does not load"] += 1
                continue
            by = next((name for name, tests in groups if noticed(tests)), None)
            counts[by or "nobody"] += 1
            if by not in [name for name, _ in groups[:2]]:
                survivors.append((site, factor, by))
    report(sites, counts, survivors, left_out, [name for name, _ in groups], time.perf_counter() - begin)


def report(
    sites: list[Site],
    counts: Counter[str],
    survivors: list[tuple[Site, float, str | None]],
    left_out: Counter[str],
    groups: list[str],
    seconds: float,
) -> None:
    """Print what was found."""
    total = 2 * len(sites)
    print(f"{len(sites)} constants, {total} changes of ten per cent, {seconds:.0f} s")
    for reason, number in left_out.items():
        print(f"  left out: {number} constants ({reason})")
    known = counts["does not load"]
    for name in groups:
        known += counts[name]
        print(
            f"{100 * known / total:6.1f} %  noticed by {name}"
            + (" or those above" if name != groups[0] else "")
        )
    print("Not noticed by outside, scaling or printed tests:")
    for site, factor, by in survivors:
        print(f"  {site.module}.py:{site.line}:{site.column} {site.text} x {factor}  ({by or 'nobody'})")


if __name__ == "__main__":
    main()
