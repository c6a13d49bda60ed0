"""The position scale and the bed names beside it: height above the base upward, or depth downward."""

from __future__ import annotations

import math
from dataclasses import dataclass

from logkit.drawing.metrics import MM_PER_POINT, shorten, width_mm
from logkit.drawing.placement import spread, thin
from logkit.drawing.scene import Scene, Tally, View, position_unit
from logkit.drawing.shapes import Group, Paint, Path, Segment, Shape, Text, polyline
from logkit.drawing.tracks.texture import MERGED_MM, break_mark

STEPS_M = (0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0, 200.0, 500.0, 1000.0)
LABEL_PITCH_MM = 5.0
NAME_PITCH_MM = 2.3


def shown_position(scene: Scene, position_m: float) -> float:
    """A position as the log counts it: height, or depth as written when the log runs downward."""
    unit = position_unit(scene)[1]
    if not scene.downward:
        return position_m / unit
    for bed in scene.log.beds:
        if bed.depth_base is not None and bed.depth_top is not None and bed.thickness_m > 0:
            # depths as written and positions differ by one constant and the sign, in the unit of the log
            return bed.depth_base + (bed.base_m - position_m) / unit
    return -position_m / unit


def draw_scale(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Ticks leftwards from the scale line, labels left of them."""
    column, style = scene.columns["scale"], scene.style
    x = column.x1
    shapes: list[Shape] = []
    unit = position_unit(scene)[1]
    rate = 1000.0 / scene.scale * unit
    major = next((s for s in STEPS_M if s * rate >= LABEL_PITCH_MM and s >= 1), STEPS_M[-1])
    if rate >= 100:
        major = next(s for s in STEPS_M if s * rate >= LABEL_PITCH_MM * 2)
    minor, least = _subdivisions(major, rate)
    line: list[Segment] = []
    ticks: dict[float, list[Segment]] = {0.30: [], 0.20: [], 0.14: []}
    labels: list[Shape] = []
    for piece in view.position.pieces:
        if piece.cut:
            shapes.append(break_mark(x, (piece.y_base + piece.y_top) / 2, scene))
            continue
        line.extend((("M", (x, piece.y_base)), ("L", (x, piece.y_top))))
        ends = sorted((shown_position(scene, piece.base_m), shown_position(scene, piece.top_m)))
        for number in range(math.ceil(ends[0] / least - 1e-6), math.floor(ends[1] / least + 1e-6) + 1):
            value = number * least
            y = _y_of(scene, view, value)
            if _multiple(value, major):
                length, weight = 2.2, 0.30
                text = _label(value, major)
                labels.append(
                    Text(
                        (x - 3.0, y + 0.35 * style.fonts.metre * MM_PER_POINT),
                        text,
                        style.fonts.metre,
                        style.colours.ink,
                        bold=True,
                        anchor="end",
                    )
                )
            elif _multiple(value, minor):
                length, weight = 1.5, 0.20
            else:
                length, weight = 0.8, 0.14
            ticks[weight].extend((("M", (x, y)), ("L", (x - length, y))))
    shapes.append(Path(tuple(line), Paint(stroke=style.colours.ink, width=style.lines.profile)))
    for weight, steps in ticks.items():
        if steps:
            shapes.append(Path(tuple(steps), Paint(stroke=style.colours.ink, width=weight)))
    taken = [label.at[1] for label in labels if isinstance(label, Text)]
    labels.extend(_ends(scene, view, x, taken))
    return [*shapes, Group(tuple(labels))]


def _ends(scene: Scene, view: View, x: float, taken: list[float]) -> list[Shape]:
    """Positions of the ends of the section, where no round label is near."""
    style = scene.style
    made: list[Shape] = []
    edges = {view.position.base_m, view.position.top_m}
    for piece in view.position.pieces:
        if piece.cut:
            edges |= {piece.base_m, piece.top_m}
    for edge in sorted(edges):
        y = view.position.y(edge) + 0.35 * style.fonts.label * MM_PER_POINT
        if all(abs(y - other) > 2.8 for other in taken):
            taken.append(y)
            text = f"{shown_position(scene, edge):.2f}"
            # where the scale is the first track of a narrow page, the label comes nearer to it
            right = max(x - 3.0, width_mm(text, style.fonts.label) + 0.2)
            made.append(Text((right, y), text, style.fonts.label, style.colours.ink2, anchor="end"))
    return made


def _subdivisions(major: float, rate: float) -> tuple[float, float]:
    """Steps of middle and small ticks: at least 1.4 mm apart on paper."""
    lead = round(major / 10 ** math.floor(math.log10(major) + 1e-9))
    minor = major / 2 if lead in (1, 2) else major / 5
    least = major / 10
    if least * rate < 1.4:
        least = minor
    if minor * rate < 1.4:
        minor = least = major
    return minor, least


def _multiple(value: float, step: float) -> bool:
    return abs(value / step - round(value / step)) < 1e-6


def _label(value: float, major: float) -> str:
    digits = max(0, -math.floor(math.log10(major) + 1e-9))
    return f"{value:.{digits}f}".replace("-", "−")


def _y_of(scene: Scene, view: View, value: float) -> float:
    """y of a value on the position axis."""
    unit = position_unit(scene)[1]
    zero = shown_position(scene, 0.0)
    position_m = (zero - value) * unit if scene.downward else value * unit
    return view.position.y(position_m)


def draw_names(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Bed names at their beds; spread with a leader where beds are thin, thinned where they are too many."""
    column, style = scene.columns["names"], scene.style
    size = style.fonts.label
    labels = _labels(view)
    kept = thin([label.y for label in labels], NAME_PITCH_MM, [label.tall for label in labels])
    low, high = view.position.y_top - 1.5, view.position.y_base + 1.5
    centres = None
    while centres is None:
        shown = [labels[i] for i in kept]
        centres = spread([label.y for label in shown], [NAME_PITCH_MM] * len(shown), low, high)
        if centres is None:
            kept = kept[::2]
    if len(kept) < len(labels):
        tally.left_out["bed names"] += sum(label.beds for label in labels) - sum(
            label.beds for label in shown
        )
    drop = 0.36 * size * MM_PER_POINT
    right, room = column.x1, column.x1 - column.x0
    texts: list[Shape] = []
    leaders: list[Segment] = []
    for label, y in zip(shown, centres, strict=True):
        text = shorten(label.text, room, size)
        if text != label.text:
            tally.left_out["bed names cut short"] += 1
        texts.append(Text((right, y + drop), text, size, style.colours.ink, anchor="end"))
        if label.beds > 1:
            tally.marks.add("thin")
            top, base, x = label.y - label.tall / 2, label.y + label.tall / 2, right + 1.4
            leaders.extend(polyline(((x + 0.8, top), (x, top), (x, base), (x + 0.8, base))))
        if abs(y - label.y) > 0.4 or label.beds > 1:
            leaders.extend(polyline(((right + 0.4, y), (right + 0.9, y), (right + 1.4, label.y))))
    shapes: list[Shape] = [Group(tuple(texts))]
    if leaders:
        shapes.append(Path(tuple(leaders), Paint(stroke=style.colours.ink2, width=style.lines.hairline)))
    return shapes


@dataclass(frozen=True, slots=True)
class _Label:
    """A name with its middle and height on the page, mm; more than one bed where thin ones are merged."""

    text: str
    y: float
    tall: float
    beds: int = 1


def _labels(view: View) -> list[_Label]:
    """Names from the top down; runs of beds too thin to tell apart share one."""
    labels: list[_Label] = []
    run: list[tuple[str, float, float]] = []

    def close() -> None:
        if len(run) > 1:
            text = f"{run[-1][0]}–{run[0][0]}"
            top, base = run[0][2], run[-1][1]
            labels.append(_Label(text, (top + base) / 2, base - top, len(run)))
        elif run:
            name, y_base, y_top = run[0]
            labels.append(_Label(name, (y_base + y_top) / 2, y_base - y_top))
        run.clear()

    for item, (y_base, y_top) in reversed(list(view.items())):
        if not item.bed.is_gap and y_base - y_top < MERGED_MM:
            run.append((item.bed.name, y_base, y_top))
            continue
        close()
        if not item.bed.is_gap:
            labels.append(_Label(item.bed.name, (y_base + y_top) / 2, y_base - y_top))
    close()
    return labels
