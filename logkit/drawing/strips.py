"""Strips: the lines of one structure, drawn once over a long stretch, of which every bed shows a window.

Drawing a structure anew for each bed costs far more than cutting a piece from a strip. A strip belongs to a structure,
a class of heights and a number of sets; a window is stretched to the height of its bed by a tenth at most and begins at
a place of the strip that the bed's seed chooses, so no two beds look the same. Ways of drawing lines are in `strata`
and `laminae`, cutting in `cutting`, painting in `motifs`.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.cutting import Runs, cut_each, simplified
from logkit.drawing.ground import Array, Mask
from logkit.drawing.packed import Polylines
from logkit.drawing.strata import ROLES, Box, Way

HEIGHT_STEP = 1.2
"""Ratio of one class of heights to the next."""

LEAST_HEIGHT_MM = 0.5

_NAMES = tuple(sorted(ROLES))
_RANKS = {role: rank for rank, role in enumerate(_NAMES)}

WIDTH_STEP_MM = 24.0
SPARE_MM = 24.0
"""Length of a strip beyond the widest bed it serves, in which windows begin."""

CELL_MM = 0.1
REACH_CELLS = 9
"""Distances from lines are known up to so many cells; its square and that of the next fit into eight bits."""


class Strip:
    """Lines over a long stretch.

    Attributes
    ----------
    height, length : mm
    roles : role of each line, in order of the alphabet
    points, owner : points of all lines, mm from the upper left corner, and the number of the line of each
    first, last : leftmost and rightmost reach of each line, mm
    within : True for lines that keep between top and foot of the strip
    """

    def __init__(self, way: Way, height: float, length: float, set_mm: float | None, seed: int) -> None:
        self.height, self.length = height, length
        made = way.lines((0.0, 0.0, length, height), set_mm, np.random.default_rng(seed))
        made = sorted((s for s in made if len(s.points) > 1), key=lambda stratum: stratum.role)
        lines = [simplified(stratum.points) for stratum in made]
        self.roles = [stratum.role for stratum in made]
        self.ranks = np.array([_RANKS[role] for role in self.roles], dtype=np.int64)
        self.points = np.concatenate(lines) if lines else np.empty((0, 2))
        sizes = [len(line) for line in lines]
        self.owner = np.repeat(np.arange(len(lines)), sizes)
        self.first = np.array([line[:, 0].min() for line in lines])
        self.last = np.array([line[:, 0].max() for line in lines])
        self.within = np.array(
            [line[:, 1].min() >= 0.0 and line[:, 1].max() <= height for line in lines], dtype=bool
        )

    @cached_property
    def distances(self) -> NDArray[np.uint8]:
        """Squared distance of each cell from the nearest line, in cells, capped; rows downward."""
        far = REACH_CELLS + 1
        rows, columns = (int(extent / CELL_MM) + 1 + 2 * far for extent in (self.height, self.length))
        marked = np.zeros((rows, columns), dtype=bool)
        pieces = np.flatnonzero(self.owner[1:] == self.owner[:-1])
        start, step = self.points[pieces], self.points[pieces + 1] - self.points[pieces]
        count = np.ceil(np.hypot(step[:, 0], step[:, 1]) / (0.9 * CELL_MM)).astype(int) + 1
        which = np.repeat(np.arange(len(pieces)), count)
        place = np.arange(count.sum()) - np.repeat(np.cumsum(count) - count, count)
        at = start[which] + (place / np.maximum(count - 1, 1)[which])[:, None] * step[which]
        column, row = (np.floor(at[:, axis] / CELL_MM).astype(int) + far for axis in (0, 1))
        kept = (row >= 0) & (row < rows) & (column >= 0) & (column < columns)
        marked[row[kept], column[kept]] = True
        upright = np.where(marked, 0, far).astype(np.uint8)
        for _ in range(far - 1):
            upright[1:] = np.minimum(upright[1:], upright[:-1] + np.uint8(1))
            upright[:-1] = np.minimum(upright[:-1], upright[1:] + np.uint8(1))
        squared = upright * upright
        nearest = squared.copy()
        for shift in range(1, far):
            sideways = squared + np.uint8(shift * shift)
            np.minimum(nearest[:, shift:], sideways[:, :-shift], out=nearest[:, shift:])
            np.minimum(nearest[:, :-shift], sideways[:, shift:], out=nearest[:, :-shift])
        return nearest

    @cached_property
    def flat_distances(self) -> NDArray[np.uint8]:
        """The same row after row, and one cell more that is far from every line."""
        return np.append(self.distances.ravel(), np.uint8(255))


@lru_cache(maxsize=96)
def _strip(way: Way, height_class: int, width_class: int, rows: int, seed: int) -> Strip:
    height = HEIGHT_STEP**height_class
    length = WIDTH_STEP_MM * width_class + SPARE_MM
    return Strip(way, height, length, height / rows if rows else None, seed + 31 * height_class + rows)


@dataclass(frozen=True, slots=True)
class Window:
    """A bed's piece of a strip.

    Attributes
    ----------
    strip : where the lines come from
    box : x0, y of the top, x1, y of the base on the page, mm
    shift : where on the strip the window begins, mm
    factor : how much larger than on the strip the bed's lines are spaced
    """

    strip: Strip
    box: Box
    shift: float
    factor: float

    def shown(self, polygon: Array) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
        """Which lines of the strip show in the window, and which of them need no cutting to the polygon."""
        strip, (x0, _, x1, _) = self.strip, self.box
        stop = self.shift + (x1 - x0) / self.factor
        shown = (strip.last > self.shift) & (strip.first < stop)
        free = self.shift + (_free_right(polygon, self.box) - x0) / self.factor
        return shown, shown & strip.within & (strip.first >= self.shift) & (strip.last <= free)

    @property
    def measures(self) -> tuple[float, ...]:
        """x0, factor, shift, top, stretch from page to strip, and rows and columns of the table of distances."""
        strip, (x0, top, _, base) = self.strip, self.box
        stretch = strip.height / (base - top)
        return (x0, self.factor, self.shift, top, stretch, *strip.distances.shape)

    def near(self, x: Array, y: Array, margin: Array) -> Mask:
        """True for places of the page within `margin` mm of a line."""
        strip, (x0, top, _, base) = self.strip, self.box
        distances = strip.distances
        rows, columns = distances.shape
        far = REACH_CELLS + 1
        column = np.floor(((x - x0) / self.factor + self.shift) / CELL_MM).astype(int) + far
        row = np.floor((y - top) * (strip.height / (base - top)) / CELL_MM).astype(int) + far
        here = (row >= 0) & (row < rows) & (column >= 0) & (column < columns)
        reach = np.minimum(np.ceil(margin / (CELL_MM * self.factor)), REACH_CELLS) + 0.3
        near = np.zeros(x.shape, dtype=bool)
        near[here] = distances[row[here], column[here]] <= np.square(reach[here])
        return near


def _free_right(polygon: Array, box: Box) -> float:
    """How far to the right a box is free of the polygon's edges, mm; lines up to there need no cutting."""
    x0, top, x1, base = box
    x, y = polygon[:, 0], polygon[:, 1]
    right = float(x[x > x0 + 0.4 * (x1 - x0)].min(initial=x1))
    in_the_way = (x > x0 + 1e-6) & (x < right - 1e-6) & (y > top + 1e-6) & (y < base - 1e-6)
    return x0 if in_the_way.any() else right


def window_lines(windows: Sequence[Window], polygons: Sequence[Array]) -> list[dict[str, Polylines]]:
    """The lines of each window on the page inside its polygon, by role in order of the alphabet.

    The windows of a sheet are taken together, since array code pays per call.
    """
    if not windows:
        return []
    parts = _Parts(windows, polygons)
    runs = [parts.whole()]
    for size in sorted(set(parts.size_classes)):
        runs.append(parts.cut(size))
    return _by_role(windows, runs)


class _Parts:
    """Points of the lines that windows show, whole ones and ones to cut apart."""

    def __init__(self, windows: Sequence[Window], polygons: Sequence[Array]) -> None:
        self.windows, self.polygons = windows, polygons
        self.size_classes = [len(polygon).bit_length() for polygon in polygons]
        self._whole: list[tuple[int, NDArray[np.int64]]] = []
        self._cut: list[tuple[int, NDArray[np.int64]]] = []
        for number, (piece, polygon) in enumerate(zip(windows, polygons, strict=True)):
            shown, whole = piece.shown(polygon)
            of_line = piece.strip.owner
            self._whole.append((number, whole[of_line].nonzero()[0]))
            self._cut.append((number, (shown & ~whole)[of_line].nonzero()[0]))

    def _placed(
        self, chosen: Sequence[tuple[int, NDArray[np.int64]]]
    ) -> tuple[Array, NDArray[np.int64], NDArray[np.int64]]:
        """Points on the page, the line of each (window and line in one number), and its window."""
        pieces = [self.windows[number] for number, _ in chosen]
        numbers = np.repeat([number for number, _ in chosen], [index.size for _, index in chosen])
        rows = np.repeat(np.arange(len(chosen)), [index.size for _, index in chosen])
        strips = [piece.strip for piece in pieces]
        points = np.concatenate([s.points.take(i, axis=0) for s, (_, i) in zip(strips, chosen, strict=True)])
        owner = np.concatenate([s.owner[i] for s, (_, i) in zip(strips, chosen, strict=True)])
        points -= np.array([(piece.shift, 0.0) for piece in pieces])[rows]
        points *= np.array([(p.factor, (p.box[3] - p.box[1]) / p.strip.height) for p in pieces])[rows]
        points += np.array([piece.box[:2] for piece in pieces])[rows]
        return points, owner + numbers * _MOST_LINES, numbers

    def whole(self) -> Runs:
        """Lines that need no cutting."""
        points, owner, _ = self._placed(self._whole)
        fresh = np.ones(owner.size, dtype=bool)
        fresh[1:] = owner[1:] != owner[:-1]
        starts = fresh.nonzero()[0]
        return Runs(points, starts, owner[starts])

    def cut(self, size: int) -> Runs:
        """The parts of the others, for the polygons of one class of size."""
        chosen = [pair for pair in self._cut if self.size_classes[pair[0]] == size and pair[1].size]
        if not chosen:
            none = np.empty(0, dtype=np.int64)
            return Runs(np.empty((0, 2)), none, none)
        points, owner, _ = self._placed(chosen)
        rows = np.repeat(np.arange(len(chosen)), [index.size for _, index in chosen])
        return cut_each(points, owner, rows, [self.polygons[number] for number, _ in chosen])


_MOST_LINES = 1 << 32


def _by_role(windows: Sequence[Window], found: Sequence[Runs]) -> list[dict[str, Polylines]]:
    """Runs sorted by window and role, in the order found within them."""
    points = np.concatenate([runs.points for runs in found])
    offsets = np.cumsum([0, *(len(runs.points) for runs in found)])
    starts = np.concatenate([runs.starts + offset for runs, offset in zip(found, offsets[:-1], strict=True)])
    owners = np.concatenate([runs.owners for runs in found])
    made: list[dict[str, Polylines]] = [{} for _ in windows]
    if not starts.size:
        return made
    bounds = np.concatenate(([0], np.cumsum([piece.strip.ranks.size for piece in windows])))
    ranks = np.concatenate([piece.strip.ranks for piece in windows])
    number = owners // _MOST_LINES
    key = number * len(_NAMES) + ranks[bounds[number] + owners % _MOST_LINES]
    order = np.argsort(key, kind="stable")
    sizes = np.diff(starts, append=len(points))[order]
    begins = np.cumsum(sizes) - sizes
    points = points[np.repeat(starts[order] - begins, sizes) + np.arange(len(points))]
    key = key[order]
    heads = np.flatnonzero(np.diff(key, prepend=-1))
    first_run = [*heads.tolist(), key.size]
    first_point = [*begins[heads].tolist(), len(points)]
    for place, label in enumerate(key[heads].tolist()):
        first, last = first_point[place], first_point[place + 1]
        own = begins[first_run[place] : first_run[place + 1]] - first
        made[label // len(_NAMES)][_NAMES[label % len(_NAMES)]] = Polylines(points[first:last], own)
    return made


def window(way: Way, box: Box, set_mm: float | None, factor: float, seed: int, term_seed: int) -> Window:
    """The window of a bed.

    Parameters
    ----------
    way : how the structure fills a bed
    box : on the page, mm
    set_mm : thickness of a set on the page, None when not recorded
    factor : how much larger the style draws structures
    seed, term_seed : of the bed, and of the structure
    """
    height, width = (box[3] - box[1]) / factor, (box[2] - box[0]) / factor
    height_class = round(math.log(max(height, LEAST_HEIGHT_MM)) / math.log(HEIGHT_STEP))
    width_class = max(1, math.ceil(width / WIDTH_STEP_MM))
    rows = 0
    if set_mm is not None and set_mm > 0:
        rows = max(1, round(height * factor / set_mm))
    strip = _strip(way, height_class, width_class, rows, term_seed)
    shift = (seed * 0.618033989) % 1.0 * (strip.length - width)
    return Window(strip, box, shift, factor)
