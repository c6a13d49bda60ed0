"""Styles: inheritance, dumping, and errors that name file, line and the nearest key."""

from __future__ import annotations

import dataclasses

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.drawing.style import LEAST_TYPE_PT, dump, list_styles, load_style
from logkit.errors import ArgumentError, DataFileError, UnknownNameError

NAMES = list(list_styles())


def written(tmp_path, text):
    """A style file with this text."""
    path = tmp_path / "mine.toml"
    path.write_text(text, encoding="utf-8")
    return path


def test_six_styles_ship_with_the_base_first():
    """The list starts with the base style and gives every shipped style a label."""
    assert NAMES[0] == "report"
    assert set(NAMES) == {"report", "journal-single", "journal-double", "field-mono", "poster", "dark"}
    assert all(list_styles().values())


@pytest.mark.parametrize("name", NAMES)
def test_a_dumped_style_is_the_same_style(tmp_path, name):
    """`load(dump(style))` equals the style in everything but its name."""
    style = load_style(name)
    again = load_style(written(tmp_path, dump(style)))
    assert dataclasses.replace(again, name=name) == style


@pytest.mark.parametrize("name", NAMES)
def test_no_type_is_too_small_and_tracks_fit_the_page(name):
    """All type is 6 pt or more; widths of the fixed tracks fit between the margins."""
    style = load_style(name)
    assert min(getattr(style.fonts, f.name) for f in dataclasses.fields(style.fonts)) >= LEAST_TYPE_PT
    usual = [t for t in style.order if t not in ("gamma", "colour", "fossils", "bioturbation")]
    needed = sum(style.tracks[t].width + style.tracks[t].gap for t in usual) - style.tracks[usual[0]].gap
    assert needed <= style.page_size_mm()[0] - 2 * style.page.margin + 1e-6


def test_journal_columns_have_their_widths():
    """The two journal styles are 80 and 175 mm wide."""
    assert load_style("journal-single").page_size_mm()[0] == 80
    assert load_style("journal-double").page_size_mm()[0] == 175


def test_a_file_overrides_only_what_it_names(tmp_path):
    """Everything a user's file does not name comes from the style it inherits from."""
    style = load_style(
        written(tmp_path, 'inherits = "dark"\n[page]\nscale = 20\n[tracks.texture]\nwidth = 60\n')
    )
    dark = load_style("dark")
    assert style.page.scale == 20.0
    assert style.tracks["texture"].width == 60.0
    assert style.tracks["texture"].gap == dark.tracks["texture"].gap
    assert style.colours == dark.colours


def test_a_file_can_inherit_from_a_file_beside_it(tmp_path):
    """`inherits = "house.toml"` is looked up beside the file."""
    (tmp_path / "house.toml").write_text("[lines]\nspine = 0.7\n", encoding="utf-8")
    style = load_style(written(tmp_path, 'inherits = "house.toml"\n'))
    assert style.lines.spine == 0.7


def test_overrides_in_memory_and_a_style_as_argument():
    """Overrides work on a name and on a style, and do not touch the original."""
    report = load_style("report")
    assert load_style(report) is report
    assert load_style(report, {"page": {"scale": 10}}).page.scale == 10.0
    assert load_style("report", {"fonts": {"note": 8}}).fonts.note == 8.0
    assert load_style("report").fonts.note == report.fonts.note


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("[lines]\nspin = 0.3\n", "line 2: there is no key 'spin' in [lines]. Did you mean 'spine'?"),
        ("\n[colors]\nink = '#000000'\n", "line 2: there is no key 'colors'. Did you mean 'colours'?"),
        ("[lines]\nspine = 'thick'\n", "line 2: lines.spine must be a number, not 'thick'."),
        ("[lines]\nspine = true\n", "line 2: lines.spine must be a number, not True."),
        ("[colours]\nink = 'red'\n", "line 2: colours.ink must be a colour like \"#1d2430\", not 'red'."),
        ("[page]\n\nscale = 0\n", "line 3: page.scale must be above zero."),
        ("[fonts]\nnote = 5\n", "line 2: fonts.note is 5 pt; at least 6 is legible."),
        ("[page]\nsize = 'A44'\n", "line 2: there is no page size 'A44'. Did you mean 'A4'?"),
        ("[texture]\nmost_dots = 1.5\n", "line 2: texture.most_dots must be a whole number, not 1.5."),
        ("[ribbon]\nvelocity = [2, 1]\n", "line 2: ribbon.velocity must be two numbers above zero, the smaller first."),
        ("page = 3\n", "line 1: page must be a table, not 3."),
        ("[tracks]\norder = ['scale', 'textur']\n", "line 2: there is no key 'textur' in [tracks.order]. Did you"),
        ("[tracks.texture]\nwidth = -1\n", "needs a width above zero and a gap of zero or more."),
        ("inherits = 'reprot'\n", "line 1: There is no style called 'reprot'. Did you mean 'report'?"),
        ("inherits = 'mine.toml'\n", "line 1: the style inherits from itself in a circle. Name another style."),
        ("[page\nscale = 1\n", "line 1: not valid TOML"),
    ],
)  # fmt: skip
def test_a_slip_in_a_style_names_file_line_and_remedy(tmp_path, text, message):
    """Each wrong key, type or value is one clear sentence with the file and the line."""
    with pytest.raises(DataFileError) as caught:
        load_style(written(tmp_path, text))
    assert "mine.toml" in str(caught.value)
    assert message in str(caught.value)


def test_an_unknown_style_names_the_nearest():
    """A misspelt style name suggests the right one."""
    with pytest.raises(UnknownNameError, match="Did you mean 'field-mono'"):
        load_style("field-mno")


def test_a_missing_file_is_an_error_about_the_file(tmp_path):
    """A path that does not exist is named."""
    with pytest.raises(DataFileError, match=r"nowhere\.toml: cannot be read"):
        load_style(tmp_path / "nowhere.toml")


def test_overrides_must_be_named_sections():
    """Overrides with a key that is no text are refused by name."""
    with pytest.raises(ArgumentError, match="overrides"):
        load_style("report", {3: {}})


@settings(deadline=None, max_examples=40)
@given(st.text(max_size=40))
def test_any_label_survives_dumping(tmp_path_factory, label):
    """Quotes, brackets and control characters in a label come back as they were."""
    style = load_style("report", {"label": label})
    path = tmp_path_factory.mktemp("style") / "any.toml"
    path.write_text(dump(style), encoding="utf-8", newline="")
    assert load_style(path).label == label
