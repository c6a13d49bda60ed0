"""Core-to-log depth shifts: constant, per interval or point by point. Moves depths; knows no beds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np

from logkit.errors import ArgumentError

if TYPE_CHECKING:
    from numpy.typing import NDArray

ShiftKind = Literal["constant", "per interval", "point by point"]


@dataclass(frozen=True, slots=True)
class ShiftTable:
    """How core depths move to logged depths; a positive shift moves the core down.

    Attributes
    ----------
    kind : "constant" (one row), "per interval" (each row holds between its depths, nothing outside) or
        "point by point" (linear between points, the end values beyond them)
    rows : (from_m, to_m, shift_m); for points from and to are the same depth
    """

    kind: ShiftKind
    rows: tuple[tuple[float, float, float], ...]

    def __post_init__(self) -> None:
        if not self.rows:
            raise ArgumentError("rows", self.rows, "at least one shift")
        if not np.isfinite(np.asarray([row[2] for row in self.rows])).all():
            raise ArgumentError("shift_m", self.rows, "a number in every row")
        if self.kind == "constant":
            return
        edges = np.asarray(self.rows, dtype=float)
        if not np.isfinite(edges).all() or (edges[:, 1] < edges[:, 0]).any():
            raise ArgumentError("rows", self.rows, "depths with from_m above to_m")
        if (edges[1:, 0] < edges[:-1, 1]).any():
            raise ArgumentError(
                "rows", self.rows, "intervals that follow each other downwards without overlap"
            )
        if self.kind == "point by point" and (np.diff(edges[:, 0] + edges[:, 2]) <= 0).any():
            raise ArgumentError("rows", self.rows, "points that keep their order after the shift")

    @classmethod
    def constant(cls, shift_m: float) -> ShiftTable:
        """The same shift everywhere."""
        return cls("constant", ((float("-inf"), float("inf"), float(shift_m)),))

    @classmethod
    def points(cls, depths_m: tuple[float, ...], shifts_m: tuple[float, ...]) -> ShiftTable:
        """Shifts at matched depths, linear between them."""
        return cls("point by point", tuple((d, d, s) for d, s in zip(depths_m, shifts_m, strict=True)))

    def shift_at(self, depth_m: float) -> float:
        """Shift of one core depth, m; 0 outside the intervals of a table by intervals."""
        if self.kind == "point by point":
            depths, shifts = [row[0] for row in self.rows], [row[2] for row in self.rows]
            return float(np.interp(depth_m, depths, shifts))
        for start, end, shift in self.rows:
            if start <= depth_m <= end:
                return shift
        return 0.0

    def move(self, top_m: float, base_m: float) -> tuple[float, float]:
        """Logged depths of a core interval: moved as a whole, or stretched between points."""
        if self.kind == "point by point":
            return top_m + self.shift_at(top_m), base_m + self.shift_at(base_m)
        shift = self.shift_at(0.5 * (top_m + base_m))
        return top_m + shift, base_m + shift

    def covers(self, depths_m: NDArray[np.float64]) -> NDArray[np.bool_]:
        """Which depths a table by intervals speaks for."""
        if self.kind != "per interval":
            return np.ones(len(depths_m), dtype=bool)
        return np.any([(depths_m >= start) & (depths_m <= end) for start, end, _ in self.rows], axis=0)
