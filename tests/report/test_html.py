"""The page: inert text, no network, one record a bed, small."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest
from report_cases import SOURCES, small_log, wells_of

from logkit.report import write_report
from logkit.report.content import build_document
from logkit.report.html import document_html, inert_json
from logkit.report.page import page_columns
from logkit.report.settings import make_settings
from logkit.report.wells import Well


def page_of(wells: list[Well]) -> str:
    """The page of some wells."""
    settings = make_settings(None)
    document = build_document(wells, settings, for_page=True)
    return document_html(document, [figure for well in wells for figure in page_columns(well, settings)])


def data_of(page: str) -> dict:
    """The data that the script of the page reads."""
    found = re.search(r'<script type="application/json" id="bed-data">(.*?)</script>', page, re.DOTALL)
    assert found
    return json.loads(found[1])


def test_hostile_text_is_inert(small: Well) -> None:
    """What looks like markup in titles, names and notes is never markup; there are two scripts and no image."""
    page = page_of([small])
    assert page.count("<script") == 2
    assert "<img" not in page
    assert "<script>window.hacked" not in page
    assert "&lt;script&gt;window.hacked" in page
    assert "Ash Gill &amp; &lt;i&gt;Co&lt;/i&gt;" in page


def test_json_cannot_end_its_element() -> None:
    """No text can close the script element, and it is read back as it was."""
    value = {"a": '</script><!-- & " \u2028'}
    text = inert_json(value)
    assert not set("<>&") & set(text)
    assert json.loads(text) == value


def test_no_address_is_fetched(small: Well) -> None:
    """The page asks for nothing: no link, no source but data, and a policy that forbids the rest."""
    page = page_of([small])
    assert "default-src 'none'" in page
    assert re.findall(r'(?:src|href)="(?!#|data:)[^"]*"', page) == []
    assert re.findall(r"url\((?!#)", page) == []


def test_ids_are_unique() -> None:
    """Every id of the page of several wells is there once."""
    ids = re.findall(r'\bid="([^"]+)"', page_of(wells_of("wells")))
    assert len(ids) == len(set(ids))


@pytest.mark.parametrize("name", SOURCES)
def test_column_history_and_tables_are_tied(name: str) -> None:
    """Every bed of the log has a record, a group in the column and a row in the bed table of the same key."""
    wells = wells_of(name)
    page = page_of(wells)
    keys = [bed["key"] for bed in data_of(page)["beds"]]
    assert len(keys) == len(set(keys)) == sum(len(well.log.beds) for well in wells)
    drawn = set(re.findall(r'<g\b[^>]*\bdata-bed="([^"]+)"', page))
    listed = set(re.findall(r'<tr data-bed="([^"]+)"', page))
    assert set(keys) <= drawn
    assert set(keys) <= listed


def test_same_log_same_bytes(tmp_path: Path) -> None:
    """Two runs give the same page."""
    first = write_report(small_log(), tmp_path / "a.html").read_bytes()
    assert first == write_report(small_log(), tmp_path / "b.html").read_bytes()
