"""Suggested ties: alignment held by the markers, with a confidence from resampling. Never accepted by itself.

Bed series are warped onto each other between the shared markers. How often a tie comes back when sizes,
thicknesses and beds are resampled is its confidence; and the whole alignment must be better than those with
unrelated wells of the same habit, or nothing is called confident.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from logkit.compare.placing import PlacedLog
from logkit.compare.series import BedSeries, bed_series, costs, resampled, surrogates
from logkit.compare.ties import anchors
from logkit.compare.warping import FORBIDDEN, Warping, warp

if TYPE_CHECKING:
    from numpy.typing import NDArray

UNRELATED = 99
"""Unrelated wells made up for the test of an alignment."""

RESAMPLES = 60
CONFIDENT = 0.7
"""Share of resamples in which a tie must come back within one bed."""

LEVEL = 0.01
"""Level of the test against unrelated wells: none of them may align as well."""

WINDOW = 0.35
"""Ties farther apart than this share of the records are not looked at, measured in beds."""


@dataclass(frozen=True, slots=True)
class SuggestedTie:
    """A tie that the alignment suggests. It is for a person to accept or drop.

    confidence : share of resamples in which it came back within one bed, 0 … 1
    p : share of unrelated wells that align as well or better, for the pair of wells
    mutual : each bed is the other's best partner; a bed that is lost in one well has none
    confident : mutual, and both confidence and p pass their levels
    unlikeness : 0 (alike) … 1 of the two beds as described
    first_base_m, second_base_m : heights of the bases above the datum, m
    """

    first: str
    second: str
    first_bed: str
    second_bed: str
    first_base_m: float
    second_base_m: float
    confidence: float
    p: float
    mutual: bool
    confident: bool
    unlikeness: float


@dataclass(frozen=True, slots=True)
class _Stretch:
    """Beds between two anchors in both wells; an end is open where the record ends without a marker."""

    first: slice
    second: slice
    open_start: bool
    open_end: bool


def suggest_ties(
    placed: Sequence[PlacedLog], histories: Sequence[Any] | None = None
) -> tuple[SuggestedTie, ...]:
    """Suggested ties between each well and the next.

    Parameters
    ----------
    histories : flow histories in the order of the logs, or None

    Returns
    -------
    upward, pair by pair, a partner for every bed that has one on the path; gaps and markers have none
    """
    found: list[SuggestedTie] = []
    series = [
        bed_series(p.log, histories[k] if histories is not None else None) for k, p in enumerate(placed)
    ]
    for k in range(len(placed) - 1):
        found.extend(_pair(placed[k], placed[k + 1], series[k], series[k + 1]))
    return tuple(found)


def _pair(first: PlacedLog, second: PlacedLog, one: BedSeries, two: BedSeries) -> list[SuggestedTie]:
    stretches = _stretches(anchors(first, second), len(one), len(two))
    if not stretches:
        return []
    random = np.random.default_rng([one.seed(), two.seed()])
    ties: list[tuple[int, int, bool, float, float]] = []
    scores: list[tuple[float, NDArray[np.float64], int]] = []
    for part in stretches:
        a, b = one.take(part.first), two.take(part.second)
        table = costs(a, [b])
        best = _align(table, part)
        pairs = _partners(table[0], best.on_path()[0], a.gap, b.gap)
        again = _confidence(a, b, part, pairs, random)
        for (i, j, mutual), share in zip(pairs, again, strict=True):
            place = (i + part.first.start, j + part.second.start)
            ties.append((*place, mutual, share, float(table[0, i, j])))
        null = _unrelated(a, two, len(b), part, random)
        scores.append((float(best.score[0]), null, len(a) + len(b)))
    whole = sum(score * size for score, _, size in scores)
    others = sum((null * size for _, null, size in scores), np.zeros(UNRELATED))
    p = float((1 + (others <= whole + 1e-12).sum()) / (1 + UNRELATED))
    return [
        SuggestedTie(
            first.name,
            second.name,
            first.log.beds[i].name,
            second.log.beds[j].name,
            first.hung.beds[i].base_m,
            second.hung.beds[j].base_m,
            share,
            p,
            mutual,
            mutual and share >= CONFIDENT and p <= LEVEL,
            unlike,
        )
        for i, j, mutual, share, unlike in ties
    ]


def _stretches(held: list[tuple[int, int]], rows: int, columns: int) -> list[_Stretch]:
    """The parts between anchors that hold beds in both wells."""
    edges = [(-1, -1), *held, (rows, columns)]
    parts = []
    for (i0, j0), (i1, j1) in pairwise(edges):
        if i1 - i0 > 1 and j1 - j0 > 1:
            parts.append(_Stretch(slice(i0 + 1, i1), slice(j0 + 1, j1), i0 < 0, i1 == rows))
    return parts


def _align(table: NDArray[np.float64], part: _Stretch) -> Warping:
    _, rows, columns = table.shape
    # position in the record from its closed end; two open ends allow the whole window
    i, j = np.arange(rows)[:, None], np.arange(columns)[None, :]
    wide = max(WINDOW * max(rows, columns), 8.0)
    outside = np.abs(i * columns / rows - j) > wide
    held = np.where(outside[None], FORBIDDEN, table)
    return warp(held, open_start=part.open_start, open_end=part.open_end)


def _partners(
    table: NDArray[np.float64],
    path: NDArray[np.bool_],
    gap_one: NDArray[np.bool_],
    gap_two: NDArray[np.bool_],
) -> list[tuple[int, int, bool]]:
    """The most like partner on the path of every bed of both records, and whether it is mutual."""
    on = np.where(path & (table < FORBIDDEN), table, np.inf)
    on[gap_one, :] = np.inf
    on[:, gap_two] = np.inf
    best_column, best_row = on.argmin(axis=1), on.argmin(axis=0)
    pairs = {(i, int(j)) for i, j in enumerate(best_column) if np.isfinite(on[i, j])}
    pairs |= {(int(i), j) for j, i in enumerate(best_row) if np.isfinite(on[i, j])}
    return [(i, j, best_column[i] == j and best_row[j] == i) for i, j in sorted(pairs)]


def _confidence(
    a: BedSeries,
    b: BedSeries,
    part: _Stretch,
    pairs: list[tuple[int, int, bool]],
    random: np.random.Generator,
) -> list[float]:
    """How often each pair comes back within one bed when both records are resampled."""
    if not pairs:
        return []
    hits = np.zeros(len(pairs))
    rows = np.array([pair[0] for pair in pairs])
    columns = np.array([pair[1] for pair in pairs])
    for chunk in _chunks(RESAMPLES, len(a) * len(b)):
        table = np.concatenate([costs(resampled(a, random), [resampled(b, random)]) for _ in range(chunk)])
        path = _align(table, part).on_path()
        near = np.zeros((chunk, len(pairs)), dtype=bool)
        for step in (-1, 0, 1):
            near |= path[:, rows, np.clip(columns + step, 0, len(b) - 1)]
        hits += near.sum(axis=0)
    return [float(h) for h in hits / RESAMPLES]


def _unrelated(
    a: BedSeries, whole: BedSeries, length: int, part: _Stretch, random: np.random.Generator
) -> NDArray[np.float64]:
    """Scores of the record against unrelated wells of the same habit."""
    scores = []
    made = surrogates(whole, random, UNRELATED, length)
    for chunk in np.split(made, np.cumsum(_chunks(UNRELATED, len(a) * length))[:-1]):
        others = [whole.take(index) for index in chunk]
        scores.append(_align(costs(a, others), part).score)
    return np.concatenate(scores)


def _chunks(count: int, cells: int) -> list[int]:
    """Sizes of batches that keep the tables of one batch below some ten million cells."""
    size = max(1, min(count, 4_000_000 // max(cells, 1)))
    return [size] * (count // size) + ([count % size] if count % size else [])
