"""Path data of packed points: the same text as `svg` writes point by point, for all arrays of a sheet in one pass.

Words for the short steps that textures are made of are looked up in a table; only what is longer is put into words
one by one.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from typing import Any

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.packed import Packed, Points, Polylines, Strokes

REACH = 2000
"""Steps up to so many units have their words in the table."""

_WIDTH = 2 * REACH + 1
_MOVE, _LINE, _NEXT, _LEVEL, _DOT = range(5)
_EMPTY = 5
_NOTHING = _EMPTY * _WIDTH
_STROKE = 6
_KINDS = {Points: (_MOVE, _DOT), Polylines: (_NEXT, _NEXT), Strokes: (_MOVE, _STROKE)}


def _words(kind: int, value: int) -> str:
    """One coordinate of a step, with what stands before or after it."""
    if kind in (_NEXT, _DOT):
        return (f"{value}" if value < 0 else f" {value}") + ("h0" if kind == _DOT else "")
    return f"{'ml h'[kind]}{value}"


@cache
def _table() -> NDArray[np.object_]:
    """The words of all short steps, kind after kind, and the empty word."""
    steps = [str(value) for value in range(-REACH, REACH + 1)]
    spaced = steps[:REACH] + [" " + step for step in steps[REACH:]]
    words = [letter + step for letter in "ml" for step in steps]
    words += spaced
    words += ["h" + step for step in steps]
    words += [step + "h0" for step in spaced]
    return np.array([*words, ""], dtype=object)


def packed_data(shapes: Sequence[Packed[Any]]) -> list[str]:
    """The `d` attribute of each, from the points in mm; a position is a whole number of 0.01 mm.

    Raises
    ------
    ValueError : a coordinate is not finite
    """
    if not shapes:
        return []
    points = np.rint(np.concatenate([shape.points for shape in shapes]) * 100)
    if not np.isfinite(points).all():
        raise ValueError("a coordinate is not finite")
    sizes = np.array([len(shape.points) for shape in shapes])
    bounds = np.concatenate(([0], np.cumsum(sizes)))
    heads = bounds[:-1]
    steps = points.astype(np.int64)
    steps[1:] -= steps[:-1].copy()
    steps[heads] = points[heads].astype(np.int64)
    kinds = _kinds(shapes, sizes, heads)
    places = kinds * _WIDTH + (steps + REACH)
    places[kinds == _EMPTY] = _NOTHING
    flat_places, flat_steps, flat_kinds = places.ravel(), steps.ravel(), kinds.ravel()
    long = np.flatnonzero((np.abs(flat_steps) > REACH) & (flat_places != _NOTHING))
    flat_places[long] = _NOTHING
    words = _table().take(flat_places).tolist()
    for place, kind, step in zip(
        long.tolist(), flat_kinds[long].tolist(), flat_steps[long].tolist(), strict=True
    ):
        words[place] = _words(kind, step)
    made = []
    ends = (2 * bounds).tolist()
    for shape, first, last in zip(shapes, ends[:-1], ends[1:], strict=True):
        text = "".join(words[first:last])
        made.append(text if isinstance(shape, Points) else "M" + text[1:])
    return made


def _kinds(
    shapes: Sequence[Packed[Any]], sizes: NDArray[np.int64], heads: NDArray[np.int64]
) -> NDArray[np.int64]:
    """How each coordinate is put into words, (points, 2)."""
    pairs = [_KINDS[type(shape)] for shape in shapes]
    kinds = np.repeat(pairs, sizes, axis=0)
    starts = [shape.starts + head for shape, head in zip(shapes, heads.tolist(), strict=True)
              if isinstance(shape, Polylines)]  # fmt: skip
    if starts:
        begins = np.concatenate(starts)
        kinds[begins + 1, 0] = _LINE
        kinds[begins, 0] = _MOVE
    ends = (kinds[:, 1] == _STROKE).nonzero()[0]
    if ends.size:
        # strokes have two points, so that every other one of theirs is an end
        kinds[ends, 1] = _NEXT
        kinds[ends[1::2]] = (_LEVEL, _EMPTY)
    return kinds
