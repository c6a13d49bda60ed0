"""Packages: runs of beds with a common level or trend, found and tested so that random order gives none.

A log whose order cannot be told from random keeps each unbroken run as one package. The cut itself is
`segments`, the test of order is `order`.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from logkit.model import Package
from logkit.trends.order import OrderTest
from logkit.trends.ranks import TrendTest, adjusted_p, trend_test
from logkit.trends.segments import Piece, cut, noise_variance
from logkit.trends.series import Quantity, Run

MINIMUM_BEDS = 4
"""Fewest beds of a package, by default."""

FLAT_PRICE, SLOPE_PRICE = 1.3, 2.3
"""Price of a flat and of a sloping piece in units of ln(n) x noise variance. Ours."""

NESTING_PRICE = 4.0
"""How much dearer a cut is when packages are gathered into larger ones. Ours."""

TRIED = (1.5, 2.0, 3.0, 4.0)
"""Dearer penalties tried for the support of a boundary, times the one used."""

ROUGH = 200
"""Longest piece of the rough cut that estimates the noise."""

WORDS: dict[Quantity, tuple[str, str]] = {
    "grain size": ("fining-up", "coarsening-up"),
    "thickness": ("thickening-up", "thinning-up"),
}
"""Trend words for a rising and a falling series; phi rises as grains get finer."""


@dataclass(frozen=True, slots=True)
class Boundary:
    """A boundary between two packages.

    height_m : base of the upper package
    change : mean of the upper less mean of the lower package, phi or ln(m)
    support : share of four dearer penalties, to four times the one used, that keep it
    """

    quantity: str
    height_m: float
    bed_above: str
    change: float
    support: float


@dataclass(frozen=True, slots=True)
class _Candidate:
    run: Run
    piece: Piece
    level: int
    test: TrendTest


def find_packages(
    series: Sequence[tuple[Quantity, Sequence[Run], OrderTest]],
    *,
    level: float = 0.05,
    minimum: int = MINIMUM_BEDS,
) -> tuple[tuple[Package, ...], tuple[Boundary, ...]]:
    """Packages of a log in each quantity, with the boundaries between them.

    Parameters
    ----------
    series : quantity, its runs and its test against random order; where the beds of a quantity are in random
        order, its trends are tested in the packages of the one before as well
    level : share of logs in random order that may get a significant package
    minimum : fewest beds of a package

    Notes
    -----
    Half the level goes to the search: cuts are made only where the gain from cutting is rarer in random
    order than that half, shared over the quantities. The other half goes to the trends: Kendall's p of
    every package of every quantity is adjusted by Benjamini-Hochberg and doubled. So both errors together
    stay within the level, whatever the cut finds.

    A flat piece costs 1.3 ln(n) times the noise variance, a sloping one 2.3. The noise is estimated from
    bed-to-bed steps, then from what a first cut leaves, and is never below that of the size classes.
    Packages are gathered into larger ones where these have a trend of their own.

    References
    ----------
    killick_2012, benjamini_hochberg_1995, kendall_1938
    """
    gate = level / 2 / max(len(series), 1)
    candidates: list[tuple[Quantity, _Candidate]] = []
    boundaries: list[Boundary] = []
    cut_before: list[_Candidate] = []
    for quantity, runs, test in series:
        ordered = test.p_packages is not None and test.p_packages <= gate
        own, between = _cut_all(quantity, runs, minimum, level / 2) if ordered else ([], [])
        whole = [
            _candidate(run, Piece(0, run.values.size, False, 0.0), 0)
            for run in runs
            if run.values.size >= minimum and not any(c.run is run for c in own)
        ]
        shared = [] if own else [c for run in runs for c in _shared(run, cut_before, minimum)]
        candidates += [(quantity, candidate) for candidate in (*own, *whole, *shared)]
        boundaries += between
        cut_before = own
    adjusted = adjusted_p([c.test.p for _, c in candidates])
    packages = [
        _package(quantity, c, min(2 * float(p), 1.0), level)
        for (quantity, c), p in zip(candidates, adjusted, strict=True)
    ]
    packages.sort(key=lambda p: (p.quantity, p.base_m, p.level))
    return tuple(packages), tuple(boundaries)


def _candidate(run: Run, piece: Piece, level: int) -> _Candidate:
    return _Candidate(run, piece, level, trend_test(run.values[piece.start : piece.stop]))


def _cut_all(
    quantity: Quantity, runs: Sequence[Run], minimum: int, level: float
) -> tuple[list[_Candidate], list[Boundary]]:
    """Packages of the runs that fall into pieces, and the boundaries between them."""
    candidates: list[_Candidate] = []
    boundaries: list[Boundary] = []
    beds = sum(run.values.size for run in runs)
    noise = _noise(runs, minimum)
    for run in runs:
        found = _run_pieces(run, noise, beds, minimum, level) if run.values.size >= minimum else None
        if found is None:
            continue
        candidates += [_candidate(run, piece, depth) for piece, depth in found]
        finest = [piece for piece, _ in found if not _holds_others(piece, found)]
        boundaries += _boundaries(quantity, run, finest, noise, beds, minimum)
    return candidates, boundaries


def _shared(run: Run, packages: Sequence[_Candidate], minimum: int) -> list[_Candidate]:
    """The packages of the quantity before, for a run that is not cut by its own: nested in the run."""
    bases = np.array([bed.base_m for bed in run.beds])
    found: list[tuple[Piece, int]] = []
    for package in packages:
        beds = package.run.beds[package.piece.start : package.piece.stop]
        start = int(np.searchsorted(bases, beds[0].base_m - 1e-9))
        stop = int(np.searchsorted(bases, beds[-1].top_m - 1e-9))
        if minimum <= stop - start < run.values.size:
            found.append((Piece(start, stop, False, 0.0), package.level))
    outermost = min((level for _, level in found), default=0)
    return [_candidate(run, piece, level - outermost + 1) for piece, level in found]


def _package(quantity: Quantity, candidate: _Candidate, p_adjusted: float, level: float) -> Package:
    beds = candidate.run.beds[candidate.piece.start : candidate.piece.stop]
    significant = p_adjusted <= level
    rising, falling = WORDS[quantity]
    word = (rising if candidate.test.tau > 0 else falling) if significant else "no trend"
    return Package(
        word, beds[0].base_m, beds[-1].top_m, beds[0].name, beds[-1].name, len(beds),
        candidate.test.tau, candidate.test.p, p_adjusted, significant, quantity, candidate.level,
    )  # fmt: skip


def _prices(variance: float, beds: int, factor: float = 1.0) -> tuple[float, float]:
    unit = math.log(max(beds, 3)) * variance * factor
    return FLAT_PRICE * unit, SLOPE_PRICE * unit


def _noise(runs: Sequence[Run], minimum: int) -> float:
    """Noise variance of all runs: from steps, then from what a first cut leaves; not below the classes'."""
    widths = np.concatenate([run.widths for run in runs])
    floor = max(float(np.mean(np.minimum(widths, 1.0) ** 2)) / 12, 0.1**2)
    sizes = np.array([run.values.size for run in runs], dtype=float)
    steps = np.array([noise_variance(run.values) for run in runs])
    first = max(float(np.average(steps, weights=sizes)), floor)
    total = int(sizes.sum())
    squares, freedom = 0.0, 0.0
    for run in runs:
        pieces = cut(run.values, *_prices(first, total), weights=run.weights, minimum=minimum, longest=ROUGH)
        squares += sum(piece.squares for piece in pieces)
        freedom += run.values.size - sum(2 + piece.sloping for piece in pieces)
    if freedom < 4:
        return first
    return max(min(squares / freedom, first), floor, first / 2)


def _cut_run(
    run: Run,
    noise: float,
    beds: int,
    minimum: int,
    factor: float = 1.0,
    places: tuple[int, ...] | None = None,
) -> tuple[Piece, ...]:
    return cut(run.values, *_prices(noise, beds, factor), weights=run.weights, minimum=minimum, places=places)


def _run_pieces(
    run: Run, noise: float, beds: int, minimum: int, level: float
) -> list[tuple[Piece, int]] | None:
    """Pieces of a run with their level, or None when the run stays whole."""
    fine = _cut_run(run, noise, beds, minimum)
    if len(fine) == 1:
        return None
    places = tuple(piece.start for piece in fine[1:])
    coarse = _cut_run(run, noise, beds, minimum, NESTING_PRICE, places)
    found: list[tuple[Piece, int]] = []
    for outer in coarse:
        inner = [p for p in fine if outer.start <= p.start and p.stop <= outer.stop]
        nested = len(inner) > 1 and trend_test(run.values[outer.start : outer.stop]).p <= level
        if nested:
            found.append((outer, 0))
        found += [(replace(p), 1 if nested else 0) for p in inner]
    return found


def _holds_others(piece: Piece, found: list[tuple[Piece, int]]) -> bool:
    return any(
        other is not piece and piece.start <= other.start and other.stop <= piece.stop for other, _ in found
    )


def _boundaries(
    quantity: Quantity, run: Run, pieces: list[Piece], noise: float, beds: int, minimum: int
) -> list[Boundary]:
    places = tuple(piece.start for piece in pieces[1:])
    tried = [{p.start for p in _cut_run(run, noise, beds, minimum, factor, places)[1:]} for factor in TRIED]
    result = []
    for lower, upper in itertools.pairwise(pieces):
        kept = [upper.start in starts for starts in tried]
        change = run.values[upper.start : upper.stop].mean() - run.values[lower.start : lower.stop].mean()
        bed = run.beds[upper.start]
        result.append(Boundary(quantity, bed.base_m, bed.name, float(change), sum(kept) / len(kept)))
    return result
