"""The flow ribbon: for every phase a box of velocity quantiles that leans with the change, and what stands for none.

Estimates come finished; nothing is calculated here but places on the page.
"""

from __future__ import annotations

from dataclasses import dataclass

from logkit.drawing.axes import LogAxis
from logkit.drawing.metrics import MM_PER_POINT, shorten, width_mm
from logkit.drawing.palette import state_letter, state_tints
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Circle, Group, Paint, Path, Point, Segment, Shape, Text, gathered, polyline
from logkit.drawing.tracks.texture import gap_reason
from logkit.model import Clash, PhaseEstimate, Quantiles

CLUE_WORDS = {
    "bed_state": "form",
    "motion": "grain",
    "grain_size": "grain",
    "largest_clast": "clast",
    "dune_sets": "sets",
    "accretion_sets": "sets",
    "suspension": "fall-out",
    "stated_depth": "depth",
    "stated_slope": "slope",
    "mud_chips": "chips",
}
"""Words of one syllable or two for the boxes of a conflict; other criteria go by the last part of their id."""

WORD_MM = 2.3
THIN_MM = 2.4


@dataclass(frozen=True, slots=True)
class _End:
    """Where the thread of a phase leaves at the top, and whether anything broke the time since."""

    at: Point
    top_m: float


def is_conflict(estimate: PhaseEstimate) -> bool:
    """True when the clues of a phase clash and are drawn apart."""
    clash = estimate.clash
    return clash is not None and (clash.first_velocity or clash.second_velocity) is not None


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Ribbon, bounds, conflicts, blanks with their reasons, and the links between phases."""
    axis = scene.velocity
    if axis is None:
        return []
    marks: list[list[Shape]] = []
    wipes: list[Segment] = []
    blanks: list[tuple[tuple[float, float], str]] = []
    solid: list[Segment] = []
    dotted: list[Segment] = []
    last: _End | None = None
    broken = False
    for item, bed_span in view.items():
        estimates = scene.estimates.get(item.index, ())
        if item.bed.is_gap or not estimates:
            reason = gap_reason(item) if item.bed.is_gap else ""
            wipes.extend(_wipe(scene, bed_span))
            blanks.append((bed_span, reason))
            if item.bed.is_gap:
                last = None
            broken = True
            continue
        contact = item.bed.contact
        if contact is not None and contact.kind in ("erosive", "faulted"):
            broken = True
        if estimates[0].phase.setting == "turbidity":
            last = None  # each bed is a current of its own: no thread joins two of them
        for estimate in estimates:
            span = view.span(estimate.phase.base_m, estimate.phase.top_m)
            if span is None:
                continue
            if is_conflict(estimate):
                tally.marks.add("conflict")
                marks.append(_conflict(scene, axis, estimate, span))
                last, broken = None, False
            elif estimate.status == "no estimate":
                wipes.extend(_wipe(scene, span))
                blanks.append((span, estimate.reason))
                broken = True
            elif estimate.bound in ("above", "below") or estimate.velocity is None:
                marks.append(_bound(scene, axis, estimate, span, tally))
                last, broken = None, False
            else:
                box, start, end = _box(scene, axis, estimate, span, tally)
                marks.append(box)
                if last is not None:
                    target = dotted if broken else solid
                    target.extend((("M", last.at), ("L", start)))
                last, broken = _End(end, estimate.phase.top_m), False
    shapes: list[Shape] = []
    if wipes:
        shapes.append(Path(tuple(wipes), Paint(fill=scene.style.colours.paper)))
    words = [shape for span, reason in blanks for shape in _reason(scene, span, reason, dotted, tally)]
    if words:
        shapes.append(Group(tuple(words)))
    shapes.extend(gathered(marks))
    shapes.extend(_links(scene, solid, dotted, tally))
    return shapes


def _links(scene: Scene, solid: list[Segment], dotted: list[Segment], tally: Tally) -> list[Shape]:
    style = scene.style
    shapes: list[Shape] = []
    if solid:
        shapes.append(Path(tuple(solid), Paint(stroke=style.colours.ink, width=style.lines.link)))
    if dotted:
        tally.marks.add("dotted")
        paint = Paint(stroke=style.colours.ink, width=style.lines.link, dash=(0.01, 0.75), cap="round")
        shapes.append(Path(tuple(dotted), paint))
    return shapes


def _box(
    scene: Scene, axis: LogAxis, estimate: PhaseEstimate, span: tuple[float, float], tally: Tally
) -> tuple[list[Shape], Point, Point]:
    """The leaning box of one phase; also where its thread begins and ends."""
    style = scene.style
    velocity = estimate.velocity
    if velocity is None:
        return [], (axis.x0, span[0]), (axis.x0, span[1])
    low = estimate.base_velocity or velocity
    high = estimate.top_velocity or velocity
    tall = span[0] - span[1]
    edge = min(style.ribbon.edge, tall / 6)
    y0, y1 = span[0] - edge, span[1] + edge
    outer, inner = state_tints(estimate.bed_state, style)
    tally.states.add(estimate.bed_state or "other")
    ink = style.colours.ink

    def quad(left: str, right: str) -> tuple[Segment, ...]:
        return polyline(
            (
                (axis.x(getattr(low, left)), y0),
                (axis.x(getattr(low, right)), y0),
                (axis.x(getattr(high, right)), y1),
                (axis.x(getattr(high, left)), y1),
            ),
            closed=True,
        )

    shapes: list[Shape] = [
        Path(quad("p10", "p90"), Paint(fill=outer, stroke=ink, width=style.ribbon.outline))
    ]
    inner_stroke = ink if style.ribbon.outline_inner else None
    shapes.append(
        Path(quad("p25", "p75"), Paint(fill=inner, stroke=inner_stroke, width=style.ribbon.outline))
    )
    start, end = (axis.x(low.p50), y0), (axis.x(high.p50), y1)
    weight = style.lines.thread if tall >= THIN_MM else 0.40
    shapes.append(Path(polyline((start, end)), Paint(stroke=ink, width=min(weight, max(0.15, tall)))))
    letter = state_letter(estimate.bed_state, style)
    if letter and tall >= style.texture.least_glyph:
        x = max(axis.x(low.p90), axis.x(high.p90)) + style.ribbon.letter_gap
        size = style.fonts.label
        if x + width_mm(letter, size) <= axis.x1 + 1.5:
            y = (span[0] + span[1]) / 2 + 0.36 * size * MM_PER_POINT
            x_mid = (axis.x(low.p90) + axis.x(high.p90)) / 2 + style.ribbon.letter_gap
            lean = abs(axis.x(low.p90) - axis.x(high.p90))
            shapes.append(
                Text((x if lean < 2.5 else x_mid + lean * 0.25, y), letter, size, style.colours.ink2)
            )
    elif letter:
        tally.left_out["state letters"] += 1
    return shapes, start, end


def _bound(
    scene: Scene, axis: LogAxis, estimate: PhaseEstimate, span: tuple[float, float], tally: Tally
) -> list[Shape]:
    """A bar at the limit and an arrow to the side on which the velocity lies."""
    limit = estimate.limit_velocity_m_s
    if limit is None:
        return []
    above = estimate.bound == "above"
    tally.marks.add("bound above" if above else "bound below")
    x = axis.x(limit)
    reach = min(7.0, axis.x1 - x - 0.2) if above else min(7.0, x - axis.x0 - 0.2)
    tip = x + max(reach, 2.0) * (1 if above else -1)
    words = "at least" if above else "at most"
    if estimate.is_wind:
        words = f"wind 10 m up: {words}"
    return arrow(scene, x, tip, span, words, (axis.x0, axis.x1))


def arrow(
    scene: Scene, x: float, tip: float, span: tuple[float, float], words: str, limits: tuple[float, float]
) -> list[Shape]:
    """A bar at `x`, a line with a head at `tip`, and words beyond it where they fit."""
    style = scene.style
    ink, y = style.colours.ink, (span[0] + span[1]) / 2
    tall = span[0] - span[1]
    half = min(1.0, tall / 2.2)
    back = -1.4 if tip > x else 1.4
    lines = (*polyline(((x, y - half), (x, y + half))), *polyline(((x, y), (tip + back * 0.8, y))))
    head = polyline(
        ((tip, y), (tip + back, y - min(0.65, half)), (tip + back, y + min(0.65, half))), closed=True
    )
    shapes: list[Shape] = [
        Path(lines, Paint(stroke=ink, width=style.lines.link)),
        Path(head, Paint(fill=ink)),
    ]
    size = style.fonts.label
    width = width_mm(words, size)
    if words and tall >= WORD_MM:
        baseline = y + 0.36 * size * MM_PER_POINT
        if tip > x and tip + 0.8 + width <= limits[1]:
            shapes.append(Text((tip + 0.8, baseline), words, size, style.colours.ink2))
        elif tip < x and tip - 0.8 - width >= limits[0]:
            shapes.append(Text((tip - 0.8, baseline), words, size, style.colours.ink2, anchor="end"))
    return shapes


def _conflict(scene: Scene, axis: LogAxis, estimate: PhaseEstimate, span: tuple[float, float]) -> list[Shape]:
    """Hollow dashed boxes named by their clues with a sign between them; never one average.

    A clue that gives no velocity of its own has no box, only its word on the other side of the sign.
    """
    style, clash = scene.style, estimate.clash
    if clash is None:
        return []
    tall = span[0] - span[1]
    edge = min(style.ribbon.edge, tall / 6)
    y0, y1, middle = span[0] - edge, span[1] + edge, (span[0] + span[1]) / 2
    radius = min(1.15, tall / 2.2)
    boxes = [(q, name) for q, name in _clues(clash) if q is not None]
    boxes.sort(key=lambda pair: pair[0].p50)
    ends = [(axis.x(quantiles.p10), axis.x(quantiles.p90)) for quantiles, _ in boxes]
    sign_x = (ends[0][1] + ends[1][0]) / 2 if len(ends) == 2 else ends[0][1] + 0.4 + radius
    sign_x = min(max(sign_x, axis.x0 + radius), axis.x1 - radius)
    paint = Paint(stroke=style.colours.ink, width=style.lines.contact, dash=(0.9, 0.6))
    shapes: list[Shape] = []
    slots: list[tuple[float, float, str]] = []
    for side, ((left, right), (_, name)) in enumerate(zip(ends, boxes, strict=True)):
        box = polyline(((left, y0), (right, y0), (right, y1), (left, y1)), closed=True)
        shapes.append(Path(box, paint))
        free = (left, min(right, sign_x - radius)) if side == 0 else (max(left, sign_x + radius), right)
        slots.append((*free, clue_word(name)))
    for quantiles, name in _clues(clash):
        if quantiles is None:
            slots.append((sign_x + radius, axis.x1, clue_word(name)))
    shapes.extend(conflict_sign((sign_x, middle), radius, scene))
    size = style.fonts.label
    for left, right, word in slots:
        if tall >= WORD_MM + 0.4 and width_mm(word, size) <= right - left - 0.6:
            at = ((left + right) / 2, middle + 0.36 * size * MM_PER_POINT)
            if (left + right) / 2 > sign_x + radius and right == axis.x1:
                at = (left + 0.6 + width_mm(word, size) / 2, at[1])
            shapes.append(Text(at, word, size, style.colours.ink, anchor="middle"))
    return shapes


def _clues(clash: Clash) -> tuple[tuple[Quantiles | None, str], ...]:
    return ((clash.first_velocity, clash.first), (clash.second_velocity, clash.second))


def clue_word(criterion: str) -> str:
    """The short word for a criterion."""
    return CLUE_WORDS.get(criterion, criterion.rsplit(".", 1)[-1].replace("_", " "))


def conflict_sign(centre: Point, radius: float, scene: Scene) -> list[Shape]:
    """A disc with a crossed-out equals sign, drawn as lines so that it needs no font."""
    colours = scene.style.colours
    x, y = centre
    r = radius
    lines = (
        *polyline(((x - 0.5 * r, y - 0.22 * r), (x + 0.5 * r, y - 0.22 * r))),
        *polyline(((x - 0.5 * r, y + 0.22 * r), (x + 0.5 * r, y + 0.22 * r))),
        *polyline(((x - 0.3 * r, y + 0.62 * r), (x + 0.3 * r, y - 0.62 * r))),
    )
    return [
        Circle(centre, r, Paint(fill=colours.conflict)),
        Path(lines, Paint(stroke=colours.on_conflict, width=max(0.1, 0.18 * r), cap="round")),
    ]


def _wipe(scene: Scene, span: tuple[float, float]) -> list[Segment]:
    """No estimate: the area in the flow columns where the grid does not show."""
    inset = min(0.1, (span[0] - span[1]) / 8)
    steps: list[Segment] = []
    for name in ("velocity", "depth"):
        if name in scene.columns:
            x0, x1 = scene.columns[name].x0 - 0.3, scene.columns[name].x1 + 0.3
            y0, y1 = span[0] - inset, span[1] + inset
            steps.extend(polyline(((x0, y0), (x1, y0), (x1, y1), (x0, y1)), closed=True))
    return steps


def _reason(
    scene: Scene, span: tuple[float, float], reason: str, dotted: list[Segment], tally: Tally
) -> list[Shape]:
    """Why there is no estimate, on the side of the column that no link passes through."""
    style, column = scene.style, scene.columns["velocity"]
    tall, middle = span[0] - span[1], (span[0] + span[1]) / 2
    if not reason:
        return []
    if tall < WORD_MM:
        if tall < 0.5:
            return []
        tally.marks.add("short dash")
        dash = polyline(((column.x0 + 0.8, middle), (column.x0 + 2.6, middle)))
        return [Path(dash, Paint(stroke=style.colours.ink2, width=style.lines.link))]
    # the depth column is blank as well: a reason may run on into it
    left, right = column.x0 + 0.8, scene.columns.get("depth", column).x1 - 0.2
    crossed = _crossed(dotted, middle)
    slots = [(left, right)]
    if crossed is not None:
        slots = [(left, crossed[0] - 0.6), (crossed[1] + 0.6, right)]
    size = style.fonts.label
    start, end = next(
        (s for s in slots if width_mm(reason, size) <= s[1] - s[0]), max(slots, key=lambda s: s[1] - s[0])
    )
    line = shorten(reason, end - start, size)
    if line != reason:
        tally.left_out["reasons cut short"] += 1
    return (
        [Text((start, middle + 0.36 * size * MM_PER_POINT), line, size, style.colours.ink2)] if line else []
    )


def _crossed(dotted: list[Segment], y: float) -> tuple[float, float] | None:
    """Range of x in which links cross a line of text at a height."""
    found: list[float] = []
    for (_, start), (_, end) in zip(dotted[::2], dotted[1::2], strict=True):
        low, high = min(start[1], end[1]), max(start[1], end[1])
        if high < y - 1.2 or low > y + 1.2:
            continue
        for edge in (max(low, y - 1.2), min(high, y + 1.2)):
            share = 0.0 if high == low else (edge - start[1]) / (end[1] - start[1])
            found.append(start[0] + share * (end[0] - start[0]))
    return (min(found), max(found)) if found else None
