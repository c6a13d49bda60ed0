"""A finished drawing: its sheets, what scale it has, what it had to leave out, and how it is saved."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

from logkit.drawing.shapes import Sheet
from logkit.errors import ArgumentError

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
        from logkit.drawing.svg import sheet_svg

        if not 1 <= sheet <= len(self.sheets):
            raise ArgumentError("sheet", sheet, f"a number from 1 to {len(self.sheets)}")
        return sheet_svg(self.sheets[sheet - 1])

    def pdf(self) -> bytes:
        """All sheets as one PDF document."""
        from logkit.drawing.render import pdf

        pages = [(self.svg(n), s.width, s.height) for n, s in enumerate(self.sheets, 1)]
        return pdf(pages, self.title)

    def png(self, sheet: int = 1, dots_per_inch: float = 200.0) -> bytes:
        """One sheet as a PNG picture."""
        from logkit.drawing.render import png

        text = self.svg(sheet)
        page = self.sheets[sheet - 1]
        return png((text, page.width, page.height), dots_per_inch)

    def save(self, path: str | Path, dots_per_inch: float = 200.0) -> tuple[Path, ...]:
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
        from logkit.files import write_atomic

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
            content = (
                self.svg(number).encode("utf-8") if ending == ".svg" else self.png(number, dots_per_inch)
            )
            write_atomic(name, content)
            written.append(name)
        return tuple(written)

    def _repr_svg_(self) -> str:
        return self.svg(1)
