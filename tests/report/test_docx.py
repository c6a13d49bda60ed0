"""The report as DOCX, for those who must edit."""

from io import BytesIO
from zipfile import ZipFile

from docx import Document as read_docx
from report_cases import document_of

from logkit.report.content import build_document
from logkit.report.docx import document_docx
from logkit.report.settings import make_settings
from logkit.report.wells import Well


def test_tables_pictures_and_fields() -> None:
    """Tables are tables, each picture keeps its vector original, captions count by fields."""
    document = document_of("turbidites")
    packed = document_docx(document)
    figures, tables = list(document.figures()), list(document.tables())
    with ZipFile(BytesIO(packed)) as archive:
        originals = {name: archive.read(name) for name in archive.namelist() if name.endswith(".svg")}
        body = archive.read("word/document.xml").decode()
    assert sorted(originals.values()) == sorted(figure.svg.encode() for figure in figures)
    assert body.count(" SEQ Figure ") == len(figures)
    assert body.count(" SEQ Table ") == len(tables)
    assert body.count("svgBlip") == len(figures)
    read = read_docx(BytesIO(packed))
    assert len(read.tables) == len(tables) + 1  # and the header data
    first = read.tables[1]
    assert [cell.text for cell in first.rows[0].cells] == [column.label for column in tables[0].columns]
    assert {shape._inline.docPr.get("descr") for shape in read.inline_shapes} == {f.alt for f in figures}


def test_same_log_same_bytes_and_hostile_text(small: Well) -> None:
    """Two runs give the same file, and text that looks like markup is read back as text."""
    document = build_document([small], make_settings(None))
    packed = document_docx(document)
    assert packed == document_docx(document)
    texts = [
        cell.text for table in read_docx(BytesIO(packed)).tables for row in table.rows for cell in row.cells
    ]
    assert any("<script>window.hacked = 1</script>" in text for text in texts)
