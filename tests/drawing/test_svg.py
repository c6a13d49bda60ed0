"""Shapes written as SVG: exact text of small drawings, inert user text, finite numbers."""

from __future__ import annotations

from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st

from logkit.drawing.shapes import (
    Circle,
    Dots,
    Gradient,
    Group,
    Lines,
    Paint,
    Path,
    Sheet,
    Text,
    gathered,
    polyline,
)
from logkit.drawing.svg import path_data, sheet_svg
from logkit.errors import LogkitError

NAMESPACE = "{http://www.w3.org/2000/svg}"


def body(*shapes: object) -> str:
    """What stands inside the root group of a sheet."""
    text = sheet_svg(Sheet(10, 10, shapes))  # type: ignore[arg-type]
    return text.split('<g id="sheet" fill="none" stroke-linejoin="round">')[1].rsplit("</g></svg>", 1)[0]


def test_path_is_written_as_steps() -> None:
    """Coordinates are whole hundredths of a millimetre, each step relative to the point before."""
    line = Path(
        polyline(((1.0, 2.0), (3.004, 2.0), (3.0, 1.5), (2.0, 1.0)), closed=True), Paint(fill="#ffffff")
    )
    assert body(line) == '<path d="M100 200h200v-50l-100-50z" fill="#ffffff"/>'


def test_curves_and_strokes() -> None:
    """Stroke attributes are in the same unit; curves are relative as well."""
    curve = Path(
        (("M", (0.0, 0.0)), ("C", (1.0, 0.0, 1.0, 1.0, 2.0, -1.0))),
        Paint(stroke="#000000", width=0.125, dash=(1.2, 0.8), cap="round"),
    )
    assert body(curve) == (
        '<path d="M0 0c100 0 100 100 200-100" stroke="#000000" stroke-width="12.5" '
        'stroke-dasharray="120 80" stroke-linecap="round"/>'
    )


def test_texts_of_a_group_share_their_style() -> None:
    """What texts have in common is written once on their group; what differs is written on the text."""
    one = Text((1, 1), "a", 6.0, "#111111", bold=True)
    two = Text((2, 2), "b", 6.0, "#222222", bold=True)
    assert body(Group((one, two), id="x")) == (
        '<g id="x" font-size="211.7" fill="#111111" font-weight="bold"><text x="100" y="100">a</text>'
        '<text x="200" y="200" fill="#222222">b</text></g>'
    )


def test_text_colour_never_fills_a_path() -> None:
    """A group with lines among its texts keeps the colour on the texts: a line would be filled with it."""
    line = Path(polyline(((0, 0), (1, 0), (1, 1))), Paint(stroke="#000000"))
    mixed = body(Group((Text((1, 1), "a", 6.0, "#111111"), line, Text((2, 2), "b", 6.0, "#111111"))))
    assert mixed.startswith("<g><text")
    assert mixed.count('fill="#111111"') == 2


def test_lines_of_one_paint_become_one_path() -> None:
    """Lines that follow each other in one paint are one path; filled shapes stay apart."""
    paint = Paint(stroke="#000000", width=0.2)
    lines = [Path(polyline(((n, 0), (n, 1))), paint) for n in range(2)]
    filled = [Path(polyline(((n, 0), (n, 1), (5, 5))), Paint(fill="#ffffff")) for n in range(2)]
    assert body(*lines, *filled) == (
        '<path d="M0 0v100m100-100v100" stroke="#000000" stroke-width="20"/>'
        '<path d="M0 0v100l500 400" fill="#ffffff"/><path d="M100 0v100l400 400" fill="#ffffff"/>'
    )


def test_dots_are_one_path() -> None:
    """Dots are zero-length strokes of one path; no dots write nothing."""
    assert body(Dots(((1, 1), (1.5, 0.5)), 0.3, "#333333")) == (
        '<path d="m100 100h0m50-50h0" stroke="#333333" stroke-width="30" stroke-linecap="round"/>'
    )
    assert body(Dots((), 0.3, "#333333"), Circle((1, 1), 0.5, Paint(fill="#000000"))) == (
        '<circle cx="100" cy="100" r="50" fill="#000000"/>'
    )


@given(st.text(max_size=60))
def test_user_text_stays_text(text: str) -> None:
    """Markup, quotes and control characters of a user are never read as markup, and the file stays well-formed."""
    sheet = Sheet(
        10,
        10,
        (Group((Text((1, 1), text, 6, "#000000"),), title=text, data=(("bed", text),)),),
        title=text or "x",
    )
    root = ElementTree.fromstring(sheet_svg(sheet))
    assert {element.tag.removeprefix(NAMESPACE) for element in root.iter()} <= {
        "svg",
        "g",
        "title",
        "desc",
        "rect",
        "text",
    }


@pytest.mark.parametrize("bad", [float("nan"), float("inf")])
def test_numbers_are_finite(bad: float) -> None:
    """A coordinate that is not finite stops the drawing with a word, it never reaches a file."""
    with pytest.raises(LogkitError, match="not a finite number"):
        path_data((("M", (0.0, bad)),))


@given(st.lists(st.tuples(st.floats(-300, 300), st.floats(-300, 300)), min_size=2, max_size=30))
def test_rounding_does_not_add_up(points: list[tuple[float, float]]) -> None:
    """Adding up the steps of the dots gives every position back to half a hundredth."""
    text = body(Dots(tuple(points), 0.3, "#333333"))
    steps = text.split('d="')[1].split('"')[0].split("h0")[:-1]
    x = y = 0
    for (x_wanted, y_wanted), step in zip(points, steps, strict=True):
        dx, dy = step[1:].replace("-", " -").split()
        x, y = x + int(dx), y + int(dy)
        assert abs(x / 100 - x_wanted) <= 0.00501
        assert abs(y / 100 - y_wanted) <= 0.00501


def test_gradient_is_defined_where_it_is_used() -> None:
    """A gradient runs down the shape it fills; beds that fade alike share one."""
    fade = Gradient("g1", ((0.0, "#000000"), (1.0, "#ffffff")))
    sheet = Sheet(10, 10, (Path(polyline(((0, 1), (1, 3))), Paint(fill="gradient:g1")),), (fade, fade))
    text = sheet_svg(sheet)
    assert 'fill="url(#g1)"' in text
    assert text.count('<linearGradient id="g1" x2="0" y2="1"><stop offset="0" stop-color="#000000"/>') == 1


def test_a_paint_of_many_paths_becomes_a_class() -> None:
    """From the third path on a paint is written once, as a rule; the class is the same on every sheet."""
    paint = Paint(stroke="#123456", width=0.3, dash=(1.2, 0.8))
    lines = [Group((Path(polyline(((n, 0), (n, 1))), paint),)) for n in range(3)]
    sheets = [sheet_svg(Sheet(10, 10, tuple(lines[:count]))) for count in (2, 3)]
    assert sheets[0].count('stroke="#123456"') == 2
    name = sheets[1].split("<style>.")[1].split("{")[0]
    assert f".{name}{{stroke:#123456;stroke-width:30;stroke-dasharray:120 80}}" in sheets[1]
    assert sheets[1].count(f'class="{name}"') == 3


def test_lines_are_one_path() -> None:
    """Open lines of one paint are one path of steps."""
    lines = Lines((((0.0, 0.0), (1.0, 0.0), (1.5, -0.5)), ((2.0, 2.0), (1.0, 2.0))), Paint(stroke="#000000"))
    assert 'd="M0 0l100 0 50-50m50 250l-100 0"' in body(lines)


def test_gathered_marks_keep_their_order_and_share_their_paints() -> None:
    """Marks that do not touch become one path a paint, what lies below first; texts form one group."""
    below, above = Paint(fill="#ffffff"), Paint(stroke="#000000")
    marks = [
        (
            Path(polyline(((n, 0), (n, 1), (n + 0.5, 1))), below),
            Path(polyline(((n, 0), (n, 1))), above),
            Text((n, 2), str(n), 6, "#000000"),
        )
        for n in range(3)
    ]
    first, second, texts = gathered(marks)
    assert (first.paint, second.paint) == (below, above)
    assert [len(shape.segments) for shape in (first, second)] == [9, 6]
    assert [text.text for text in texts.children] == ["0", "1", "2"]
