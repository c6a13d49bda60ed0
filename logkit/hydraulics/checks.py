"""Outside values that formulas have to meet: reading them and holding a formula against them.

The values are data, shipped with the package; what they are compared with is in the registry. How the
result is shown is the business of `sources` and the command line.
"""

from __future__ import annotations

import tomllib
import warnings
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from typing import Any

from logkit.errors import DataFileError
from logkit.registry import assess
from logkit.resources import shipped

OUTSIDE_KINDS = ("published", "library", "common_practice")


@dataclass(frozen=True, slots=True)
class Check:
    """One value that a formula has to meet.

    Attributes
    ----------
    formula : id
    inputs : public inputs
    expected, unit : the value and its unit
    kind : "published", "library", "common_practice"; "computed" for an own earlier result
    source : where the value is from
    rel_tol, abs_tol, tol_factor : how near the formula has to come; the last one present counts
    constant : a constant of the source, nothing is calculated
    note : what to know about it
    """

    formula: str
    inputs: dict[str, Any] = field(hash=False)
    expected: float
    unit: str
    kind: str
    source: str
    rel_tol: float
    abs_tol: float | None = None
    tol_factor: float | None = None
    constant: bool = False
    note: str = ""

    @property
    def tolerance(self) -> str:
        """How near the value has to come, in words."""
        if self.tol_factor is not None:
            return f"within a factor {self.tol_factor:g}"
        if self.abs_tol is not None:
            return f"± {self.abs_tol:g} {self.unit}"
        return f"± {100 * self.rel_tol:.3g} %"

    def accepts(self, value: float) -> bool:
        """Whether a value meets the check; directions are compared on the circle."""
        if self.tol_factor is not None:
            return self.expected / self.tol_factor <= value <= self.expected * self.tol_factor
        difference = value - self.expected
        if self.unit == "deg":
            difference = (difference + 180) % 360 - 180
        allowed = self.rel_tol * abs(self.expected) if self.abs_tol is None else self.abs_tol
        return abs(difference) <= allowed


@dataclass(frozen=True, slots=True)
class CheckResult:
    """A check with the value calculated by the formula now."""

    check: Check
    value: float
    met: bool


def read_checks(path: Path) -> tuple[Check, ...]:
    """The checks of one file.

    Raises
    ------
    DataFileError : not TOML, or a check lacks a field or has an unknown one
    """
    try:
        tables = tomllib.loads(path.read_text(encoding="utf-8")).get("check", [])
    except tomllib.TOMLDecodeError as problem:
        raise DataFileError(path.name, None, str(problem)) from None
    result = []
    for number, table in enumerate(tables, 1):
        try:
            result.append(Check(**table))
        except TypeError as problem:
            raise DataFileError(path.name, None, f"check {number}: {problem}") from None
    return tuple(result)


@cache
def outside_checks() -> tuple[Check, ...]:
    """Every outside check that ships with logkit, in the order of the files."""
    folder = shipped("data/outside", "tests/published/outside")
    return tuple(check for path in sorted(folder.glob("*.toml")) for check in read_checks(path))


def run_check(check: Check) -> CheckResult:
    """Hold the formula against one check."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", RuntimeWarning)
        value = float(assess(check.formula, **check.inputs).value)
    return CheckResult(check, value, check.accepts(value))
