"""Our own earlier results, against drift only; nothing here shows that a formula is right."""

from __future__ import annotations

from pathlib import Path

import pytest

from logkit.hydraulics.checks import Check, read_checks, run_check

CHECKS = read_checks(Path(__file__).with_name("handbook_computed.toml"))


@pytest.mark.parametrize("check", CHECKS, ids=lambda c: f"{c.formula}-{c.expected:.6g}")
def test_result_has_not_drifted(check: Check) -> None:
    """A formula still gives what it gave when the value was written down."""
    result = run_check(check)
    assert result.met, f"{result.value!r} is not within {check.tolerance} of {check.expected!r}"
