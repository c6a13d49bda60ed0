"""Where things stand on a panel: scale, columns, corridors between them, heights. Numbers only, no shapes.

The columns themselves are measured by the drawing layer (`lay_out`); here they get their places.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Any, Literal

from logkit.compare.comparison import Comparison
from logkit.compare.placing import PlacedLog
from logkit.drawing.layout import depth_ends, lay_out, velocity_ends
from logkit.drawing.pages import make_view
from logkit.drawing.scene import Scene, View
from logkit.drawing.style import Style
from logkit.drawing.tracks import TRACKS, Material
from logkit.errors import ArgumentError
from logkit.model import PhaseEstimate

Spacing = Literal["even", "distance"]

PANEL_TRACKS = ("gamma", "texture", "velocity")
"""Tracks of each well, as far as it has anything for them."""

WIDTHS_MM = {"texture": 37.0, "velocity": 28.0, "gamma": 14.0, "depth": 14.0, "glyphs": 6.0, "current": 11.0}
"""Room of a track on a panel; others keep the width of the style."""

SCALE_ROOM_MM = 12.5
"""Room for a well's own depths left of its first track."""

HEAD_ROOM_MM = 13.0
"""Room between the names of the wells and the highest column for heads and axes."""

CORRIDOR_MM = 24.0
LEAST_CORRIDOR_MM = 14.0
USUAL_HEIGHT_MM = 230.0
LARGEST_MM = 5000.0
ROUND_SCALES = (5, 10, 20, 25, 40, 50, 100, 200, 250, 400, 500, 1000, 2000, 2500, 4000, 5000, 10000)


@dataclass(frozen=True, slots=True)
class Hung:
    """Estimates and trends of a log on heights above the datum, as the tracks read them."""

    estimates: tuple[PhaseEstimate, ...] = ()
    gradings: tuple[Any, ...] = ()
    packages: tuple[Any, ...] = ()
    currents: tuple[Any, ...] = ()


@dataclass(frozen=True, slots=True)
class WellColumn:
    """One well on the panel: its scene and view, where its depths stand, its left and right edge, mm."""

    placed: PlacedLog
    scene: Scene
    view: View
    scale_x: float
    left: float
    right: float

    @property
    def middle(self) -> float:
        """Centre of the column, mm."""
        return 0.5 * (self.left + self.right)


@dataclass(frozen=True, slots=True)
class PanelPlan:
    """The whole panel before it is drawn.

    scale : metres in the wells a metre on paper
    horizontal_m_per_mm : None when the spacing is even and means nothing
    top_m, base_m : heights above the datum of the upper and lower edge
    y_top : page coordinate of the upper edge, mm
    """

    columns: tuple[WellColumn, ...]
    style: Style
    scale: float
    width: float
    y_top: float
    top_m: float
    base_m: float
    horizontal_m_per_mm: float | None

    def y(self, height_m: float) -> float:
        """Page coordinate of a height above the datum, mm."""
        return self.y_top + (self.top_m - height_m) * 1000 / self.scale

    @property
    def y_base(self) -> float:
        """Page coordinate of the lower edge, mm."""
        return self.y(self.base_m)

    @property
    def exaggeration(self) -> float | None:
        """Vertical over horizontal scale; None when the spacing is even."""
        if self.horizontal_m_per_mm is None:
            return None
        return self.horizontal_m_per_mm * 1000 / self.scale


def plan_panel(
    comparison: Comparison,
    style: Style,
    scale: float | None,
    spacing: Spacing,
    tracks: Sequence[str],
    height_mm: float | None,
) -> PanelPlan:
    """Measure every well and place it.

    Raises
    ------
    ArgumentError : a scale or height that cannot be drawn, an unknown track, spacing by distance without
        distances
    """
    wells = comparison.placed
    filled = [p for p in wells if p.hung.beds]
    if not filled:
        raise ArgumentError("comparison", "wells without beds", "a comparison with beds to draw")
    top, base = max(p.hung.top_m for p in filled), min(p.hung.base_m for p in filled)
    ratio = _scale(scale, height_mm, top - base)
    hung = [_hung(p, h, t) for p, h, t in zip(wells, comparison.histories, comparison.trends, strict=True)]
    everything = [e for h in hung for e in h.estimates]
    ends = {
        "velocity_range": velocity_ends(everything, style),
        "depth_range": depth_ends(everything, style),
    }
    shown = [_shown(p, h, tracks) for p, h in zip(wells, hung, strict=True)]
    narrow = _narrowed(style)
    widths = [_width(narrow, names) for names in shown]
    lefts, per_mm = _places(wells, widths, spacing, style.page.margin + 10.0)
    y_top = style.page.section_top + HEAD_ROOM_MM
    columns = []
    for p, h, names, left, width in zip(wells, hung, shown, lefts, widths, strict=True):
        scene = lay_out(
            p.hung, h if h.estimates else None, h, narrow, ratio, _curves(p), left + SCALE_ROOM_MM,
            width - SCALE_ROOM_MM, names, **ends,
        )  # fmt: skip
        scene = replace(scene, currents=(), packages=())
        own_top = y_top + (top - p.hung.top_m) * 1000 / ratio
        view = make_view(scene, (p.hung.base_m, p.hung.top_m), own_top)
        columns.append(WellColumn(p, scene, view, left + SCALE_ROOM_MM - 3.0, left, left + width))
    return PanelPlan(
        tuple(columns), narrow, ratio, columns[-1].right + style.page.margin + 4.0, y_top, top, base, per_mm
    )


def _scale(scale: float | None, height_mm: float | None, thickness_m: float) -> float:
    if height_mm is not None:
        if not (math.isfinite(height_mm) and height_mm >= 20):
            raise ArgumentError("height_mm", height_mm, "20 mm or more")
        return max(thickness_m * 1000 / height_mm, 0.01)
    if scale is None:
        needed = thickness_m * 1000 / USUAL_HEIGHT_MM
        return float(next((s for s in ROUND_SCALES if s >= needed), math.ceil(needed / 1000) * 1000))
    if not (isinstance(scale, int | float) and math.isfinite(scale) and scale > 0):
        raise ArgumentError("scale", scale, "a number such as 200 for 1:200")
    if thickness_m * 1000 / scale > LARGEST_MM:
        least = math.ceil(thickness_m * 1000 / LARGEST_MM)
        raise ArgumentError("scale", scale, f"{least} or more: the panel would be higher than 5 m on paper")
    return float(scale)


def _places(
    wells: Sequence[PlacedLog], widths: Sequence[float], spacing: Spacing, left: float
) -> tuple[list[float], float | None]:
    """Left edges of the columns; metres a mm between their middles when they are to scale."""
    if spacing == "even":
        lefts = [left]
        for width in widths[:-1]:
            lefts.append(lefts[-1] + width + CORRIDOR_MM)
        return lefts, None
    if spacing != "distance":
        raise ArgumentError("spacing", spacing, "even or distance")
    distances = [p.distance_m for p in wells]
    missing = [p.name for p, d in zip(wells, distances, strict=True) if d is None]
    if missing:
        raise ArgumentError(
            "spacing", "distance", f"even, or give {', '.join(missing)} a header line `# distance_m: …`"
        )
    known = [d for d in distances if d is not None]
    steps = [b - a for a, b in pairwise(known)]
    if min(steps) <= 0:
        raise ArgumentError(
            "spacing", "distance", "distances that grow from well to well, in the order given"
        )
    needed = [0.5 * (a + b) + LEAST_CORRIDOR_MM for a, b in pairwise(widths)]
    mm_per_m = max(n / s for n, s in zip(needed, steps, strict=True))
    first = left + 0.5 * widths[0]
    middles = [first + (d - known[0]) * mm_per_m for d in known]
    if middles[-1] > LARGEST_MM:
        raise ArgumentError(
            "spacing", "distance", "even: the nearest wells would put the others metres apart"
        )
    return [m - 0.5 * w for m, w in zip(middles, widths, strict=True)], 1 / mm_per_m


def _hung(p: PlacedLog, history: Any, trends: Any) -> Hung:
    """Results moved with the beds they belong to."""
    estimates = []
    for e in history.estimates if history is not None else ():
        phase = e.phase
        moved = replace(
            phase,
            base_m=p.height(phase.bed_index, phase.base_m),
            top_m=p.height(phase.bed_index, phase.top_m),
        )
        estimates.append(replace(e, phase=moved))
    return Hung(tuple(estimates), tuple(trends.gradings) if trends is not None else ())


def _shown(p: PlacedLog, hung: Hung, tracks: Sequence[str]) -> tuple[str, ...]:
    material = Material(p.hung, hung.estimates, 0, sum(bool(b.currents) for b in p.hung.beds), len(p.curves))
    names = tuple(name for name in tracks if TRACKS[name].shown(material))
    return names if "texture" in names else ("texture", *names)


def _narrowed(style: Style) -> Style:
    """The style with the narrower tracks of a panel."""
    tracks = {
        name: replace(track, width=min(track.width, WIDTHS_MM.get(name, track.width)))
        for name, track in style.tracks.items()
    }
    return replace(style, tracks=tracks)


def _width(style: Style, names: Sequence[str]) -> float:
    gaps = sum(style.tracks[name].gap for name in names[1:])
    return SCALE_ROOM_MM + gaps + sum(style.tracks[name].width for name in names)


def _curves(p: PlacedLog) -> tuple[tuple[str, str, list[float], list[float]], ...]:
    """Curves as the drawing takes them, upward: gamma ray first where there is one."""
    ordered = sorted(p.curves, key=lambda c: not c.mnemonic.upper().startswith("GR"))
    return tuple((c.mnemonic, c.unit, c.depth_m[::-1].tolist(), c.values[::-1].tolist()) for c in ordered[:1])
