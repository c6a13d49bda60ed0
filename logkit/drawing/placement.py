"""Placing labels along one line without overlap: thinning where they are too many, then pushing apart.

Knows positions and sizes only; what a label says and how its leader looks is up to the track that asks.
"""

from __future__ import annotations

import itertools
from collections.abc import Sequence


def spread(
    wanted: Sequence[float], heights: Sequence[float], low: float, high: float, gap: float = 0.0
) -> list[float] | None:
    """Centres of labels that keep their order, do not touch and lie as near as possible to where they belong.

    Parameters
    ----------
    wanted : wanted centres in increasing order, mm
    heights : height of each label, mm
    low, high : limits that no label may cross, mm
    gap : least distance between two labels, mm

    Returns
    -------
    centres, mm, or None when the labels do not fit between the limits

    Notes
    -----
    Least squares under an ordering constraint: pool adjacent violators on positions from which the stacked
    heights were taken off [barlow_1972]. The order is kept, so leaders never cross.
    """
    if not wanted:
        return []
    offsets = [0.0]
    for first, second in itertools.pairwise(heights):
        offsets.append(offsets[-1] + (first + second) / 2 + gap)
    least = low + heights[0] / 2
    most = high - heights[-1] / 2 - offsets[-1]
    if most < least - 1e-9:
        return None
    blocks: list[tuple[float, int]] = []
    for target, offset in zip(wanted, offsets, strict=True):
        total, count = target - offset, 1
        while blocks and blocks[-1][0] / blocks[-1][1] >= total / count:
            before, number = blocks.pop()
            total, count = total + before, count + number
        blocks.append((total, count))
    centres = []
    index = 0
    for total, count in blocks:
        level = min(max(total / count, least), max(most, least))
        for _ in range(count):
            centres.append(level + offsets[index])
            index += 1
    return centres


def thin(wanted: Sequence[float], height: float, weights: Sequence[float], window: float = 24.0) -> list[int]:
    """Indices of the labels to keep so that no stretch of the line holds more than fit into it.

    Parameters
    ----------
    wanted : wanted centres in increasing order, mm
    height : height of one label with its gap, mm
    weights : importance; the greater ones stay
    window : length of the stretches, mm
    """
    room = max(1, int(window / height))
    kept: list[int] = []
    start = 0
    while start < len(wanted):
        stop = start
        cell = int(wanted[start] // window)
        while stop < len(wanted) and int(wanted[stop] // window) == cell:
            stop += 1
        members = range(start, stop)
        if len(members) > room:
            members_kept = sorted(sorted(members, key=lambda i: (-weights[i], i))[:room])
        else:
            members_kept = list(members)
        kept.extend(members_kept)
        start = stop
    return kept


def keep_clear(wanted: Sequence[float], heights: Sequence[float], gap: float = 0.0) -> list[int]:
    """Indices of labels that can stay exactly where they are; later ones give way to earlier ones."""
    kept: list[int] = []
    edge = float("-inf")
    for index, (centre, height) in enumerate(zip(wanted, heights, strict=True)):
        if centre - height / 2 >= edge + gap:
            kept.append(index)
            edge = centre + height / 2
    return kept
