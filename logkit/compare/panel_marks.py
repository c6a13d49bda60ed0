"""What stands between the columns of a panel: own depths, datum, ties, bands, suggestions, their key."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

from logkit.compare.comparison import Comparison
from logkit.compare.panel_layout import PanelPlan, WellColumn
from logkit.compare.placing import STRUCTURAL
from logkit.compare.suggestions import SuggestedTie
from logkit.compare.ties import Tie
from logkit.drawing.metrics import MM_PER_POINT, clean, shorten, width_mm
from logkit.drawing.shapes import Group, Paint, Path, Segment, Shape, Text, polyline
from logkit.model import Log
from logkit.units import METRES

STEPS = (0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50, 100, 200, 500, 1000)
LABEL_PITCH_MM = 5.0
TIE_GAP_MM = 1.4
"""Free paper between a tie and the columns it joins."""

NAME_PITCH_MM = 3.0
LEAST_FLATNESS = 0.5
"""Cosine of the steepest line that carries its name."""

SUGGESTION_PITCH_MM = 3.5
"""Least distance between two suggestions that are drawn."""

DASH = (2.2, 1.2)
DOT = (0.01, 0.9)


def log_unit(log: Log) -> tuple[str, float]:
    """Unit that positions of a log are shown in, and its length in m: feet for a log in feet, else m."""
    unit = log.header.unit.strip().casefold()
    return ("ft", METRES["ft"]) if unit in ("ft", "feet", "foot") else ("m", 1.0)


def own_scale(plan: PanelPlan, column: WellColumn) -> list[Shape]:
    """Depths (or heights) of a well as logged, at the heights they have on the panel.

    After a conversion equal depths are not equally far apart, so every tick is placed by its bed.
    """
    placed, style = column.placed, plan.style
    down = placed.log.header.direction == "down"
    unit = log_unit(placed.log)[1]
    least = (placed.log.thickness_m / unit) / max(
        column.view.position.y_base - column.view.position.y_top, 1e-6
    )
    step = next((s for s in STEPS if s >= least * LABEL_PITCH_MM), STEPS[-1])
    x = column.scale_x
    ticks: list[Segment] = []
    labels: list[Shape] = []
    digits = max(0, -math.floor(math.log10(step) + 1e-9))
    size = style.fonts.label
    for i, bed in enumerate(placed.log.beds):
        low, high = (-bed.top_m, -bed.base_m) if down else (bed.base_m, bed.top_m)
        for k in range(math.ceil(low / unit / step - 1e-9), math.ceil(high / unit / step - 1e-9)):
            value = k * step
            y = plan.y(placed.height(i, -value * unit if down else value * unit))
            ticks.extend(polyline(((x, y), (x - 1.8, y))))
            text = f"{value:.{digits}f}".replace("-", "−")
            labels.append(
                Text((x - 2.3, y + 0.36 * size * MM_PER_POINT), text, size, style.colours.ink, anchor="end")
            )
    spine = polyline(((x, column.view.position.y_base), (x, column.view.position.y_top)))
    shapes: list[Shape] = [Path(spine, Paint(stroke=style.colours.ink, width=style.lines.profile))]
    if ticks:
        shapes.append(Path(tuple(ticks), Paint(stroke=style.colours.ink, width=style.lines.contact)))
    return [*shapes, Group(tuple(labels))]


def datum_line(plan: PanelPlan, comparison: Comparison) -> list[Shape]:
    """The line the wells hang on, dashed through wells where it was not seen; nothing on structural sections."""
    if comparison.datum in STRUCTURAL or not plan.base_m <= 0 <= plan.top_m:
        return []
    style, y = plan.style, plan.y(0.0)
    shapes: list[Shape] = []
    for column in plan.columns:
        sure = column.placed.datum_sure
        paint = Paint(stroke=style.colours.ink2, width=style.lines.set, dash=() if sure else DASH)
        shapes.append(Path(polyline(((column.left - 1.0, y), (column.right + 1.0, y))), paint))
        if not sure:
            at = (column.right + 1.4, y + 0.36 * style.fonts.head * MM_PER_POINT)
            shapes.append(Text(at, "?", style.fonts.head, style.colours.ink2, bold=True))
    return shapes


def ties(plan: PanelPlan, found: Sequence[Tie]) -> tuple[list[Shape], list[str]]:
    """Tie lines at bases of markers, each name along its line; names without room go into words."""
    shapes: list[Shape] = []
    words: list[str] = []
    size = plan.style.fonts.label
    for (left, right), here in _by_pair(plan, found):
        last_y = math.inf
        for tie in sorted(here, key=lambda t: t.first_base_m):
            a = (left.right + TIE_GAP_MM, plan.y(tie.first_base_m))
            b = (right.left - TIE_GAP_MM, plan.y(tie.second_base_m))
            shapes.extend(_tie_line(plan, a, b, tie))
            name = clean(tie.marker) + ("" if tie.sure else " ?")
            middle = 0.5 * (a[1] + b[1])
            across, down = b[0] - a[0], abs(b[1] - a[1])
            reach = (width_mm(name, size) * across + 3.0 * down) / math.hypot(across, down)
            flat = across / math.hypot(across, down)
            fits = reach <= across - 2.0 and flat >= LEAST_FLATNESS
            if fits and (last_y - middle) * flat > NAME_PITCH_MM:
                shapes.append(_along(plan, a, b, name))
                last_y = middle
            else:
                words.append(
                    f"{name}: tied between {tie.first} and {tie.second}, name left out for want of room"
                )
    return shapes, words


def _along(plan: PanelPlan, a: tuple[float, float], b: tuple[float, float], name: str) -> Text:
    """A name in the middle of a line, turned with it, just above it."""
    angle = math.atan2(b[1] - a[1], b[0] - a[0])
    off = 0.9
    at = (0.5 * (a[0] + b[0]) + off * math.sin(angle), 0.5 * (a[1] + b[1]) - off * math.cos(angle))
    style = plan.style
    return Text(at, name, style.fonts.label, style.colours.ink, anchor="middle", turn=math.degrees(angle))


def bands(plan: PanelPlan, found: Sequence[Tie]) -> list[Shape]:
    """A tint in every other interval between neighbouring ties."""
    shapes: list[Shape] = []
    for (left, right), here in _by_pair(plan, found):
        upward = sorted(here, key=lambda t: t.first_base_m)
        for number, (low, high) in enumerate(pairwise(upward)):
            if number % 2:
                continue
            x0, x1 = left.right + TIE_GAP_MM, right.left - TIE_GAP_MM
            corners = (
                (x0, plan.y(low.first_base_m)),
                (x1, plan.y(low.second_base_m)),
                (x1, plan.y(high.second_base_m)),
                (x0, plan.y(high.first_base_m)),
            )
            shapes.append(
                Path(polyline(corners, closed=True), Paint(fill=plan.style.colours.grid, opacity=0.5))
            )
    return shapes


def drawn_suggestions(plan: PanelPlan, found: Sequence[SuggestedTie]) -> list[SuggestedTie]:
    """Confident suggestions that have room beside each other, the surest first; the table has them all."""
    kept: list[SuggestedTie] = []
    for tie in sorted(
        (t for t in found if t.confident), key=lambda t: (-t.confidence, t.unlikeness, t.first_base_m)
    ):
        near = (
            abs(plan.y(tie.first_base_m) - plan.y(other.first_base_m)) < SUGGESTION_PITCH_MM
            for other in kept
            if other.first == tie.first
        )
        if not any(near):
            kept.append(tie)
    return sorted(kept, key=lambda t: (t.first, t.first_base_m))


def suggestions(plan: PanelPlan, found: Sequence[SuggestedTie]) -> list[Shape]:
    """Suggestions as dotted lines: to be looked at, not to be believed."""
    names = {c.placed.name: c for c in plan.columns}
    steps: list[Segment] = []
    for tie in found:
        a, b = names[tie.first], names[tie.second]
        start = (a.right + TIE_GAP_MM, plan.y(tie.first_base_m))
        end = (b.left - TIE_GAP_MM, plan.y(tie.second_base_m))
        steps.extend(polyline((start, end)))
    style = plan.style
    paint = Paint(stroke=style.colours.chip, width=style.lines.set, dash=DOT, cap="round")
    return [Path(tuple(steps), paint)] if steps else []


def key(plan: PanelPlan, comparison: Comparison, width: float, y: float) -> tuple[list[Shape], float]:
    """What the lines between the wells mean, only those used; shapes and height."""
    style = plan.style
    used: list[tuple[str, str]] = []
    for kind, label in (("time", "time tie (ash)"), ("lithological", "lithological tie")):
        if any(t.kind == kind and t.sure for t in comparison.ties):
            used.append((kind, label))
    if any(not t.sure for t in comparison.ties):
        used.append(("queried", "queried tie"))
    confident = sum(t.confident for t in comparison.suggested)
    if confident:
        drawn = len(drawn_suggestions(plan, comparison.suggested))
        words = f"suggested by alignment, for a person to accept or drop ({drawn} of {confident} drawn)"
        used.append(("suggested", words))
    if not all(c.placed.datum_sure for c in plan.columns):
        used.append(("datum", "datum not seen in the well, worked out from the others"))
    shapes: list[Shape] = []
    x, line, size = style.page.margin, 0, style.fonts.label
    for kind, label in used:
        text = shorten(label, width - 2 * style.page.margin - 14, size)
        need = 14 + width_mm(text, size) + 6
        if x + need > width - style.page.margin and x > style.page.margin:
            x, line = style.page.margin, line + 1
        at = y + 3.0 + 4.0 * line
        shapes.extend(_key_line(plan, kind, (x, at - 0.9), (x + 11, at - 0.9)))
        shapes.append(Text((x + 13, at), text, size, style.colours.ink))
        x += need
    return shapes, (4.0 * (line + 1) + 3.0) if used else 0.0


def _key_line(plan: PanelPlan, kind: str, a: tuple[float, float], b: tuple[float, float]) -> list[Shape]:
    style = plan.style
    if kind == "suggested":
        paint = Paint(stroke=style.colours.chip, width=style.lines.set, dash=DOT, cap="round")
    elif kind == "datum":
        paint = Paint(stroke=style.colours.ink2, width=style.lines.set, dash=DASH)
    else:
        return _stroke(plan, a, b, kind == "time", kind != "queried")
    return [Path(polyline((a, b)), paint)]


def _tie_line(plan: PanelPlan, a: tuple[float, float], b: tuple[float, float], tie: Tie) -> list[Shape]:
    return _stroke(plan, a, b, tie.kind == "time", tie.sure)


def _stroke(
    plan: PanelPlan, a: tuple[float, float], b: tuple[float, float], time: bool, sure: bool
) -> list[Shape]:
    """A tie: time ties heavy with a filled lozenge at each end, lithological ones plain; queried dashed."""
    style = plan.style
    ink = style.colours.ink
    width = style.lines.spine if time else style.lines.contact
    shapes: list[Shape] = [Path(polyline((a, b)), Paint(stroke=ink, width=width, dash=() if sure else DASH))]
    if time:
        ends: list[Segment] = []
        for x, y in (a, b):
            ends.extend(polyline(((x - 0.9, y), (x, y - 0.9), (x + 0.9, y), (x, y + 0.9)), closed=True))
        shapes.append(Path(tuple(ends), Paint(fill=ink)))
    return shapes


def _by_pair(plan: PanelPlan, found: Sequence[Tie]) -> list[tuple[tuple[WellColumn, WellColumn], list[Tie]]]:
    """Ties of each pair of neighbours."""
    pairs = []
    for left, right in pairwise(plan.columns):
        names = (left.placed.name, right.placed.name)
        pairs.append(((left, right), [t for t in found if (t.first, t.second) == names]))
    return pairs
