"""A document as PDF, set by typst from a template that ships with logkit: offline, same input same bytes."""

from __future__ import annotations

import json
from dataclasses import replace
from importlib.resources import files
from typing import Any

from logkit.errors import LogkitError
from logkit.report.document import Block, Document, Figure, Heading, Paragraph, Table, Terms
from logkit.report.widths import breakable, fit
from logkit.words import one_line

TEMPLATE = "report.typ"
MARGIN_MM = 18.0
NO_DATE = "2000-01-01"
"""An archive file must have a date; one that does not change keeps its bytes the same."""

PAPERS_MM = {"a3": (297.0, 420.0), "a4": (210.0, 297.0), "letter": (215.9, 279.4)}
"""Papers of the text pages by the page setter's name: width and height."""

TYPST_NAME = {"letter": "us-letter"}


def document_pdf(document: Document, *, paper: str = "a4", archive: bool = False) -> bytes:
    """The document as the bytes of a PDF.

    Parameters
    ----------
    paper : paper name of the text pages, A4 for one that is not known; drawings keep their own true size
    archive : PDF/A-2a

    Raises
    ------
    LogkitError : the page setter refuses the document, with its message
    """
    import typst

    from logkit.drawing.fonts import font_folder

    pictures: dict[str, bytes] = {}
    if archive and not document.date:
        document = replace(document, date=NO_DATE)
    content = _content(document, paper.lower() if paper.lower() in PAPERS_MM else "a4", pictures)
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
        "date": [int(part) for part in document.date.split("-")] if document.date else [],
        "authors": [one_line(a) for a in document.authors],
        "keywords": ["sedimentary log", "flow history", "logkit"],
        "paper": TYPST_NAME.get(paper, paper),
        "margin": MARGIN_MM,
        "footer": f"{one_line(document.title)}. Ranges, not measurements: see limits and cautions.",
        "facts": [[key, one_line(value)] for key, value in document.facts],
        "caution": document.caution,
        "organisation": one_line(document.organisation),
        "logo": logo,
        "sections": [
            {
                "id": s.id,
                "title": s.title,
                "blocks": [_block(b, pictures, PAPERS_MM[paper]) for b in s.blocks],
            }
            for s in document.sections
        ],
    }


def _block(block: Block, pictures: dict[str, bytes], paper_mm: tuple[float, float]) -> dict[str, Any]:
    match block:
        case Paragraph(text, kind):
            return {"type": "paragraph", "text": text, "kind": kind}
        case Heading(text):
            return {"type": "heading", "text": text}
        case Terms(entries):
            return {"type": "terms", "entries": [list(entry) for entry in entries]}
        case Table():
            upright, sideways = (side - 2 * MARGIN_MM for side in paper_mm)
            how = fit(block, upright, sideways)
            return {
                "type": "table",
                "caption": block.caption,
                "columns": [
                    {"label": breakable(c.label, how.longest), "align": c.align, "width": width}
                    for c, width in zip(block.columns, how.widths_mm, strict=True)
                ],
                "size": how.size_pt,
                "wide": how.wide,
                "rows": [[breakable(cell, how.longest) for cell in row] for row in block.rows],
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
