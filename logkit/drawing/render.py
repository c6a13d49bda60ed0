"""SVG to PDF and PNG through typst, with the fonts that come with the installation and no others."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Any

from logkit.drawing.fonts import font_folder
from logkit.errors import ArgumentError

_SIZE = re.compile(r'<svg\b[^>]*?\bheight="([\d.]+)mm"[^>]*?\bwidth="([\d.]+)mm"|'
                   r'<svg\b[^>]*?\bwidth="([\d.]+)mm"[^>]*?\bheight="([\d.]+)mm"')  # fmt: skip


def svg_to_pdf(sheets: Sequence[str], title: str = "") -> bytes:
    """SVG drawings as the pages of one PDF, text as text.

    Parameters
    ----------
    sheets : SVG texts whose root states width and height in mm
    title : document title
    """
    return _compile(sheets, "pdf", title)


def svg_to_png(svg: str, dpi: float = 200.0) -> bytes:
    """An SVG drawing as a picture.

    Parameters
    ----------
    svg : SVG text whose root states width and height in mm
    dpi : dots per inch

    Raises
    ------
    ArgumentError : dots per inch outside 10 to 2400
    """
    if not 10 <= dpi <= 2400:
        raise ArgumentError("dpi", dpi, "from 10 to 2400 dots per inch")
    return _compile([svg], "png", dpi=dpi)


def _compile(sheets: Sequence[str], kind: str, title: str = "", dpi: float | None = None) -> bytes:
    import typst

    files: dict[str, bytes] = {}
    pages = []
    for number, svg in enumerate(sheets, 1):
        width, height = _page_size(svg)
        name = f"sheet-{number}.svg"
        files[name] = svg.encode("utf-8")
        size = f"width: {width}mm, height: {height}mm"
        pages.append(f'#page({size}, margin: 0mm)[#image("{name}", {size})]')
    quoted = title.replace("\\", "\\\\").replace('"', '\\"')
    head = f'#set document(title: "{quoted}", date: none)' if title else "#set document(date: none)"
    files["main"] = "\n".join([head, *pages]).encode("utf-8")
    compile_document: Any = typst.compile  # its type hints do not know a dictionary of files
    return bytes(
        compile_document(
            files,
            format=kind,
            ppi=dpi,
            font_paths=[str(font_folder())],
            ignore_system_fonts=True,
            timestamp=0,
        )
    )


def _page_size(svg: str) -> tuple[str, str]:
    """Width and height in mm as the root element states them."""
    found = _SIZE.search(svg[:2000])
    if found is None:
        raise ArgumentError("svg", svg[:60], "a drawing whose root states width and height in mm")
    height_first, width_second, width_first, height_second = found.groups()
    return width_first or width_second, height_second or height_first
