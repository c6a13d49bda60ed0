"""Glyphs that repeat the structures for scanning, and the fossils of each bed."""

from __future__ import annotations

from logkit.drawing.motifs import glyph
from logkit.drawing.scene import Scene, Tally, View
from logkit.drawing.shapes import Circle, Path, Shape, gathered, shifted

Drawn = dict[str, tuple[Path | Circle, ...]]
"""Glyphs of a sheet around the origin, by term."""

GLYPH_WIDTH, GLYPH_HEIGHT = 4.6, 2.6


def draw_glyphs(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """One glyph for each layer, those of objects above; left out where the bed is too thin."""
    column = scene.columns["glyphs"]
    found: list[list[Shape]] = []
    drawn: Drawn = {}
    for item, span in view.items():
        if item.bed.is_gap:
            continue
        marks: list[list[Shape]] = []
        terms = [layer for layer in item.layers if layer.term]
        if len(terms) == 1 and item.objects:
            marks = _stack(scene, drawn, span, [terms[0].term, *item.objects], column.middle, tally)
        elif not terms and item.objects:
            marks = _stack(scene, drawn, span, list(item.objects), column.middle, tally)
        else:
            for layer in terms:
                part = view.span(layer.base_m, layer.top_m)
                if part is not None:
                    marks.extend(_stack(scene, drawn, part, [layer.term], column.middle, tally))
            if item.objects:
                tally.left_out["glyphs"] += len(item.objects)
        found.extend(marks)
    return gathered(found)


def draw_fossils(scene: Scene, view: View, tally: Tally) -> list[Shape]:
    """Fossil glyphs side by side or above each other, as many as fit into the bed."""
    column = scene.columns["fossils"]
    found: list[list[Shape]] = []
    drawn: Drawn = {}
    for item, span in view.items():
        if item.bed.fossils:
            names = list(dict.fromkeys(item.bed.fossils))
            for name in names:
                tally.fossils[name] = tally.fossils.get(name, 0) + 1
            found.extend(_stack(scene, drawn, span, names, column.middle, tally, what="fossil glyphs"))
    return gathered(found)


def _stack(
    scene: Scene,
    drawn: Drawn,
    span: tuple[float, float],
    terms: list[str],
    x: float,
    tally: Tally,
    what: str = "glyphs",
) -> list[list[Shape]]:
    """Glyphs above each other, the first at the bottom, spread over the interval; each is drawn once a sheet."""
    style = scene.style
    tall = span[0] - span[1]
    room = int(tall / style.texture.least_glyph)
    shown = terms[:room]
    if len(terms) > room:
        tally.left_out[what] += len(terms) - room
    made: list[list[Shape]] = []
    for number, term in enumerate(shown):
        y = span[0] - tall * (number + 0.5) / len(shown)
        if term not in drawn:
            drawn[term] = glyph(term, (0.0, 0.0), GLYPH_WIDTH, GLYPH_HEIGHT, style)
        made.append([shifted(shape, x, y) for shape in drawn[term]])
        if what == "glyphs":
            tally.structures[term] = tally.structures.get(term, 0) + 1
    return made
