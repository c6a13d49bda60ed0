"""A document for those who must edit: tables as tables, pictures with the vector original kept beside them.

The vector original of each picture travels inside the file (`/word/media/NAME.svg`), tied to the picture by
the extension that word processors use for SVG, so that they show and keep it.
"""

from __future__ import annotations

from io import BytesIO
from typing import Any
from zipfile import ZIP_DEFLATED, ZipFile, ZipInfo

from logkit.model import CAUTION_SHORT
from logkit.report.document import Block, Document, Figure, Heading, Paragraph, Table, Terms, captions
from logkit.words import one_line

SVG_EXTENSION = "{96DAC541-7B7A-43D3-8B79-37D633B846F1}"
SVG_NAMESPACE = "http://schemas.microsoft.com/office/drawing/2016/SVG/main"
TEXT_WIDTH_MM = 170.0
TEXT_HEIGHT_MM = 235.0


def document_docx(document: Document) -> bytes:
    """The document as the bytes of a DOCX file."""
    import datetime

    import docx
    from docx.shared import Mm, Pt

    file = docx.Document()
    properties = file.core_properties
    properties.title, properties.author = one_line(document.title), "; ".join(document.authors)
    properties.comments = CAUTION_SHORT
    # a fixed time: the same log gives the same bytes
    properties.created = properties.modified = datetime.datetime(2000, 1, 1)
    file.styles["Normal"].font.size = Pt(10)
    page = file.sections[0]
    page.page_width, page.page_height = Mm(210), Mm(297)
    page.left_margin = page.right_margin = Mm(20)

    if document.logo is not None and document.logo[0].endswith("png"):
        file.add_picture(BytesIO(document.logo[1]), height=Mm(18))
    file.add_heading(one_line(document.title), 0)
    file.add_paragraph(one_line(document.subtitle))
    _add_rows(file, [list(fact) for fact in document.facts])
    file.add_paragraph(document.caution, style="Intense Quote")
    if document.organisation:
        file.add_paragraph(one_line(document.organisation))
    names = captions(document)
    for section in document.sections:
        file.add_page_break()
        file.add_heading(section.title, 1)
        for block in section.blocks:
            _add_block(file, block, names)
    buffer = BytesIO()
    file.save(buffer)
    return _timeless(buffer.getvalue())


def _timeless(packed: bytes) -> bytes:
    """The same archive with a fixed time on each part, so that the same log gives the same bytes."""
    result = BytesIO()
    with ZipFile(BytesIO(packed)) as old, ZipFile(result, "w", ZIP_DEFLATED) as new:
        for name in old.namelist():
            new.writestr(ZipInfo(name, (2000, 1, 1, 0, 0, 0)), old.read(name), ZIP_DEFLATED)
    return result.getvalue()


def _add_block(file: Any, block: Block, names: dict[str, str]) -> None:
    match block:
        case Paragraph(text, kind):
            file.add_paragraph(text, style="Intense Quote" if kind == "caution" else None)
        case Heading(text):
            file.add_heading(text, 2)
        case Terms(entries):
            for term, meaning in entries:
                line = file.add_paragraph()
                line.add_run(f"{term}  ").bold = True
                line.add_run(meaning)
        case Table():
            _add_caption(file, names[block.id], block.caption)
            _add_rows(file, [[c.label for c in block.columns], *block.rows], heading=True)
        case Figure():
            _add_picture(file, block)
            _add_caption(file, names[block.id], block.caption)


def _add_rows(file: Any, rows: list[Any], heading: bool = False) -> None:
    """A table of text; built as XML at once, because cell by cell takes minutes for a long log."""
    from xml.sax.saxutils import escape

    from docx.oxml import parse_xml
    from docx.oxml.ns import nsdecls

    width = len(rows[0]) if rows else 1

    def cell(text: str, bold: bool, span: int = 1) -> str:
        spanned = f'<w:gridSpan w:val="{span}"/>' if span > 1 else ""
        weight = "<w:b/>" if bold else ""
        clean = escape(one_line(text))
        return (
            f'<w:tc><w:tcPr>{spanned}</w:tcPr><w:p><w:pPr><w:spacing w:after="0"/></w:pPr>'
            f'<w:r><w:rPr>{weight}<w:sz w:val="15"/></w:rPr><w:t xml:space="preserve">{clean}</w:t></w:r></w:p></w:tc>'
        )

    lines = []
    for i, row in enumerate(rows):
        first = heading and i == 0
        repeat = "<w:trPr><w:tblHeader/></w:trPr>" if first else ""
        across = len(row) == 1 < width
        cells = cell(row[0], True, width) if across else "".join(cell(text, first) for text in row)
        lines.append(f"<w:tr>{repeat}{cells}</w:tr>")
    grid = "<w:gridCol/>" * width
    xml = (
        f'<w:tbl {nsdecls("w")}><w:tblPr><w:tblStyle w:val="TableGrid"/><w:tblW w:w="5000" w:type="pct"/>'
        f"</w:tblPr><w:tblGrid>{grid}</w:tblGrid>{''.join(lines)}</w:tbl>"
    )
    body = file.element.body
    body.insert(len(body) - 1, parse_xml(xml))
    file.add_paragraph()


def _add_caption(file: Any, name: str, text: str) -> None:
    """A caption with a counting field, so that cross-references and lists of figures work."""
    from docx.oxml import parse_xml
    from docx.oxml.ns import nsdecls

    kind, number = name.split(" ")
    line = file.add_paragraph(style="Caption")
    line.add_run(f"{kind} ")
    field = (
        f'<w:fldSimple {nsdecls("w")} w:instr=" SEQ {kind} \\* ARABIC ">'
        f"<w:r><w:t>{number}</w:t></w:r></w:fldSimple>"
    )
    line._p.append(parse_xml(field))
    line.add_run(f". {one_line(text)}")


def _add_picture(file: Any, figure: Figure) -> None:
    from docx.opc.packuri import PackURI
    from docx.opc.part import Part
    from docx.oxml import parse_xml
    from docx.shared import Mm

    from logkit.drawing.render import svg_to_png

    shrink = min(1.0, TEXT_WIDTH_MM / figure.width_mm, TEXT_HEIGHT_MM / figure.height_mm)
    pixels = svg_to_png(figure.svg, 150.0)
    picture = file.add_picture(BytesIO(pixels), width=Mm(figure.width_mm * shrink))
    picture._inline.docPr.set("descr", figure.alt)
    part = Part(
        PackURI(f"/word/media/{figure.id}.svg"), "image/svg+xml", figure.svg.encode(), file.part.package
    )
    link = file.part.relate_to(
        part, "http://schemas.openxmlformats.org/officeDocument/2006/relationships/image"
    )
    blip = picture._inline.graphic.graphicData.pic.blipFill.blip
    blip.append(
        parse_xml(
            '<a:extLst xmlns:a="http://schemas.openxmlformats.org/drawingml/2006/main">'
            f'<a:ext uri="{SVG_EXTENSION}"><asvg:svgBlip xmlns:asvg="{SVG_NAMESPACE}" '
            'xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships" '
            f'r:embed="{link}"/></a:ext></a:extLst>'
        )
    )
