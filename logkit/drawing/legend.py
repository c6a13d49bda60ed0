"""The legend: only what the sheets before it used. And the rose of the section's palaeocurrents beside it."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from logkit.drawing.metrics import MM_PER_POINT, shorten, width_mm
from logkit.drawing.motifs import glyph
from logkit.drawing.palette import fill, state_label, state_letter, state_tints
from logkit.drawing.scene import Scene, Tally, structure_label
from logkit.drawing.shapes import Circle, Group, Paint, Path, Segment, Shape, Text, polyline
from logkit.drawing.textures import bed_texture
from logkit.drawing.tracks.current import needle
from logkit.drawing.tracks.ribbon import arrow, conflict_sign
from logkit.vocabulary.terms import vocabulary

ROW_MM = 4.6
SWATCH_MM = 7.0
HEAD_MM = 5.2
MOST_ROWS = 6
FAMILY_LABELS = {
    "quartz": ("sand, quartz-rich", 1.5), "lithic": ("sand, lithic", 1.5), "gravel": ("gravel", -3.0),
    "mud": ("mud and silt", 6.5), "organic_mud": ("organic mud", 6.5), "mixed": ("mixed sand and mud", 4.5),
    "carbonate": ("limestone", 2.0), "marl": ("marl", 6.0), "dolomite": ("dolostone", 3.0),
    "evaporite": ("evaporite", 3.0), "chert": ("chert", 4.0), "iron": ("ironstone", 3.0), "coal": ("coal, peat", 5.0),
    "volcanic": ("volcanic ash and tuff", 3.0), "lava": ("lava", 2.0), "crystalline": ("basement", 1.0),
}  # fmt: skip

Swatch = Callable[[float, float], list[Shape]]
"""Draws a sample with its left end and its middle height."""


@dataclass(frozen=True, slots=True)
class Item:
    """One line of the legend."""

    swatch: Swatch
    label: str


@dataclass(frozen=True, slots=True)
class Block:
    """A titled group of lines, or the rose, of a known size."""

    title: str
    items: tuple[Item, ...]
    width: float
    columns: int
    rows: int

    @property
    def height(self) -> float:
        """Height with its title, mm."""
        return HEAD_MM + self.rows * ROW_MM


def legend(scene: Scene, tally: Tally, width: float) -> tuple[list[Shape], float]:
    """Shapes of the legend with its upper edge at y 0, and its height.

    Parameters
    ----------
    width : width of the page, mm
    """
    style = scene.style
    blocks = _blocks(scene, tally)
    left, right = style.page.margin, width - style.page.margin
    shapes: list[Shape] = []
    x, y, tallest = left, 0.0, 0.0
    rose = _rose_block(scene)
    if rose is not None:
        made, rose_width, rose_height = rose
        shapes.extend(made(x, y))
        x, tallest = x + rose_width + 3.0, rose_height
    for block in blocks:
        if x + block.width > right + 0.5 and x > left:
            x, y, tallest = left, y + tallest + 2.0, 0.0
        shapes.extend(_draw_block(scene, block, x, y, right))
        x += block.width + 4.0
        tallest = max(tallest, block.height)
    return shapes, y + tallest + 1.0


def moved(shapes: list[Shape], dy: float) -> Group:
    """Shapes shifted downwards as one group."""
    return Group(tuple(_shift(shape, dy) for shape in shapes), id="legend", layer="legend")


def _shift(shape: Shape, dy: float) -> Shape:
    if isinstance(shape, Path):
        steps = tuple(
            (word, tuple(v + dy if i % 2 else v for i, v in enumerate(values)))
            for word, values in shape.segments
        )
        return Path(steps, shape.paint)
    if isinstance(shape, Text):
        return Text(
            (shape.at[0], shape.at[1] + dy),
            shape.text,
            shape.size,
            shape.colour,
            shape.bold,
            shape.italic,
            shape.anchor,
            shape.turn,
        )
    if isinstance(shape, Circle):
        return Circle((shape.centre[0], shape.centre[1] + dy), shape.radius, shape.paint)
    if isinstance(shape, Group):
        return Group(
            tuple(_shift(child, dy) for child in shape.children),
            shape.id,
            shape.layer,
            shape.title,
            shape.desc,
            shape.data,
        )
    return type(shape)(tuple((x, y + dy) for x, y in shape.points), shape.diameter, shape.colour)


def _blocks(scene: Scene, tally: Tally) -> list[Block]:
    groups = [
        ("Texture", _texture_items(scene, tally)),
        ("Structures", _term_items(scene, tally.structures, structure_label)),
        ("Fossils", _term_items(scene, tally.fossils, _fossil_label)),
        ("Boundaries, marks", _mark_items(scene, tally)),
        ("Flow: lean shows change", _flow_items(scene, tally)),
    ]
    return [_block(scene, title, items) for title, items in groups if items]


def _block(scene: Scene, title: str, items: list[Item]) -> Block:
    size = scene.style.fonts.label
    columns = math.ceil(len(items) / MOST_ROWS)
    rows = math.ceil(len(items) / columns)
    width = 0.0
    for number in range(columns):
        part = items[number * rows : (number + 1) * rows]
        width += SWATCH_MM + 1.6 + max(min(width_mm(item.label, size), 34.0) for item in part) + 2.5
    return Block(
        title, tuple(items), max(width - 2.5, width_mm(title, scene.style.fonts.head, True)), columns, rows
    )


def _draw_block(scene: Scene, block: Block, x: float, y: float, right: float) -> list[Shape]:
    style = scene.style
    size = style.fonts.label
    shapes: list[Shape] = [
        Text(
            (x, y + 3.0),
            shorten(block.title, right - x, style.fonts.head, True),
            style.fonts.head,
            style.colours.ink,
            bold=True,
        )
    ]
    texts: list[Shape] = []
    column_x = x
    for number in range(block.columns):
        part = block.items[number * block.rows : (number + 1) * block.rows]
        widest = 0.0
        for row, item in enumerate(part):
            middle = y + HEAD_MM + (row + 0.5) * ROW_MM - 0.4
            shapes.extend(item.swatch(column_x, middle))
            label_x = column_x + SWATCH_MM + 1.6
            label = shorten(item.label, min(34.0, right - label_x), size)
            texts.append(Text((label_x, middle + 0.36 * size * MM_PER_POINT), label, size, style.colours.ink))
            widest = max(widest, width_mm(label, size))
        column_x += SWATCH_MM + 1.6 + widest + 2.5
    return [*shapes, Group(tuple(texts))]


def _texture_items(scene: Scene, tally: Tally) -> list[Item]:
    style = scene.style

    def sample(family: str, phi: float) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            corners = [(x, y - 1.6), (x + SWATCH_MM, y - 1.6), (x + SWATCH_MM, y + 1.6), (x, y + 1.6)]
            box = polyline(corners, closed=True)
            marks = bed_texture(corners, [(y + 1.6, phi), (y - 1.6, phi)], family, style, seed=len(family))
            edge = Paint(stroke=style.colours.ink, width=style.lines.hairline)
            return [Path(box, Paint(fill=fill(family, phi, style))), *marks, Path(box, edge)]

        return draw

    return [
        Item(sample(family, phi), label)
        for family, (label, phi) in FAMILY_LABELS.items()
        if family in tally.families
    ]


def _term_items(scene: Scene, used: dict[str, int], label: Callable[[str], str]) -> list[Item]:
    def sample(term: str) -> Swatch:
        return lambda x, y: list(glyph(term, (x + SWATCH_MM / 2, y), 4.6, 2.6, scene.style))

    return [Item(sample(term), label(term)) for term in used]


def _fossil_label(term: str) -> str:
    known = vocabulary("fossils")
    return known[term].label if term in known else term.replace("_", " ")


def _line_item(scene: Scene, label: str, width: float, dash: tuple[float, ...] = ()) -> Item:
    paint = Paint(stroke=scene.style.colours.ink, width=width, dash=dash)
    return Item(lambda x, y: [Path(polyline(((x, y), (x + SWATCH_MM, y))), paint)], label)


def _mark_items(scene: Scene, tally: Tally) -> list[Item]:
    """Contacts and other marks that stand on the sheets."""
    style = scene.style
    ink, lines = style.colours.ink, style.lines

    def bumps(x: float, y: float, up: float, down: float, weight: float) -> list[Shape]:
        steps: list[Segment] = [("M", (x, y))]
        for number in range(3):
            a = x + number * SWATCH_MM / 3
            b = a + SWATCH_MM / 3
            swing = down if number % 2 == 0 or up == 0 else -up
            steps.append(("C", (a + 0.5, y + swing, b - 0.8, y + swing, b, y)))
        return [Path(tuple(steps), Paint(stroke=ink, width=weight, join="round"))]

    def shade(x: float, y: float) -> list[Shape]:
        shapes: list[Shape] = []
        for number in range(8):
            top = y - 1.6 + number * 0.4
            box = polyline(
                ((x, top), (x + SWATCH_MM, top), (x + SWATCH_MM, top + 0.42), (x, top + 0.42)), closed=True
            )
            shapes.append(Path(box, Paint(fill=fill("quartz", 5.5 - number * 0.8, style))))
        return shapes

    def solid(x: float, y: float, points: tuple[tuple[float, float], ...]) -> list[Shape]:
        return [Path(polyline([(x + a, y + b) for a, b in points], closed=True), Paint(fill=ink))]

    def sail(x: float, y: float, weak: bool) -> list[Shape]:
        outline = polyline(
            [
                (x + 4.5, y + 1.8),
                (x + 1.5, y + 1.8),
                (x + 3.2, y - 0.4),
                (x + 4.2, y - 1.8),
                (x + 4.5, y - 1.8),
            ],
            closed=True,
        )
        paint = (
            Paint(stroke=ink, width=0.18, dash=(1.0, 0.7))
            if weak
            else Paint(fill=style.colours.trend if style.ribbon.sail_fill else None, stroke=ink, width=0.18)
        )
        return [
            Path(outline, paint),
            Path(polyline(((x + 4.5, y + 1.8), (x + 4.5, y - 1.8))), Paint(stroke=ink, width=0.4)),
        ]

    bar = Paint(fill=style.colours.chip)
    table: list[tuple[str, Item]] = [
        ("erosive", Item(lambda x, y: bumps(x, y - 0.4, 0, 1.8, lines.erosive), "erosive, relief to scale")),
        ("sharp", _line_item(scene, "sharp", lines.contact)),
        ("gradational", Item(shade, "gradational")),
        ("undulose", Item(lambda x, y: bumps(x, y, 1.2, 1.2, lines.contact), "undulose")),
        ("loaded", Item(lambda x, y: bumps(x, y - 0.6, 0, 2.4, lines.contact), "loaded")),
        ("faulted", Item(lambda x, y: [Path(polyline(((x, y), (x + SWATCH_MM, y))), Paint(stroke=style.colours.conflict, width=lines.erosive))], "faulted")),
        ("end", _line_item(scene, "end of exposure, not seen", lines.contact, (1.2, 0.8))),
        ("unsized", _line_item(scene, "size not recorded", lines.profile, (0.9, 0.6))),
        ("cut", _line_item(scene, "scale cut", lines.contact, (1.0, 1.0))),
        ("sample", Item(lambda x, y: solid(x + 2.5, y, ((0, 0), (1.6, -0.9), (1.6, 0.9))), "sample")),
        ("marker", Item(lambda x, y: solid(x + 2.5, y, ((0, 0), (0.9, -0.9), (1.8, 0), (0.9, 0.9))), "marker")),
        ("needle", Item(lambda x, y: needle((x + 3.5, y), 70.0, "direction", scene), "current, to the filled end")),
        ("axis", Item(lambda x, y: needle((x + 3.5, y), 70.0, "axis", scene), "current, line only")),
        ("bioturbation", Item(lambda x, y: [Path(polyline(((x, y - 1), (x + 4, y - 1), (x + 4, y + 1), (x, y + 1)), closed=True), bar)], "bioturbation, full width 6")),
        ("sail", Item(lambda x, y: sail(x, y, False), "trend, p < 0.05")),
        ("weak sail", Item(lambda x, y: sail(x, y, True), "trend, not significant")),
    ]  # fmt: skip
    return [item for name, item in table if name in tally.marks]


def _flow_items(scene: Scene, tally: Tally) -> list[Item]:
    """Ribbon, states, bounds, conflict, links and depth."""
    style = scene.style
    ink = style.colours.ink
    items: list[Item] = []
    if tally.states:
        items.append(Item(lambda x, y: _lean(scene, x, y), "P10–P90, inner P25–P75, median"))

    def state(name: str) -> Swatch:
        def draw(x: float, y: float) -> list[Shape]:
            outer, inner = state_tints(name, style)
            left = polyline(((x, y - 1.5), (x + 3.5, y - 1.5), (x + 3.5, y + 1.5), (x, y + 1.5)), closed=True)
            right = polyline(
                ((x + 3.5, y - 1.5), (x + 7, y - 1.5), (x + 7, y + 1.5), (x + 3.5, y + 1.5)), closed=True
            )
            edge = Paint(stroke=ink, width=style.ribbon.outline)
            whole = polyline(((x, y - 1.5), (x + 7, y - 1.5), (x + 7, y + 1.5), (x, y + 1.5)), closed=True)
            letter = Text(
                (x + 1.75, y + 0.36 * style.fonts.label * MM_PER_POINT),
                state_letter(name, style),
                style.fonts.label,
                ink,
                anchor="middle",
            )
            return [Path(left, Paint(fill=outer)), Path(right, Paint(fill=inner)), Path(whole, edge), letter]

        return draw

    known = [name for name in style.ribbon.states if name in tally.states]
    items += [Item(state(name), state_label(name, style)) for name in known]
    unknown = [name for name in sorted(tally.states) if name not in style.ribbon.states]
    if unknown and "other" not in known:
        items.append(Item(state("other"), state_label("other", style)))
    table: list[tuple[str, Item]] = [
        ("whisker", Item(lambda x, y: _whisker(scene, x, y), "depth P10–P90, P25–P75, median")),
        ("dotted", Item(lambda x, y: [Path(polyline(((x, y), (x + SWATCH_MM, y))), Paint(stroke=ink, width=style.lines.link, dash=(0.01, 0.75), cap="round"))], "dotted: time missing")),
        ("conflict", Item(lambda x, y: conflict_sign((x + 3.5, y), 1.15, scene), "clues conflict, not averaged")),
        ("bound above", Item(lambda x, y: arrow(scene, x + 0.5, x + 6.5, (y + 1.1, y - 1.1), "", (x, x + 7)), "at least")),
        ("bound below", Item(lambda x, y: arrow(scene, x + 6.5, x + 0.5, (y + 1.1, y - 1.1), "", (x, x + 7)), "at most")),
        ("short dash", Item(lambda x, y: [Path(polyline(((x + 2.5, y), (x + 4.3, y))), Paint(stroke=style.colours.ink2, width=style.lines.link))], "no estimate, thin bed")),
    ]  # fmt: skip
    items += [item for name, item in table if name in tally.marks]
    return items


def _lean(scene: Scene, x: float, y: float) -> list[Shape]:
    """A leaning box as on the ribbon."""
    style = scene.style
    name = "dune" if "dune" in style.ribbon.states else "other"
    outer, inner = state_tints(name, style)
    ink = style.colours.ink

    def quad(a: float, b: float) -> tuple[Segment, ...]:
        return polyline(
            ((x + a + 1, y + 1.7), (x + b + 1, y + 1.7), (x + b, y - 1.7), (x + a, y - 1.7)), closed=True
        )

    return [
        Path(quad(0, 6), Paint(fill=outer, stroke=ink, width=style.ribbon.outline)),
        Path(quad(1.7, 4.3), Paint(fill=inner)),
        Path(polyline(((x + 4, y + 1.7), (x + 3, y - 1.7))), Paint(stroke=ink, width=style.lines.thread)),
    ]


def _whisker(scene: Scene, x: float, y: float) -> list[Shape]:
    style = scene.style
    inner = state_tints("dune", style)[1]
    ink = style.colours.ink
    return [
        Path(polyline(((x, y), (x + 7, y))), Paint(stroke=ink, width=0.20)),
        Path(polyline(((x + 2, y - 0.65), (x + 5, y - 0.65), (x + 5, y + 0.65), (x + 2, y + 0.65)), closed=True), Paint(fill=inner, stroke=ink, width=style.ribbon.outline)),
        Path(polyline(((x + 3.5, y - 0.65), (x + 3.5, y + 0.65))), Paint(stroke=ink, width=0.50)),
    ]  # fmt: skip


def _rose_block(scene: Scene) -> tuple[Callable[[float, float], list[Shape]], float, float] | None:
    """The rose of all directions of the section, with the words that belong to it."""
    summary = next((c for c in scene.currents if c.azimuths_deg), None)
    if summary is None:
        return None
    words = [f"n {summary.n}, 20° sectors"]
    if summary.mean_deg is not None:
        words.append(f"mean {round(summary.mean_deg) % 360:03d}°, R {summary.resultant:.2f}")
    counts = sector_counts(summary.azimuths_deg, summary.sense == "axis")
    share = max(counts) / sum(counts)
    words += ["area = share of n", f"rim = {100 * share:.0f} %"]
    size = scene.style.fonts.label
    radius = 10.0
    width = (
        2 * radius
        + 2.0
        + max(width_mm("Palaeocurrent", scene.style.fonts.head, True), *(width_mm(w, size) for w in words))
    )

    def draw(x: float, y: float) -> list[Shape]:
        style = scene.style
        centre = (x + radius, y + radius + 4.0)
        shapes: list[Shape] = [Circle(centre, radius, Paint(stroke=style.colours.ink2, width=0.18))]
        shapes.extend(_sectors(scene, centre, radius, counts))
        if summary.mean_deg is not None:
            angle = math.radians(summary.mean_deg)
            end = (centre[0] + radius * math.sin(angle), centre[1] - radius * math.cos(angle))
            shapes.append(Path(polyline((centre, end)), Paint(stroke=style.colours.ink, width=0.5)))
        north = polyline(((centre[0], y + 4.0), (centre[0], y + 2.9)))
        shapes.append(Path(north, Paint(stroke=style.colours.ink, width=0.3)))
        shapes.append(
            Text((centre[0], y + 2.5), "N", style.fonts.head, style.colours.ink, bold=True, anchor="middle")
        )
        left = x + 2 * radius + 2.0
        shapes.append(Text((left, y + 6.5), "Palaeocurrent", style.fonts.head, style.colours.ink, bold=True))
        for number, line in enumerate(words):
            shapes.append(Text((left, y + 9.8 + number * 2.8), line, size, style.colours.ink2))
        return shapes

    return draw, width, 2 * radius + 5.0


def sector_counts(azimuths_deg: tuple[float, ...], axis: bool) -> list[int]:
    """Readings in each of 18 sectors of 20°, the first centred on north; an axis counts at both ends."""
    counts = [0] * 18
    for azimuth in azimuths_deg:
        counts[int(((azimuth + 10) % 360) // 20)] += 1
        if axis:
            counts[int(((azimuth + 190) % 360) // 20)] += 1
    return counts


def _sectors(scene: Scene, centre: tuple[float, float], radius: float, counts: list[int]) -> list[Shape]:
    style = scene.style
    most = max(counts)
    steps: list[Segment] = []
    for number, count in enumerate(counts):
        if not count:
            continue
        r = radius * math.sqrt(count / most)
        points = [centre]
        for part in range(5):
            angle = math.radians(number * 20 - 10 + part * 5)
            points.append((centre[0] + r * math.sin(angle), centre[1] - r * math.cos(angle)))
        steps.extend(polyline(points, closed=True))
    paint = Paint(fill=style.colours.rose, stroke=style.colours.ink, width=0.18, join="round")
    return [Path(tuple(steps), paint)]
