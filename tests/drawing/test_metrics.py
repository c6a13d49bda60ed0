"""Text is measured as the shipped font has it."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from matplotlib.ft2font import FT2Font, LoadFlags

from logkit.drawing.fonts import font_folder
from logkit.drawing.metrics import clean, shorten, width_mm, wrap

LETTERS = st.text(st.sampled_from("abcdefgWMil .,-–°µφτ≠0123456789äéČ"), max_size=40)


@pytest.mark.parametrize(("bold", "file"), [(False, "DejaVuSans.ttf"), (True, "DejaVuSans-Bold.ttf")])
def test_widths_are_those_of_the_font_file(bold: bool, file: str) -> None:
    """The table of advances agrees with the font that PDF and PNG are set in."""
    face = FT2Font(str(font_folder() / file))
    for letter in "aWi 7φτ≠–°µ…↔":
        advance = face.load_char(ord(letter), flags=LoadFlags.NO_SCALE).horiAdvance
        assert width_mm(letter, 72.0, bold) == pytest.approx(advance / 2048 * 25.4)


@given(LETTERS, st.floats(8, 60))
def test_wrapped_lines_fit_and_lose_nothing(text: str, width: float) -> None:
    """No line is wider than asked, and the letters stay the same."""
    lines = wrap(text, width, 6.0)
    assert all(width_mm(line, 6.0) <= width + 1e-9 for line in lines)
    assert "".join(lines).replace(" ", "") == text.replace(" ", "")


@given(LETTERS, st.floats(1, 40))
def test_shortened_text_fits(text: str, width: float) -> None:
    """A shortened text fits, and is the text itself where that fits."""
    short = shorten(text, width, 6.0)
    assert width_mm(short, 6.0) <= width or short == ""
    if width_mm(clean(text), 6.0) <= width:
        assert short == clean(text)


def test_control_characters_become_spaces() -> None:
    """A page carries no control characters; a no-break space stays."""
    assert clean("a\x00b\n\tc\u00a0d") == "a b c\u00a0d"
