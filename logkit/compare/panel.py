"""`draw_panel`: wells side by side as a finished drawing. Columns come from the drawing layer, at one scale.

What is drawn between the columns is in `panel_marks`, places are in `panel_layout`.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path as FilePath

from logkit.compare import panel_marks as marks
from logkit.compare.comparison import Comparison
from logkit.compare.panel_layout import PANEL_TRACKS, PanelPlan, Spacing, WellColumn, plan_panel
from logkit.compare.placing import STRUCTURAL
from logkit.drawing import Drawing, frame, legend, titles
from logkit.drawing.metrics import MM_PER_POINT, clean, shorten, wrap
from logkit.drawing.scene import Tally
from logkit.drawing.shapes import Gradient, Group, Paint, Path, Shape, Sheet, Text, polyline
from logkit.drawing.style import Style, load_style
from logkit.drawing.tracks import TRACKS
from logkit.words import digits

BELOW_MM = 16.0
"""Room below the columns for their axes and names."""


def draw_panel(
    comparison: Comparison,
    style: str | FilePath | Style = "report",
    *,
    scale: float | None = None,
    height_mm: float | None = None,
    spacing: Spacing = "even",
    bands: bool = False,
    tracks: Sequence[str] = PANEL_TRACKS,
) -> Drawing:
    """Draw a comparison as one sheet.

    Parameters
    ----------
    style : name of a shipped style, path of a style file, or a style
    scale : metres in the wells a metre on paper, 200 for 1:200; a round one that fits some 230 mm by default
    height_mm : height of the tallest well instead, which sets the scale
    spacing : "even" (means nothing) or "distance" (by the header lines `distance_m`, to scale)
    bands : tint every other interval between ties
    tracks : tracks of each well by name

    Returns
    -------
    Drawing of one sheet, as large as it needs to be

    Raises
    ------
    ArgumentError : a scale that cannot be drawn, or spacing by distance without distances
    UnknownNameError : no such style or track
    """
    plan = plan_panel(comparison, load_style(style), scale, spacing, tracks, height_mm)
    tally = Tally()
    shapes: list[Shape] = []
    if bands:
        shapes.append(Group(tuple(marks.bands(plan, comparison.ties)), id="bands", layer="bands"))
    shapes.append(Group(tuple(marks.datum_line(plan, comparison)), id="datum", layer="datum"))
    gradients: list[Gradient] = []
    for number, column in enumerate(plan.columns, start=1):
        shapes.append(_well(plan, column, number, tally))
        gradients.extend(tally.gradients)
        tally.gradients = []
    tie_shapes, words = marks.ties(plan, comparison.ties)
    shapes.append(Group(tuple(tie_shapes), id="ties", layer="ties"))
    suggested = marks.drawn_suggestions(plan, comparison.suggested)
    if suggested:
        drawn = tuple(marks.suggestions(plan, suggested))
        shapes.append(Group(drawn, id="suggested-ties", layer="suggested ties"))
    return _finish(plan, comparison, shapes, tuple(gradients), tally, spacing, words)


def _well(plan: PanelPlan, column: WellColumn, number: int, tally: Tally) -> Group:
    """One column with its depths, name and axes."""
    scene, view = column.scene, column.view
    name = column.placed.name
    shapes: list[Shape] = [Group(tuple(frame.guides(scene, view)))]
    drawn = {track: TRACKS[track].draw(scene, view, tally) for track in reversed(list(scene.columns))}
    for track in ("texture", *(t for t in scene.columns if t != "texture")):
        if drawn.get(track):
            layer = f"{name} {track}"
            shapes.append(Group(tuple(drawn[track]), id=f"well-{number}-{track}", layer=layer))
    shapes.append(Group(tuple(frame.axes(scene, view))))
    shapes.extend(frame.heads(scene, plan.style.page.section_top - 2.5))
    shapes.append(Group(tuple(marks.own_scale(plan, column))))
    shapes.extend(_name(plan, column))
    title = f"{name}: {len(column.placed.log.real_beds)} beds"
    own = tuple(_own_ids(shape, f"well-{number}") for shape in shapes)
    return Group(own, id=f"well-{number}", layer=name, title=title)


def _own_ids(shape: Shape, prefix: str) -> Shape:
    """The same shape with ids that belong to one well; ids of beds are made from their content and stay."""
    if not isinstance(shape, Group):
        return shape
    id = shape.id if not shape.id or shape.id.startswith(("b-", prefix)) else f"{prefix}-{shape.id}"
    return replace(shape, id=id, children=tuple(_own_ids(child, prefix) for child in shape.children))


def _name(plan: PanelPlan, column: WellColumn) -> list[Shape]:
    """Name of the well and what its depths are, in one row above all columns."""
    style, header = plan.style, column.placed.log.header
    y = style.page.section_top - 11.0
    room = column.right - column.left
    what = "depth as logged" if header.direction == "down" else "height as logged"
    unit = marks.log_unit(column.placed.log)[0]
    lines = [f"{what}, {unit}"]
    low, high = column.placed.factors
    if max(abs(low - 1), abs(high - 1)) > 0.005:
        span = f"{low:.2f}" if high - low < 0.005 else f"{low:.2f} to {high:.2f}"
        lines.append(f"thickness × {span}")
    if not column.placed.datum_sure:
        lines.append("datum not seen")
    texts: list[Shape] = [
        Text(
            (column.left, y), shorten(clean(column.placed.name), room, style.fonts.subtitle + 2, True),
            style.fonts.subtitle + 2, style.colours.ink, bold=True,
        )
    ]  # fmt: skip
    words = shorten("; ".join(lines), room, style.fonts.label)
    texts.append(Text((column.left, y + 3.2), words, style.fonts.label, style.colours.ink2))
    return texts


def _finish(
    plan: PanelPlan,
    comparison: Comparison,
    shapes: list[Shape],
    gradients: tuple[Gradient, ...],
    tally: Tally,
    spacing: Spacing,
    words: list[str],
) -> Drawing:
    """Title above, key, legend, notes and caution below; the sheet is as high as that needs."""
    style = plan.style
    width = max(plan.width, 170.0)
    flowing = next((c.scene for c in plan.columns if c.scene.estimates), plan.columns[0].scene)
    y = plan.y_base + BELOW_MM
    shapes = [*_head(plan, comparison, width, spacing), *shapes]
    shapes.extend(titles.scale_bar(flowing, style.page.margin, plan.y_base + 4.0, 18.0))
    key, key_mm = marks.key(plan, comparison, width, y)
    shapes.append(Group(tuple(key), id="tie-key", layer="tie key"))
    y += key_mm
    explained = legend.measure_legend(flowing, tally, width) if style.page.legend else None
    if explained is not None:
        shapes.append(explained.draw(y))
        y += explained.height + 1.0
    y = _notes(plan, [*comparison.notes, *words], shapes, width, y)
    closing = titles.closing_lines(flowing, tally, width)
    shapes.append(
        Group(tuple(titles.closing_block(flowing, closing, y, width)), id="caution", layer="caution")
    )
    height = y + titles.closing_height(flowing, closing) + style.page.margin
    names = ", ".join(p.name for p in comparison.placed)
    title = f"Wells {names}"
    sheet = Sheet(
        width, height, tuple(shapes), gradients, title, " ".join(_said(plan, comparison, spacing)),
        background=style.colours.paper,
    )  # fmt: skip
    counts = tuple(sorted(tally.left_out.items()))
    return Drawing((sheet,), title, plan.scale, counts)


def _said(plan: PanelPlan, comparison: Comparison, spacing: Spacing) -> list[str]:
    """What a reader must know: datum, thickness, scale, spacing, exaggeration."""
    datum = comparison.datum
    where = (
        f"Structural section: heights are {comparison.thickness_means}."
        if datum in STRUCTURAL
        else f"Hung on {datum}; heights are {comparison.thickness_means}."
    )
    if spacing == "even" or plan.exaggeration is None:
        return [where, f"Vertical 1:{plan.scale:.4g}.", "Wells spaced evenly, not to scale."]
    across = (plan.horizontal_m_per_mm or 0) * 1000
    scales = f"Vertical 1:{plan.scale:.4g}, between well axes 1:{digits(across, 3)}"
    return [where, f"{scales}; exaggeration × {digits(plan.exaggeration)}."]


def _head(plan: PanelPlan, comparison: Comparison, width: float, spacing: Spacing) -> list[Shape]:
    style = plan.style
    page, colours = style.page, style.colours
    left, right = page.margin, width - page.margin
    title = shorten("Wells side by side", right - left, style.fonts.title, True)
    rule = polyline(((left, page.rule), (right, page.rule)))
    texts: list[Shape] = [Text((left, page.rule - 7.0), title, style.fonts.title, colours.ink, bold=True)]
    lines = wrap(" ".join(_said(plan, comparison, spacing)), right - left, style.fonts.subtitle)
    for number, line in enumerate(lines[:2]):
        at = (left, page.summary + number * 1.3 * style.fonts.subtitle * MM_PER_POINT)
        texts.append(Text(at, line, style.fonts.subtitle, colours.ink2))
    names = shorten(", ".join(clean(p.name) for p in comparison.placed), right - left, style.fonts.subtitle)
    texts.append(Text((left, page.rule - 2.2), names, style.fonts.subtitle, colours.ink))
    return [
        Group(tuple(texts), id="title", layer="title"),
        Path(rule, Paint(stroke=colours.ink, width=style.lines.rule)),
    ]


def _notes(plan: PanelPlan, notes: Sequence[str], shapes: list[Shape], width: float, y: float) -> float:
    """Assumptions in words; the next free y."""
    style = plan.style
    size = style.fonts.note
    pitch = style.notes.line_height * size * MM_PER_POINT
    texts: list[Shape] = []
    at = y + 3.0
    for note in notes:
        for number, line in enumerate(wrap(clean(note), width - 2 * style.page.margin - 4, size)):
            if number == 0:
                dot = polyline(((style.page.margin, at - 0.8), (style.page.margin + 1.6, at - 0.8)))
                texts.append(Path(dot, Paint(stroke=style.colours.ink2, width=style.lines.link)))
            texts.append(Text((style.page.margin + 3.0, at), line, size, style.colours.ink))
            at += pitch
    if texts:
        shapes.append(Group(tuple(texts), id="assumptions", layer="assumptions"))
        return at + 0.5
    return y
