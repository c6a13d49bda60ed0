"""Rank statistics against an independent library and against full enumeration."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from logkit.errors import ArgumentError
from logkit.registry import evaluate
from logkit.trends.ranks import adjusted_p, kendall_tau_b, theil_sen_interval, trend_test

SMALL = st.lists(st.integers(0, 4), min_size=3, max_size=40)
DISTINCT = st.lists(st.integers(0, 10_000), min_size=3, max_size=33, unique=True)


@settings(max_examples=60, deadline=None)
@given(SMALL)
def test_tau_b_equals_an_independent_library(values: list[int]) -> None:
    """tau_b of a tied series is that of scipy, and undefined where scipy's is."""
    theirs = stats.kendalltau(range(len(values)), values).statistic
    ours = kendall_tau_b(np.arange(len(values)), values)
    assert ours == pytest.approx(theirs, abs=1e-12, nan_ok=True)


@settings(max_examples=60, deadline=None)
@given(DISTINCT)
def test_the_exact_p_equals_an_independent_library(values: list[int]) -> None:
    """Without ties the exact two-sided p is that of scipy."""
    theirs = stats.kendalltau(range(len(values)), values, method="exact").pvalue
    assert trend_test(values).p == pytest.approx(theirs, rel=1e-9)


@pytest.mark.parametrize("size", [60, 400])
def test_the_normal_p_equals_an_independent_library(size: int) -> None:
    """Long tied series use the normal form, as scipy does."""
    values = np.random.default_rng(size).integers(0, 6, size) + np.arange(size) // 30
    theirs = stats.kendalltau(np.arange(size), values, method="asymptotic")
    ours = trend_test(values)
    assert not ours.exact
    assert ours.tau == pytest.approx(theirs.statistic, abs=1e-12)
    assert ours.p == pytest.approx(theirs.pvalue, rel=1e-9)


@pytest.mark.parametrize("values", [(1, 1, 2, 2, 3), (1, 2, 2, 3, 4, 4), (5, 5, 5, 1, 1, 2, 3)])
def test_ties_are_counted_exactly_in_short_series(values: tuple[int, ...]) -> None:
    """With ties p is the share of all orders of the same values with at least that |S|."""

    def s(order: tuple[int, ...]) -> int:
        return sum((b > a) - (b < a) for a, b in itertools.combinations(order, 2))

    scores = [abs(s(order)) for order in itertools.permutations(values)]
    assert trend_test(values).p == pytest.approx(np.mean([x >= abs(s(values)) for x in scores]))


@settings(max_examples=40, deadline=None)
@given(SMALL)
def test_turning_a_series_over_turns_the_sign(values: list[int]) -> None:
    """Reading the other way changes the sign of tau and nothing else."""
    up, down = trend_test(values), trend_test(values[::-1])
    assert (up.s, up.tau) == (-down.s, -down.tau)
    assert up.p == down.p


def test_a_series_that_does_not_vary_has_no_trend() -> None:
    """Equal values give tau 0 and p 1, not a division by zero."""
    test = trend_test([2.5, 2.5, 2.5, 2.5])
    assert (test.tau, test.p) == (0.0, 1.0)


def test_the_slope_and_its_limits_equal_an_independent_library() -> None:
    """Theil-Sen slope and limits are those of scipy for a noisy line."""
    generator = np.random.default_rng(4)
    x = np.sort(generator.random(25))
    y = 2 * x + generator.normal(0, 0.3, 25)
    theirs = stats.theilslopes(y, x, 0.9)
    assert evaluate("stat.theil_sen_slope", x=list(x), y=list(y)) == pytest.approx(theirs.slope)
    assert theil_sen_interval(x, y, 0.9) == pytest.approx((theirs.low_slope, theirs.high_slope))


@settings(max_examples=40, deadline=None)
@given(st.lists(st.floats(0, 1), min_size=1, max_size=30))
def test_adjusted_p_equals_an_independent_library(p: list[float]) -> None:
    """Benjamini-Hochberg values are those of scipy, in the order given."""
    assert adjusted_p(p) == pytest.approx(stats.false_discovery_control(p))


def test_missing_tests_are_not_counted() -> None:
    """NaN stays NaN and does not count among the tests."""
    values = adjusted_p([0.01, math.nan, 0.04])
    assert values[[0, 2]] == pytest.approx([0.02, 0.04])
    assert math.isnan(values[1])


@pytest.mark.parametrize(("values", "allowed"), [
    ([1.0], "a list of 2 or more numbers"),
    ([1.0, math.nan, 2.0], "free of missing and infinite values"),
])  # fmt: skip
def test_unusable_series_are_refused_in_words(values: list[float], allowed: str) -> None:
    """Too short or broken series are an error that says what is allowed."""
    with pytest.raises(ArgumentError) as caught:
        trend_test(values)
    assert caught.value.allowed == allowed
