"""The lines of the legend: a sample and its words for everything the sheets used. `legend` decides where they stand."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from logkit.drawing.metrics import MM_PER_POINT
from logkit.drawing.motifs import glyph
from logkit.drawing.palette import fill, state_label, state_letter, state_tints
from logkit.drawing.scene import Scene, Tally, structure_label
from logkit.drawing.shapes import Paint, Path, Point, Segment, Shape, Text, polyline
from logkit.drawing.textures import bed_texture
from logkit.drawing.tracks.current import needle
from logkit.drawing.tracks.ribbon import arrow, conflict_sign
from logkit.drawing.tracks.texture import break_mark
from logkit.vocabulary.terms import vocabulary

SWATCH_MM = 7.0
FAMILY_LABELS = {
    "quartz": ("sand, quartz-rich", 1.5), "lithic": ("sand, lithic", 1.5), "gravel": ("gravel", -3.0),
    "mud": ("mud and silt", 6.5), "organic_mud": ("organic mud", 6.5), "mixed": ("mixed sand and mud", 4.5),
    "carbonate": ("limestone", 2.0), "marl": ("marl", 6.0), "dolomite": ("dolostone", 3.0),
    "evaporite": ("evaporite", 3.0), "chert": ("chert", 4.0), "iron": ("ironstone", 3.0), "coal": ("coal, peat", 5.0),
    "volcanic": ("volcanic ash and tuff", 3.0), "lava": ("lava", 2.0), "crystalline": ("basement", 1.0),
}  # fmt: skip
"""Words and grain size of the sample of each texture family."""

Swatch = Callable[[float, float], list[Shape]]
"""Draws a sample with its left end and its middle height."""


@dataclass(frozen=True, slots=True)
class Item:
    """One line of the legend."""

    swatch: Swatch
    label: str


def legend_groups(scene: Scene, tally: Tally) -> list[tuple[str, list[Item]]]:
    """Titled groups of lines, without empty ones."""
    groups = [
        ("Texture", _textures(scene, tally)),
        ("Structures", _terms(scene, tally.structures, structure_label)),
        ("Fossils", _terms(scene, tally.fossils, _fossil_label)),
        ("Boundaries, marks", _Marks(scene).items(tally)),
        ("Flow: lean shows change", _flow(scene, tally)),
    ]
    return [(title, items) for title, items in groups if items]


def _rectangle(x0: float, y0: float, x1: float, y1: float) -> tuple[Segment, ...]:
    return polyline(((x0, y0), (x1, y0), (x1, y1), (x0, y1)), closed=True)


def _textures(scene: Scene, tally: Tally) -> list[Item]:
    style = scene.style

    def sample(family: str, phi: float) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            top, base, right = y - 1.6, y + 1.6, x + SWATCH_MM
            box = _rectangle(x, top, right, base)
            corners = [(x, top), (right, top), (right, base), (x, base)]
            marks = bed_texture(corners, [(base, phi), (top, phi)], family, style, seed=len(family))
            edge = Paint(stroke=style.colours.ink, width=style.lines.hairline)
            return [Path(box, Paint(fill=fill(family, phi, style))), *marks, Path(box, edge)]

        return draw

    return [
        Item(sample(family, phi), label)
        for family, (label, phi) in FAMILY_LABELS.items()
        if family in tally.families
    ]


def _terms(scene: Scene, used: dict[str, int], label: Callable[[str], str]) -> list[Item]:
    def sample(term: str) -> Swatch:
        return lambda x, y: list(glyph(term, (x + SWATCH_MM / 2, y), 4.6, 2.6, scene.style))

    return [Item(sample(term), label(term)) for term in used]


def _fossil_label(term: str) -> str:
    known = vocabulary("fossils")
    return known[term].label if term in known else term.replace("_", " ")


class _Marks:
    """Contacts and other marks."""

    def __init__(self, scene: Scene) -> None:
        self.scene = scene
        self.style = scene.style
        self.ink = scene.style.colours.ink

    def items(self, tally: Tally) -> list[Item]:
        """Lines for the marks that stand on the sheets."""
        lines, colours = self.style.lines, self.style.colours
        triangle, lozenge = ((0, 0), (1.6, -0.9), (1.6, 0.9)), ((0, 0), (0.9, -0.9), (1.8, 0), (0.9, 0.9))
        table: dict[str, Item] = {
            "erosive": Item(self._bumps(-0.4, 0.0, 1.8, lines.erosive), "erosive, relief to scale"),
            "sharp": Item(self._line(lines.contact), "sharp"),
            "gradational": Item(self._shade, "gradational"),
            "undulose": Item(self._bumps(0.0, 1.2, 1.2, lines.contact), "undulose"),
            "loaded": Item(self._bumps(-0.6, 0.0, 2.4, lines.contact), "loaded"),
            "faulted": Item(self._line(lines.erosive, colour=colours.conflict), "faulted"),
            "end": Item(self._line(lines.contact, (1.2, 0.8)), "end of exposure, not seen"),
            "unsized": Item(self._line(lines.profile, (0.9, 0.6)), "size not recorded"),
            "cut": Item(self._cut, "scale cut"),
            "sample": Item(self._solid(triangle), "sample"),
            "marker": Item(self._solid(lozenge), "marker"),
            "needle": Item(self._needle("direction"), "current, to the filled end"),
            "axis": Item(self._needle("axis"), "current, line only"),
            "bioturbation": Item(self._bar, "bioturbation, full width 6"),
            "thin": Item(self._bracket, "thin beds, merged"),
            "sail": Item(self._sail(), "size trend, p < 0.05"),
            "weak sail": Item(self._sail(weak=True), "size trend, not significant"),
            "steps": Item(self._sail(steps=True), "thickness trend, p < 0.05"),
            "weak steps": Item(self._sail(weak=True, steps=True), "thickness trend, not significant"),
            "colour": Item(self._brown, "colour as logged"),
        }
        return [item for name, item in table.items() if name in tally.marks]

    def _line(self, width: float, dash: tuple[float, ...] = (), colour: str = "") -> Swatch:
        paint = Paint(stroke=colour or self.ink, width=width, dash=dash)
        return lambda x, y: [Path(polyline(((x, y), (x + SWATCH_MM, y))), paint)]

    def _bumps(self, dy: float, up: float, down: float, weight: float) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            level = y + dy
            steps: list[Segment] = [("M", (x, level))]
            for number in range(3):
                a = x + number * SWATCH_MM / 3
                b = a + SWATCH_MM / 3
                swing = down if number % 2 == 0 or up == 0 else -up
                steps.append(("C", (a + 0.5, level + swing, b - 0.8, level + swing, b, level)))
            return [Path(tuple(steps), Paint(stroke=self.ink, width=weight))]

        return draw

    def _cut(self, x: float, y: float) -> list[Shape]:
        return [break_mark(x + SWATCH_MM / 2, y, self.scene)]

    def _shade(self, x: float, y: float) -> list[Shape]:
        shapes: list[Shape] = []
        for number in range(8):
            top = y - 1.6 + number * 0.4
            box = _rectangle(x, top, x + SWATCH_MM, top + 0.42)
            shapes.append(Path(box, Paint(fill=fill("quartz", 5.5 - number * 0.8, self.style))))
        return shapes

    def _solid(self, points: tuple[Point, ...]) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            placed = [(x + 2.5 + a, y + b) for a, b in points]
            return [Path(polyline(placed, closed=True), Paint(fill=self.ink))]

        return draw

    def _needle(self, sense: str) -> Swatch:
        return lambda x, y: needle((x + SWATCH_MM / 2, y), 70.0, sense, self.scene)

    def _bar(self, x: float, y: float) -> list[Shape]:
        return [Path(_rectangle(x, y - 1.0, x + 4.0, y + 1.0), Paint(fill=self.style.colours.chip))]

    def _bracket(self, x: float, y: float) -> list[Shape]:
        steps = polyline(((x + 4.0, y - 1.5), (x + 3.2, y - 1.5), (x + 3.2, y + 1.5), (x + 4.0, y + 1.5)))
        return [Path(steps, Paint(stroke=self.ink, width=self.style.lines.hairline))]

    def _brown(self, x: float, y: float) -> list[Shape]:
        box = _rectangle(x + 2.0, y - 1.6, x + 5.0, y + 1.6)
        paint = Paint(fill=fill("iron", 2.0, self.style), stroke=self.ink, width=self.style.lines.hairline)
        return [Path(box, paint)]

    def _sail(self, *, weak: bool = False, steps: bool = False) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            mast = x + 4.5
            curve = [(x + 1.5, y + 1.8), (x + 3.2, y - 0.4), (x + 4.2, y - 1.8)]
            if steps:
                curve = [(x + 1.5, y + 1.8), (x + 1.5, y), (x + 3.2, y), (x + 3.2, y - 1.8)]
            filled = self.style.colours.trend if self.style.ribbon.sail_fill and not weak else None
            paint = Paint(fill=filled, stroke=self.ink, width=0.18, dash=(1.0, 0.7) if weak else ())
            outline = polyline([(mast, y + 1.8), *curve, (mast, y - 1.8)], closed=True)
            line = polyline(((mast, y + 1.8), (mast, y - 1.8)))
            return [Path(outline, paint), Path(line, Paint(stroke=self.ink, width=0.4))]

        return draw


def _flow(scene: Scene, tally: Tally) -> list[Item]:
    """Ribbon, states, bounds, conflict, links and depth."""
    style = scene.style
    ink = style.colours.ink
    items: list[Item] = []
    if tally.states:
        items.append(Item(lambda x, y: _lean(scene, x, y), "P10–P90, P25–P75, median"))
    known = [name for name in style.ribbon.states if name in tally.states]
    items += [Item(_state(scene, name), state_label(name, style)) for name in known]
    if "other" not in known and any(name not in style.ribbon.states for name in tally.states):
        items.append(Item(_state(scene, "other"), state_label("other", style)))
    dots = Paint(stroke=ink, width=style.lines.link, dash=(0.01, 0.75), cap="round")
    dash = Paint(stroke=style.colours.ink2, width=style.lines.link)

    def bound(above: bool) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            ends = (x + 0.5, x + 6.5) if above else (x + 6.5, x + 0.5)
            return arrow(scene, ends[0], ends[1], (y + 1.1, y - 1.1), "", (x, x + SWATCH_MM))

        return draw

    table: dict[str, Item] = {
        "whisker": Item(lambda x, y: _whisker(scene, x, y), "depth, same ranges"),
        "dotted": Item(
            lambda x, y: [Path(polyline(((x, y), (x + SWATCH_MM, y))), dots)], "dotted: time missing"
        ),
        "conflict": Item(
            lambda x, y: conflict_sign((x + SWATCH_MM / 2, y), 1.15, scene), "clues conflict, not averaged"
        ),
        "bound above": Item(bound(True), "at least"),
        "bound below": Item(bound(False), "at most"),
        "short dash": Item(
            lambda x, y: [Path(polyline(((x + 2.5, y), (x + 4.3, y))), dash)], "no estimate, thin bed"
        ),
    }
    return items + [item for name, item in table.items() if name in tally.marks]


def _state(scene: Scene, name: str) -> Swatch:
    style = scene.style

    def draw(x: float, y: float) -> list[Shape]:
        outer, inner = state_tints(name, style)
        size, ink = style.fonts.label, style.colours.ink
        letter = state_letter(name, style)
        shapes: list[Shape] = [
            Path(_rectangle(x, y - 1.5, x + 3.5, y + 1.5), Paint(fill=outer)),
            Path(_rectangle(x + 3.5, y - 1.5, x + 7.0, y + 1.5), Paint(fill=inner)),
            Path(_rectangle(x, y - 1.5, x + 7.0, y + 1.5), Paint(stroke=ink, width=style.ribbon.outline)),
        ]
        if letter:
            at = (x + 1.75, y + 0.36 * size * MM_PER_POINT)
            shapes.append(Text(at, letter, size, ink, anchor="middle"))
        return shapes

    return draw


def _lean(scene: Scene, x: float, y: float) -> list[Shape]:
    """A leaning box as on the ribbon."""
    style = scene.style
    outer, inner = state_tints("dune", style)
    ink = style.colours.ink

    def quad(a: float, b: float) -> tuple[Segment, ...]:
        corners = ((x + a + 1, y + 1.7), (x + b + 1, y + 1.7), (x + b, y - 1.7), (x + a, y - 1.7))
        return polyline(corners, closed=True)

    inner_stroke = ink if style.ribbon.outline_inner else None
    return [
        Path(quad(0, 6), Paint(fill=outer, stroke=ink, width=style.ribbon.outline)),
        Path(quad(1.7, 4.3), Paint(fill=inner, stroke=inner_stroke, width=style.ribbon.outline)),
        Path(polyline(((x + 4, y + 1.7), (x + 3, y - 1.7))), Paint(stroke=ink, width=style.lines.thread)),
    ]


def _whisker(scene: Scene, x: float, y: float) -> list[Shape]:
    style = scene.style
    inner = state_tints("dune", style)[1]
    ink = style.colours.ink
    box = Paint(fill=inner, stroke=ink, width=style.ribbon.outline)
    return [
        Path(polyline(((x, y), (x + 7, y))), Paint(stroke=ink, width=0.20)),
        Path(_rectangle(x + 2, y - 0.65, x + 5, y + 0.65), box),
        Path(polyline(((x + 3.5, y - 0.65), (x + 3.5, y + 0.65))), Paint(stroke=ink, width=0.50)),
    ]
