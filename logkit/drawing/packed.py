"""Many points, polylines or level strokes in one array each, read like the tuples that other shapes hold.

A tuple a point costs more than everything that is done with it, and a texture has a hundred thousand of them. Only
`svg` looks at the arrays; whoever iterates sees plain points and steps. What is drawn where is not decided here.
"""

from __future__ import annotations

import itertools
from abc import abstractmethod
from collections.abc import Iterator, Sequence
from typing import Any, TypeVar

import numpy as np
from numpy.typing import NDArray

T = TypeVar("T")


class Packed(Sequence[T]):
    """A sequence kept in an array of points, (n, 2), mm."""

    __slots__ = ("points",)

    def __init__(self, points: NDArray[np.float64]) -> None:
        self.points = points

    @abstractmethod
    def unpacked(self) -> list[T]:
        """The sequence as a list."""

    def __len__(self) -> int:
        return len(self.points)

    def __getitem__(self, place: Any) -> Any:
        return self.unpacked()[place]

    def __iter__(self) -> Iterator[T]:
        return iter(self.unpacked())

    def __eq__(self, other: object) -> bool:
        return isinstance(other, type(self)) and self.unpacked() == other.unpacked()

    def __hash__(self) -> int:
        return hash(self.points.tobytes())


class Points(Packed[tuple[float, float]]):
    """Points one by one."""

    __slots__ = ()

    def unpacked(self) -> list[tuple[float, float]]:
        """As (x, y)."""
        return [(x, y) for x, y in self.points.tolist()]


class Strokes(Packed[tuple[str, tuple[float, ...]]]):
    """Level strokes as steps of a path: left end, right end, left end, …"""

    __slots__ = ()

    def unpacked(self) -> list[tuple[str, tuple[float, ...]]]:
        """As ("M", left end), ("L", right end) for each."""
        return [("L" if i % 2 else "M", (x, y)) for i, (x, y) in enumerate(self.points.tolist())]


class Polylines(Packed[tuple[tuple[float, float], ...]]):
    """Polylines one after the other; `starts` says where each begins in the points."""

    __slots__ = ("starts",)

    def __init__(self, points: NDArray[np.float64], starts: NDArray[np.int64]) -> None:
        super().__init__(points)
        self.starts = starts

    def __len__(self) -> int:
        return len(self.starts)

    def unpacked(self) -> list[tuple[tuple[float, float], ...]]:
        """As tuples of (x, y)."""
        points = [(x, y) for x, y in self.points.tolist()]
        bounds = [*self.starts.tolist(), len(points)]
        return [tuple(points[a:b]) for a, b in itertools.pairwise(bounds)]
