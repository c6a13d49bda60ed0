"""Embedded Markov chains of states that lie on one another: counts, quasi-independence, chi-square.

A sequence is a list of states from the base upward; a chain may come in pieces, which are never joined.
What a state is (lithology, facies, size class) is decided elsewhere.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import Any

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError, LogkitError
from logkit.registry import formula
from logkit.resources import shipped

Array = npt.NDArray[np.float64]

_CHAIN = {"sequence": "states bottom to top; or `file` and `order` of a shipped sequence"}
_CELL = _CHAIN | {"below": "lower state (`from`)", "above": "upper state (`to`)"}


def shipped_sequence(file: str, order: str = "bottom to top") -> tuple[str, ...]:
    """A published sequence that ships with logkit, one letter a state.

    Parameters
    ----------
    file : name of the file; it lists states top to bottom, lines with # are comments
    order : "bottom to top" or "top to bottom", the order of the result

    Raises
    ------
    LogkitError : no such sequence
    """
    path = shipped("data/outside", "tests/published/outside") / Path(file).name
    if not path.is_file():
        raise LogkitError(f"There is no shipped sequence {file!r}.", "Give the states as a list instead.")
    lines = path.read_text(encoding="utf-8").splitlines()
    states = "".join(line.strip() for line in lines if not line.lstrip().startswith("#"))
    if order == "bottom to top":
        return tuple(reversed(states))
    if order == "top to bottom":
        return tuple(states)
    raise ArgumentError("order", order, "'bottom to top' or 'top to bottom'")


def _from_file(inputs: dict[str, Any]) -> dict[str, Any]:
    """Public inputs to arguments: `from` and `to` to below and above, a file to its sequence."""
    given = dict(inputs)
    if "file" in given:
        given["sequence"] = shipped_sequence(given.pop("file"), given.pop("order", "bottom to top"))
    for public, own in (("from", "below"), ("to", "above")):
        if public in given:
            given[own] = given.pop(public)
    return given


def count_transitions(
    pieces: Iterable[Sequence[str]], states: Sequence[str] | None = None
) -> tuple[tuple[str, ...], Array]:
    """Count matrix of an embedded chain, rows below, columns above.

    Parameters
    ----------
    pieces : unbroken sequences bottom to top; equal neighbours are one state and are not counted
    states : order of rows and columns, sorted by name by default

    Returns
    -------
    the states, and the (k, k) counts with an empty diagonal
    """
    chains = [tuple(piece) for piece in pieces]
    names = tuple(states) if states is not None else tuple(sorted({s for chain in chains for s in chain}))
    place = {state: i for i, state in enumerate(names)}
    counts = np.zeros((len(names), len(names)))
    for chain in chains:
        codes = np.array([place[state] for state in chain], dtype=int)
        np.add.at(counts, (codes[:-1], codes[1:]), 1)
    np.fill_diagonal(counts, 0)
    return names, counts


def quasi_independent(counts: npt.ArrayLike, tolerance: float = 1e-9, most: int = 10_000) -> Array:
    """Expected counts without self transitions, row and column sums as observed.

    Parameters
    ----------
    counts : (..., k, k) counts, rows below, columns above; leading axes are separate tables

    Notes
    -----
    E_ij = a_i b_j off the diagonal, by iterative proportional fitting until the largest change is below
    the tolerance. Rows and columns without a count stay zero.

    References
    ----------
    davis_2002, powers_easterling_1982
    """
    observed = np.asarray(counts, dtype=float)
    rows, columns = observed.sum(axis=-1, keepdims=True), observed.sum(axis=-2, keepdims=True)
    expected = (1 - np.eye(observed.shape[-1])) * (rows > 0) * (columns > 0)
    for _ in range(most):
        before = expected
        for axis, totals in ((-1, rows), (-2, columns)):
            sums = expected.sum(axis=axis, keepdims=True)
            expected = expected * np.divide(totals, sums, out=np.zeros_like(totals), where=sums > 0)
        if np.max(np.abs(expected - before), initial=0.0) < tolerance:
            break
    return expected


def degrees_of_freedom(counts: npt.ArrayLike) -> int:
    """Degrees of freedom of the embedded chain: cells that can be filled, less fitted totals.

    (k - 1)^2 - k for a full matrix; fewer where whole rows or columns are empty.
    """
    observed = np.asarray(counts, dtype=float)
    rows, columns = observed.sum(axis=1) > 0, observed.sum(axis=0) > 0
    cells = int(rows.sum() * columns.sum() - np.sum(rows & columns))
    return cells - int(rows.sum()) - int(columns.sum()) + 1


def chi_square(counts: npt.ArrayLike, expected: npt.ArrayLike) -> Array:
    """Sum of (n - E)^2/E over the cells with an expectation, for each of (..., k, k) tables."""
    n, e = np.asarray(counts, float), np.asarray(expected, float)
    cells = np.divide((n - e) ** 2, e, out=np.zeros_like(e), where=e > 1e-12)
    result: Array = cells.sum(axis=(-2, -1))
    return result


def simulated_p(counts: npt.ArrayLike, expected: npt.ArrayLike, copies: int = 499) -> float:
    """Share of simulated tables whose chi-square is at least as large as that of the counts.

    Tables are drawn from the expected counts with the same total and fitted anew, which holds where
    expected counts are too small for the chi-square distribution. The seed comes from the counts.
    """
    n, e = np.asarray(counts, float), np.asarray(expected, float)
    generator = np.random.default_rng(int(np.sum(n * np.arange(n.size).reshape(n.shape))))
    chances = e.ravel() / e.sum()
    drawn = generator.multinomial(int(n.sum()), chances, size=copies).reshape(copies, *n.shape).astype(float)
    theirs = chi_square(drawn, quasi_independent(drawn, tolerance=1e-6, most=300))
    return float((1 + np.sum(theirs >= chi_square(n, e) - 1e-9)) / (copies + 1))


@formula(
    "stat.markov_states", gives="number of states in the sequence", unit="1", equation="count", source="davis_2002",
    locator="ch. 4", status="published", inputs=_CHAIN, resolve=_from_file,
)  # fmt: skip
def markov_states(sequence: Sequence[str]) -> int:
    """Length of a sequence of states."""
    return len(sequence)


@formula(
    "stat.markov_transitions", gives="number of transitions", unit="1", equation="sum n_ij, i not j",
    source="davis_2002", locator="ch. 4", status="published", inputs=_CHAIN, resolve=_from_file,
)  # fmt: skip
def markov_transitions(sequence: Sequence[str]) -> int:
    """Number of transitions between unlike states."""
    return int(count_transitions([sequence])[1].sum())


def _cell(states: tuple[str, ...], matrix: Array, below: str, above: str) -> float:
    for name, state in (("below", below), ("above", above)):
        if state not in states:
            raise ArgumentError(name, state, f"one of the states {', '.join(states)}")
    return float(matrix[states.index(below), states.index(above)])


@formula(
    "stat.markov_count", gives="times the upper state lies directly on the lower one, n_ij", unit="1",
    equation="n_ij", source="davis_2002", locator="ch. 4, table 4-4", status="published", inputs=_CELL,
    resolve=_from_file, pitfalls="State the order: reading downward gives the transpose.",
)  # fmt: skip
def markov_count(sequence: Sequence[str], below: str, above: str) -> float:
    """One cell of the count matrix, read upward.

    References
    ----------
    davis_2002
    """
    return _cell(*count_transitions([sequence]), below, above)


@formula(
    "stat.markov_expected", gives="expected count under quasi-independence, E_ij", unit="1",
    equation="E_ij = a_i b_j, i not j, totals as observed", source="powers_easterling_1982", status="published",
    inputs=_CELL, resolve=_from_file, domain="embedded chains, 3 states or more",
    pitfalls="Simple products row x column/total expect self transitions and are wrong here.",
)  # fmt: skip
def markov_expected(sequence: Sequence[str], below: str, above: str) -> float:
    """One cell of the expected counts.

    References
    ----------
    davis_2002, powers_easterling_1982
    """
    states, counts = count_transitions([sequence])
    return _cell(states, quasi_independent(counts), below, above)


@formula(
    "stat.markov_chi_square", gives="chi-square of the embedded chain, X2", unit="1",
    equation="X2 = sum over i not j of (n_ij - E_ij)^2/E_ij", source="davis_2002", locator="ch. 4",
    status="published", inputs=_CHAIN, resolve=_from_file, domain="most E_ij of 5 or more",
    pitfalls="A rejected test says 'not independent', not 'cyclic'.",
)  # fmt: skip
def markov_chi_square(sequence: Sequence[str]) -> float:
    """Chi-square of a sequence against quasi-independence.

    References
    ----------
    davis_2002, powers_easterling_1982
    """
    counts = count_transitions([sequence])[1]
    return float(chi_square(counts, quasi_independent(counts)))


@formula(
    "stat.markov_df", gives="degrees of freedom", unit="1", equation="(k - 1)^2 - k embedded, (k - 1)^2 else",
    source="davis_2002", locator="ch. 4", status="published",
    inputs={"states": "number of states, k", "embedded": "True without self transitions"},
    domain="no empty rows or columns",
)  # fmt: skip
def markov_df(states: int, embedded: bool = True) -> int:
    """Degrees of freedom of a full matrix.

    References
    ----------
    davis_2002
    """
    k = int(states)
    if k < 2 + bool(embedded):
        raise ArgumentError("states", states, "3 or more for an embedded chain, 2 or more else")
    return (k - 1) ** 2 - (k if embedded else 0)


@formula(
    "stat.chi_square_critical", gives="upper critical value of chi-square", unit="1",
    equation="P(X2 > x) = alpha", source="davis_2002", locator="appendix tables", status="published",
    inputs={"df": "degrees of freedom", "alpha": "level"},
)  # fmt: skip
def chi_square_critical(df: float, alpha: float) -> float:
    """Upper critical value of the chi-square distribution."""
    from scipy.special import chdtri

    return float(chdtri(df, alpha))


@formula(
    "stat.markov_probability", gives="transition probability, p_ij", unit="1", equation="p_ij = n_ij/n_i",
    source="davis_2002", locator="ch. 4", status="published", domain="equal steps, self transitions allowed",
    inputs={"counts_row": "counts from one state to all, n_i.", "to_index": "number of the upper state from 1, j"},
    pitfalls="The diagonal only measures bed thickness against the step.",
)  # fmt: skip
def markov_probability(counts_row: npt.ArrayLike, to_index: int) -> float:
    """Transition probability from a row of counts.

    References
    ----------
    davis_2002
    """
    row = np.asarray(counts_row, dtype=float)
    if not 1 <= int(to_index) <= row.size:
        raise ArgumentError("to_index", to_index, f"from 1 to {row.size}")
    if row.sum() <= 0 or (row < 0).any():
        raise ArgumentError("counts_row", counts_row, "counts with a sum above zero")
    return float(row[int(to_index) - 1] / row.sum())
