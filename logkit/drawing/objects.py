"""Where the objects of a bed sit: scattered through it, in a row at its base or top, in columns across it.

Gives places and sizes; what stands there is a mark of motifs.toml.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logkit.drawing.noise import scatter
from logkit.drawing.strata import Box

PLACINGS = ("scatter", "base", "top", "across", "rows")


@dataclass(frozen=True, slots=True)
class Placed:
    """One object: centre on the page, half width and half height in mm, turn in radians."""

    x: float
    y: float
    half_width: float
    half_height: float
    turn: float = 0.0

    def times(self, factor: float) -> Placed:
        """The same object in a frame enlarged by a factor."""
        return Placed(
            self.x * factor, self.y * factor, self.half_width * factor, self.half_height * factor, self.turn
        )


@dataclass(frozen=True, slots=True)
class Objects:
    """How marks are placed.

    where : "scatter", "base" or "top" (row along that edge), "across" (the full height), "rows" (level rows)
    width, height : of one object, mm; spacing : between centres, mm; turn : random turn up to, degrees
    sizes : random sizes from this share up; depth : share of the bed that a row at the top or base may take
    """

    where: str = "scatter"
    width: float = 2.4
    height: float = 1.6
    spacing: float = 4.0
    turn: float = 0.0
    sizes: float = 0.75
    depth: float = 0.8
    most: int = 60

    def places(self, box: Box, random: np.random.Generator) -> list[Placed]:
        """Objects in a box, the largest first where they could touch."""
        room = box[3] - box[1]
        if self.where == "scatter":
            return self._scattered(box, random)
        if self.where == "rows":
            rows = max(1, int(room / self.spacing * 1.6))
            stacked: list[Placed] = []
            for row in range(rows):
                level = box[1] + (row + 0.5) * room / rows
                stacked += self._row(box, level, room / rows, random)
            return stacked
        if self.where == "across":
            return [
                Placed(x, (box[1] + box[3]) / 2, self.width / 2, room / 2) for x in self._columns(box, random)
            ]
        made: list[Placed] = []
        for x in self._columns(box, random):
            share = self.sizes + (1 - self.sizes) * random.random()
            tall = min(self.height * share, self.depth * room)
            y = box[1] + tall / 2 if self.where == "top" else box[3] - tall / 2
            made.append(Placed(x, y, self.width / 2 * min(1.0, 0.5 + 0.5 * tall / self.height), tall / 2))
        return made

    def _columns(self, box: Box, random: np.random.Generator) -> list[float]:
        x = box[0] + self.width / 2 + 0.5 + 0.4 * self.spacing * random.random()
        made: list[float] = []
        while x < box[2] - self.width / 2 - 0.3 and len(made) < self.most:
            made.append(float(x))
            x += self.spacing * (0.8 + 0.4 * random.random())
        return made

    def _row(self, box: Box, level: float, room: float, random: np.random.Generator) -> list[Placed]:
        shrink = min(1.0, 0.85 * room / self.height)
        return [
            Placed(
                x,
                level + 0.2 * room * (random.random() - 0.5),
                self.width / 2 * shrink,
                self.height / 2 * shrink,
            )
            for x in self._columns(box, random)
        ]

    def _scattered(self, box: Box, random: np.random.Generator) -> list[Placed]:
        room = box[3] - box[1]
        shrink = min(1.0, 0.8 * room / self.height)
        spacing = max(self.spacing * shrink, 0.45)
        flat = min(1.0, max(self.height / self.width, 0.45))
        area = (box[2] - box[0]) * room
        spacing *= max(1.0, (0.7 * area / (spacing**2 * flat) / self.most) ** 0.5)
        seed = int(random.integers(0, 1 << 30))
        x, y, reach = scatter((box[0], box[1] / flat, box[2], box[3] / flat), spacing, seed)
        kept = reach >= spacing
        made = []
        for cx, cy in zip(x[kept].tolist(), (y[kept] * flat).tolist(), strict=True):
            share = shrink * (self.sizes + (1 - self.sizes) * random.random())
            turn = np.radians(self.turn) * (2 * random.random() - 1)
            made.append(Placed(cx, cy, self.width / 2 * share, self.height / 2 * share, float(turn)))
        return made
