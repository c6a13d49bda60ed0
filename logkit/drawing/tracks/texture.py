"""The texture track: every bed as a group with its fill, grains, structures, profile and contact; gaps; the spine.

The marks themselves come from `textures` and `motifs`; samples and markers beside the profile from `tracks.labels`.
"""

from __future__ import annotations

import zlib
from collections.abc import Iterator

from logkit.drawing.metrics import shorten
from logkit.drawing.motifs import Filling, structures_lines
from logkit.drawing.outline import Outline, base_path
from logkit.drawing.palette import fill
from logkit.drawing.scene import MeasuredBed, Scene, Tally, View, position_unit, structure_label
from logkit.drawing.shapes import Gradient, Group, Paint, Path, Point, Segment, Shape, Text, polyline
from logkit.drawing.textures import BedGround, bed_textures
from logkit.vocabulary.terms import vocabulary

DASH = (1.2, 0.8)
"""Dashes of an edge that is not a boundary: end of exposure, contact not seen."""


MERGED_MM = 0.25
"""Beds thinner than this on paper are drawn as fill alone; the names track brackets them."""


def draw(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Beds from the lowest to the highest, so that a scoured base covers what it cut into."""
    style = scene.style
    outlines = view.outlines
    insides = _insides(scene, view, tally)
    beds: list[Shape] = []
    breaks: list[Segment] = []
    for place, (item, span) in enumerate(view.items()):
        outline = outlines.get(item.index)
        if outline is None:
            beds.append(_gap(scene, view, item, span, tally))
            continue
        below = outlines.get(view.beds[place - 1].index) if place else None
        beds.append(_bed(scene, view, item, outline, below, insides.get(item.index, []), tally))
        if outline.scoured:
            tally.marks.add("erosive")
            breaks.append(("M", (outline.profile[0][0] + 0.6, outline.y_base)))
            breaks.append(("L", (_right_end(scene), outline.y_base)))
    shapes: list[Shape] = []
    if breaks:
        shapes.append(Path(tuple(breaks), Paint(stroke=style.colours.break_, width=0.20)))
    shapes.append(Group(tuple(beds), id="beds", layer="beds"))
    shapes.extend(_spine(scene, view))
    return shapes


def bed_words(item: MeasuredBed) -> str:
    """A bed in words, for screen readers and tooltips."""
    bed = item.bed
    lithologies = vocabulary("lithologies")
    words = [lithologies[bed.lithology].label if bed.lithology in lithologies else bed.lithology]
    if bed.size is not None:
        words.append(" to ".join(dict.fromkeys(state.size.label for state in bed.grain if state.size.label)))
    words.extend(dict.fromkeys(structure_label(s.term) for s in bed.structures))
    return f"{bed.name}: " + ", ".join(word for word in words if word)


def gap_reason(item: MeasuredBed) -> str:
    """Why there is no data, in words."""
    reason, known = item.bed.gap_reason, vocabulary("gaps")
    return known[reason].label if reason in known else (reason or "no data").replace("_", " ")


def _right_end(scene: Scene) -> float:
    """Where the lines that mark breaks in time end: at the last track before the notes."""
    return max(column.x1 for column in scene.columns.values() if column.name != "notes")


def _bed(
    scene: Scene,
    view: View,
    item: MeasuredBed,
    outline: Outline,
    below: Outline | None,
    inside: list[Shape],
    tally: Tally,
) -> Group:
    style = scene.style
    tall = outline.y_base - outline.y_top
    closed = outline.closed()
    children: list[Shape] = [_flat(scene, item, outline, closed, tally)]
    if item.family:
        tally.families.add(item.family)
    children.extend(inside)
    if tall >= 0.4:
        dash = () if item.sized else (0.9, 0.6)
        if not item.sized:
            tally.marks.add("unsized")
        paint = Paint(stroke=style.colours.ink, width=style.lines.profile, dash=dash)
        children.append(Path(polyline(outline.profile), paint))
    children.extend(_contact(scene, view, item, outline, below, tally))
    return Group(tuple(children), id=item.id, title=bed_words(item), data=_data(scene, item))


def _data(scene: Scene, item: MeasuredBed) -> tuple[tuple[str, str], ...]:
    """What a page that holds the drawing can filter by."""
    bed = item.bed
    data = [("bed", bed.name), ("base", f"{bed.base_m:.5g}"), ("top", f"{bed.top_m:.5g}")]
    if bed.structures:
        data.append(("structures", " ".join(dict.fromkeys(s.term for s in bed.structures))))
    grading = scene.gradings.get(item.index)
    if grading and grading.verdict != "not determinable":
        data.append(("grading", grading.verdict))
    tendencies = [e.tendency for e in scene.estimates.get(item.index, ()) if e.tendency != "not determinable"]
    if tendencies:
        data.append(("tendency", " ".join(dict.fromkeys(tendencies))))
    return tuple(data)


def _flat(
    scene: Scene, item: MeasuredBed, outline: Outline, closed: tuple[Segment, ...], tally: Tally
) -> Path:
    """The fill: one colour, or a gradient where the size changes enough to see."""
    style = scene.style
    if not item.family:
        dash = Paint(
            fill=style.colours.paper, stroke=style.colours.ink2, width=style.lines.hairline, dash=(0.9, 0.6)
        )
        return Path(closed, dash)
    top, tall = outline.y_top, outline.y_low - outline.y_top
    stops = [(y, fill(item.family, phi, style)) for y, phi in reversed(outline.sizes)]
    if outline.y_base - top < 0.6 or len({colour for _, colour in stops}) == 1:
        return Path(closed, Paint(fill=stops[len(stops) // 2][1]))
    shares = tuple((round((y - top) / tall, 2), colour) for y, colour in stops)
    name = f"g{zlib.crc32(repr(shares).encode()):08x}"
    tally.gradients.append(Gradient(name, shares))
    return Path(closed, Paint(fill=f"gradient:{name}"))


def _insides(scene: Scene, view: View, tally: Tally) -> dict[int, list[Shape]]:
    """Structure lines, and the grains that keep clear of them, of all beds of a sheet together."""
    style = scene.style
    beds: list[tuple[MeasuredBed, Outline, list[Point], int, int]] = []
    fillings: list[Filling] = []
    for item in view.beds:
        outline = view.outlines.get(item.index)
        if outline is None or not item.family:
            continue
        if outline.y_base - outline.y_top >= style.texture.least_bed:
            polygon, first = outline.polygon(), len(fillings)
            fillings.extend(_fillings(scene, view, item, outline, polygon, tally))
            beds.append((item, outline, polygon, first, len(fillings)))
    made = structures_lines(fillings, style)
    insides: dict[int, list[Shape]] = {}
    textures: list[BedGround] = []
    for item, outline, polygon, first, last in beds:
        own = made[first:last]
        insides[item.index] = [line for one in own for line in one.lines]
        clear = [segment for one in own for segment in one.clear]
        windows = [one.window for one in own if one.window is not None]
        textures.append(BedGround(polygon, outline.sizes, item.family, item.seed, clear, windows))
    if style.texture.dots:
        for (item, *_), marks in zip(beds, bed_textures(textures, style), strict=True):
            insides[item.index] = [*marks, *insides[item.index]]
    return insides


def _fillings(
    scene: Scene, view: View, item: MeasuredBed, outline: Outline, polygon: list[Point], tally: Tally
) -> Iterator[Filling]:
    """The structures of a bed that are tall enough to draw."""
    set_m = item.bed.set_thickness.central_m if item.bed.set_thickness else None
    set_mm = set_m * 1000 / scene.scale if set_m else None
    boxes = [(layer.term, layer.base_m, layer.top_m) for layer in item.layers if layer.term]
    boxes += [(term, item.bed.base_m, item.bed.top_m) for term in item.objects]
    right = max(x for x, _ in outline.profile)
    for number, (term, base_m, top_m) in enumerate(boxes):
        span = view.span(base_m, top_m)
        if span is None:
            continue
        tally.structures[term] = tally.structures.get(term, 0) + 1
        if span[0] - span[1] < scene.style.texture.least_segment:
            tally.left_out["structures drawn inside a bed"] += 1
            continue
        box = (outline.x0, span[1], right, span[0])
        yield Filling(term, box, set_mm, item.seed + number, polygon)


def _contact(
    scene: Scene, view: View, item: MeasuredBed, outline: Outline, below: Outline | None, tally: Tally
) -> list[Shape]:
    """The base line of a bed as logged, and its top where exposure ends."""
    style, bed = scene.style, item.bed
    shapes: list[Shape] = []
    if bed.base_m >= view.position.base_m - 1e-9:
        lowest = item.index == 0 or scene.beds[item.index - 1].bed.is_gap
        kind = bed.contact.kind if bed.contact else "not_seen" if lowest else "unknown"
        right = max(outline.profile[0][0], below.profile[-1][0] if below else 0.0)
        shapes.extend(_base(scene, item, outline, kind, right, tally))
    if bed.top_m <= view.position.top_m + 1e-9 and _open_above(scene, item):
        line = polyline(((outline.x0, outline.y_top), (outline.profile[-1][0], outline.y_top)))
        tally.marks.add("end")
        paint = Paint(stroke=style.colours.ink, width=style.lines.contact, dash=DASH)
        shapes.append(Path(line, paint))
    return shapes


def _base(
    scene: Scene, item: MeasuredBed, outline: Outline, kind: str, right: float, tally: Tally
) -> list[Shape]:
    """The line of one kind of contact."""
    style = scene.style
    ink, lines = style.colours.ink, style.lines
    tall = outline.y_base - outline.y_top
    if tall < MERGED_MM:
        return []
    thin = tall < 0.4
    straight = polyline(((outline.x0, outline.y_base), (right, outline.y_base)))
    if kind in ("erosive", "undulose", "loaded"):
        tally.marks.add(kind)
        weight = lines.hairline if thin else lines.erosive if kind == "erosive" else lines.contact
        return [Path(base_path(outline.base), Paint(stroke=ink, width=weight))]
    if kind == "gradational":
        tally.marks.add(kind)
        return []
    if kind == "not_seen":
        tally.marks.add("end")
        return [Path(straight, Paint(stroke=ink, width=lines.contact, dash=DASH))]
    if kind == "faulted":
        tally.marks.add(kind)
        y = outline.y_base
        both = (*straight, *polyline(((outline.x0 - 2.0, y + 0.9), (outline.x0 + 2.0, y - 0.9))))
        return [Path(both, Paint(stroke=style.colours.conflict, width=lines.erosive))]
    tally.marks.add("sharp")
    sure = item.bed.contact is None or item.bed.contact.sure
    weight = lines.hairline if thin else lines.contact
    return [Path(straight, Paint(stroke=ink, width=weight, dash=() if sure else (0.6, 0.5)))]


def _open_above(scene: Scene, item: MeasuredBed) -> bool:
    following = item.index + 1
    return following >= len(scene.beds) or scene.beds[following].bed.is_gap


def _gap(scene: Scene, view: View, item: MeasuredBed, span: tuple[float, float], tally: Tally) -> Group:
    """A gap: nothing but its reason and height in words, where they fit."""
    column = scene.columns["texture"]
    style = scene.style
    above = view.outlines.get(item.index + 1)
    y_free = max(span[1], above.y_low) if above else span[1]
    tall = span[0] - y_free
    unit, metres = position_unit(scene)
    height = f"{item.bed.thickness_m / metres:.3g}\u00a0{unit}"
    words = f"{gap_reason(item)}: {height}"
    words = words[0].upper() + words[1:]
    cut = any(piece.cut and piece.base_m <= item.bed.base_m < piece.top_m for piece in view.position.pieces)
    texts: list[Shape] = []
    size = style.fonts.label
    middle = (span[0] + y_free) / 2
    if cut:
        below = f"scale cut here: {height} drawn as {span[0] - span[1]:.0f}\u00a0mm"
        tally.marks.add("cut")
        texts.append(
            Text(
                (column.x0 + 3.5, middle - 0.4),
                shorten(words, column.x1 - column.x0 - 4, size),
                size,
                style.colours.ink,
            )
        )
        texts.append(
            Text(
                (column.x0 + 3.5, middle + 2.4),
                shorten(below, column.x1 - column.x0 - 4, size),
                size,
                style.colours.ink2,
            )
        )
    elif tall >= 2.6:
        line = shorten(words, column.x1 - column.x0 - 4, size)
        texts.append(Text((column.x0 + 3.5, middle + 0.8), line, size, style.colours.ink))
    else:
        tally.left_out["reasons of thin gaps"] += 1
    return Group(tuple(texts), id=item.id, title=words, data=_data(scene, item))


def _spine(scene: Scene, view: View) -> list[Shape]:
    """The line the profile stands on: solid where there are beds, dashed in gaps, broken where the scale is cut."""
    column, style = scene.columns["texture"], scene.style
    solid: list[Segment] = []
    dashed: list[Segment] = []
    for item, (y_base, y_top) in view.items():
        target = dashed if item.bed.is_gap else solid
        if not item.bed.is_gap and target and target[-1] == ("L", (column.x0, y_base)):
            target[-1] = ("L", (column.x0, y_top))
        else:
            target.extend((("M", (column.x0, y_base)), ("L", (column.x0, y_top))))
    shapes: list[Shape] = []
    if solid:
        shapes.append(Path(tuple(solid), Paint(stroke=style.colours.ink, width=style.lines.spine)))
    if dashed:
        paint = Paint(stroke=style.colours.ink, width=style.lines.contact, dash=(1.0, 1.0))
        shapes.append(Path(tuple(dashed), paint))
    for piece in view.position.pieces:
        if piece.cut:
            shapes.append(break_mark(column.x0, (piece.y_base + piece.y_top) / 2, scene))
    return shapes


def break_mark(x: float, y: float, scene: Scene) -> Group:
    """Two zigzags on white: the scale is cut here."""
    steps: list[Segment] = []
    for dy in (-0.9, 0.9):
        steps.extend(
            polyline(
                (
                    (x - 1.8, y + dy + 0.5),
                    (x - 0.6, y + dy - 0.5),
                    (x + 0.6, y + dy + 0.5),
                    (x + 1.8, y + dy - 0.5),
                )
            )
        )
    wipe = polyline(
        ((x - 1.4, y - 0.8), (x + 1.4, y - 1.2), (x + 1.4, y + 0.8), (x - 1.4, y + 1.2)), closed=True
    )
    colours = scene.style.colours
    return Group((
        Path(wipe, Paint(fill=colours.paper)),
        Path(tuple(steps), Paint(stroke=colours.ink, width=scene.style.lines.contact)),
    ))  # fmt: skip
