"""Colour arithmetic and palettes, against an independent colour library and the limits of legibility."""

from __future__ import annotations

import itertools

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.drawing.colour import (
    DEFICIENCIES,
    contrast,
    distance,
    hex_linear,
    lightness_cie,
    linear_to_oklab,
    mixed,
    oklab_to_linear,
    oklch_hex,
    seen_with,
)
from logkit.drawing.palette import fill, state_letter, state_tints, stipple
from logkit.drawing.style import list_styles, load_style

USUAL_PHI = {"mud": 6.0, "organic_mud": 6.0, "marl": 6.0, "gravel": -3.0}
LADDER = ("ripple", "dune", "upper_plane", "gravel", "antidune")
COLOURED = [name for name in list_styles() if name != "field-mono"]
hex_colours = st.integers(0, 0xFFFFFF).map(lambda n: f"#{n:06x}")


@pytest.fixture(scope="module")
def library():
    """An independent colour library."""
    return pytest.importorskip("colour")


def test_oklab_agrees_with_an_independent_library(library):
    """Linear sRGB to OKLab and back equals the library's conversion to four places."""
    for colour in ("#fdf0c9", "#a395a6", "#469cb8", "#c52f15", "#1d2430"):
        rgb = np.array(hex_linear(colour))
        xyz = rgb @ np.array(library.models.RGB_COLOURSPACE_sRGB.matrix_RGB_to_XYZ).T
        assert linear_to_oklab(tuple(rgb)) == pytest.approx(library.XYZ_to_Oklab(xyz), abs=2e-3)
        assert oklab_to_linear(*linear_to_oklab(tuple(rgb))) == pytest.approx(rgb, abs=2e-6)


def test_srgb_encoding_agrees_with_an_independent_library(library):
    """The transfer curve of sRGB is that of the library."""
    for colour in ("#000000", "#0a0b0c", "#808080", "#e1f3ff"):
        encoded = np.array([int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)])
        assert hex_linear(colour) == pytest.approx(library.models.eotf_sRGB(encoded), abs=1e-6)


@pytest.mark.parametrize(
    ("ours", "theirs"), [("protan", "Protanomaly"), ("deutan", "Deuteranomaly"), ("tritan", "Tritanomaly")]
)
def test_deficiency_matrices_are_the_published_ones(library, ours, theirs):
    """The matrices of a complete deficiency equal those the library carries from the paper."""
    published = library.matrix_cvd_Machado2009(theirs, 1.0)
    assert np.array(DEFICIENCIES[ours]) == pytest.approx(published, abs=1e-6)


@given(hex_colours)
def test_a_colour_comes_back_from_oklab(colour):
    """OKLCH of any sRGB colour gives the same hex colour again."""
    l, a, b = linear_to_oklab(hex_linear(colour))
    assert oklch_hex(l, float(np.hypot(a, b)), float(np.degrees(np.arctan2(b, a)))) == colour


@given(st.floats(0.15, 1), st.floats(0, 0.5), st.floats(0, 360))
def test_any_oklch_gives_a_colour_of_that_lightness(lightness, chroma, hue):
    """Out-of-gamut chroma is lowered and not clipped: the lightness stays."""
    colour = oklch_hex(lightness, chroma, hue)
    assert linear_to_oklab(hex_linear(colour))[0] == pytest.approx(lightness, abs=0.02)


@given(hex_colours, hex_colours)
def test_contrast_is_symmetric_and_bounded(first, second):
    """Contrast runs from 1 to 21 and does not depend on the order."""
    assert contrast(first, second) == contrast(second, first)
    assert 1 <= contrast(first, second) <= 21.0001


def test_the_mean_colour_lies_between():
    """Half of two colours is equally far from both."""
    middle = mixed("#fdf0c9", "#97a9b4")
    assert distance(middle, "#fdf0c9") == pytest.approx(distance(middle, "#97a9b4"), abs=0.005)


@pytest.mark.parametrize("name", COLOURED)
def test_finer_is_darker_in_every_family(name):
    """Along each ramp the lightness falls with phi, so that the order survives grey printing."""
    style = load_style(name)
    for family in style.palette.families:
        greys = [lightness_cie(fill(family, phi, style)) for phi in (-4, -2, 0, 2, 4, 6, 8)]
        assert greys == sorted(greys, reverse=True), family
        assert greys[0] - greys[-1] > 10, family


@pytest.mark.parametrize("name", list(list_styles()))
def test_marks_stand_out_from_their_fill(name):
    """Dots and strokes have a contrast of 3 to every fill of their family from granules to clay."""
    style = load_style(name)
    for family in style.palette.families:
        for phi in (-1, 1, 3, 5, 8):
            assert contrast(stipple(family, style), fill(family, phi, style)) >= 3.0, (family, phi)


@pytest.mark.parametrize("name", COLOURED)
@pytest.mark.parametrize("deficiency", [None, *DEFICIENCIES])
def test_families_differ_for_every_kind_of_colour_vision(name, deficiency):
    """No two families have fills at their usual sizes closer than a just visible step; marks tell the rest."""
    style = load_style(name)
    for one, two in itertools.combinations(style.palette.families, 2):
        if {one, two} == {"quartz", "gravel"}:  # the same rock; gravel is told by its clasts
            continue
        colours = [fill(f, USUAL_PHI.get(f, 2.0), style) for f in (one, two)]
        if deficiency:
            colours = [seen_with(c, deficiency) for c in colours]
        assert distance(*colours) > 0.015, (one, two)


def test_no_two_families_share_a_mark():
    """Every family has a mark of its own, so that no meaning rests on hue alone."""
    marks = [family.mark for family in load_style("report").palette.families.values()]
    assert len(set(marks)) == len(marks)


@pytest.mark.parametrize("name", COLOURED)
def test_bed_states_are_an_ordered_ramp(name):
    """Neighbouring states differ by 6 or more in grey, in one direction, and for every kind of colour vision."""
    style = load_style(name)
    outer = [state_tints(state, style)[0] for state in LADDER]
    greys = [lightness_cie(colour) for colour in outer]
    assert greys in (sorted(greys), sorted(greys, reverse=True))
    for one, two in itertools.pairwise(outer):
        assert abs(lightness_cie(one) - lightness_cie(two)) > 6
        for deficiency in DEFICIENCIES:
            assert distance(seen_with(one, deficiency), seen_with(two, deficiency)) > 0.055


@pytest.mark.parametrize("name", list(list_styles()))
def test_inks_are_legible_on_paper(name):
    """Text inks reach 4.5 : 1 on the paper of every style, and so does the word on the conflict mark."""
    style = load_style(name)
    inks = style.colours
    for ink in (inks.ink, inks.ink2, inks.conflict, inks.structure):
        assert contrast(ink, inks.paper) >= 4.5
    assert contrast(inks.conflict, inks.on_conflict) >= 4.5
    for state in LADDER:
        assert contrast(inks.ink, state_tints(state, style)[1]) >= 3.0


def test_states_are_told_by_letters():
    """All known states have letters that differ; an unknown one is open and keeps no letter."""
    style = load_style("report")
    letters = [state_letter(state, style) for state in style.ribbon.states if state != "other"]
    assert len(set(letters)) == len(letters)
    assert state_letter("never heard of", style) == ""
    assert state_tints("never heard of", style) == state_tints("other", style)


def test_black_and_white_is_black_and_white():
    """The field style has no third colour anywhere."""
    style = load_style("field-mono")
    used = {fill(f, phi, style) for f in style.palette.families for phi in (-4, 2, 8)}
    used |= {stipple(f, style) for f in style.palette.families}
    used |= {tint for state in style.ribbon.states for tint in state_tints(state, style)}
    used |= {getattr(style.colours, key) for key in type(style.colours).__dataclass_fields__}
    assert used == {"#000000", "#ffffff"}


def test_an_unknown_family_is_grey():
    """A family that the style lacks is painted grey and not refused."""
    r, g, b = hex_linear(fill("no such rock", 2.0, load_style("report")))
    assert max(r, g, b) - min(r, g, b) < 0.01


def test_report_fills_are_the_agreed_ones():
    """The core families keep their printed colours."""
    style = load_style("report")
    assert [fill("quartz", phi, style) for phi in (-4, 1, 4)] == ["#fdf0c9", "#dacda8", "#c5b994"]
    assert [fill("mud", phi, style) for phi in (4, 7)] == ["#aabdc8", "#97a9b4"]
    assert stipple("lithic", style)[1:3] >= "50"
