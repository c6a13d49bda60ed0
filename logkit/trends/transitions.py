"""Which state lies on which: the embedded chain of a log, tested, with the cells that stand out.

The arithmetic is in `chains`; here beds become states and the result becomes tables and sentences.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError
from logkit.model import Bed, Log
from logkit.trends.chains import (
    chi_square,
    count_transitions,
    degrees_of_freedom,
    quasi_independent,
    simulated_p,
)
from logkit.trends.ranks import adjusted_p
from logkit.trends.series import bed_size, size_class
from logkit.vocabulary import vocabulary

if TYPE_CHECKING:
    import pandas as pd

Array = npt.NDArray[np.float64]
States = Literal["lithology", "size class", "structure"] | Callable[[Bed], str]
"""What a state is: a word, or a function of a bed that gives the state ("" for none)."""


@dataclass(frozen=True, slots=True)
class Pair:
    """One cell of the table: `above` lies on `below`. `p` is two-sided, from the Poisson distribution."""

    below: str
    above: str
    count: int
    expected: float
    residual: float
    p: float
    p_adjusted: float


@dataclass(frozen=True, slots=True)
class Transitions:
    """The embedded chain of a log, read upward.

    Attributes
    ----------
    states, counts, expected : names; (k, k) counts and counts expected, rows below, columns above
    chi_square, df, p : test against quasi-independence; None when not determinable; p is from simulated
        tables where more than a fifth of the expected counts is below 5
    pairs : every cell with an expectation; `significant` those with adjusted p below the level
    breaks : times the chain was broken by gaps, faults, written patterns and beds without a state
    merged : contacts of a state with itself
    notes : what limits the result
    """

    by: str
    states: tuple[str, ...]
    counts: Array
    expected: Array
    chi_square: float | None
    df: int
    p: float | None
    pairs: tuple[Pair, ...]
    breaks: int
    merged: int
    level: float = 0.05
    order: str = "upward"
    notes: tuple[str, ...] = ()

    @property
    def total(self) -> int:
        """Number of transitions."""
        return int(self.counts.sum())

    @property
    def significant(self) -> tuple[Pair, ...]:
        """Cells more or less frequent than by chance, the test as a whole having rejected chance."""
        if self.p is None or self.p > self.level:
            return ()
        return tuple(pair for pair in self.pairs if pair.p_adjusted <= self.level)

    def to_frame(self) -> pd.DataFrame:
        """One row a cell: below, above, count, expected, residual, p, p_adjusted."""
        import pandas as pd

        columns = list(Pair.__dataclass_fields__)
        return pd.DataFrame([[getattr(p, c) for c in columns] for p in self.pairs], columns=columns)

    def sentences(self) -> list[str]:
        """The result in words."""
        head = f"Transitions of {self.by}, read upward ({self.total} transitions, {self.breaks} breaks)"
        if self.p is None or self.chi_square is None:
            return [f"{head}: not determinable. {' '.join(self.notes)}".strip()]
        verdict = "not distinguished from random" if self.p > self.level else "not independent"
        lines = [f"{head}: {verdict} (chi-square {self.chi_square:.1f}, {self.df} degrees of freedom, "
                 f"p {_small(self.p)})."]  # fmt: skip
        for pair in self.significant:
            often = "more" if pair.residual > 0 else "less"
            lines.append(
                f"{spoken(pair.above)} lies on {spoken(pair.below)} {often} often than by chance "
                f"({pair.count} times, {pair.expected:.1f} expected, adjusted p {_small(pair.p_adjusted)})."
            )
        return [*lines, *self.notes]


def spoken(state: str) -> str:
    """A state in words: its label as a lithology or a structure, else without underscores."""
    for name in ("lithologies", "structures"):
        terms = vocabulary(name)
        if state in terms:
            return terms[state].label
    return state.replace("_", " ")


def _small(p: float) -> str:
    return "below 0.0001" if p < 1e-4 else f"= {p:.2g}"


def state_of(bed: Bed, by: States) -> str:
    """State of a bed, "" when it has none."""
    if callable(by):
        return by(bed)
    if by == "lithology":
        if bed.lithology:
            return bed.lithology
        name = size_class(bed_size(bed))
        return "" if name == "unknown" else name
    if by == "size class":
        name = size_class(bed_size(bed))
        return "" if name == "unknown" else name
    if by == "structure":
        return bed.structures[0].term if bed.structures else ""
    raise ArgumentError("states", by, "'lithology', 'size class', 'structure' or a function of a bed")


def find_transitions(log: Log, by: States = "lithology", level: float = 0.05) -> Transitions:
    """Count and test which state lies directly on which.

    Parameters
    ----------
    log : the log; gaps and faults break the chain, and so do beds without a state and layers of a
        written pattern, whose order was not measured
    by : what a state is
    level : level of the test and of the adjusted cells

    References
    ----------
    davis_2002, powers_easterling_1982, benjamini_hochberg_1995
    """
    pieces: list[list[str]] = []
    merged = 0
    for run in log.runs:
        piece: list[str] = []
        for bed in run:
            if bed.contact is not None and bed.contact.kind == "faulted" and piece:
                pieces.append(piece)
                piece = []
            state = state_of(bed, by) if bed.measured else ""
            if state:
                merged += bool(piece) and piece[-1] == state
                piece.append(state)
            elif piece:
                pieces.append(piece)
                piece = []
        pieces.append(piece)
    pieces = [piece for piece in pieces if piece]
    breaks = max(len(pieces) - 1, 0)
    states, counts = count_transitions(pieces)
    return _tested("a given state" if callable(by) else by, states, counts, breaks, merged, level)


def _tested(
    by: str, states: tuple[str, ...], counts: Array, breaks: int, merged: int, level: float
) -> Transitions:
    expected = quasi_independent(counts) if len(states) else counts
    df = degrees_of_freedom(counts) if len(states) else 0
    notes = []
    if len(states) < 3 or df < 1 or counts.sum() == 0:
        notes.append("An embedded chain needs three or more states that follow one another.")
        return Transitions(by, states, counts, expected, None, max(df, 0), None, (), breaks, merged, level,
                           notes=tuple(notes))  # fmt: skip
    from scipy.special import chdtrc, pdtr, pdtrc

    statistic = float(chi_square(counts, expected))
    cells = np.argwhere(expected > 1e-9)
    n, e = counts[tuple(cells.T)], expected[tuple(cells.T)]
    tail = np.minimum(np.where(n > 0, pdtrc(n - 1, e), 1.0), pdtr(n, e))
    p = np.minimum(2 * tail, 1.0)
    adjusted = adjusted_p(p)
    residual = (n - e) / np.sqrt(e)
    pairs = tuple(
        Pair(
            states[i], states[j], int(n[k]), float(e[k]), float(residual[k]), float(p[k]), float(adjusted[k])
        )
        for k, (i, j) in enumerate(cells)
    )
    small = int(np.sum(e < 5))
    if small > 0.2 * e.size:
        chance = simulated_p(counts, expected)
        notes.append(
            f"{small} of {e.size} expected counts are below 5: p of the transitions is from simulated tables."
        )
    else:
        chance = float(chdtrc(df, statistic))
    return Transitions(by, states, counts, expected, statistic, df, chance,
                       pairs, breaks, merged, level, notes=tuple(notes))  # fmt: skip
