"""The rose of the section's palaeocurrents, with the words that belong to it; area is share of readings."""

from __future__ import annotations

import math
from dataclasses import dataclass

from logkit.drawing.metrics import shorten, width_mm
from logkit.drawing.scene import Scene
from logkit.drawing.shapes import Circle, Paint, Path, Segment, Shape, Text, polyline
from logkit.model import CurrentSummary
from logkit.vocabulary.terms import vocabulary

RADIUS_MM = 10.0
SECTOR_DEG = 20
TITLE = "Palaeocurrent"


@dataclass(frozen=True, slots=True)
class Rose:
    """A measured rose."""

    scene: Scene
    summary: CurrentSummary
    words: tuple[str, ...]
    counts: tuple[int, ...]

    @property
    def width(self) -> float:
        """Width with its words, mm."""
        fonts = self.scene.style.fonts
        widest = max(width_mm(TITLE, fonts.head, True), *(width_mm(w, fonts.label) for w in self.words))
        return 2 * RADIUS_MM + 2.0 + widest

    @property
    def height(self) -> float:
        """Height with the N above it, mm."""
        return 2 * RADIUS_MM + 5.0

    def draw(self, x: float, y: float) -> list[Shape]:
        """Its shapes with the upper left corner at x, y."""
        style = self.scene.style
        colours = style.colours
        centre = (x + RADIUS_MM, y + RADIUS_MM + 4.0)
        shapes: list[Shape] = [Circle(centre, RADIUS_MM, Paint(stroke=colours.ink2, width=0.18))]
        petals = Paint(fill=colours.rose, stroke=colours.ink, width=0.18)
        shapes.append(Path(tuple(self._sectors(centre)), petals))
        if self.summary.mean_deg is not None:
            angle = math.radians(self.summary.mean_deg)
            end = (centre[0] + RADIUS_MM * math.sin(angle), centre[1] - RADIUS_MM * math.cos(angle))
            shapes.append(Path(polyline((centre, end)), Paint(stroke=colours.ink, width=0.5)))
        north = polyline(((centre[0], y + 4.0), (centre[0], y + 2.9)))
        shapes.append(Path(north, Paint(stroke=colours.ink, width=0.3)))
        shapes.append(
            Text((centre[0], y + 2.5), "N", style.fonts.head, colours.ink, bold=True, anchor="middle")
        )
        left = x + 2 * RADIUS_MM + 2.0
        shapes.append(Text((left, y + 6.5), TITLE, style.fonts.head, colours.ink, bold=True))
        for number, line in enumerate(self.words):
            shapes.append(Text((left, y + 9.8 + number * 2.8), line, style.fonts.label, colours.ink2))
        return shapes

    def _sectors(self, centre: tuple[float, float]) -> list[Segment]:
        most = max(self.counts)
        steps: list[Segment] = []
        for number, count in enumerate(self.counts):
            if not count:
                continue
            radius = RADIUS_MM * math.sqrt(count / most)
            points = [centre]
            for part in range(5):
                angle = math.radians(number * SECTOR_DEG - SECTOR_DEG / 2 + part * SECTOR_DEG / 4)
                points.append((centre[0] + radius * math.sin(angle), centre[1] - radius * math.cos(angle)))
            steps.extend(polyline(points, closed=True))
        return steps


def rose_block(scene: Scene) -> Rose | None:
    """The rose of the scene's foremost summary; None without any."""
    if not scene.currents:
        return None
    summary = scene.currents[0]
    counts = sector_counts(summary.azimuths_deg, summary.sense == "axis")
    words = [shorten(indicator_words(summary), 30.0, scene.style.fonts.label)]
    words.append(f"n {summary.n}, {SECTOR_DEG}° sectors")
    if summary.mean_deg is not None:
        words.append(f"mean {round(summary.mean_deg) % 360:03d}°, R {summary.resultant:.2f}")
    words += ["area = share of n", f"rim = {100 * max(counts) / sum(counts):.0f} %"]
    return Rose(scene, summary, tuple(words), tuple(counts))


def sector_counts(azimuths_deg: tuple[float, ...], axis: bool) -> list[int]:
    """Readings in each sector, the first centred on north; an axis counts at both ends."""
    counts = [0] * (360 // SECTOR_DEG)
    for azimuth in azimuths_deg:
        for end in (azimuth, azimuth + 180) if axis else (azimuth,):
            counts[int(((end + SECTOR_DEG / 2) % 360) // SECTOR_DEG)] += 1
    return counts


def indicator_words(summary: CurrentSummary) -> str:
    """What was measured, in words."""
    known = vocabulary("indicators")
    return known[summary.indicator].label if summary.indicator in known else summary.indicator
