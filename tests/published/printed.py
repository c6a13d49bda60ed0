"""Reads the printed equations and tables and holds the formulas against them; used by tests and mutations."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from logkit.registry import assess

FILE = Path(__file__).with_name("printed_equations.toml")
NAMES = {
    name: getattr(np, name)
    for name in ("log", "log10", "exp", "sin", "tan", "tanh", "radians", "pi", "minimum")
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
        worst = float(np.max(np.abs(value - expected) / scale))
        return np.inf if np.isnan(worst) else worst

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
