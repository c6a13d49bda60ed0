"""The panel as shapes: one scale, places of wells and ties, what is said on it."""

from __future__ import annotations

import re
from dataclasses import replace
from xml.etree import ElementTree

import pytest
from synthetic_wells import second_well, section

from logkit.compare import Comparison, compare_logs, draw_panel
from logkit.compare.panel_layout import PANEL_TRACKS, plan_panel
from logkit.drawing.metrics import text_box
from logkit.drawing.shapes import Text, walk
from logkit.drawing.style import load_style
from logkit.errors import ArgumentError
from logkit.model import Bed, Header, Log


def marked(log: Log, marks: dict[int, str], distance: float | None = None) -> Log:
    """A log with markers, and a distance in its header."""
    beds = tuple(replace(b, marker=marks.get(i, "")) for i, b in enumerate(log.beds))
    extra = () if distance is None else (("distance_m", str(distance)),)
    return replace(log, beds=beds, header=Header(section=log.header.section, extra=extra))


@pytest.fixture(scope="module")
def comparison() -> Comparison:
    """Three wells, the third without the datum."""
    first = section(1, 40, "cycles")
    second, _ = second_well(first, 3)
    third = section(9, 30, "cycles", "C <&>")
    logs = [
        marked(first, {10: "ash 2", 30: "coal"}, 0),
        marked(second, {9: "ash 2", 26: "coal"}, 400),
        marked(third, {20: "coal"}, 1400),
    ]
    return compare_logs(logs, "ash 2", suggest_ties=True)


def texts(drawing) -> list[Text]:  # type: ignore[no-untyped-def]
    """All texts of the sheet."""
    return [s for s in walk(drawing.sheets[0].shapes) if isinstance(s, Text)]


def test_panel_is_well_formed_and_the_same_every_time(comparison: Comparison) -> None:
    """Same input, same bytes; hostile names stay text; ids are unique."""
    one, two = draw_panel(comparison).svg(), draw_panel(comparison).svg()
    assert one == two
    root = ElementTree.fromstring(one)
    ids = [e.get("id") for e in root.iter() if e.get("id")]
    assert len(ids) == len(set(ids))
    assert "C &lt;&amp;&gt;" in one
    assert not re.search(r"nan|inf", re.sub(r">[^<]*<", "><", one))


def test_every_bed_is_on_the_panel(comparison: Comparison) -> None:
    """No bed is left out for its size."""
    svg = draw_panel(comparison).svg()
    beds = set(re.findall(r'id="(b-[0-9a-f-]+)"', svg))
    assert len(beds) >= sum(len(p.hung.beds) for p in comparison.placed)


def test_texts_stay_on_the_sheet_and_apart(comparison: Comparison) -> None:
    """No text leaves the page, and hardly any box meets another."""
    drawing = draw_panel(comparison)
    sheet = drawing.sheets[0]
    boxes = [text_box(t.at, t.text, t.size, t.bold, t.anchor, t.turn) for t in texts(drawing)]
    for box in boxes:
        assert box.x0 >= 0
        assert box.x1 <= sheet.width
        assert box.y0 >= 0
        assert box.y1 <= sheet.height
    meeting = [(a, b) for i, a in enumerate(boxes) for b in boxes[i + 1 :] if a.overlaps(b, 0.3)]
    assert not meeting


def test_the_datum_is_level_and_scale_is_one(comparison: Comparison) -> None:
    """The datum marker lies at one height in all wells that show it, at one scale."""
    plan = plan_panel(comparison, load_style("report"), 100.0, "even", PANEL_TRACKS, None)
    for column, index in zip(plan.columns[:2], (10, 9), strict=True):
        y = column.view.position.y(column.placed.hung.beds[index].base_m)
        assert y == pytest.approx(plan.y(0.0), abs=1e-6)
    for column in plan.columns:
        tall = column.view.position.y_base - column.view.position.y_top
        assert tall == pytest.approx(column.placed.hung.thickness_m * 10)


def test_one_velocity_axis_for_all_wells(comparison: Comparison) -> None:
    """The flow ribbon of each well has the same ends."""
    plan = plan_panel(comparison, load_style("report"), None, "even", PANEL_TRACKS, None)
    ends = {(c.scene.velocity.low, c.scene.velocity.high) for c in plan.columns if c.scene.velocity}
    assert len(ends) == 1


def test_spacing_by_distance_is_to_scale_and_said(comparison: Comparison) -> None:
    """Distances between the middles are proportional; the exaggeration is printed."""
    plan = plan_panel(comparison, load_style("report"), None, "distance", PANEL_TRACKS, None)
    a, b, c = (column.middle for column in plan.columns)
    assert (c - b) / (b - a) == pytest.approx(1000 / 400)
    said = " ".join(t.text for t in texts(draw_panel(comparison, spacing="distance")))
    assert "exaggeration ×" in said
    assert "spaced evenly, not to scale" in " ".join(t.text for t in texts(draw_panel(comparison)))


def test_what_is_assumed_is_printed(comparison: Comparison) -> None:
    """Thickness, datum, and a datum that was not seen stand on the sheet."""
    said = " ".join(t.text for t in texts(draw_panel(comparison)))
    assert "Hung on ash 2; heights are true stratigraphic thickness (TST)" in said
    assert "datum not seen" in said
    assert "Read with care" in said


def test_suggestions_are_a_layer_of_their_own(comparison: Comparison) -> None:
    """Ties and suggestions can be told apart in a vector editor, and suggestions are in the key."""
    svg = draw_panel(comparison).svg()
    assert 'id="ties"' in svg
    assert 'id="suggested-ties"' in svg
    plain = replace(comparison, suggested=())
    assert 'id="suggested-ties"' not in draw_panel(plain).svg()


def test_wishes_that_cannot_be_drawn_are_named(comparison: Comparison) -> None:
    """Scale of zero, spacing without distances, an unknown track."""
    with pytest.raises(ArgumentError, match="scale is 0"):
        draw_panel(comparison, scale=0)
    with pytest.raises(ArgumentError, match="higher than 5 m on paper"):
        draw_panel(comparison, scale=0.5)
    logs = [section(1, 10), section(2, 10, name="B")]
    without = compare_logs(logs, "base", histories=[None] * 2, trends=[None] * 2)
    with pytest.raises(ArgumentError, match="give A, B a header line"):
        draw_panel(without, spacing="distance")


def test_a_well_of_gaps_alone_is_drawn() -> None:
    """A comparison survives a well without any bed described, and without results."""
    gap = Bed("gap 1", 0.0, 5.0, kind="gap", gap_reason="no_exposure")
    logs = [section(1, 10), Log(Header(section="G"), (gap,))]
    found = compare_logs(logs, "base", histories=[None] * 2, trends=[None] * 2)
    root = ElementTree.fromstring(draw_panel(found).svg())
    assert any(e.get("id") == "well-2" for e in root.iter())
    assert found.tables()["wells"].described_m.tolist()[1] == 0.0
