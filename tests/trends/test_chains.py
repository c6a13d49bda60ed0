"""Embedded chains: the published sequence, and properties of counts and expectations."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from logkit.errors import LogkitError
from logkit.model import Bed, Contact, Log
from logkit.trends.chains import (
    chi_square,
    count_transitions,
    degrees_of_freedom,
    quasi_independent,
    shipped_sequence,
    simulated_p,
)
from logkit.trends.transitions import find_transitions

# Davis 2002, Statistics and Data Analysis in Geology, 3rd ed., ch. 4, table 4-4 (after Doveton 1971)
PUBLISHED = [[0, 13, 36, 19, 52], [29, 0, 5, 4, 0], [35, 2, 0, 45, 12], [29, 1, 44, 0, 3], [26, 23, 9, 9, 0]]


def log_of(states: str) -> Log:
    """Beds of one metre; a dot is a gap, an exclamation mark a faulted base of the next bed."""
    beds = []
    faulted = False
    for state in states:
        if state == "!":
            faulted = True
            continue
        k = len(beds)
        kind = "gap" if state == "." else "bed"
        contact = Contact("faulted") if faulted else None
        beds.append(
            Bed(str(k), k, k + 1.0, kind=kind, lithology="" if state == "." else state, contact=contact)
        )
        faulted = False
    return Log(beds=tuple(beds))


def test_the_published_sequence_gives_its_counts_exactly() -> None:
    """397 states read upward give the printed matrix; read downward they give its transpose."""
    sequence = shipped_sequence("markov_sequence.txt")
    assert len(sequence) == 397
    states, counts = count_transitions([sequence])
    assert states == tuple("ABCDE")
    assert counts.tolist() == PUBLISHED
    down = shipped_sequence("markov_sequence.txt", "top to bottom")
    assert count_transitions([down])[1].T.tolist() == PUBLISHED


def test_the_published_log_is_not_independent() -> None:
    """As beds of a log: chi-square within 1 % of the printed 172, 11 degrees of freedom, upward order stated."""
    result = find_transitions(log_of("".join(shipped_sequence("markov_sequence.txt"))))
    assert result.chi_square == pytest.approx(172, rel=0.01)
    assert result.df == 11
    assert result.p is not None
    assert result.p < 1e-6
    assert result.order == "upward"
    pairs = {(p.below, p.above): p.residual for p in result.significant}
    assert pairs[("E", "B")] > 0 > pairs[("D", "E")]


def test_a_sequence_that_is_not_shipped_is_refused() -> None:
    """An unknown file is an error; folders in the name lead nowhere."""
    with pytest.raises(LogkitError, match="no shipped sequence"):
        shipped_sequence("../handbook.txt")


@settings(max_examples=50, deadline=None)
@given(st.text("ABCD", min_size=2, max_size=120))
def test_expected_totals_are_the_observed_ones(states: str) -> None:
    """Quasi-independence keeps row and column totals and an empty diagonal."""
    _, counts = count_transitions([states])
    expected = quasi_independent(counts)
    assert np.diag(expected) == pytest.approx(0)
    if degrees_of_freedom(counts) > 0 and np.all(counts.sum(0) > 0) and np.all(counts.sum(1) > 0):
        assert expected.sum(0) == pytest.approx(counts.sum(0), abs=0.05)
        assert expected.sum(1) == pytest.approx(counts.sum(1), abs=0.05)


@settings(max_examples=40, deadline=None)
@given(st.text("ABCD", min_size=3, max_size=60))
def test_reading_downward_transposes_and_keeps_the_test(states: str) -> None:
    """The reversed sequence has the transposed counts and the same chi-square."""
    up, down = count_transitions([states])[1], count_transitions([states[::-1]])[1]
    assert (up == down.T).all()
    one, two = chi_square(up, quasi_independent(up)), chi_square(down, quasi_independent(down))
    assert one == pytest.approx(two, rel=1e-3, abs=1e-6)


@pytest.mark.parametrize(("states", "total", "breaks", "merged"), [
    ("ABCA", 3, 0, 0), ("AB.CA", 2, 1, 0), ("AB!CA", 2, 1, 0), ("AABBC", 2, 0, 2), (".A.B.", 0, 1, 0),
])  # fmt: skip
def test_gaps_and_faults_break_the_chain(states: str, total: int, breaks: int, merged: int) -> None:
    """Nothing is counted across a gap or a fault, and a state on itself is one state."""
    result = find_transitions(log_of(states))
    assert (result.total, result.breaks, result.merged) == (total, breaks, merged)


def test_a_written_pattern_breaks_the_chain() -> None:
    """Layers of a pattern were not measured one by one: their alternation is not counted."""
    beds = [
        Bed(str(k), k, k + 1.0, lithology=state, measured=not 2 <= k < 8)
        for k, state in enumerate("ABCDCDCDAB")
    ]
    result = find_transitions(Log(beds=tuple(beds)))
    assert (result.total, result.breaks) == (2, 1)


def test_two_states_say_nothing() -> None:
    """Two alternating states must follow one another: not determinable, in words."""
    result = find_transitions(log_of("ABABABAB"))
    assert result.p is None
    assert result.significant == ()
    assert "not determinable" in result.sentences()[0]


def test_an_empty_row_costs_its_degrees_of_freedom() -> None:
    """A state that only ends the chain has no row; full matrices have (k - 1)^2 - k."""
    assert degrees_of_freedom(PUBLISHED) == 11
    counts = np.array([[0, 4, 3, 2], [5, 0, 4, 1], [3, 2, 0, 3], [0, 0, 0, 0]])
    assert degrees_of_freedom(counts) == 9 - 3 - 4 + 1


def test_simulated_tables_agree_with_the_distribution_where_both_hold() -> None:
    """With large expected counts the simulated p is near that of the chi-square distribution."""
    counts = count_transitions([np.random.default_rng(21).choice(list("ABCD"), 900).tolist()])[1]
    expected = quasi_independent(counts)
    theirs = stats.chi2.sf(chi_square(counts, expected), degrees_of_freedom(counts))
    assert simulated_p(counts, expected) == pytest.approx(theirs, abs=0.06)


@pytest.mark.parametrize("beds", [40, 200])
def test_random_states_are_rejected_at_the_nominal_rate(beds: int) -> None:
    """Long and short chains of random states are rejected about as often as the level says."""
    generator = np.random.default_rng(8)
    rejected = 0
    for _ in range(200):
        states = generator.choice(list("ABCD"), beds)
        result = find_transitions(log_of("".join(states)))
        rejected += result.p is not None and result.p <= 0.05
    assert 0.015 <= rejected / 200 <= 0.09
