"""Lines of stratification inside a box: sets of troughs, of foresets and of domes. Laminae are in `laminae`.

Each way of filling is a frozen record of its parameters (the keys of `fill` in motifs.toml) with a method that
gives polylines, oldest first. Flow runs from left to right. Cutting to the bed and painting is in `motifs`.
"""

from __future__ import annotations

import math
from collections.abc import Hashable, Iterator
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from logkit.drawing.ground import Array

Box = tuple[float, float, float, float]
"""x0, y of the top, x1, y of the base, mm on the page."""


ROLES = ("set", "lamina", "crest", "drape")
"""What a line is, which decides its weight and colour."""

FORMS = ("tangential", "sigmoid", "straight", "overturned")
"""Forms of a foreset."""


@dataclass(frozen=True, slots=True)
class Stratum:
    """One line: points (n, 2) in mm on the page and its role, which decides weight and colour."""

    points: Array
    role: str


class Way(Hashable, Protocol):
    """A way of filling a bed with lines."""

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        """Lines in the box."""


def levels(box: Box, step: float, random: np.random.Generator, uneven: float = 0.0) -> list[float]:
    """Base heights of sets or rows from the base up, about `step` apart, the top one at least half full."""
    top, base = box[1], box[3]
    count = max(1, round((base - top) / step))
    size = (base - top) / count
    shifts = uneven * size * (random.random(count) - 0.5)
    shifts[0] = 0.0
    return [base - i * size + float(shifts[i]) for i in range(count)]


@dataclass(frozen=True, slots=True)
class Troughs:
    """Sets of troughs; each younger trough erases older lines.

    width : half-width over set thickness; depth : trough depth over set thickness; skew : of the inner arcs
    """

    width: float = 1.7
    depth: float = 1.18
    skew: float = 0.22
    set: float = 6.0

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        height = min(set_mm or self.set, box[3] - box[1])
        height = max(height, 1.6)
        rows = levels(box, height, random, 0.15)
        height = (box[3] - box[1]) / len(rows)
        half, depth = max(3.2, self.width * height), self.depth * height
        troughs: list[tuple[float, float, float, float]] = []
        for number, base in enumerate(rows):
            x = box[0] - half * (0.3 + random.random()) - (number % 2) * 0.5 * half
            while x - half < box[2]:
                own = half * (0.85 + 0.35 * random.random())
                lift = 0.12 * height * random.random()
                troughs.append((x, base - lift, own, depth))
                x += own * (1.0 + 0.22 * random.random())
        return [line for i in range(len(troughs)) for line in self._trough(troughs, i)]

    def _trough(self, troughs: list[tuple[float, float, float, float]], number: int) -> Iterator[Stratum]:
        cx, bottom, half, depth = troughs[number]
        younger = np.array(troughs[number + 1 :]).reshape(-1, 4)
        step = max(1.55, 0.29 * depth)
        for arc in range(int(0.96 * depth / step) + 1):
            u = np.linspace(-1, 1, max(13, int(half * 2 / (0.6 if arc else 0.25))))
            x = cx + half * u + (arc * step * self.skew)
            y = bottom - arc * step - (depth) * u**2 * (1.0 - 0.06 * arc)
            own = y >= bottom - depth
            inside_own = np.abs(x - cx) <= half
            floor = bottom - depth * ((x - cx) / half) ** 2
            visible = own & inside_own & (y <= floor + 1e-6)
            near = younger[np.abs(younger[:, 0] - cx) < half + younger[:, 2]]
            if len(near):
                v = (x[:, None] - near[:, 0]) / near[:, 2]
                above_floor = y[:, None] < near[:, 1] - near[:, 3] * v**2
                hidden = (np.abs(v) < 1) & above_floor & (y[:, None] > near[:, 1] - near[:, 3] - 0.01)
                visible &= ~hidden.any(axis=1)
            role = "set" if arc == 0 else "lamina"
            for part in runs(np.column_stack([x, y]), visible):
                if arc == 0 or len(part) > 4:
                    yield Stratum(part, role)


@dataclass(frozen=True, slots=True)
class Foresets:
    """Sets of inclined layers.

    angle : mean dip of a foreset, degrees; spacing : distance across the layers as a share of the set,
    at least `least` mm; form : "tangential", "sigmoid", "straight" or
    "overturned"; both_ways : every second set dips the other way; bundles : spacing waxes and wanes;
    drape : every n-th foreset is a heavy drape, 0 never; whole : one set fills the bed
    """

    angle: float = 26.0
    form: str = "tangential"
    spacing: float = 0.11
    least: float = 1.4
    both_ways: bool = False
    bundles: bool = False
    drape: int = 0
    whole: bool = False
    set: float = 7.0

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        full = box[3] - box[1]
        height = full if self.whole else max(min(set_mm or self.set, full), 1.4)
        rows = levels(box, height, random, 0.12)
        tops = [*rows[1:], box[1]]
        made: list[Stratum] = []
        for number, (base, top) in enumerate(zip(rows, tops, strict=True)):
            made += self._set(box, base, top, number, random)
            if number:
                x = np.linspace(box[0], box[2], 7)
                tilt = 0.25 * (random.random() - 0.5)
                made.append(Stratum(np.column_stack([x, base + tilt * np.linspace(-1, 1, 7)]), "set"))
        return made

    def _set(
        self, box: Box, base: float, top: float, number: int, random: np.random.Generator
    ) -> Iterator[Stratum]:
        height = base - top
        run = height / math.tan(math.radians(self.angle))
        step = max(self.least, self.spacing * height) / math.sin(math.radians(self.angle))
        backward = self.both_ways and number % 2 == 1
        x, count = box[0] - run - step * random.random(), 0
        while x < box[2] + run:
            t = np.linspace(0, 1, 13)
            fx, fy = self._form(t)
            px = x + run * fx
            if backward:
                px = box[0] + box[2] - px
            heavy = self.drape and count % self.drape == 0
            shy = 0.06 * height * random.random()
            yield Stratum(
                np.column_stack([px, top + shy + (height - shy) * fy]), "drape" if heavy else "lamina"
            )
            beat = 1 + 0.65 * math.sin(count * 0.62) if self.bundles else 1.0
            x += step * beat * (0.82 + 0.36 * random.random())
            count += 1

    def _form(self, t: Array) -> tuple[Array, Array]:
        if self.form == "sigmoid":
            return t, t * t * (3 - 2 * t)
        if self.form == "overturned":
            hook = np.where(t < 0.3, 0.42 * np.sin(np.pi * t / 0.6) * 1.2, 0.50 - 0.0 * t)
            return np.where(t < 0.3, hook, 0.50 - 1.1 * (t - 0.3)), t
        if self.form == "straight":
            return t, t
        return t, 1 - (1 - t) ** 2.3


@dataclass(frozen=True, slots=True)
class Domes:
    """Sets of laminae that drape a wavy surface and are cut by the next one.

    wavelength, height : mm; down : only the hollows are kept (swales); inner : lines a set
    """

    wavelength: float = 15.0
    height: float = 1.5
    set: float = 5.0
    spacing: float = 1.25
    down: bool = False

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        rows = levels(box, max(min(set_mm or self.set, box[3] - box[1]), 2.0), random, 0.2)
        height = min(self.height, 0.3 * (box[3] - box[1]))
        x = np.linspace(box[0], box[2], max(20, int((box[2] - box[0]) / 0.8)))
        floors = []
        for level in rows:
            length = self.wavelength * (0.8 + 0.4 * random.random())
            wave = np.sin(2 * math.pi * (x / length + random.random()))
            wave = np.abs(wave) * 1.6 - 0.8 if self.down else wave
            floors.append(
                level - height * (1.0 if self.down else 0.8) + height * wave * (-1.0 if self.down else 1.0)
            )
        made = []
        for number, floor in enumerate(floors):
            ceiling = floors[number + 1] if number + 1 < len(floors) else np.full(x.size, box[1])
            thick = (box[3] - box[1]) / len(floors)
            for lamina in range(max(1, int(1.8 * thick / self.spacing))):
                fade = 1 - 0.75 * min(1.0, lamina * self.spacing / (1.6 * thick))
                mean = float(floor.mean())
                y = mean - lamina * self.spacing + (floor - mean) * fade
                keep = (y > ceiling + 0.15) & (y <= floor + 1e-9)
                role = "set" if lamina == 0 else "lamina"
                made += [Stratum(part, role) for part in runs(np.column_stack([x, y]), keep) if len(part) > 3]
        return made


def runs(points: Array, keep: np.ndarray) -> Iterator[Array]:
    """The unbroken stretches of a polyline where `keep` is True, at least two points long."""
    if keep.all():
        yield points
        return
    edges = np.flatnonzero(np.diff(np.concatenate([[False], keep, [False]]).astype(np.int8)))
    for first, last in zip(edges[::2], edges[1::2], strict=True):
        if last - first > 1:
            yield points[first:last]
