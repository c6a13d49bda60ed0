"""The symbol sheets: everything is on them, nothing leaves the page, words do not overlap."""

from __future__ import annotations

import itertools
import xml.etree.ElementTree as ElementTree

import pytest

from logkit.drawing.metrics import text_box
from logkit.drawing.motifs import all_motifs
from logkit.drawing.shapes import Text, walk
from logkit.drawing.style import list_styles, load_style
from logkit.drawing.symbols import symbol_sheet

STYLES = list(list_styles())


@pytest.fixture(scope="module")
def sheets():
    """Symbol sheets of all styles."""
    return {name: symbol_sheet(load_style(name)) for name in STYLES}


@pytest.mark.parametrize("name", STYLES)
def test_every_motif_is_shown_with_its_words(sheets, name):
    """The first word of every motif's label stands on a sheet."""
    words = " ".join(
        shape.text for sheet in sheets[name].sheets for shape in walk(sheet.shapes) if isinstance(shape, Text)
    )
    for motif in all_motifs().values():
        assert motif.label.split()[0] in words


@pytest.mark.parametrize("name", STYLES)
def test_words_stay_on_the_page_and_apart(sheets, name):
    """No text leaves its sheet or meets another text."""
    for sheet in sheets[name].sheets:
        boxes = []
        for text in walk(sheet.shapes):
            if isinstance(text, Text):
                assert text.size >= 6
                box = text_box(text.at, text.text, text.size, text.bold, text.anchor, text.turn)
                boxes.append(((box.x0, box.y0, box.x1, box.y1), text.text))
        for (x0, y0, x1, y1), words in boxes:
            assert min(x0, y0) >= 0, words
            assert x1 <= sheet.width, words
            assert y1 <= sheet.height, words
        for (one, first), (two, second) in itertools.combinations(boxes, 2):
            apart = one[2] <= two[0] or two[2] <= one[0] or one[3] <= two[1] or two[3] <= one[1]
            assert apart, (first, second)


def test_the_sheets_are_well_formed_and_repeatable(sheets):
    """The SVG is well formed, and two runs give the same bytes."""
    again = symbol_sheet(load_style("report"))
    for number in range(1, len(again.sheets) + 1):
        text = again.svg(number)
        ElementTree.fromstring(text)
        assert text == sheets["report"].svg(number)
