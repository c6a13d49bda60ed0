"""The grounds of a sheet's beds taken together: candidates for marks, and which of them are held.

Array code pays per call and a bed has few marks, so the same steps are done for all beds at once, each in one call.
What a ground is, is in `ground`; which mark goes where is decided in `textures`.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from logkit.drawing.ground import Array, Ground, Mask, edges_of, inside_edges
from logkit.drawing.noise import FINEST_MM, drawn_for_each, scatter_each
from logkit.drawing.strips import CELL_MM, REACH_CELLS, Window

Numbers = NDArray[np.int64]


class Grounds:
    """Several grounds; a candidate is known by its place on the page and the number of its ground."""

    def __init__(self, grounds: Sequence[Ground]) -> None:
        self.grounds = grounds
        self._edges = _edge_tables(grounds)

    def points(
        self, spacings: Sequence[float], stretch: tuple[float, float] = (1.0, 1.0), salt: int = 0
    ) -> tuple[Array, Array, Array, Numbers]:
        """As `Ground.points` for each: x, y, the spacing they serve, and how many there are for each ground."""
        sx, sy = stretch
        boxes = [(x0 / sx, y0 / sy, x1 / sx, y1 / sy) for x0, y0, x1, y1 in (g.box for g in self.grounds)]
        least = [max(spacing, FINEST_MM) for spacing in spacings]
        x, y, reach, counts = scatter_each(boxes, least, [ground.seed + salt for ground in self.grounds])
        return x * sx, y * sy, reach, counts

    def phi_at(self, y: Array, counts: Numbers) -> Array:
        """Grain size at heights on the page, those of the first ground first, phi."""
        phi = np.repeat([ground.phi_range[1] for ground in self.grounds], counts)
        ends = np.cumsum(counts).tolist()
        for ground, first, last in zip(self.grounds, [0, *ends[:-1]], ends, strict=True):
            if ground.phi_range[0] < ground.phi_range[1]:
                phi[first:last] = ground.phi_at(y[first:last])
        return phi

    def random(self, counts: Numbers) -> Array:
        """So many random numbers from each ground, one after the other."""
        return drawn_for_each([ground.random for ground in self.grounds], counts)

    def holds(self, x: Array, y: Array, margin: Array, of: Numbers) -> Mask:
        """As `Ground.holds` for candidates of the grounds `of`, which increase."""
        held = np.zeros(x.size, dtype=bool)
        for table, row in self._edges:
            rows = row[of]
            own = (rows >= 0).nonzero()[0]
            if own.size:
                held[own] = inside_edges(table.take(rows[own], axis=2), x[own], y[own], margin[own])
        index = held.nonzero()[0]
        if index.size and any(ground.has_lines for ground in self.grounds):
            held[index] = ~self._near(x[index], y[index], margin[index], of[index])
        return held

    def _near(self, x: Array, y: Array, margin: Array, of: Numbers) -> Mask:
        """True for candidates within their margin of a line of their ground."""
        bounds = np.searchsorted(of, np.arange(len(self.grounds) + 1)).tolist()
        near = np.zeros(x.size, dtype=bool)
        windows, spans = [], []
        for ground, first, last in zip(self.grounds, bounds[:-1], bounds[1:], strict=True):
            if first == last:
                continue
            for piece in ground.windows:
                windows.append(piece)
                spans.append((first, last))
            if ground.has_raster:
                near[first:last] = ground.near_marks(x[first:last], y[first:last], margin[first:last])
        if windows:
            _near_windows(windows, spans, x, y, margin, near)
        return near


def _near_windows(
    windows: Sequence[Window],
    spans: Sequence[tuple[int, int]],
    x: Array,
    y: Array,
    margin: Array,
    near: Mask,
) -> None:
    """Set `near` where a candidate of a window's span lies within its margin of the window's lines."""
    sizes = np.array([last - first for first, last in spans])
    ends = np.cumsum(sizes)
    pairs = np.repeat([first for first, _ in spans] - (ends - sizes), sizes) + np.arange(ends[-1])
    cells, reach = _near_cells(windows, sizes, x[pairs], y[pairs], margin[pairs])
    for piece, (first, last), end in zip(windows, spans, ends.tolist(), strict=True):
        own = slice(end - (last - first), end)
        near[first:last] |= piece.strip.flat_distances.take(cells[own]) <= reach[own]


def _near_cells(
    windows: Sequence[Window], sizes: Numbers, x: Array, y: Array, margin: Array
) -> tuple[Numbers, Array]:
    """Cell of each candidate in its window's table of distances, and the squared distance that is too near, in cells.

    Places outside the table are given a cell past its end, which is far from every line.
    """
    numbers = np.array([piece.measures for piece in windows]).T
    x0, factor, shift, top, stretch, rows, columns = np.repeat(numbers, sizes, axis=1)
    column = np.floor(((x - x0) / factor + shift) / CELL_MM) + (REACH_CELLS + 1)
    row = np.floor((y - top) * stretch / CELL_MM) + (REACH_CELLS + 1)
    reach = np.minimum(np.ceil(margin / (CELL_MM * factor)), REACH_CELLS) + 0.3
    here = (row >= 0) & (row < rows) & (column >= 0) & (column < columns)
    cells = np.where(here, row * columns + column, rows * columns).astype(np.int64)
    return cells, np.square(reach)


def _edge_tables(grounds: Sequence[Ground]) -> list[tuple[Array, Numbers]]:
    """Edges of the outlines, those with about as many edges in one table; and the column of each ground in it."""
    if not grounds:
        return []
    edges, counts = edges_of([ground.outline for ground in grounds])
    starts = np.cumsum(counts) - counts
    classes: dict[int, list[int]] = {}
    for number, count in enumerate(counts.tolist()):
        classes.setdefault(count.bit_length(), []).append(number)
    tables = []
    for members in classes.values():
        own = counts[members]
        place = np.arange(own.max())[:, None]
        spare = place >= own
        table = edges[:, starts[members] + np.where(spare, 0, place)]
        # the first edge once more changes no distance; without a slope it is never crossed
        table[5][spare] = np.nan
        row = np.full(len(grounds), -1)
        row[members] = np.arange(len(members))
        tables.append((table, row))
    return tables
