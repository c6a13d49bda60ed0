"""The note table: notes that found no room beside the column, in columns below the legend or on sheets of their own."""

from __future__ import annotations

from dataclasses import dataclass

from logkit.drawing.metrics import MM_PER_POINT, shorten, wrap
from logkit.drawing.scene import Scene, Tally
from logkit.drawing.shapes import Group, Shape, Text

LEAST_COLUMN_MM = 58.0
HEAD_MM = 5.0
NAME_MM = 10.0


@dataclass(frozen=True, slots=True)
class _Line:
    """One line of the table; `name` stands before the first line of a note only, `gap` is free space above."""

    name: str
    words: str
    strong: bool
    gap: float


class NoteTable:
    """The moved notes, handed out piece by piece to the space there is.

    Parameters
    ----------
    width : width of the page, mm
    """

    def __init__(self, scene: Scene, tally: Tally, width: float) -> None:
        style = scene.style
        self._style = style
        self._size = style.fonts.note
        self._pitch = style.notes.line_height * self._size * MM_PER_POINT
        room = width - 2 * style.page.margin
        self._columns = max(1, int(room // LEAST_COLUMN_MM))
        self._column_mm = room / self._columns
        self._lines: list[_Line] = []
        for name, text, strong in tally.moved_notes:
            lines = wrap(text, self._column_mm - NAME_MM - 4.0, self._size)
            for number, words in enumerate(lines):
                first = number == 0
                self._lines.append(
                    _Line(name if first else "", words, strong, style.notes.gap / 2 if first else 0.0)
                )

    def __bool__(self) -> bool:
        return bool(self._lines)

    def take(self, y: float, room: float) -> tuple[Group, float]:
        """As much of the rest as fits into a height: its shapes with the upper edge at `y`, and its height."""
        height = min(room - HEAD_MM, self._even_height())
        while height < room - HEAD_MM and self._fitting(height) < len(self._lines):
            height = min(room - HEAD_MM, height + self._pitch)
        count = self._fitting(height)
        style, ink = self._style, self._style.colours.ink
        left = style.page.margin
        shapes: list[Shape] = [Text((left, y + 2.5), "Note table", style.fonts.head, ink, bold=True)]
        column, used = 0, 0.0
        for line in self._lines[:count]:
            if used + line.gap + self._pitch > height + 1e-6:
                column, used = column + 1, 0.0
            used += self._pitch + (line.gap if used else 0.0)
            x, base = left + column * self._column_mm, y + HEAD_MM + used - 0.25 * self._pitch
            if line.name:
                colour = style.colours.conflict if line.strong else ink
                name = shorten(line.name, NAME_MM, self._size, True)
                shapes.append(Text((x, base), name, self._size, colour, bold=True))
            shapes.append(Text((x + NAME_MM + 1.0, base), line.words, self._size, ink))
        self._lines = self._lines[count:]
        return Group(tuple(shapes), id="note-table", layer="note table"), HEAD_MM + height

    def _even_height(self) -> float:
        """Height at which the columns would be filled evenly."""
        total = sum(line.gap + self._pitch for line in self._lines)
        return max(total / self._columns, 2 * self._pitch)

    def _fitting(self, height: float) -> int:
        """How many lines fit into columns of a height."""
        column, used = 0, 0.0
        for number, line in enumerate(self._lines):
            if used + line.gap + self._pitch > height + 1e-6:
                column, used = column + 1, 0.0
                if column == self._columns:
                    return number
            used += self._pitch + (line.gap if used else 0.0)
        return len(self._lines)
