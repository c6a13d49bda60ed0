"""Small-scale lines inside a box: laminae, rows of ripples, folded laminae. Larger sets are in `strata`.

Each way of filling is a frozen record of its parameters (the keys of `fill` in motifs.toml) with a method that
gives polylines. Flow runs from left to right. Cutting to the bed and painting is in `motifs`.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from logkit.drawing.strata import Box, Stratum, levels


@dataclass(frozen=True, slots=True)
class Laminae:
    """Near-level lines.

    spacing, jitter : mm and share of it; length : range of their lengths as written, mm (0 runs through);
    wave, wavelength : undulation, mm; tooth : height of teeth (stylolites), mm; pairs : lines come in twos;
    heavy : every n-th line is a drape, 0 never; crinkle : small irregularity, mm
    """

    spacing: float = 1.5
    jitter: float = 0.25
    shortest: float = 11.0
    longest: float = 26.0
    wave: float = 0.0
    wavelength: float = 14.0
    tooth: float = 0.0
    pairs: float = 0.0
    heavy: int = 0
    crinkle: float = 0.0
    gap: float = 2.5
    role: str = "lamina"

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        made = []
        for count, level in enumerate(levels(box, self.spacing, random, self.jitter)):
            y = level - 0.5 * self.spacing
            if not box[1] + 0.25 < y < box[3] - 0.25:
                y = 0.5 * (box[1] + box[3]) if box[3] - box[1] < self.spacing else y
            heavy = bool(self.heavy) and count % self.heavy == 0
            phase = 2 * math.pi * random.random()
            for left, right in self._spans(box, random):
                for shift in (0.0, self.pairs) if self.pairs else (0.0,):
                    made.append(self._line(left, right, y + shift, phase, heavy, random))
        return made

    def _spans(self, box: Box, random: np.random.Generator) -> Iterator[tuple[float, float]]:
        if self.longest <= 0:
            yield box[0], box[2]
            return
        x = box[0] - self.longest * random.random() * 0.6
        while x < box[2]:
            length = self.shortest + (self.longest - self.shortest) * random.random()
            yield max(x, box[0]), min(x + length, box[2])
            x += length + self.gap * (0.4 + random.random())

    def _line(
        self, left: float, right: float, y: float, phase: float, heavy: bool, random: np.random.Generator
    ) -> Stratum:
        role = "drape" if heavy else self.role
        bent = self.wave or self.crinkle or self.tooth
        if not bent:
            return Stratum(np.array([[left, y], [right, y]]), role)
        step = 0.7 if self.tooth or self.crinkle else 1.2
        x = np.linspace(left, right, max(3, int((right - left) / step)))
        level = y + self.wave * np.sin(2 * math.pi * x / self.wavelength + phase)
        level = level + self.crinkle * (random.random(x.size) - 0.5)
        if self.tooth:
            level = level - self.tooth * np.where(np.arange(x.size) % 2, 0.3 + 0.7 * random.random(x.size), 0)
        return Stratum(np.column_stack([x, level]), role)


@dataclass(frozen=True, slots=True)
class Ripples:
    """Rows of ripple profiles with lee laminae.

    stoss : share of the wavelength on the upstream side; row, wavelength, height : mm; climb : shift of each
    row downstream, mm, with rising set boundaries; kept : share of the ripples drawn
    """

    stoss: float = 0.66
    row: float = 1.75
    wavelength: float = 4.2
    height: float = 0.95
    climb: float = 0.0
    kept: float = 0.78
    rounded: bool = False
    chevrons: bool = False

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        made: list[Stratum] = []
        rows = levels(box, self.row, random, 0.16)
        start = box[0] - self.wavelength * (1 + random.random())
        joints: dict[int, list[tuple[float, float]]] = {}
        for number, base in enumerate(rows):
            height = min(self.height, 0.62 * (box[3] - box[1]))
            x = start + (number * self.climb if self.climb else self.wavelength * random.random())
            if self.climb:
                x -= math.floor((x - box[0]) / self.wavelength + 2) * self.wavelength
            count = round((x - start - number * self.climb) / self.wavelength) if self.climb else 0
            while x < box[2]:
                length = self.wavelength * (1.0 if self.climb else 0.78 + 0.5 * random.random())
                tall = height * (0.7 + 0.45 * random.random())
                joints.setdefault(count, []).append((x, base - 0.12))
                if random.random() < self.kept:
                    made += self._ripple(x, base - 0.12, length, tall, random)
                x += length
                count += 1
        if self.climb:
            made += [Stratum(np.array(points), "set") for points in joints.values() if len(points) > 1]
        return made

    def _ripple(
        self, x: float, base: float, length: float, height: float, random: np.random.Generator
    ) -> Iterator[Stratum]:
        crest = self.stoss * length
        t = np.linspace(0, 1, 6)
        up = np.sin(0.5 * math.pi * t) ** 1.25 if not self.chevrons else t**1.7
        down = np.cos(0.5 * math.pi * t) ** (0.8 if self.rounded else 1.6)
        if self.chevrons and not self.rounded:
            down = (1 - t) ** 1.7
        xs = np.concatenate([x + crest * t, x + crest + (length - crest) * t[1:]])
        ys = base - height * np.concatenate([up, down[1:]])
        yield Stratum(np.column_stack([xs, ys]), "crest")
        if self.chevrons:
            inner = np.array([[x + 0.72 * crest, base], [x + crest, base - 0.55 * height]])
            outer = np.array([[x + crest, base - 0.55 * height], [x + crest + 0.28 * (length - crest), base]])
            yield Stratum(np.concatenate([inner, outer[1:]]), "lamina")
            return
        for share in (0.55, 0.8)[: 1 + (random.random() < 0.6)]:
            top = base - height * share**1.25 * 0.82
            foot = x + crest * share + 0.75 * (length - crest)
            curve = np.array(
                [
                    [x + crest * share, top],
                    [x + crest * share + 0.35 * (length - crest), base - 0.3 * height * share],
                    [foot, base - 0.02],
                ]
            )
            yield Stratum(curve, "lamina")


@dataclass(frozen=True, slots=True)
class Folds:
    """Contorted laminae: level lines moved up and down, then sheared, so that they never cross.

    wavelength, height : mm; lean : 1 makes one limb upright, more overturns it; spacing : mm
    """

    wavelength: float = 8.0
    height: float = 1.5
    lean: float = 0.75
    spacing: float = 1.3
    role: str = "lamina"

    def lines(self, box: Box, set_mm: float | None, random: np.random.Generator) -> list[Stratum]:
        tall = min(self.height, 0.3 * (box[3] - box[1]))
        wave = 2 * math.pi / self.wavelength
        shear = self.lean / (wave * tall)
        reach = shear * (box[3] - box[1]) + self.wavelength
        s = np.arange(box[0] - reach, box[2] + reach, 0.4)
        phase, drift = 2 * math.pi * random.random(2)
        angle = wave * s + phase + 0.7 * np.sin(s / (1.7 * self.wavelength) + drift)
        fold = (np.cos(angle) + 0.28 * np.cos(2 * angle)) * (0.8 + 0.3 * np.sin(s / 9.1 + drift))
        made = []
        for level in levels(box, self.spacing, random, 0.1):
            share = (box[3] - level) / max(box[3] - box[1], 1e-9)
            calm = math.sin(math.pi * min(0.25 + 0.6 * share, 1.0))
            y = level - 0.5 * self.spacing - tall * calm * fold
            x = s + shear * (0.5 * (box[1] + box[3]) - y)
            made.append(Stratum(np.column_stack([x, y]), self.role))
        return made
