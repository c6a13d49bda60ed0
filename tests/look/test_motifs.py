"""Motifs: the whole vocabulary has a glyph, structures stay in their bed, slips in the file are named."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.drawing.cutting import inside
from logkit.drawing.marks import parse_step
from logkit.drawing.motifs import all_motifs, glyph, has_motif, load_motifs, motif, structure_lines
from logkit.drawing.shapes import Circle, Lines, Path
from logkit.drawing.style import list_styles, load_style
from logkit.errors import ArgumentError, DataFileError
from logkit.vocabulary import vocabulary

REPORT = load_style("report")
TERMS = tuple(all_motifs())
OUTLINE = [(36.0, 20.0), (58.0, 20.0), (64.0, 34.0), (36.0, 34.0)]


def extent(shapes):
    """x0, y0, x1, y1 of all points and circles."""
    points = []
    for shape in shapes:
        if isinstance(shape, Circle):
            (x, y), r = shape.centre, shape.radius
            points += [(x - r, y - r), (x + r, y + r)]
        elif isinstance(shape, Path):
            points += [s[1][-2:] for s in shape.segments if s[1]]
        elif isinstance(shape, Lines):
            points += [point for line in shape.lines for point in line]
    array = np.array(points)
    return (*array.min(axis=0), *array.max(axis=0))


def line_points(made):
    """Points of each line of a structure."""
    return [np.array(line) for shape in made.lines if isinstance(shape, Lines) for line in shape.lines]


@pytest.mark.parametrize("name", ["structures", "fossils", "contacts"])
def test_every_term_has_a_motif_of_its_own(name):
    """No structure, fossil or contact of the vocabulary falls back on the generic mark."""
    missing = [term for term in vocabulary(name).ids if not has_motif(term)]
    assert missing == []


@pytest.mark.parametrize("term", TERMS)
def test_a_glyph_fits_its_box(term):
    """Glyphs stay within their box, so that neighbours never touch."""
    x0, y0, x1, y1 = extent(glyph(term, (50, 80), 4.6, 2.6, REPORT))
    assert x0 >= 50 - 2.3 - 0.4
    assert x1 <= 50 + 2.3 + 0.4
    assert y0 >= 80 - 1.3 - 0.4
    assert y1 <= 80 + 1.3 + 0.4
    assert x1 - x0 > 0.9
    assert max(x1 - x0, y1 - y0) > 1.2


def test_no_two_terms_share_a_glyph():
    """Glyphs differ, except where the file says that a term is drawn like another."""
    drawn = {}
    for term, entry in all_motifs().items():
        drawn.setdefault(entry.glyph, []).append(term)
    shared = sorted(tuple(terms) for terms in drawn.values() if len(terms) > 1)
    assert shared == [
        ("burrows", "undetermined_burrows"),
        ("escape_burrows", "escape_trace"),
        ("microbial_lamination", "microbial_mats"),
        ("plant_debris", "plant_fragments"),
    ]


@pytest.mark.parametrize("term", TERMS)
def test_structure_lines_stay_in_the_bed(term):
    """All lines and objects lie inside the bed's outline; the same seed gives the same drawing."""
    box = (36.0, 20.0, 64.0, 34.0)
    made = structure_lines(term, box, 5.0, 11, REPORT, OUTLINE)
    assert made == structure_lines(term, box, 5.0, 11, REPORT, OUTLINE)
    if made.lines:
        x0, y0, x1, y1 = extent(made.lines)
        assert x0 >= 36 - 0.3
        assert x1 <= 64 + 0.3
        assert y0 >= 20 - 0.3
        assert y1 <= 34 + 0.3
        ends = np.array([(s[2], s[3]) for s in made.clear] or [(40.0, 25.0)])
        ends = np.concatenate([ends, *line_points(made)])
        grown = np.array([(35.5, 19.4), (58.3, 19.4), (64.8, 34.6), (35.5, 34.6)])
        assert inside(ends, grown).all()


def test_structures_that_show_lines_show_them():
    """Every structure but those without structure draws something in a bed of usual size."""
    plain = {"massive", "graded_massive"}
    for term in vocabulary("structures").ids:
        made = structure_lines(term, (36.0, 20.0, 64.0, 34.0), None, 3, REPORT)
        assert bool(made.lines) == (term not in plain), term
        assert bool(made.clear or made.window) == (term not in plain), term


@settings(deadline=None, max_examples=60)
@given(
    st.sampled_from(TERMS),
    st.floats(0.6, 60),
    st.floats(1, 47),
    st.one_of(st.none(), st.floats(-1, 80)),
    st.integers(0, 2**31),
)
def test_any_box_and_set_thickness_works(term, height, width, set_mm, seed):
    """Thin beds, narrow beds, sets thicker than their bed: finite lines inside the box."""
    made = structure_lines(term, (36.0, 50.0, 36.0 + width, 50.0 + height), set_mm, seed, REPORT)
    ends = np.array(made.clear).reshape(-1, 4)
    assert np.isfinite(ends).all()
    assert (ends[:, [0, 2]] >= 36 - 0.6).all()
    assert (ends[:, [0, 2]] <= 36 + width + 0.6).all()
    for line in line_points(made):
        assert np.isfinite(line).all()
        assert (line >= (36 - 1e-6, 50 - 1e-6)).all()
        assert (line <= (36 + width + 1e-6, 50 + height + 1e-6)).all()


def test_sets_have_the_thickness_of_the_record():
    """The boundaries of cross-sets lie a set thickness apart."""
    made = structure_lines("planar_cross_bedding", (0.0, 0.0, 40.0, 24.0), 6.0, 1, REPORT)
    (boundaries,) = [s for s in made.lines if isinstance(s, Lines) and s.paint.width == REPORT.lines.set]
    heights = sorted({round(y, 1) for line in boundaries.lines for _, y in line})
    assert len([h for h in heights if min(abs(h - k) for k in (6, 12, 18)) < 1.0]) == len(heights)


@pytest.mark.parametrize("name", list(list_styles()))
def test_lines_are_in_the_inks_of_the_style(name):
    """Structure lines use no colour but those of the style."""
    style = load_style(name)
    inks = {getattr(style.colours, key) for key in type(style.colours).__dataclass_fields__} | {None}
    for term in ("trough_cross_bedding", "lenticular_bedding", "mud_chips", "roots"):
        for shape in structure_lines(term, (0.0, 0.0, 30.0, 12.0), 4.0, 2, style).lines:
            assert {shape.paint.fill, shape.paint.stroke} <= inks


def test_an_unknown_term_has_the_generic_mark():
    """A term without a motif is drawn, under its own name, and never fails."""
    assert motif("brand_new_structure").label == "brand new structure"
    assert glyph("brand_new_structure", (0, 0), 4, 2, REPORT) == glyph("unknown_term", (0, 0), 4, 2, REPORT)
    assert structure_lines("brand_new_structure", (0, 0, 30, 12), None, 1, REPORT).lines


def test_a_large_style_draws_larger_structures():
    """The poster spaces its lines more widely than the report on the same box."""
    box = (0.0, 0.0, 60.0, 30.0)
    small, large = (
        len(line_points(structure_lines("plane_lamination", box, None, 1, load_style(name))))
        for name in ("report", "poster")
    )
    assert large < 0.75 * small


@pytest.mark.parametrize("box", [(0, 0, 0, 5), (0, 5, 5, 0), (0, 0, math.nan, 5)])
def test_a_box_without_area_is_refused(box):
    """Empty, upside-down and not finite boxes name the argument."""
    with pytest.raises(ArgumentError, match="box"):
        structure_lines("massive", box, None, 1, REPORT)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("circle 0 0 1", "a step starts with"),
        ("", "a step starts with"),
        ("line 0 0 1", "takes pairs of coordinates for at least 2 points"),
        ("loop 0 0 1 1", "at least 3 points"),
        ("dot 0 0 0", "a radius above zero"),
        ("line 0 0 x 1", "must be numbers"),
        ("line 0 0 9 1", "between -4 and 4"),
        ("line 0 0 nan 1", "between -4 and 4"),
    ],
)
def test_a_step_that_cannot_be_read_says_what_is_allowed(text, message):
    """Each slip in a step is one sentence with what may stand there."""
    with pytest.raises(ValueError, match=message):
        parse_step(text)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ('[x]\ngroup = "g"\nglpyh = []\n', "line 3: there is no key 'glpyh' in [x]. Did you mean 'glyph'?"),
        ('[x]\ngroup = "g"\nglyph = ["lime 0 0 1 1"]\n', "line 3: a step starts with"),
        ('[x]\ngroup = "g"\n', "line 1: x has no glyph."),
        ('[x]\nglyph = ["line 0 0 1 1"]\n', "line 1: x has no group."),
        ('[x]\nlike = "y"\n', "line 2: there is no motif called 'y'."),
        ('[x]\nlike = "x"\n', "line 2: x is like itself in a circle."),
        (
            '[x]\ngroup = "g"\nglyph = ["line 0 0 1 1"]\nfill = { way = "troughs", wdith = 2 }\n',
            "line 4: there is no key 'wdith' in [x.fill]. Did you mean 'width'?",
        ),
        (
            '[x]\ngroup = "g"\nglyph = ["line 0 0 1 1"]\nfill = { way = "trough" }\n',
            "line 4: way of x is 'trough'; it must be one of troughs,",
        ),
        (
            '[x]\ngroup = "g"\nglyph = ["line 0 0 1 1"]\nfill = { way = "foresets", form = "bent" }\n',
            "line 4: form of x is 'bent'; it must be one of tangential,",
        ),
        (
            '[x]\ngroup = "g"\nglyph = ["line 0 0 1 1"]\nobjects = { where = "everywhere" }\n',
            "line 4: where of x is 'everywhere'",
        ),
        (
            '[x]\ngroup = "g"\nglyph = ["line 0 0 1 1"]\nfill = { way = "laminae", spacing = 0 }\n',
            "line 4: spacing of x must be above zero.",
        ),
        ('[x]\ngroup = 3\nglyph = ["line 0 0 1 1"]\n', "line 2: x.group must be text in quotes, not 3."),
    ],
)  # fmt: skip
def test_a_slip_in_a_motif_file_names_file_line_and_remedy(tmp_path, text, message):
    """A geologist who adds a motif is told where the slip is and what was meant."""
    path = tmp_path / "own.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(DataFileError) as caught:
        load_motifs(path)
    assert "own.toml" in str(caught.value)
    assert message in str(caught.value)


def test_a_new_motif_needs_no_code(tmp_path):
    """A term with a few steps and a way of filling is complete."""
    path = tmp_path / "own.toml"
    path.write_text(
        '[wiggle]\nlabel = "wiggles"\ngroup = "mine"\nglyph = ["curve -1 0 0 1 1 0"]\n'
        'fill = { way = "laminae", wave = 0.5 }\nobjects = { where = "rows" }\n',
        encoding="utf-8",
    )
    made = load_motifs(path)["wiggle"]
    assert (made.label, made.group) == ("wiggles", "mine")
    assert made.fill is not None
    assert made.objects is not None
