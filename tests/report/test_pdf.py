"""The report as PDF: fonts, glyphs, metadata, tags, archives, the same bytes twice."""

from __future__ import annotations

import re
import zlib
from pathlib import Path

import pytest
from report_cases import HOSTILE, SOURCES, document_of, outcome, small_log, wells_of

from logkit.errors import ArgumentError, LogkitError
from logkit.report import write_report
from logkit.report.content import build_document
from logkit.report.document import Paragraph, Table, Terms
from logkit.report.pdf import document_pdf
from logkit.report.settings import make_settings
from logkit.report.wells import Well

OURS = {"DejaVuSans", "DejaVuSans-Bold"}


def inside(pdf: bytes) -> bytes:
    """The file with its packed streams opened."""
    parts = [pdf]
    for match in re.finditer(rb"stream\r?\n(.*?)\r?\nendstream", pdf, re.DOTALL):
        try:
            parts.append(zlib.decompress(match[1]))
        except zlib.error:
            continue
    return b"\n".join(parts)


@pytest.mark.parametrize("name", ["river", "turbidites", "core"])
def test_only_our_fonts_are_named(name: str) -> None:
    """The PDF of an example names the fonts that ship with logkit and no other."""
    document = document_of(name)
    body = inside(document_pdf(document))
    fonts = {f.decode().split("+")[-1] for f in re.findall(rb"/BaseFont ?/([\w+-]+)", body)}
    assert {font.removesuffix("-Identity-H") for font in fonts} == OURS


@pytest.mark.parametrize("name", SOURCES)
def test_no_glyph_is_missing(name: str) -> None:
    """Every letter of every text of the reports has a glyph in our font."""
    from matplotlib.ft2font import FT2Font

    from logkit.drawing.fonts import font_folder

    known = {chr(code) for code in FT2Font(str(font_folder() / "DejaVuSans.ttf")).get_charmap()}
    document = document_of(name)
    texts = [document.title, document.subtitle, document.caution]
    for section in document.sections:
        for block in section.blocks:
            if isinstance(block, Paragraph):
                texts.append(block.text)
            elif isinstance(block, Terms):
                texts.extend(text for entry in block.entries for text in entry)
            elif isinstance(block, Table):
                texts.append(block.caption)
                texts.extend(column.label for column in block.columns)
                texts.extend(cell for row in block.rows for cell in row)
            elif hasattr(block, "svg"):
                texts.append(block.caption)
                texts.extend(re.findall(r">([^<>]+)</(?:text|tspan)>", block.svg))
    assert sorted({letter for text in texts for letter in text if letter.isprintable()} - known) == []


def test_same_log_same_bytes(small: Well) -> None:
    """Two runs give the same file."""
    settings = make_settings(None)
    assert document_pdf(build_document([small], settings)) == document_pdf(build_document([small], settings))


def test_metadata_bookmarks_and_tags(small: Well) -> None:
    """Title, author, bookmarks, language, tags and descriptions of pictures are in the file."""
    body = inside(document_pdf(build_document([small], make_settings(None))))
    assert b"Ash Gill & <i>Co</i>" in body
    assert b"A. Tester" in body
    for mark in (b"/Outlines", b"/StructTreeRoot", b"/MarkInfo", b"/Alt", b"/Lang"):
        assert mark in body


@pytest.mark.parametrize("name", ["turbidites", "core"])
def test_archive_on_request(name: str) -> None:
    """PDF/A says so in its metadata; the plain file does not."""
    document = document_of(name)
    assert b"<pdfaid:part>2</pdfaid:part>" in document_pdf(document, archive=True)
    assert b"pdfaid" not in document_pdf(document)


def test_logo_organisation_and_feet(tmp_path: Path, small: Well) -> None:
    """The title page takes a logo and a line; feet change lengths, velocities and the headings of tables."""
    logo = tmp_path / "logo.svg"
    logo.write_text(
        '<svg xmlns="http://www.w3.org/2000/svg" width="20" height="20"><rect width="20" height="20"/></svg>'
    )
    settings = make_settings(None, units="feet", logo=str(logo), organisation="Orme Survey")
    document = build_document([small], settings)
    assert document.organisation == "Orme Survey"
    beds = next(table for table in document.tables() if table.id.startswith("beds"))
    assert [column.unit for column in beds.columns[1:4]] == ["ft", "ft", "ft"]
    assert beds.rows[0][2] == "3.28"
    phases = next(table for table in document.tables() if table.id.startswith("phases"))
    assert {column.unit for column in phases.columns} >= {"ft", "ft/s"}
    assert document_pdf(document).startswith(b"%PDF")


def test_sentences_of_the_summary_are_in_feet() -> None:
    """With feet no sentence of the summary has a length in metres or a velocity in m/s."""
    document = build_document(wells_of("river"), make_settings(None, units="feet", sections=["summary"]))
    sentences = [block.text for block in document.sections[0].blocks if isinstance(block, Paragraph)]
    assert any(" ft/s" in text for text in sentences)
    assert [text for text in sentences if re.search(r"\d[ \u00a0]m(/s)?\b", text)] == []


def test_a_logo_that_cannot_be_used_is_told(tmp_path: Path, small: Well) -> None:
    """A logo that is missing or no picture stops with a word on what to do."""
    with pytest.raises(LogkitError, match="cannot be read"):
        build_document([small], make_settings(None, logo=str(tmp_path / "none.png")))
    with pytest.raises(LogkitError, match="not an svg or png"):
        build_document([small], make_settings(None, logo="logo.gif"))


def test_sections_in_the_order_wanted(small: Well) -> None:
    """Only the chosen sections are there, in their order."""
    document = build_document([small], make_settings(None, sections=["limits", "summary"]))
    assert [section.id for section in document.sections] == ["limits", "summary"]


def test_depths_as_known_from_the_well() -> None:
    """Tables of a cored well in feet show its depths, larger downward, in the unit they were written in."""
    wells = wells_of("core")
    document = document_of("core")
    beds = next(table for table in document.tables() if table.id.startswith("beds"))
    assert [column.label for column in beds.columns[1:3]] == ["base (ft)", "top (ft)"]
    bed = wells[0].log.beds[0]
    assert float(beds.rows[0][1]) == pytest.approx(bed.depth_base, abs=0.01)
    assert float(beds.rows[0][2]) == pytest.approx(bed.depth_top, abs=0.01)


def test_methods_name_only_what_was_used() -> None:
    """Formulas of waves and wind are not in the methods of a river, those of its criteria are."""
    document = document_of("river")
    methods = next(table for table in document.tables() if table.id == "methods")
    used = {row[0] for row in methods.rows}
    assert "threshold.soulsby_whitehouse" in used
    assert not any(id.startswith(("waves.", "wind.", "turbidity.")) for id in used)
    works = next(s for s in document.sections if s.id == "references").blocks[0]
    assert isinstance(works, Terms)
    listed = " ".join(work for _, work in works.entries)
    for name in ("Soulsby", "van den Berg", "Leclair"):
        assert name in listed


def test_captions_say_what_is_shown() -> None:
    """Every caption names its source; every picture of numbers says what its range means and has a description."""
    for name in SOURCES:
        document = document_of(name)
        for table in document.tables():
            assert "ource" in table.caption, table.id
        for figure in document.figures():
            assert "ource" in figure.caption, figure.id
            assert figure.alt
            if not figure.id.startswith("roses"):
                assert "P10–P90" in figure.caption, figure.id


def test_wrong_ending_is_refused(tmp_path: Path) -> None:
    """Only pdf, html and docx are written, and nothing is left behind."""
    with pytest.raises(ArgumentError, match=r"\.pdf, \.html or \.docx"):
        write_report(small_log(), tmp_path / "report.odt")
    assert list(tmp_path.iterdir()) == []


def test_hostile_text_stays_text(small: Well) -> None:
    """Marks of markup languages in notes are set as they are."""
    body = build_document([small], make_settings(None))
    notes = [cell for table in body.tables() for row in table.rows for cell in row if "script" in cell]
    assert notes
    assert all("\u0007" not in cell for cell in notes)
    assert "\u0007" in HOSTILE


def test_all_logs_of_several_wells_are_there() -> None:
    """Panel, comparison and the columns of every well are in the report of several."""
    document = document_of("wells")
    ids = {section.id for section in document.sections}
    assert {"panel", "comparison"} <= ids
    names = [found.log.name for found in outcome("wells").runs]
    for name in names:
        assert any(name in figure.caption for figure in document.figures() if figure.kind == "column")
