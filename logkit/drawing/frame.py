"""What stands around the tracks: heads, axes above and below, guides behind, hairlines between the beds."""

from __future__ import annotations

from collections.abc import Sequence

from logkit.drawing.axes import LogAxis, PhiAxis
from logkit.drawing.metrics import MM_PER_POINT, shorten, width_mm
from logkit.drawing.scene import Column, Scene, View, position_unit
from logkit.drawing.shapes import Group, Paint, Path, Segment, Shape, Text, polyline
from logkit.drawing.tracks.curves import curve_range

AXIS_GAP = 1.6
"""Distance between the section and its axes, mm."""

LOWER_AXIS_MM = 8.5
"""Height of the axes below the section, labels included."""

SIZE_CLASSES: tuple[tuple[str, float], ...] = (
    ("mud", 6.0),
    ("vf", 3.5),
    ("f", 2.5),
    ("m", 1.5),
    ("c", 0.5),
    ("vc", -0.5),
    ("gravel", -4.0),
)
SIZE_LABELS: tuple[tuple[str, float], ...] = (
    ("0.06", 4.0),
    ("0.25", 2.0),
    ("1", 0.0),
    ("2", -1.0),
    ("16", -4.0),
    ("128", -7.0),
)
LONG_TICKS = (8, 4, -1, -7)


def heads(scene: Scene, y: float) -> list[Shape]:
    """Titles of the tracks on one base line, units below them."""
    style = scene.style
    shapes: list[Shape] = []
    titled = [column for column in scene.columns.values() if column.title]
    size = style.fonts.head
    below = y + 1.35 * size * MM_PER_POINT
    for column, following in zip(titled, [*titled[1:], None], strict=True):
        room = (following.x0 if following else column.x1 + 1) - column.x0 - 1.2
        x = column.x0
        shapes.append(
            Text((x, y), shorten(_title(scene, column), room, size, True), size, style.colours.ink, bold=True)
        )
        sub = shorten(_subtitle(scene, column), room, style.fonts.label)
        if sub:
            shapes.append(Text((x, below), sub, style.fonts.label, style.colours.ink2))
    return [Group(tuple(shapes))]


def _title(scene: Scene, column: Column) -> str:
    if column.name == "scale" and scene.downward:
        return "Depth"
    if column.name == "gamma" and scene.curves:
        return scene.curves[0][0]
    return column.title


def _subtitle(scene: Scene, column: Column) -> str:
    if column.name == "scale":
        unit = position_unit(scene)[0]
        reference = scene.log.header.depth_reference
        return f"{unit} below {reference}" if scene.downward and reference else unit
    if column.name == "gamma" and scene.curves:
        return scene.curves[0][1]
    return {"velocity": "m/s", "depth": "m", "current": "N is up"}.get(column.name, "")


def axes(scene: Scene, view: View) -> list[Shape]:
    """All horizontal axes above the section and again below it."""
    shapes: list[Shape] = []
    for y, side in ((view.position.y_top - AXIS_GAP, -1), (view.position.y_base + AXIS_GAP + 1.6, 1)):
        if scene.phi is not None:
            shapes.extend(_size_axis(scene, y, side))
        for axis in (scene.velocity, scene.flow_depth):
            if axis is not None:
                shapes.extend(_log_axis(scene, axis, y, side))
        if "gamma" in scene.columns and scene.curves:
            column = scene.columns["gamma"]
            low, high = curve_range(scene.curves[0][3])
            labels = (
                (column.x0, f"{low:g}"),
                ((column.x0 + column.x1) / 2, f"{(low + high) / 2:g}"),
                (column.x1, f"{high:g}"),
            )
            shapes.extend(_axis(scene, column.x0, column.x1, y, side, [x for x, _ in labels], [], labels))
    return shapes


def _log_axis(scene: Scene, axis: LogAxis, y: float, side: int) -> list[Shape]:
    ticks = axis.ticks(scene.style.fonts.label)
    labels = [(axis.x(value), label) for value, label in ticks if label]
    long = [axis.x(value) for value, label in ticks if label]
    short = [axis.x(value) for value, label in ticks if not label]
    return _axis(scene, axis.x0, axis.x1, y, side, long, short, labels)


def _axis(
    scene: Scene,
    x0: float,
    x1: float,
    y: float,
    side: int,
    long: Sequence[float],
    short: Sequence[float],
    labels: Sequence[tuple[float, str]],
) -> list[Shape]:
    """One axis: its line, ticks pointing away from the section, labels beyond them."""
    style = scene.style
    ink, size = style.colours.ink, style.fonts.label
    steps: list[Segment] = list(polyline(((x0, y), (x1, y))))
    for x in long:
        steps.extend(polyline(((x, y), (x, y + side * 1.4))))
    for x in short:
        steps.extend(polyline(((x, y), (x, y + side * 0.8))))
    baseline = y + (-2.1 if side < 0 else 2.1 + 0.74 * size * MM_PER_POINT)
    edge = x1 + style.page.margin - 0.3
    texts = tuple(
        Text((min(x, edge - width_mm(text, size) / 2), baseline), text, size, ink, anchor="middle")
        for x, text in labels
    )
    return [Path(tuple(steps), Paint(stroke=ink, width=style.lines.contact)), Group(texts)]


def _size_axis(scene: Scene, y: float, side: int) -> list[Shape]:
    """The grain-size axis: class words next to the line, millimetres beyond them."""
    axis, style = scene.phi, scene.style
    if axis is None:
        return []
    ink, size = style.colours.ink, style.fonts.label
    line_height = 1.25 * size * MM_PER_POINT
    steps: list[Segment] = list(polyline(((axis.x0, y), (axis.x1, y))))
    for tick in range(-7, 9):
        length = 2.2 if tick in LONG_TICKS else 1.2
        steps.extend(polyline(((axis.x(tick), y), (axis.x(tick), y + side * length))))
    em = size * MM_PER_POINT
    first = y - 1.7 if side < 0 else y + 1.6 + 0.74 * em
    second = first - line_height if side < 0 else first + line_height
    texts: list[Shape] = []
    edge = -1e9
    for word, phi in SIZE_CLASSES:
        x, width = axis.x(phi), width_mm(word, size)
        if x - width / 2 > edge and _room(axis, phi) >= 0.6 * width:
            texts.append(Text((x, first), word, size, ink, anchor="middle"))
            edge = x + width / 2 + 0.4
    labels: list[Shape] = []
    edge = axis.x0 + width_mm("mm", size) + 0.6
    labels.append(Text((axis.x0, second), "mm", size, style.colours.ink2))
    for word, phi in SIZE_LABELS:
        x, width = axis.x(phi), width_mm(word, size)
        x = min(x, axis.x1 + 1.3 - width / 2)
        if x - width / 2 > edge:
            labels.append(Text((x, second), word, size, style.colours.ink2, anchor="middle"))
            edge = x + width / 2 + 0.5
    return [
        Path(tuple(steps), Paint(stroke=ink, width=style.lines.contact)),
        Group(tuple(texts)),
        Group(tuple(labels)),
    ]


def _room(axis: PhiAxis, phi: float) -> float:
    """Width of the class that a word stands in, mm."""
    low, high = (8.0, 4.0) if phi > 4 else (-1.0, -7.0) if phi < -1 else (phi + 0.5, phi - 0.5)
    return axis.x(high) - axis.x(low)


def guides(scene: Scene, view: View) -> list[Shape]:
    """Vertical hairlines of the axes, and horizontal ones at the bed boundaries through the tracks on the right."""
    style = scene.style
    top, base = view.position.y_top, view.position.y_base
    steps: list[Segment] = []
    if scene.phi is not None:
        for phi in range(4, -2, -1):
            steps.extend(polyline(((scene.phi.x(phi), top), (scene.phi.x(phi), base))))
    for axis in (scene.velocity, scene.flow_depth):
        if axis is not None:
            for value, label in axis.ticks(style.fonts.label):
                if label:
                    steps.extend(polyline(((axis.x(value), top), (axis.x(value), base))))
    after = [c for name, c in scene.columns.items() if name in ("glyphs", "current", "velocity", "depth")]
    if after:
        x0, x1 = min(c.x0 for c in after), max(c.x1 for c in after)
        last = None
        for _, (y_base, y_top) in view.items():
            for y in (y_base, y_top):
                if last is None or last - y >= 1.0:
                    steps.extend(polyline(((x0, y), (x1, y))))
                    last = y
    paint = Paint(stroke=style.colours.grid, width=style.lines.hairline)
    return [Path(tuple(steps), paint)] if steps else []
