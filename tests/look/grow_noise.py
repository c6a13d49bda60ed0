"""Grows the blue-noise tile that ships as `logkit/drawing/data/noise.npy`.

Run by hand: `python tests/look/grow_noise.py`. Points are added one by one, each at a random place among those
farthest from all earlier ones on a torus. The distance at which a point came in is its rank: the points of rank r and
more are blue noise with a least distance of about r.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np

TILE_MM, CELL_MM, LEAST_MM, LOOSENESS = 40.0, 0.05, 0.40, 0.80


def grow(seed: int = 1) -> np.ndarray:
    """Rows of x, y and rank in micrometres, sorted by y."""
    random = np.random.default_rng(seed)
    cells = round(TILE_MM / CELL_MM)
    axis = (np.arange(cells) + 0.5) * CELL_MM
    free = np.full((cells, cells), 1e9)
    points, ceiling = [], 14.0
    while True:
        open_cells = np.flatnonzero(free.ravel() >= ceiling * LOOSENESS)
        if open_cells.size == 0:
            ceiling *= 0.985
            if ceiling * LOOSENESS < LEAST_MM:
                break
            continue
        for cell in random.permutation(open_cells):
            row, column = divmod(int(cell), cells)
            rank = free[row, column]
            if rank < ceiling * LOOSENESS:
                continue
            x, y = axis[column], axis[row]
            points.append((x, y, min(rank, 14.0)))
            reach = min(int(ceiling * 1.3 / CELL_MM) + 2, cells // 2 - 1)
            rows = np.arange(row - reach, row + reach + 1) % cells
            columns = np.arange(column - reach, column + reach + 1) % cells
            dy, dx = np.abs(axis[rows] - y), np.abs(axis[columns] - x)
            dy, dx = np.minimum(dy, TILE_MM - dy), np.minimum(dx, TILE_MM - dx)
            window = np.ix_(rows, columns)
            free[window] = np.minimum(free[window], np.hypot(dy[:, None], dx[None, :]))
    tile = np.array(points)
    tile = tile[np.argsort(tile[:, 1], kind="stable")]
    return np.round(tile * 1000).astype(np.uint16)


def main() -> None:
    """Write the tile."""
    tile = grow()
    path = Path(__file__).resolve().parents[2] / "logkit" / "drawing" / "data" / "noise.npy"
    np.save(path, tile)
    print(f"{len(tile)} points, {path.stat().st_size} bytes: {path}")


if __name__ == "__main__":
    main()
