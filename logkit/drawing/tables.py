"""The note table: notes that found no room beside the column, on sheets of their own, in columns."""

from __future__ import annotations

from logkit.drawing.metrics import MM_PER_POINT, shorten, wrap
from logkit.drawing.scene import Scene, Tally
from logkit.drawing.shapes import Group, Shape, Text

LEAST_COLUMN_MM = 58.0
NAME_MM = 10.0


def note_sheets(
    scene: Scene, tally: Tally, width: float, page_height: float | None
) -> list[tuple[list[Shape], float]]:
    """Shapes and lower edge, mm, of each sheet of the note table; none when every note stands beside the column."""
    if not tally.moved_notes:
        return []
    style = scene.style
    page, size = style.page, style.fonts.note
    line = style.notes.line_height * size * MM_PER_POINT
    room = width - 2 * page.margin
    columns = max(1, int(room // LEAST_COLUMN_MM))
    pitch = room / columns
    top = page.heads + 4.0
    bottom = (page_height or 297.0) - page.margin - 22.0
    sheets: list[list[Shape]] = []
    column, y = columns, bottom
    for name, text, strong in tally.moved_notes:
        lines = wrap(text, pitch - NAME_MM - 4.0, size)
        for number, words in enumerate(lines):
            if y + line > bottom:
                column, y = column + 1, top
                if column >= columns:
                    head = Text(
                        (page.margin, page.heads),
                        "Note table",
                        style.fonts.head,
                        style.colours.ink,
                        bold=True,
                    )
                    sheets.append([head])
                    column = 0
            x = page.margin + column * pitch
            drawn: list[Shape] = []
            if number == 0:
                colour = style.colours.conflict if strong else style.colours.ink
                drawn.append(
                    Text((x, y + 0.8 * line), shorten(name, NAME_MM, size, True), size, colour, bold=True)
                )
            drawn.append(Text((x + NAME_MM + 1.0, y + 0.8 * line), words, size, style.colours.ink))
            sheets[-1].append(Group(tuple(drawn)))
            y += line
        y += style.notes.gap
    return [(shapes, bottom) for shapes in sheets]
