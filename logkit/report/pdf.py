"""A document as PDF, set by typst from a template that ships with logkit: offline, same input same bytes."""

from __future__ import annotations

import json
from importlib.resources import files
from typing import Any

from logkit.errors import LogkitError
from logkit.report.document import Block, Document, Figure, Heading, Paragraph, Table, Terms
from logkit.words import one_line

TEMPLATE = "report.typ"


def document_pdf(document: Document, *, paper: str = "a4", archive: bool = False) -> bytes:
    """The document as the bytes of a PDF.

    Parameters
    ----------
    paper : paper name of the text pages; drawings keep their own true size
    archive : PDF/A-2a

    Raises
    ------
    LogkitError : the page setter refuses the document, with its message
    """
    import typst

    from logkit.drawing.fonts import font_folder

    pictures: dict[str, bytes] = {}
    content = _content(document, paper, pictures)
    project: Any = {
        "main.typ": files("logkit.report").joinpath("data", TEMPLATE).read_bytes(),
        "document.json": json.dumps(content, ensure_ascii=False).encode(),
        **pictures,
    }
    try:
        compiler = typst.Compiler(project, font_paths=[str(font_folder())], ignore_system_fonts=True)
        pdf: Any = compiler.compile(format="pdf", pdf_standards=["a-2a"] if archive else [], timestamp=0)
    except typst.TypstError as problem:
        hint = problem.hints[0] if problem.hints else ""
        raise LogkitError(f"The report could not be set as pdf: {problem.message}.", hint) from problem
    return bytes(pdf)


def _content(document: Document, paper: str, pictures: dict[str, bytes]) -> dict[str, Any]:
    logo = None
    if document.logo is not None:
        logo, data = document.logo
        pictures[logo] = data
    return {
        "title": one_line(document.title),
        "subtitle": one_line(document.subtitle),
        "authors": [one_line(a) for a in document.authors],
        "keywords": ["sedimentary log", "flow history", "logkit"],
        "paper": paper.lower(),
        "footer": f"{one_line(document.title)}. Ranges, not measurements: see limits and cautions.",
        "facts": [[key, one_line(value)] for key, value in document.facts],
        "caution": document.caution,
        "organisation": one_line(document.organisation),
        "logo": logo,
        "sections": [
            {"id": s.id, "title": s.title, "blocks": [_block(b, pictures) for b in s.blocks]}
            for s in document.sections
        ],
    }


def _block(block: Block, pictures: dict[str, bytes]) -> dict[str, Any]:
    match block:
        case Paragraph(text, kind):
            return {"type": "paragraph", "text": text, "kind": kind}
        case Heading(text):
            return {"type": "heading", "text": text}
        case Terms(entries):
            return {"type": "terms", "entries": [list(entry) for entry in entries]}
        case Table():
            return {
                "type": "table",
                "caption": block.caption,
                "columns": [{"label": c.label, "align": c.align, "width": c.width} for c in block.columns],
                "rows": [list(row) for row in block.rows],
                "across": any(len(row) == 1 < len(block.columns) for row in block.rows),
            }
        case Figure():
            file = f"figure-{len(pictures)}.svg"
            pictures[file] = block.svg.encode()
            return {
                "type": "figure",
                "file": file,
                "kind": block.kind,
                "caption": block.caption,
                "alt": block.alt,
                "width": block.width_mm,
                "height": block.height_mm,
            }
