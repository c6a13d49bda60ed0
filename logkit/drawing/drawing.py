"""A finished drawing: its sheets, what scale it has, what it had to leave out, and how it is saved."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

from logkit.drawing.render import svg_to_pdf, svg_to_png
from logkit.drawing.shapes import Sheet
from logkit.drawing.svg import sheet_svg
from logkit.errors import ArgumentError
from logkit.files import write_atomic

FORMATS = (".svg", ".pdf", ".png")


@dataclass(frozen=True)
class Drawing:
    """One or more sheets of plain shapes.

    Attributes
    ----------
    sheets : pages in reading order
    title : what the drawing shows
    scale : metres in the section a metre on paper, 50 for 1:50; None for a sheet without a scale
    counts : (what, how many) was left off the paper or moved for want of room
    """

    sheets: tuple[Sheet, ...]
    title: str = ""
    scale: float | None = None
    counts: tuple[tuple[str, int], ...] = field(default=())

    def svg(self, sheet: int = 1) -> str:
        """One sheet as SVG text; sheets count from 1.

        Raises
        ------
        ArgumentError : there is no such sheet
        """
        if not 1 <= sheet <= len(self.sheets):
            raise ArgumentError("sheet", sheet, f"a number from 1 to {len(self.sheets)}")
        return sheet_svg(self.sheets[sheet - 1])

    def pdf(self) -> bytes:
        """All sheets as one PDF document."""
        return svg_to_pdf([self.svg(number) for number in range(1, len(self.sheets) + 1)], self.title)

    def png(self, sheet: int = 1, dpi: float = 200.0) -> bytes:
        """One sheet as a PNG picture, with so many dots per inch."""
        return svg_to_png(self.svg(sheet), dpi)

    def save(self, path: str | Path, dpi: float = 200.0) -> tuple[Path, ...]:
        """Write the drawing; the ending of the path chooses SVG, PDF or PNG.

        Several sheets become pages of one PDF, or files `name-1.svg`, `name-2.svg` … Existing files are replaced
        whole, never left half-written.

        Returns
        -------
        the files written

        Raises
        ------
        ArgumentError : the ending is none of .svg, .pdf, .png
        LogkitError : the folder cannot be written
        """
        target = Path(path)
        ending = target.suffix.lower()
        if ending not in FORMATS:
            raise ArgumentError("path", str(path), f"a file name that ends in {', '.join(FORMATS)}")
        if ending == ".pdf":
            write_atomic(target, self.pdf())
            return (target,)
        written = []
        for number in range(1, len(self.sheets) + 1):
            name = target
            if len(self.sheets) > 1:
                name = target.with_name(f"{target.stem}-{number}{target.suffix}")
            content = self.svg(number).encode("utf-8") if ending == ".svg" else self.png(number, dpi)
            write_atomic(name, content)
            written.append(name)
        return tuple(written)

    def _repr_svg_(self) -> str:
        return self.svg(1)
