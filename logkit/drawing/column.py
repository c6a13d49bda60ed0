"""`draw_column`: from a log and its results to a finished drawing.

Measure, lay out the tracks, break into sheets, draw each sheet, then the legend. The drawing never calculates flow.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from pathlib import Path as FilePath
from typing import Any

from logkit.drawing import frame, legend, pages, titles
from logkit.drawing.drawing import Drawing
from logkit.drawing.layout import lay_out
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Group, Shape, Sheet, Text
from logkit.drawing.style import Style, load_style
from logkit.drawing.tables import note_sheets
from logkit.drawing.tracks import TRACKS
from logkit.errors import ArgumentError
from logkit.model import Log

BEHIND = ("velocity", "depth")
"""Tracks whose blanks wipe the guides; drawn before the others."""


def draw_column(
    log: Log,
    history: Any = None,
    trends: Any = None,
    style: str | FilePath | Style = "report",
    scale: float | None = None,
    page: str | Sequence[float] | None = None,
    from_m: float | None = None,
    to_m: float | None = None,
    fit_height_mm: float | None = None,
    cut_gaps: bool = False,
    curves: Sequence[tuple[str, str, Sequence[float], Sequence[float]]] | None = None,
    landscape: bool | None = None,
) -> Drawing:
    """Draw the column of a log.

    Parameters
    ----------
    log : beds and gaps, upward
    history : flow history with `estimates`; without it the flow tracks do not show
    trends : trends with `gradings`, `packages`, `currents`; without them no sails and no rose
    style : name of a shipped style, path of a style file, or a style
    scale : metres in the section a metre on paper, 50 for 1:50; the style's scale by default
    page : "A4", "Letter", "roll" …, or (width, height) in mm; the style's page by default
    from_m, to_m : part of the section to draw, m in the log's positions
    fit_height_mm : height that the column shall have; sets the scale, which is printed
    cut_gaps : draw gaps taller than 1.5 m as 10 mm, marked and in words
    curves : (name, unit, positions m, values) of point curves
    landscape : turn a named page; as the style says by default

    Returns
    -------
    the drawing, one sheet or several

    Raises
    ------
    ArgumentError : a scale, a page or a part of the section that cannot be drawn
    """
    chosen = _style(style, page, landscape)
    low, high = _part(log, from_m, to_m)
    ratio = _scale(chosen, scale, fit_height_mm, high - low)
    scene = lay_out(log, history, trends, chosen, ratio, tuple(curves or ()))
    return _Column(scene, low, high, cut_gaps, fit_height_mm is not None).drawing()


def _style(
    style: str | FilePath | Style, page: str | Sequence[float] | None, landscape: bool | None
) -> Style:
    overrides: dict[str, Any] = {}
    if page is not None:
        overrides["size"] = page if isinstance(page, str) else [float(length) for length in page]
    if landscape is not None:
        overrides["landscape"] = landscape
    return load_style(style, {"page": overrides} if overrides else None)


def _part(log: Log, from_m: float | None, to_m: float | None) -> tuple[float, float]:
    """Part of the section to draw."""
    if not log.beds:
        return 0.0, 0.0
    for name, value in (("from_m", from_m), ("to_m", to_m)):
        if value is not None and not math.isfinite(value):
            raise ArgumentError(name, value, "a finite number of metres")
    low = log.base_m if from_m is None else max(from_m, log.base_m)
    high = log.top_m if to_m is None else min(to_m, log.top_m)
    if low >= high:
        allowed = f"a part of the section, which runs from {log.base_m:g} to {log.top_m:g} m"
        raise ArgumentError("from_m, to_m", (from_m, to_m), allowed)
    return low, high


def _scale(style: Style, scale: float | None, fit_height_mm: float | None, thickness_m: float) -> float:
    if fit_height_mm is not None:
        if not (math.isfinite(fit_height_mm) and fit_height_mm >= 5):
            raise ArgumentError("fit_height_mm", fit_height_mm, "at least 5 mm")
        return max(thickness_m * 1000 / fit_height_mm, 1e-3) if thickness_m else style.page.scale
    ratio = style.page.scale if scale is None else scale
    if not (isinstance(ratio, int | float) and math.isfinite(ratio) and 0.01 <= ratio <= 1e6):
        raise ArgumentError("scale", scale, "a number such as 50 for 1:50, from 0.01 to 1000000")
    return float(ratio)


class _Column:
    """One column on its sheets."""

    def __init__(self, scene: Scene, low: float, high: float, cut_gaps: bool, fitted: bool) -> None:
        self.scene = scene
        self.low, self.high = low, high
        self.cut_gaps = cut_gaps
        self.tally = Tally()
        self.scale_words = titles.scale_words(scene, fitted)
        self.width, self.page_height = scene.style.page_size_mm()
        self.top = scene.style.page.section_top

    def drawing(self) -> Drawing:
        """All sheets."""
        bodies = [self._body(view) for view in self._views()]
        closing = titles.closing_lines(self.scene, self.tally, self.width)
        closing_mm = titles.closing_height(self.scene, closing)
        marks, legend_mm = legend.legend(self.scene, self.tally, self.width)
        if not self.scene.style.page.legend or not marks:
            marks, legend_mm = [], 0.0
        sheets = self._place(bodies, marks, legend_mm, closing, closing_mm)
        title = self.scene.log.header.title or self.scene.log.name
        counts = tuple(sorted(self.tally.left_out.items()))
        return Drawing(tuple(sheets), title, self.scene.scale, counts)

    def _views(self) -> list[View]:
        if self.high <= self.low:
            return []
        room = 1e9 if self.page_height is None else self.page_height - self.top - self._below()
        if room < 10:
            raise ArgumentError("page", self.scene.style.page.size, "taller: there is no room for the column")
        scene = self.scene
        parts = pages.stretches(
            scene.beds, self.low, self.high, room, scene.scale, self.cut_gaps, scene.downward
        )
        views = []
        for number, part in enumerate(parts, 1):
            view = pages.make_view(scene.beds, part, self.top, scene.scale, self.cut_gaps, number, len(parts))
            views.append(view)
        return views

    def _below(self) -> float:
        """Room kept below the section for axes, scale bar, caution and margin, mm."""
        reserve = titles.closing_height(self.scene, ["", "", "", ""])
        return frame.LOWER_AXIS_MM + 3.0 + reserve + self.scene.style.page.margin

    def _body(self, view: View) -> tuple[View, list[Shape], tuple]:
        scene, tally = self.scene, self.tally
        tally.gradients = []
        shapes: list[Shape] = [Group(tuple(frame.guides(scene, view)), id="guides", layer="guides")]
        names = [name for name in scene.columns if name in BEHIND]
        names += [name for name in scene.columns if name not in BEHIND]
        drawn: dict[str, list[Shape]] = {name: TRACKS[name].draw(scene, view, tally) for name in names}
        order = ["texture", *(name for name in scene.columns if name != "texture")]
        for name in order:
            if drawn.get(name):
                shapes.append(Group(tuple(drawn[name]), id=f"track-{name}", layer=name))
        shapes.append(Group(tuple(frame.axes(scene, view)), id="axes", layer="axes"))
        return view, shapes, tuple(tally.gradients)

    def _place(
        self,
        bodies: list[tuple[View, list[Shape], tuple]],
        marks: list[Shape],
        legend_mm: float,
        closing: list[str],
        closing_mm: float,
    ) -> list[Sheet]:
        """Add titles, closing lines and the legend; more sheets where the last has no room for it."""
        style = self.scene.style
        margin = style.page.margin
        tables = note_sheets(self.scene, self.tally, self.width, self.page_height)
        last = bodies[-1][0] if bodies else None
        end = last.position.y_base + frame.LOWER_AXIS_MM + 2.0 if last else self.top
        fits = self.page_height is None or end + legend_mm + closing_mm + margin <= self.page_height
        lone_legend = bool(marks) and not fits
        total = max(1, len(bodies)) + lone_legend + len(tables)
        sheets = []
        for number, (view, shapes, gradients) in enumerate(bodies or [(None, [], ())], 1):
            below = view.position.y_base + frame.LOWER_AXIS_MM + 2.0 if view else self.top
            content = [*self._head(number, total, view), *shapes]
            if view is not None:
                content.extend(titles.scale_bar(self.scene, margin, view.position.y_base + 4.0, 18.0))
            final = number == len(bodies) or not bodies
            if final and marks and fits:
                content.append(legend.moved(marks, below))
                below += legend_mm
            height = self.page_height or below + closing_mm + margin
            content.append(self._closing(closing, height - margin - closing_mm + 1.0, number, total))
            sheets.append(self._sheet(content, height, gradients, number, total))
        if lone_legend:
            content = [*self._head(len(sheets) + 1, total, None), legend.moved(marks, style.page.heads)]
            height = self.page_height or style.page.heads + legend_mm + closing_mm + margin
            content.append(self._closing(closing, height - margin - closing_mm + 1.0, len(sheets) + 1, total))
            sheets.append(self._sheet(content, height, (), len(sheets) + 1, total))
        for shapes in tables:
            number = len(sheets) + 1
            height = self.page_height or 297.0
            content = [*self._head(number, total, None), *shapes]
            content.append(self._closing(closing, height - margin - closing_mm + 1.0, number, total))
            sheets.append(self._sheet(content, height, (), number, total))
        return sheets

    def _head(self, number: int, total: int, view: View | None) -> list[Shape]:
        scene, style = self.scene, self.scene.style
        shapes: list[Shape] = titles.title_block(scene, self.width, self.scale_words)
        shapes.extend(titles.summary_block(scene, self.width))
        if view is not None:
            shapes.extend(frame.heads(scene, style.page.heads))
        words = titles.sheet_words(view, number, total, scene.downward)
        if words:
            size = style.fonts.label
            at = (self.width - style.page.margin, style.page.rule - 10.4)
            shapes.append(Text(at, words, size, style.colours.ink2, anchor="end"))
        return [Group(tuple(shapes), id="title", layer="title")]

    def _closing(self, lines: list[str], y: float, number: int, total: int) -> Group:
        shapes = titles.closing_block(self.scene, lines, y, self.width, number, total)
        return Group(tuple(shapes), id="caution", layer="caution")

    def _sheet(self, shapes: list[Shape], height: float, gradients: tuple, number: int, total: int) -> Sheet:
        scene = self.scene
        title = scene.log.header.title or scene.log.name
        if total > 1:
            title = f"{title}, sheet {number} of {total}"
        description = f"Column at {self.scale_words}. {titles.summary(scene)}"
        return Sheet(
            self.width,
            height,
            tuple(shapes),
            gradients,
            title,
            description,
            number,
            total,
            scene.style.colours.paper,
        )
