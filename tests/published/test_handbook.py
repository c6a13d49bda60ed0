"""Outside values: every formula against what papers, standards, libraries and practice say, source beside it."""

from __future__ import annotations

import libraries
import printed
import pytest

from logkit.hydraulics.checks import OUTSIDE_KINDS, Check, outside_checks, run_check


def _name(check: Check) -> str:
    inputs = ",".join(f"{k}={v}" for k, v in check.inputs.items())
    return f"{check.formula}({inputs})~{check.kind}~{check.source}"[:150]


@pytest.mark.parametrize("check", outside_checks(), ids=_name)
def test_formula_meets_the_outside_value(check: Check) -> None:
    """The formula comes as near to the outside value as the check allows."""
    result = run_check(check)
    print(f"{check.formula}: {result.value:.6g} against {check.expected:.6g} {check.unit}; {check.source}")
    assert result.met, (
        f"{result.value!r} is not within {check.tolerance} of {check.expected!r}: {check.source}"
    )


def test_outside_values_are_from_outside() -> None:
    """No value of our own making is among the outside checks, and each names its source."""
    for check in outside_checks():
        assert check.kind in OUTSIDE_KINDS
        assert check.source
        assert "own calculation" not in check.source


@pytest.mark.parametrize("case", printed.load(), ids=lambda c: f"{c.id}~{c.source}")
def test_formula_gives_what_its_printed_equation_gives(case: printed.Printed) -> None:
    """The code agrees with the printed equation written out a second time, apart from it."""
    assert case.difference() <= case.rel_tol


def test_tested_ranges_are_as_written_down() -> None:
    """Every tested range has the written limits and is measured on what it names."""
    assert [name for name, holds in printed.ranges() if not holds] == []


def test_named_constants_are_as_written_down() -> None:
    """The constants that modules offer by name are the printed ones."""
    assert [name for name, holds in printed.constants() if not holds] == []


@pytest.mark.parametrize(
    "comparison", [libraries.sphere_drag, libraries.fresh_viscosity, libraries.density, libraries.wavelength]
)
def test_formula_agrees_with_an_independent_library(comparison) -> None:  # type: ignore[no-untyped-def]
    """On a whole grid the formula agrees with a library that is no part of logkit."""
    case = comparison()
    assert case.difference() <= case.rel_tol
