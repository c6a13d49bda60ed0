"""SVG sheets to PDF and PNG through typst, with the fonts that come with the installation and no others."""

from __future__ import annotations

from functools import cache
from importlib.util import find_spec
from pathlib import Path
from typing import Any

from logkit.errors import LogkitError

DEFAULT_DOTS_PER_INCH = 200.0


@cache
def font_folder() -> Path:
    """Folder with the DejaVu Sans files: matplotlib, which logkit needs anyway, ships them.

    Raises
    ------
    LogkitError : the installation is incomplete
    """
    spec = find_spec("matplotlib")
    for place in (spec.submodule_search_locations or []) if spec else []:
        folder = Path(place) / "mpl-data/fonts/ttf"
        if (folder / "DejaVuSans.ttf").exists():
            return folder
    raise LogkitError("The font files of matplotlib are missing.", "Install matplotlib again.")


def pdf(sheets: list[tuple[str, float, float]], title: str) -> bytes:
    """All sheets in one PDF, text as text.

    Parameters
    ----------
    sheets : (SVG text, width mm, height mm) of each sheet
    title : document title
    """
    return _compile(sheets, title, "pdf", None)[0]


def png(sheet: tuple[str, float, float], dots_per_inch: float = DEFAULT_DOTS_PER_INCH) -> bytes:
    """One sheet as a picture."""
    return _compile([sheet], "", "png", dots_per_inch)[0]


def _compile(
    sheets: list[tuple[str, float, float]], title: str, kind: str, dots_per_inch: float | None
) -> list[bytes]:
    import typst

    files: dict[str, bytes] = {}
    pages = []
    for index, (svg, width, height) in enumerate(sheets, 1):
        name = f"sheet-{index}.svg"
        files[name] = svg.encode("utf-8")
        pages.append(
            f"#page(width: {width:.2f}mm, height: {height:.2f}mm, margin: 0mm)"
            f'[#image("{name}", width: {width:.2f}mm, height: {height:.2f}mm)]'
        )
    quoted = title.replace("\\", "\\\\").replace('"', '\\"')
    head = f'#set document(title: "{quoted}", date: none)\n' if title else "#set document(date: none)\n"
    files["main"] = (head + "\n".join(pages)).encode("utf-8")
    compile_document: Any = typst.compile  # its type hints do not know a dictionary of files
    result = compile_document(
        files,
        format=kind,
        ppi=dots_per_inch,
        font_paths=[str(font_folder())],
        ignore_system_fonts=True,
        timestamp=0,
    )
    return [bytes(part) for part in result] if isinstance(result, list) else [bytes(result)]
