"""`draw_column`: from a log and its results to a finished drawing.

Measure, lay out the tracks, break into sheets, draw each sheet, then the legend. The drawing never calculates flow.
"""

from __future__ import annotations

import gc
import math
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, replace
from pathlib import Path as FilePath
from typing import Any

from logkit.drawing import frame, pages, titles
from logkit.drawing.drawing import Drawing
from logkit.drawing.layout import lay_out
from logkit.drawing.legend import legend_pages
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Gradient, Group, Shape, Sheet
from logkit.drawing.style import Style, load_style
from logkit.drawing.style_records import read_page
from logkit.drawing.tables import NoteTable
from logkit.drawing.tracks import TRACKS
from logkit.errors import ArgumentError
from logkit.model import Log

WIPING = ("velocity", "depth")
"""Tracks whose blanks wipe the guides."""

LEAST_NOTES_MM = 70.0
"""Height that notes may use where the section is shorter."""

LEAST_TABLE_MM = 25.0
"""A note table is not begun in less room than this."""


@dataclass(frozen=True, slots=True)
class _Body:
    """What stands on one sheet between title and caution; `end` is its lower edge, mm."""

    view: View | None
    shapes: tuple[Shape, ...]
    gradients: tuple[Gradient, ...]
    end: float

    def with_more(self, shapes: Group, end: float) -> _Body:
        """The same with more below it."""
        return replace(self, shapes=(*self.shapes, shapes), end=end)


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
    page : "A4", "Letter landscape", "roll", "180x240", or (width, height) in mm; the style's page by default
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
    with _no_collection():
        scene = lay_out(log, history, trends, chosen, ratio, tuple(curves or ()))
        return _Column(scene, low, high, cut_gaps, fit_height_mm is not None).drawing()


@contextmanager
def _no_collection() -> Iterator[None]:
    """Hold back the search for reference cycles: shapes have none, and looking takes a fifth of the time."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


def _style(
    style: str | FilePath | Style, page: str | Sequence[float] | None, landscape: bool | None
) -> Style:
    overrides: dict[str, Any] = {}
    if page is not None:
        overrides = read_page(page if isinstance(page, str) else "x".join(f"{length}" for length in page))
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
        self.summary = titles.summary(scene)
        self.width, self.page_height = scene.style.page_size_mm()
        self.top = scene.style.page.section_top

    def drawing(self) -> Drawing:
        """All sheets."""
        bodies = [self._body(view) for view in self._views()]
        closing = titles.closing_lines(self.scene, self.tally, self.width)
        sheets = self._place(bodies, closing)
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
            view = pages.make_view(scene, part, self.top, self.cut_gaps, number, len(parts))
            # beside a short section notes may run on below it
            floor = min(self.top + LEAST_NOTES_MM, self.top + room)
            views.append(replace(view, floor=floor))
        return views

    def _below(self) -> float:
        """Room kept below the section for axes, scale bar, caution and margin, mm."""
        lines = titles.closing_lines(self.scene, titles.crowded_tally(self.scene), self.width)
        reserve = titles.closing_height(self.scene, lines)
        return frame.LOWER_AXIS_MM + 3.0 + reserve + self.scene.style.page.margin

    def _body(self, view: View) -> _Body:
        scene, tally = self.scene, self.tally
        tally.gradients, tally.lowest = [], 0.0
        shapes: list[Shape] = [Group(tuple(frame.guides(scene, view)), id="guides", layer="guides")]
        # blanks in the flow columns wipe the guides, so these come before whatever crosses them
        names = sorted(scene.columns, key=lambda name: name not in WIPING)
        drawn = {name: TRACKS[name].draw(scene, view, tally) for name in names}
        for name in sorted(scene.columns, key=lambda name: (name not in WIPING, name != "texture")):
            if drawn[name]:
                shapes.append(Group(tuple(drawn[name]), id=f"track-{name}", layer=name))
        shapes.append(Group(tuple(frame.axes(scene, view)), id="axes", layer="axes"))
        bar = titles.scale_bar(scene, scene.style.page.margin, view.position.y_base + 4.0, 18.0)
        shapes.append(Group(tuple(bar), id="scale-bar", layer="scale bar"))
        end = max(view.position.y_base + frame.LOWER_AXIS_MM, tally.lowest) + 2.0
        return _Body(view, tuple(shapes), tuple(tally.gradients), end)

    def _place(self, bodies: list[_Body], closing: list[str]) -> list[Sheet]:
        """Add legend and note table, on more sheets where the last has no room; then titles and closing lines."""
        scene, style = self.scene, self.scene.style
        top = style.page.heads - 1.0
        margin = style.page.margin + titles.closing_height(scene, closing)
        bottom = float("inf") if self.page_height is None else self.page_height - margin
        bodies = bodies or [_Body(None, (), (), top)]
        legends = legend_pages(scene, self.tally, self.width, bottom - top) if style.page.legend else []
        for page in legends:
            if bodies[-1].end + page.height > bottom:
                bodies.append(_Body(None, (), (), top))
            end = bodies[-1].end
            bodies[-1] = bodies[-1].with_more(page.draw(end), end + page.height)
        table = NoteTable(scene, self.tally, self.width)
        while table:
            if bottom - bodies[-1].end < LEAST_TABLE_MM:
                bodies.append(_Body(None, (), (), top))
            end = bodies[-1].end + 2.0
            part, used = table.take(end, bottom - end)
            bodies[-1] = bodies[-1].with_more(part, end + used)
        sheets = []
        for number, body in enumerate(bodies, 1):
            height = self.page_height or body.end + margin
            shapes = (
                *self._head(number, len(bodies), body.view),
                *body.shapes,
                self._closing(closing, height - margin + 1.0),
            )
            sheets.append(self._sheet(shapes, height, body.gradients, number, len(bodies)))
        return sheets

    def _head(self, number: int, total: int, view: View | None) -> list[Shape]:
        scene, style = self.scene, self.scene.style
        words = titles.sheet_words(view, number, total, scene.downward)
        shapes = titles.title_block(scene, self.width, self.scale_words, words)
        shapes.extend(titles.summary_block(scene, self.summary, self.width))
        if view is not None:
            shapes.extend(frame.heads(scene, style.page.heads))
        return [Group(tuple(shapes), id="title", layer="title")]

    def _closing(self, lines: list[str], y: float) -> Group:
        shapes = titles.closing_block(self.scene, lines, y, self.width)
        return Group(tuple(shapes), id="caution", layer="caution")

    def _sheet(
        self,
        shapes: tuple[Shape, ...],
        height: float,
        gradients: tuple[Gradient, ...],
        number: int,
        total: int,
    ) -> Sheet:
        scene = self.scene
        title = scene.log.header.title or scene.log.name
        if total > 1:
            title = f"{title}, sheet {number} of {total}"
        words = f"Column at {self.scale_words}. {self.summary}"
        return Sheet(
            self.width, height, shapes, gradients, title, words, number, total, scene.style.colours.paper
        )
