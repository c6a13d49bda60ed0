"""Textures: marks stay inside their bed and off its lines, follow the grain size, and never change by themselves."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logkit.drawing.cutting import cut_each, inside, simplified
from logkit.drawing.motifs import structure_lines
from logkit.drawing.noise import scatter
from logkit.drawing.shapes import Dots, Path
from logkit.drawing.style import load_style
from logkit.drawing.textures import bed_texture, dot_diameter, dot_spacing
from logkit.errors import ArgumentError

REPORT = load_style("report")
FAMILIES = tuple(REPORT.palette.families)
BED = [(36.0, 50.0), (60.0, 50.0), (66.0, 62.0), (36.0, 62.0)]


def points_of(shapes):
    """All points of dots and paths; control points of curves count too."""
    found = []
    for shape in shapes:
        if isinstance(shape, Dots):
            found += shape.points
        elif isinstance(shape, Path):
            found += [(s[1][i], s[1][i + 1]) for s in shape.segments for i in range(0, len(s[1]), 2)]
    return np.array(found).reshape(-1, 2)


def dots_of(shapes):
    """(x, y, diameter) of all dots."""
    return [(*p, s.diameter) for s in shapes if isinstance(s, Dots) for p in s.points]


@pytest.mark.parametrize("family", FAMILIES)
@pytest.mark.parametrize("style", ["report", "field-mono", "poster"])
def test_every_family_has_marks_inside_its_bed(family, style):
    """Each family draws something, and all of it inside the outline."""
    shapes = bed_texture(BED, [(50, 3.0), (62, 1.0)], family, load_style(style), seed=4)
    assert shapes
    assert inside(points_of(shapes), np.array(BED)).all()


@settings(deadline=None, max_examples=40)
@given(
    st.floats(1.1, 30),
    st.floats(3, 45),
    st.floats(-8, 9),
    st.floats(-8, 9),
    st.sampled_from(FAMILIES),
    st.integers(0, 2**32 - 1),
)
def test_any_bed_gets_finite_marks_inside(height, width, base_phi, top_phi, family, seed):
    """Thickness, width, grading, family and seed may be anything: marks are finite and stay inside."""
    outline = [(36, 100), (36 + width, 100), (36 + 0.7 * width + 1, 100 + height), (36, 100 + height)]
    shapes = bed_texture(outline, [(100, top_phi), (100 + height, base_phi)], family, REPORT, seed=seed)
    points = points_of(shapes)
    assert np.isfinite(points).all()
    assert inside(points, np.array(outline)).all()
    assert sum(len(s.points) for s in shapes if isinstance(s, Dots)) <= 1.6 * REPORT.texture.most_dots


def test_the_same_bed_is_drawn_the_same():
    """Equal arguments give equal shapes, another seed others."""
    first, again, other = (bed_texture(BED, [(50, 2.0)], "lithic", REPORT, seed=n) for n in (7, 7, 8))
    assert first == again
    assert first != other


def test_dots_grow_and_spread_with_the_grain():
    """Coarser sand has larger and fewer dots, as the style's laws say."""
    phi = np.array([4.0, 2.0, 0.0, -1.0])
    assert dot_diameter(phi, REPORT.texture) == pytest.approx([0.15, 0.3, 0.5, 0.7], abs=0.051)
    assert dot_spacing(phi, REPORT.texture) == pytest.approx([0.60, 0.98, 1.61, 2.05], abs=0.01)
    counts = [
        len(dots_of(bed_texture(BED, [(50, p)], "quartz", REPORT, seed=1))) for p in (3.5, 2, 0.5, -0.9)
    ]
    assert counts == sorted(counts, reverse=True)
    assert counts[-1] > 5


@pytest.mark.parametrize("phi", [3.5, 2.0, 0.0])
def test_dots_are_blue_noise(phi):
    """No two dots are nearer than the spacing, and few places are farther than twice from the next dot."""
    bed = [(0, 0), (20, 0), (20, 16), (0, 16)]
    dots = np.array(dots_of(bed_texture(bed, [(0, phi)], "quartz", REPORT, seed=3)))[:, :2]
    spacing = float(dot_spacing(np.array(phi), REPORT.texture))
    gaps = np.hypot(*(dots[:, None] - dots[None]).transpose(2, 0, 1))
    np.fill_diagonal(gaps, np.inf)
    assert gaps.min() >= 0.9 * spacing
    assert np.quantile(gaps.min(axis=1), 0.95) < 1.6 * spacing


def test_ink_cover_of_sand_is_even_across_sizes():
    """Dots cover 3 to 9 % of the bed at any sand size, so that tone does not fake a grain size."""
    bed = [(0, 0), (30, 0), (30, 16), (0, 16)]
    for phi in (3.0, 2.0, 1.0, 0.0):
        dots = dots_of(
            bed_texture(
                bed, [(0, phi)], "quartz", load_style(REPORT, {"texture": {"most_dots": 9000}}), seed=3
            )
        )
        cover = sum(math.pi / 4 * d * d for *_, d in dots) / (30 * 16)
        assert 0.03 < cover < 0.09, phi


@pytest.mark.parametrize("style", ["report", "poster"])
@pytest.mark.parametrize("term", ["trough_cross_bedding", "plane_lamination", "climbing_ripples"])
def test_dots_keep_clear_of_the_lines_of_a_structure(term, style):
    """Dots keep off the lines that a structure draws in the same bed, within the raster's step."""
    chosen = load_style(style)
    box, outline = (36.0, 50.0, 66.0, 62.0), [(36.0, 50.0), (66.0, 50.0), (66.0, 62.0), (36.0, 62.0)]
    made = structure_lines(term, box, None, 5, chosen, outline)
    shapes = bed_texture(outline, [(50, 3.0)], "quartz", chosen, seed=5, windows=(made.window,))
    pieces = [p for s in made.lines for line in s.lines for p in itertools.pairwise(line)]
    start, end = (np.array([piece[i] for piece in pieces]) for i in (0, 1))
    step = end - start
    dots = dots_of(shapes)
    assert len(dots) > 20
    for x, y, diameter in dots:
        along = ((np.array([x, y]) - start) * step).sum(axis=1) / (step**2).sum(axis=1)
        foot = start + np.clip(along, 0, 1)[:, None] * step
        away = np.hypot(x - foot[:, 0], y - foot[:, 1]).min() - diameter / 2
        assert away >= chosen.texture.clear - 0.15 * chosen.texture.magnify


def test_marks_keep_clear_of_lines():
    """No dot's edge comes nearer to a structure line than the clear zone, within the raster's step."""
    lines = [(36.0, 55.0, 70.0, 55.0), (36.0, 58.0, 70.0, 60.0)]
    dots = dots_of(bed_texture(BED, [(50, 2.5), (62, 0.0)], "quartz", REPORT, seed=2, clear=lines))
    for x, y, diameter in dots:
        for x0, y0, x1, y1 in lines:
            t = min(
                max(((x - x0) * (x1 - x0) + (y - y0) * (y1 - y0)) / ((x1 - x0) ** 2 + (y1 - y0) ** 2), 0), 1
            )
            away = math.hypot(x - x0 - t * (x1 - x0), y - y0 - t * (y1 - y0)) - diameter / 2
            assert away >= REPORT.texture.clear - 0.15


def test_lithic_sand_has_triangles_and_quartz_has_none():
    """Some lithic dots are filled triangles, in about the share the style says."""
    lithic = bed_texture(BED, [(50, 1.0)], "lithic", REPORT, seed=5)
    triangles = sum(seg[0] == "Z" for s in lithic if isinstance(s, Path) for seg in s.segments)
    share = triangles / (triangles + len(dots_of(lithic)))
    assert 0.25 < share < 0.6
    assert all(isinstance(s, Dots) for s in bed_texture(BED, [(50, 1.0)], "quartz", REPORT, seed=5))


def test_a_bed_thinner_than_the_least_is_left_flat():
    """Beds under the style's least thickness get no marks, and neither does a style without dots."""
    thin = [(0, 0), (20, 0), (20, 0.9), (0, 0.9)]
    assert bed_texture(thin, [(0, 2)], "quartz", REPORT, seed=1) == ()
    assert (
        bed_texture(BED, [(50, 2)], "quartz", load_style(REPORT, {"texture": {"dots": False}}), seed=1) == ()
    )


def test_a_bed_of_unknown_size_has_the_marks_of_its_family():
    """Without a grain size mud still has strokes and gravel clasts."""
    assert isinstance(bed_texture(BED, [], "mud", REPORT, seed=1)[0], Path)
    (clasts,) = bed_texture(BED, [], "gravel", REPORT, seed=1)
    assert clasts.paint.fill == REPORT.colours.clast


def test_clasts_do_not_touch():
    """Outlined clasts keep clear of each other."""
    (clasts,) = bed_texture([(0, 0), (25, 0), (25, 12), (0, 12)], [(0, -3.0)], "gravel", REPORT, seed=9)
    loops, current = [], []
    for command, values in clasts.segments:
        if command == "Z":
            loops.append(np.array(current))
            current = []
        else:
            current.append(values[-2:])
    assert len(loops) > 30
    for one, two in itertools.combinations(loops, 2):
        if np.hypot(*(one.mean(axis=0) - two.mean(axis=0))) < 3:
            assert not inside(one, two).any()


@pytest.mark.parametrize(
    ("outline", "knots"),
    [([(0, 0), (1, 1)], []), ([(0, 0), (9, 0), (9, math.nan)], []), (BED, [(50, math.inf)])],
)
def test_outlines_that_are_no_area_are_refused(outline, knots):
    """Too few points and numbers that are not finite name the argument."""
    with pytest.raises(ArgumentError, match="outline"):
        bed_texture(outline, knots, "quartz", REPORT, seed=1)


@settings(deadline=None, max_examples=30)
@given(st.floats(0.4, 6), st.integers(0, 10**9))
def test_noise_of_any_spacing_keeps_its_distance(spacing, seed):
    """The shipped tile gives at least the spacing asked for, up to the tile's rounding, across tile seams too."""
    x, y, reach = scatter((-30, -30, 30, 30), spacing, seed)
    kept = np.column_stack([x, y])[reach >= spacing][:1500]
    gaps = np.hypot(*(kept[:, None] - kept[None]).transpose(2, 0, 1))
    np.fill_diagonal(gaps, np.inf)
    assert gaps.min() >= 0.9 * spacing


@given(st.lists(st.tuples(st.floats(-5, 15), st.floats(-5, 15)), min_size=2, max_size=12))
def test_cut_lines_lie_inside(points):
    """Every part of a line cut to a polygon lies inside it."""
    polygon = np.array([(0.0, 0.0), (10.0, 1.0), (8.0, 9.0), (1.0, 10.0)])
    grown = np.array([(-0.05, -0.05), (10.1, 0.95), (8.1, 9.1), (0.9, 10.1)])
    nought = np.zeros(len(points), dtype=int)
    for part in cut_each(np.array(points), nought, nought, [polygon]).lines():
        assert inside(part, grown).all()


def test_a_line_across_is_cut_at_the_edges_and_one_along_the_edge_is_no_trouble():
    """A line through a square keeps its middle; its length is the square's width."""
    square = np.array([(0.0, 0.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0)])
    points = np.array([(-3.0, 2.0), (9.0, 2.0), (0.0, 1.0), (4.0, 1.0), (5.0, 1.0), (6.0, 1.0)])
    runs = cut_each(points, np.array([0, 0, 1, 1, 2, 2]), np.zeros(6, dtype=int), [square])
    part, whole = runs.lines()
    assert runs.owners.tolist() == [0, 1]
    assert part == pytest.approx(np.array([(0.0, 2.0), (4.0, 2.0)]))
    assert whole == pytest.approx(np.array([(0.0, 1.0), (4.0, 1.0)]))


def test_simplifying_stays_within_the_tolerance():
    """A finely sampled arc keeps its ends and moves by less than a hair."""
    t = np.linspace(0, np.pi, 400)
    arc = np.column_stack([5 * np.cos(t), 5 * np.sin(t)])
    kept = simplified(arc)
    assert len(kept) < 40
    assert kept[0] == pytest.approx(arc[0])
    assert kept[-1] == pytest.approx(arc[-1])
    middles = (kept[1:] + kept[:-1]) / 2
    assert np.abs(np.hypot(*middles.T) - 5).max() < 0.045
