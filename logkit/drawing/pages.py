"""Which stretch of the section goes on which sheet, and how tall it is there.

Sheets break at bed boundaries. The first sheet holds the base of a section logged upward, and the top of a well.
"""

from __future__ import annotations

from collections.abc import Sequence

from logkit.drawing.axes import Piece, PositionScale
from logkit.drawing.outline import bed_outline
from logkit.drawing.scene import MeasuredBed, Scene, View

CUT_GAP_M = 1.5
"""Only gaps taller than this are ever cut."""

CUT_GAP_MM = 10.0
"""Height of a cut gap on paper."""

LEAST_FILL = 0.5
"""A sheet is broken inside a bed only when breaking before it would leave less than this part of it filled."""


def stretches(
    beds: Sequence[MeasuredBed],
    low: float,
    high: float,
    room_mm: float,
    scale: float,
    cut_gaps: bool,
    downward: bool,
) -> list[tuple[float, float]]:
    """(base, top) of the part of the section on each sheet, in reading order.

    Parameters
    ----------
    beds : upward
    low, high : part of the section to draw, m
    room_mm : height available on a sheet
    scale : metres in the section a metre on paper
    """
    order = [item for item in beds if item.bed.top_m > low and item.bed.base_m < high]
    if downward:
        order.reverse()
    parts: list[tuple[float, float]] = []
    start = high if downward else low
    used = 0.0
    for item in order:
        near = min(item.bed.top_m, high) if downward else max(item.bed.base_m, low)
        far = max(item.bed.base_m, low) if downward else min(item.bed.top_m, high)
        tall = piece_mm(item, abs(far - near), scale, cut_gaps)
        if used + tall > room_mm + 1e-6 and used > LEAST_FILL * room_mm:
            parts.append(_ordered(start, near))
            start, used = near, 0.0
        while used + tall > room_mm + 1e-6:
            # a bed taller than the rest of the sheet is broken inside, at the sheet's edge
            step = (room_mm - used) * scale / 1000
            middle = near - step if downward else near + step
            parts.append(_ordered(start, middle))
            start = near = middle
            used = 0.0
            tall = abs(far - near) * 1000 / scale
        used += tall
    end = low if downward else high
    if start != end:
        parts.append(_ordered(start, end))
    return parts


def piece_mm(item: MeasuredBed, thickness_m: float, scale: float, cut_gaps: bool) -> float:
    """Height on paper of a bed or of a gap, cut where it is to be cut."""
    tall = thickness_m * 1000 / scale
    if cut_gaps and is_cut(item, scale):
        return min(tall, CUT_GAP_MM)
    return tall


def is_cut(item: MeasuredBed, scale: float) -> bool:
    """True for a gap that may be cut: tall enough in the section and on paper."""
    thickness = item.bed.thickness_m
    return item.bed.is_gap and thickness > CUT_GAP_M and thickness * 1000 / scale > CUT_GAP_MM


def make_view(
    scene: Scene,
    part: tuple[float, float],
    y_top: float,
    cut_gaps: bool = False,
    number: int = 1,
    of: int = 1,
) -> View:
    """The view of a stretch of the section, with the outlines of its beds.

    Parameters
    ----------
    part : base and top of the stretch, m
    y_top : upper edge on the page, mm
    number, of : which of how many sheets with a column this is
    """
    beds, scale = scene.beds, scene.scale
    low, high = part
    shown = tuple(item for item in beds if item.bed.top_m > low and item.bed.base_m < high)
    pieces: list[tuple[float, float, float, bool]] = []
    base = low
    for item in shown if cut_gaps else ():
        if is_cut(item, scale) and item.bed.base_m >= low and item.bed.top_m <= high:
            if item.bed.base_m > base:
                pieces.append((base, item.bed.base_m, (item.bed.base_m - base) * 1000 / scale, False))
            pieces.append((item.bed.base_m, item.bed.top_m, CUT_GAP_MM, True))
            base = item.bed.top_m
    if high > base:
        pieces.append((base, high, (high - base) * 1000 / scale, False))
    y = y_top + sum(tall for _, _, tall, _ in pieces)
    placed = []
    for piece_base, piece_top, tall, cut in pieces:
        placed.append(Piece(piece_base, piece_top, y, y - tall, cut))
        y -= tall
    position = PositionScale(tuple(placed))
    spans = tuple(
        (position.y(max(item.bed.base_m, low)), position.y(min(item.bed.top_m, high))) for item in shown
    )
    outlines = {}
    if scene.phi is not None:
        outlines = {
            item.index: bed_outline(
                item,
                span,
                position,
                scene.phi,
                scale,
                scene.style.texture,
                open_below=item.index > 0 and beds[item.index - 1].bed.is_gap,
            )
            for item, span in zip(shown, spans, strict=True)
            if not item.bed.is_gap
        }
    return View(position, shown, spans, number, of, outlines)


def _ordered(first: float, second: float) -> tuple[float, float]:
    return (first, second) if first < second else (second, first)
