"""Path data of packed points: the same text as `svg` writes point by point, for all arrays of a sheet in one pass.

Words for the short steps that textures are made of are looked up in a table; only what is longer is put into words
one by one.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.packed import Packed, Points, Polylines, Strokes

REACH = 2000
"""Steps up to so many units have their words in the table."""

_WIDTH = 2 * REACH + 1
_MOVE, _LINE, _NEXT, _LEVEL, _DOT = range(5)
_NOTHING = 5 * _WIDTH


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


def packed_data(shapes: Sequence[Packed]) -> list[str]:  # type: ignore[type-arg]
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
    sizes = [len(shape.points) for shape in shapes]
    bounds = np.cumsum([0, *sizes])
    steps = points.astype(np.int64)
    steps[1:] -= steps[:-1].copy()
    heads = bounds[:-1]
    steps[heads] = points[heads].astype(np.int64)
    kinds = np.full(steps.shape, _NEXT)
    for shape, first, last in zip(shapes, heads.tolist(), bounds[1:].tolist(), strict=True):
        if isinstance(shape, Points):
            kinds[first:last] = (_MOVE, _DOT)
        elif isinstance(shape, Polylines):
            starts = shape.starts + first
            kinds[starts + 1, 0] = _LINE
            kinds[starts, 0] = _MOVE
        elif isinstance(shape, Strokes):
            kinds[first:last:2, 0] = _MOVE
            kinds[first + 1 : last : 2, 0] = _LEVEL
            kinds[first + 1 : last : 2, 1] = _NOTHING // _WIDTH
    places = kinds * _WIDTH + (steps + REACH)
    places[kinds == _NOTHING // _WIDTH] = _NOTHING
    flat_places, flat_steps, flat_kinds = places.ravel(), steps.ravel(), kinds.ravel()
    long = np.flatnonzero((np.abs(flat_steps) > REACH) & (flat_places != _NOTHING))
    flat_places[long] = _NOTHING
    words = _table().take(flat_places).tolist()
    for place, kind, step in zip(
        long.tolist(), flat_kinds[long].tolist(), flat_steps[long].tolist(), strict=True
    ):
        words[place] = _words(kind, step)
    made = []
    for shape, first, last in zip(shapes, heads.tolist(), bounds[1:].tolist(), strict=True):
        text = "".join(words[2 * first : 2 * last])
        made.append(text if isinstance(shape, Points) else "M" + text[1:])
    return made
