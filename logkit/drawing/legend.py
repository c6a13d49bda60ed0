"""The legend: only what the sheets before it used, in blocks that flow over the width of the page."""

from __future__ import annotations

import math
from dataclasses import dataclass

from logkit.drawing.legend_items import SWATCH_MM, Item, legend_groups
from logkit.drawing.metrics import MM_PER_POINT, shorten, width_mm
from logkit.drawing.rose import rose_block
from logkit.drawing.scene import Scene, Tally
from logkit.drawing.shapes import Group, Shape, Text

ROW_MM = 4.6
HEAD_MM = 5.2
LABEL_GAP_MM = 1.6
COLUMN_GAP_MM = 2.5
BLOCK_GAP_MM = 4.5
MOST_LABEL_MM = 36.0
MOST_ROWS = 6
NARROW_MM = 60.0
CONTINUED = ", continued"


@dataclass(frozen=True, slots=True)
class _Block:
    """A titled group of lines in columns of a known width."""

    title: str
    columns: tuple[tuple[Item, ...], ...]
    widths: tuple[float, ...]
    title_width: float

    @property
    def width(self) -> float:
        return max(sum(self.widths) + COLUMN_GAP_MM * (len(self.widths) - 1), self.title_width)

    @property
    def height(self) -> float:
        return HEAD_MM + ROW_MM * max(len(column) for column in self.columns)


@dataclass(frozen=True, slots=True)
class Legend:
    """A legend, or one page of it, that has been measured but not yet placed; the first page holds the rose."""

    scene: Scene
    blocks: tuple[tuple[_Block, float, float], ...]
    height: float
    page: int = 1

    def draw(self, y: float) -> Group:
        """Its shapes with the upper edge at `y`, mm."""
        shapes: list[Shape] = []
        rose = rose_block(self.scene) if self.page == 1 else None
        if rose is not None:
            shapes.extend(rose.draw(self.scene.style.page.margin, y))
        for block, x, dy in self.blocks:
            shapes.extend(_draw_block(self.scene, block, x, y + dy))
        name = "legend" if self.page == 1 else f"legend-{self.page}"
        return Group(tuple(shapes), id=name, layer="legend")


def measure_legend(scene: Scene, tally: Tally, width: float) -> Legend | None:
    """Arrange the legend on a page of a width, mm, as high as it needs; None when there is nothing to explain."""
    pages = legend_pages(scene, tally, width, float("inf"))
    return pages[0] if pages else None


def legend_pages(scene: Scene, tally: Tally, width: float, room: float) -> list[Legend]:
    """The legend in as many pages as it needs where each has a height of `room` mm."""
    margin = scene.style.page.margin
    left, right = margin, width - margin
    most_rows = max(4, int((room - HEAD_MM - 1.0) // ROW_MM)) if math.isfinite(room) else 10_000
    pages: list[Legend] = []
    placed: list[tuple[_Block, float, float]] = []
    x, y, tallest = left, 0.0, 0.0
    rose = rose_block(scene)
    if rose is not None:
        x, tallest = left + rose.width + BLOCK_GAP_MM, rose.height
    queue = list(legend_groups(scene, tally))
    while queue:
        title, items = queue.pop(0)
        block = _fit(scene, title, items, right - x)
        if block.width > right - x and x > left:
            x, y, tallest = left, y + tallest + 2.0, 0.0
            block = _fit(scene, title, items, right - x)
        if y + block.height > room and placed:
            pages.append(Legend(scene, tuple(placed), y + tallest + 1.0, len(pages) + 1))
            placed, x, y, tallest = [], left, 0.0, 0.0
            block = _fit(scene, title, items, right - x)
        rows = max(len(column) for column in block.columns)
        if rows > most_rows:
            count = most_rows * len(block.columns)
            queue.insert(0, (f"{title.removesuffix(CONTINUED)}{CONTINUED}", items[count:]))
            block = _block(scene, title, items[:count], most_rows)
        placed.append((block, x, y))
        x += block.width + BLOCK_GAP_MM
        tallest = max(tallest, block.height)
    if placed or (rose is not None and not pages):
        pages.append(Legend(scene, tuple(placed), y + tallest + 1.0, len(pages) + 1))
    return pages


def _fit(scene: Scene, title: str, items: list[Item], room: float) -> _Block:
    """Few rows where the width allows, more where it is narrow."""
    rows = min(MOST_ROWS, len(items))
    block = _block(scene, title, items, rows)
    while block.width > room and rows < len(items):
        rows += 1
        block = _block(scene, title, items, rows)
        if rows >= 2 * MOST_ROWS and room < NARROW_MM:
            return _block(scene, title, items, len(items))
    return block


def _block(scene: Scene, title: str, items: list[Item], rows: int) -> _Block:
    size = scene.style.fonts.label
    count = math.ceil(len(items) / rows)
    rows = math.ceil(len(items) / count)
    columns = tuple(tuple(items[n * rows : (n + 1) * rows]) for n in range(count))
    widths = tuple(
        SWATCH_MM + LABEL_GAP_MM + max(min(width_mm(item.label, size), MOST_LABEL_MM) for item in column)
        for column in columns
        if column
    )
    title_width = width_mm(title, scene.style.fonts.head, True)
    return _Block(title, tuple(column for column in columns if column), widths, title_width)


def _draw_block(scene: Scene, block: _Block, x: float, y: float) -> list[Shape]:
    style = scene.style
    size, ink = style.fonts.label, style.colours.ink
    shapes: list[Shape] = [Text((x, y + 3.0), block.title, style.fonts.head, ink, bold=True)]
    texts: list[Shape] = []
    for column, width in zip(block.columns, block.widths, strict=True):
        for row, item in enumerate(column):
            middle = y + HEAD_MM + (row + 0.5) * ROW_MM - 0.4
            shapes.extend(item.swatch(x, middle))
            at = (x + SWATCH_MM + LABEL_GAP_MM, middle + 0.36 * size * MM_PER_POINT)
            texts.append(Text(at, shorten(item.label, MOST_LABEL_MM, size), size, ink))
        x += width + COLUMN_GAP_MM
    return [*shapes, Group(tuple(texts))]
