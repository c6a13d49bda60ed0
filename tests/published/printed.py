"""Reads the printed equations and tables and holds the formulas against them; used by tests and mutations."""

from __future__ import annotations

import inspect
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from importlib import import_module
from pathlib import Path
from typing import Any

import numpy as np

from logkit.registry import FORMULAS, assess
from logkit.units import split_suffix

FILE = Path(__file__).with_name("printed_equations.toml")
NAMES = {
    name: getattr(np, name)
    for name in ("log", "log10", "exp", "sin", "tan", "tanh", "radians", "pi", "minimum", "nan")
}


@dataclass(frozen=True)
class Printed:
    """A formula's inputs and the value that the printed equation gives for them."""

    id: str
    inputs: dict[str, Any]
    expected: Any
    rel_tol: float
    source: str

    def difference(self) -> float:
        """Largest relative difference of the formula from the print; infinite for a wrong word or shape."""
        value = assess(self.id, **self.inputs).value
        if isinstance(self.expected, str):
            return 0.0 if value == self.expected else np.inf
        expected, value = np.asarray(self.expected, dtype=float), np.asarray(value, dtype=float)
        if np.broadcast_shapes(expected.shape, value.shape) != value.shape:
            return np.inf
        scale = np.where(expected == 0, 1, np.abs(expected))
        difference = np.where(np.isnan(expected) & np.isnan(value), 0, np.abs(value - expected) / scale)
        return float(np.max(np.where(np.isnan(difference), np.inf, difference)))

    def met(self) -> bool:
        """Whether the formula gives what is printed."""
        return self.difference() <= self.rel_tol


def load() -> list[Printed]:
    """Every printed equation and table row."""
    data = tomllib.loads(FILE.read_text(encoding="utf-8"))
    result = [
        Printed(e["id"], e["in"], _evaluated(e), e.get("rel_tol", 1e-9), e["source"])
        for e in data["equation"]
    ]
    for table in data["table"]:
        result += [Printed(table["id"], inputs, value, 1e-12, "table") for inputs, value in table["rows"]]
    return result


def _evaluated(equation: dict[str, Any]) -> Any:
    names: dict[str, Any] = dict(NAMES)
    for name, value in equation["in"].items():
        names[name] = np.asarray(value, dtype=float) if isinstance(value, list) else value
    unknown = equation.get("unknown")
    if unknown:
        names[unknown] = 0.3
    for name, expression in equation.get("with", {}).items():
        names[name] = eval(expression, {"__builtins__": {}}, names)
    value = eval(equation["is"], {"__builtins__": {}}, names)
    for _ in range(200 if unknown else 0):
        names[unknown] = value
        value = eval(equation["is"], {"__builtins__": {}}, names)
    return value


def ranges() -> Iterator[tuple[str, bool]]:
    """Whether each tested range is the one written down, and is measured on what it says."""
    data = tomllib.loads(FILE.read_text(encoding="utf-8"))
    for id, texts in data["limits"].items():
        yield id, [str(limit) for limit in FORMULAS[id].limits] == texts
        for limit in FORMULAS[id].limits:
            stem, unit = split_suffix(limit.of)
            for name in inspect.signature(FORMULAS[id].function).parameters:
                if split_suffix(name)[0] == stem:
                    measured = limit.measure(**{name: unit.to_si(3.0) if unit else 3.0})
                    yield f"{id} {limit.of}", bool(np.isclose(measured, 3.0, rtol=1e-9))
    for entry in data["measure"]:
        limit = next(limit for limit in FORMULAS[entry["id"]].limits if limit.of == entry["of"])
        given = {"g_m_s2": 9.81} | entry["in"]
        wanted = eval(entry["is"], {"__builtins__": {}}, NAMES)
        names = inspect.signature(limit.measure).parameters
        if not any(p.kind is p.VAR_KEYWORD for p in names.values()) or limit.of in ("ws D/nu", "D*", "Dd"):
            wanted_by_formula = inspect.signature(FORMULAS[entry["id"]].function).parameters
            given = {n: v for n, v in given.items() if n in wanted_by_formula}
        yield f"{entry['id']} {limit.of}", bool(np.isclose(limit.measure(**given), wanted, rtol=1e-9))


def constants() -> Iterator[tuple[str, bool]]:
    """Whether the constants that a module offers by name are those written down."""
    for name, value in tomllib.loads(FILE.read_text(encoding="utf-8"))["constants"].items():
        module, constant = name.split(".")
        found = getattr(import_module(f"logkit.hydraulics.{module}"), constant)
        if isinstance(value, dict):
            yield name, {k: list(v) for k, v in found.items()} == value
        else:
            yield name, bool(np.allclose(found, value, rtol=1e-12))
