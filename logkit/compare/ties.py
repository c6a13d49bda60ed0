"""Ties between neighbouring wells at shared markers. Suggested ties are made elsewhere and never mixed in."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import pairwise
from typing import Literal

from logkit.compare.placing import PlacedLog, marker_key, markers
from logkit.model import Bed

TieKind = Literal["time", "lithological"]

TIME_LITHOLOGIES = frozenset({"ash", "bentonite", "tuff"})
"""Beds that fell everywhere at once: a tie at them is a time tie."""


@dataclass(frozen=True, slots=True)
class Tie:
    """A tie at a marker seen in two neighbouring wells.

    Attributes
    ----------
    marker : name as written in the first well
    kind : "time" for ash and the like, or where the marker's name says so; else "lithological"
    sure : False when either well queries the marker
    first, second : names of the wells
    first_bed, second_bed : bed names
    first_base_m, first_top_m, second_base_m, second_top_m : heights above the datum, m
    """

    marker: str
    kind: TieKind
    sure: bool
    first: str
    second: str
    first_bed: str
    second_bed: str
    first_base_m: float
    first_top_m: float
    second_base_m: float
    second_top_m: float


def find_ties(placed: Sequence[PlacedLog]) -> tuple[tuple[Tie, ...], tuple[str, ...]]:
    """Ties between each well and the next, upward, and notes on markers that could not be tied.

    A marker that stands twice in a well, or whose ties would cross others, is not tied; a gap carries none.
    """
    ties: list[Tie] = []
    notes: list[str] = []
    for first, second in pairwise(placed):
        pairs = _pairs(first, second, notes)
        for key, i, j in _without_crossings(first, second, pairs, notes):
            ties.append(_tie(key, first, second, i, j))
    return tuple(ties), tuple(dict.fromkeys(notes))


def anchors(first: PlacedLog, second: PlacedLog) -> list[tuple[int, int]]:
    """Places in the two bed lists of the sure ties, upward: an alignment is held by them."""
    notes: list[str] = []
    pairs = _without_crossings(first, second, _pairs(first, second, notes), notes)
    return [(i, j) for _, i, j in pairs if first.log.beds[i].marker_sure and second.log.beds[j].marker_sure]


def _pairs(first: PlacedLog, second: PlacedLog, notes: list[str]) -> list[tuple[str, int, int]]:
    one, two = markers(first.log), markers(second.log)
    pairs = []
    for key in one:
        if key not in two:
            continue
        doubled = [p.name for p, m in ((first, one), (second, two)) if len(m[key]) > 1]
        if doubled:
            notes.append(f"marker {key} stands more than once in {', '.join(doubled)}: not tied")
            continue
        pairs.append((key, one[key][0], two[key][0]))
    return sorted(pairs, key=lambda pair: pair[1])


def _without_crossings(
    first: PlacedLog, second: PlacedLog, pairs: list[tuple[str, int, int]], notes: list[str]
) -> list[tuple[str, int, int]]:
    """The longest run of markers in the same order in both wells; the others are named."""

    @cache
    def best(at: int) -> tuple[int, ...]:
        after = [best(k) for k in range(at + 1, len(pairs)) if pairs[k][2] > pairs[at][2]]
        return (at, *max(after, key=len, default=()))

    kept = max((best(k) for k in range(len(pairs))), key=len, default=())
    for k, pair in enumerate(pairs):
        if k not in kept:
            notes.append(
                f"marker {pair[0]} lies in another order in {first.name} and {second.name}: not tied"
            )
    return [pairs[k] for k in kept]


def _tie(key: str, first: PlacedLog, second: PlacedLog, i: int, j: int) -> Tie:
    a, b = first.hung.beds[i], second.hung.beds[j]
    return Tie(
        a.marker,
        "time" if _is_time(a) and _is_time(b) else "lithological",
        a.marker_sure and b.marker_sure,
        first.name,
        second.name,
        a.name,
        b.name,
        a.base_m,
        a.top_m,
        b.base_m,
        b.top_m,
    )


def _is_time(bed: Bed) -> bool:
    words = set(marker_key(bed.marker).split())
    return bed.lithology in TIME_LITHOLOGIES or bool(words & {"ash", "bentonite", "tuff", "tephra"})
