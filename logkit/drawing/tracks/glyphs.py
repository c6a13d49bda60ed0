"""Glyphs that repeat the structures for scanning, and the fossils of each bed."""

from __future__ import annotations

from logkit.drawing.motifs import glyph
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Group, Shape

GLYPH_WIDTH, GLYPH_HEIGHT = 4.6, 2.6


def draw_glyphs(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """One glyph for each layer, those of objects above; left out where the bed is too thin."""
    column = scene.columns["glyphs"]
    shapes: list[Shape] = []
    for item, span in view.items():
        if item.bed.is_gap:
            continue
        marks: list[Shape] = []
        terms = [layer for layer in item.layers if layer.term]
        if len(terms) == 1 and item.objects:
            marks = _stack(scene, view, span, [terms[0].term, *item.objects], column.middle, tally)
        elif not terms and item.objects:
            marks = _stack(scene, view, span, list(item.objects), column.middle, tally)
        else:
            for layer in terms:
                part = view.span(layer.base_m, layer.top_m)
                if part is not None:
                    marks.extend(_stack(scene, view, part, [layer.term], column.middle, tally))
            if item.objects:
                tally.left_out["glyphs"] += len(item.objects)
        if marks:
            shapes.append(Group(tuple(marks), data=(("for", item.id),)))
    return shapes


def draw_fossils(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Fossil glyphs side by side or above each other, as many as fit into the bed."""
    column = scene.columns["fossils"]
    shapes: list[Shape] = []
    for item, span in view.items():
        if item.bed.fossils:
            names = list(dict.fromkeys(item.bed.fossils))
            for name in names:
                tally.fossils[name] = tally.fossils.get(name, 0) + 1
            shapes.extend(_stack(scene, view, span, names, column.middle, tally, what="fossil glyphs"))
    return shapes


def _stack(
    scene: Scene,
    view: View,
    span: tuple[float, float],
    terms: list[str],
    x: float,
    tally: Tally,
    what: str = "glyphs",
) -> list[Shape]:
    """Glyphs above each other, the first at the bottom, spread over the interval."""
    style = scene.style
    tall = span[0] - span[1]
    room = int(tall / style.texture.least_glyph)
    shown = terms[:room]
    if len(terms) > room:
        tally.left_out[what] += len(terms) - room
    made: list[Shape] = []
    for number, term in enumerate(shown):
        y = span[0] - tall * (number + 0.5) / len(shown)
        made.extend(glyph(term, (x, y), GLYPH_WIDTH, GLYPH_HEIGHT, style))
        if what == "glyphs":
            tally.structures[term] = tally.structures.get(term, 0) + 1
    return made
