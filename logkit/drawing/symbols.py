"""The symbol sheets: every texture, structure, fossil and boundary with its words, in the inks of a style.

What the marks look like is in `textures` and motifs.toml; this module only sets them out on pages.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from logkit.drawing.drawing import Drawing
from logkit.drawing.metrics import width_mm, wrap
from logkit.drawing.motifs import GENERIC, Motif, all_motifs, glyph, structure_lines
from logkit.drawing.noise import seed_of
from logkit.drawing.palette import family_mark, fill, state_label, state_letter, state_tints
from logkit.drawing.shapes import Gradient, Group, Paint, Path, Point, Shape, Sheet, Text, polyline
from logkit.drawing.style import Style
from logkit.drawing.textures import UNKNOWN_PHI, bed_texture

_PAGE_MM = (210.0, 297.0)
_SMALLEST_LABEL_PT = 6.0

_MUD_BEDS = (
    "mud_cracks", "rain_prints", "roots", "palaeosol", "lenticular_bedding", "fine_lamination", "varves", "tubes",
)  # fmt: skip
_CARBONATE_BEDS = ("stylolites", "fenestrae", "vugs", "stromatolites", "microbial_lamination")
_VOLCANIC_BEDS = ("pumice_clasts", "accretionary_lapilli")
_FLOW_STATES = ("ripple", "dune", "upper_plane", "gravel", "antidune", "lower_plane", "wave_ripple", "other")
_FAMILY_WORDS = {
    "quartz": "quartz sand",
    "lithic": "lithic sand",
    "organic_mud": "organic mud",
    "mixed": "mixed, heterolithic",
    "iron": "ironstone, phosphorite",
    "volcanic": "volcanic ash, tuff",
    "crystalline": "basement",
}


def symbol_sheet(style: Style) -> Drawing:
    """All symbols of a style on as many A4 sheets as they need (larger where the style's type is larger).

    Parameters
    ----------
    style : whose colours, marks and type are shown

    Returns
    -------
    Drawing whose sheets hold textures and colours, structures in their beds, fossils and boundaries
    """
    factor = max(1.0, style.fonts.label / _SMALLEST_LABEL_PT)
    pages = [_textures(style, factor), *_structures(style, factor), _small_symbols(style, factor)]
    sheets = tuple(page.sheet(number, len(pages)) for number, page in enumerate(pages, 1))
    return Drawing(sheets, title=f"logkit symbols, style {style.name}")


@dataclass
class _Canvas:
    """A page that is being filled."""

    style: Style
    title: str
    factor: float
    shapes: list[Shape] = field(default_factory=list)
    gradients: list[Gradient] = field(default_factory=list)

    def say(
        self, x: float, y: float, text: str, *, bold: bool = False, quiet: bool = False, points: float = 0.0
    ) -> None:
        """A line of text; quiet words are set in the second ink."""
        colours = self.style.colours
        size = points or self.style.fonts.label
        self.shapes.append(Text((x, y), text, size, colours.ink2 if quiet else colours.ink, bold=bold))

    def label(self, x: float, y: float, text: str, width: float, quiet: bool = False) -> None:
        """Words under a symbol, in two lines at most."""
        size = self.style.fonts.label
        for number, line in enumerate(wrap(text, width, size)[:2]):
            self.say(x, y + number * 0.42 * size, line, quiet=quiet)

    def heading(self, x: float, y: float, text: str, aside: str = "") -> None:
        """A bold heading with a quiet remark beside it."""
        size = self.style.fonts.label + 1.5
        self.say(x, y, text, bold=True, points=size)
        if aside:
            self.say(x + width_mm(text, size, bold=True) + 2.5, y, aside, quiet=True)

    def bed(
        self,
        outline: Sequence[Point],
        knots: Sequence[tuple[float, float]],
        family: str,
        name: str,
        term: str = "",
        set_mm: float | None = None,
    ) -> None:
        """A bed with fill, marks and, for a term, its structure."""
        style = self.style
        ys, xs = [y for _, y in outline], [x for x, _ in outline]
        box = (min(xs), min(ys), max(xs), max(ys))
        lines = structure_lines(term, box, set_mm, seed_of(name), style, outline) if term else None
        marks = bed_texture(
            outline,
            knots,
            family,
            style,
            seed=seed_of(name),
            clear=lines.clear if lines else (),
            windows=(lines.window,) if lines and lines.window else (),
        )
        edge = polyline(list(outline), closed=True)
        if len(knots) > 1:
            tall = box[3] - box[1]
            stops = tuple(((y - box[1]) / tall, fill(family, phi, style)) for y, phi in sorted(knots))
            self.gradients.append(Gradient(f"ramp-{name}", stops))
            paint = Paint(fill=f"gradient:ramp-{name}")
        else:
            paint = Paint(fill=fill(family, knots[0][1], style))
        self.shapes.append(
            Group(
                (Path(edge, paint), *marks, *(lines.lines if lines else ())),
                id=f"symbol-{name}",
                clip=edge,
            )
        )
        self.shapes.append(Path(edge, Paint(stroke=style.colours.ink, width=style.lines.profile)))

    def sheet(self, number: int, of: int) -> Sheet:
        """The finished page, with title and rule."""
        style, k = self.style, self.factor
        width, height = _PAGE_MM[0] * k, _PAGE_MM[1] * k
        margin = 8.0 * k
        head = (
            Text((margin, 13.0 * k), self.title, 13.0 * k, style.colours.ink, bold=True),
            Text(
                (width - margin, 13.0 * k),
                f"style {style.name} · sheet {number} of {of}",
                style.fonts.label,
                style.colours.ink2,
                anchor="end",
            ),
            Path(
                polyline([(margin, 15.6 * k), (width - margin, 15.6 * k)]),
                Paint(stroke=style.colours.ink, width=style.lines.rule),
            ),
        )
        return Sheet(
            width, height, (*head, *self.shapes), tuple(self.gradients), self.title,
            f"{self.title}: symbols of the style {style.label}", number, of, style.colours.paper,
        )  # fmt: skip


def _textures(style: Style, k: float) -> _Canvas:
    page = _Canvas(style, "Textures and colours", k)
    _ladder(page, 8.0 * k, 24.0 * k, k)
    _families(page, 70.0 * k, 24.0 * k, k)
    coloured = style.palette.step > 0
    if coloured:
        _ramps(page, 8.0 * k, 206.0 * k, k)
    _states(page, (120.0 if coloured else 8.0) * k, 206.0 * k, k)
    return page


def _ladder(page: _Canvas, x: float, y: float, k: float) -> None:
    """One graded column from clay to cobbles."""
    page.heading(x, y, "Grain size")
    page.label(x, y + 4 * k, "width, marks and lightness follow the size", 55 * k, quiet=True)
    top, per_phi = y + 10 * k, 13.0 * k
    sizes = (
        (8.0, "0.004 mm"), (6.0, "0.016 mm"), (4.0, "0.063 mm"), (3.0, "0.125 mm"), (2.0, "0.25 mm"),
        (1.0, "0.5 mm"), (0.0, "1 mm"), (-1.0, "2 mm"), (-2.0, "4 mm"), (-4.0, "16 mm"),
    )  # fmt: skip
    edge = [(x + (5 + 2.7 * (8 - phi)) * k, top + (8 - phi) * per_phi) for phi, _ in sizes]
    parts = (("mud", 8.0, 4.0), ("quartz", 4.0, -1.0), ("gravel", -1.0, -4.0))
    for family, fine, coarse in parts:
        inner = [(px, py) for (px, py), (phi, _) in zip(edge, sizes, strict=True) if coarse <= phi <= fine]
        outline = [(x, inner[0][1]), *inner, (x, inner[-1][1])]
        page.bed(outline, [(inner[0][1], fine), (inner[-1][1], coarse)], family, f"ladder-{family}")
    for (px, py), (_, words) in zip(edge, sizes, strict=True):
        tick = Paint(stroke=page.style.colours.ink, width=page.style.lines.contact)
        page.shapes.append(Path(polyline([(px, py), (px + 2 * k, py)]), tick))
        page.say(px + 2.8 * k, py + 0.8 * k, words)


def _families(page: _Canvas, x: float, y: float, k: float) -> None:
    """Every texture family with its mark in words."""
    page.heading(x, y, "Composition", "each family has a mark of its own, so that no meaning rests on hue")
    for number, family in enumerate(page.style.palette.families):
        left = x + (number % 3) * 45.0 * k
        top = y + 5 * k + (number // 3) * 29.0 * k
        width, height = 38.0 * k, 17.0 * k
        phi = UNKNOWN_PHI.get(family, 1.0)
        outline = [(left, top), (left + width, top), (left + width, top + height), (left, top + height)]
        page.bed(outline, [(top, phi)], family, f"family-{family}")
        page.say(left, top + height + 3.2 * k, _FAMILY_WORDS.get(family, family.replace("_", " ")), bold=True)
        page.say(left, top + height + 6.0 * k, family_mark(family, page.style), quiet=True)


def _ramps(page: _Canvas, x: float, y: float, k: float) -> None:
    """Fill ladders of all families."""
    page.heading(x, y, "Fills", "darker is finer, in every family")
    for number, family in enumerate(page.style.palette.families):
        top = y + (3.5 + 4.3 * number) * k
        page.say(x, top + 2.8 * k, family.replace("_", " "))
        for step in range(13):
            left = x + (24 + 5.4 * step) * k
            cell = [
                (left, top),
                (left + 5.4 * k, top),
                (left + 5.4 * k, top + 3.7 * k),
                (left, top + 3.7 * k),
            ]
            colour = fill(family, step - 4.0, page.style)
            page.shapes.append(Path(polyline(cell, closed=True), Paint(fill=colour)))
    foot = y + (3.5 + 4.3 * len(page.style.palette.families) + 2.6) * k
    for phi in (-4, -1, 4, 8):
        page.say(x + (24 + 5.4 * (phi + 4) + 0.8) * k, foot, f"{phi:g} φ".replace("-", "−"), quiet=True)


def _states(page: _Canvas, x: float, y: float, k: float) -> None:
    """Tints of the bed states on the flow ribbon."""
    style = page.style
    page.heading(x, y, "Bed states", "P10–P90, P25–P75, median")
    for number, state in enumerate(_FLOW_STATES):
        top = y + (4.0 + 7.4 * number) * k
        outer, inner = state_tints(state, style)
        inner_edge = style.colours.ink if style.ribbon.outline_inner else None
        for colour, inset, edge in ((outer, 0.0, style.colours.ink), (inner, 5.0 * k, inner_edge)):
            box = [
                (x + inset, top),
                (x + 20 * k - inset, top),
                (x + 20 * k - inset, top + 5.4 * k),
                (x + inset, top + 5.4 * k),
            ]
            paint = Paint(fill=colour, stroke=edge, width=style.ribbon.outline)
            page.shapes.append(Path(polyline(box, closed=True), paint))
        thread = polyline([(x + 10 * k, top), (x + 10 * k, top + 5.4 * k)])
        page.shapes.append(Path(thread, Paint(stroke=style.colours.ink, width=style.lines.thread)))
        page.say(x + 23 * k, top + 3.5 * k, state_letter(state, style), bold=True)
        page.say(x + 28 * k, top + 3.5 * k, state_label(state, style))


def _structures(style: Style, k: float) -> list[_Canvas]:
    """Structures in their beds, group after group."""
    pages: list[_Canvas] = []
    x0, width, height, pitch_x, pitch_y = 8.0 * k, 27.0 * k, 15.0 * k, 39.2 * k, 23.4 * k
    y = 1e9
    for group, motifs in _groups(_in_beds()):
        rows = -(-len(motifs) // 5)
        for row in range(rows):
            head = 7.5 * k if row == 0 else 0.0
            if y + head + pitch_y > (_PAGE_MM[1] - 6) * k:
                pages.append(_Canvas(style, "Structures", k))
                y = 20.0 * k
                head = 7.5 * k
            if head:
                again = "" if row == 0 else " (continued)"
                pages[-1].heading(x0, y + 4.0 * k, f"{group[0].upper()}{group[1:]}{again}")
                y += head
            for column, motif in enumerate(motifs[5 * row : 5 * row + 5]):
                _structure(pages[-1], motif, x0 + column * pitch_x, y, width, height, k)
            y += pitch_y
    return pages


def _structure(
    page: _Canvas, motif: Motif, x: float, y: float, width: float, height: float, k: float
) -> None:
    """One structure: its bed, its glyph, its words."""
    family, phi = _bed_of(motif)
    outline = [(x, y), (x + width - 3 * k, y), (x + width, y + height), (x, y + height)]
    page.bed(outline, [(y, phi + 0.8), (y + height, phi - 0.8)], family, motif.term, motif.term, 5.5 * k)
    page.shapes.extend(glyph(motif.term, (x + width + 4.2 * k, y + 4 * k), 4.6 * k, 2.6 * k, page.style))
    page.label(x, y + height + 2.9 * k, motif.label, 37.5 * k)


def _small_symbols(style: Style, k: float) -> _Canvas:
    """Fossils and boundaries: glyphs alone."""
    page = _Canvas(style, "Fossils and boundaries", k)
    y = 20.0 * k
    in_beds = {motif.term for motif in _in_beds()}
    for group, motifs in _groups(m for m in all_motifs().values() if m.term not in in_beds):
        page.heading(8.0 * k, y + 4.0 * k, f"{group[0].upper()}{group[1:]}")
        y += 9.5 * k
        for number, motif in enumerate(motifs):
            x = (8.0 + (number % 4) * 49.0) * k
            top = y + (number // 4) * 8.4 * k
            page.shapes.extend(glyph(motif.term, (x + 3.8 * k, top), 6.9 * k, 3.9 * k, style))
            page.label(x + 10.0 * k, top + 0.8 * k, motif.label, 37.0 * k)
        y += (-(-len(motifs) // 4) * 8.4 + 2.0) * k
    return page


def _in_beds() -> list[Motif]:
    """Motifs that are shown in a bed: all but fossils, boundaries and the mark of other terms."""
    apart = ("trace fossils", "body fossils", "plants and microbes", "boundaries", "other")
    return [motif for motif in all_motifs().values() if motif.group not in apart]


def _groups(motifs: Iterable[Motif]) -> list[tuple[str, list[Motif]]]:
    """Motifs by group, in the order of the file; the generic one last."""
    groups: dict[str, list[Motif]] = {}
    for motif in sorted(motifs, key=lambda m: m.term == GENERIC):
        groups.setdefault(motif.group, []).append(motif)
    return list(groups.items())


def _bed_of(motif: Motif) -> tuple[str, float]:
    """Family and grain size of the bed a structure is shown in."""
    if motif.term in _MUD_BEDS:
        return "mud", 6.5
    if motif.term in _CARBONATE_BEDS:
        return "carbonate", 6.0
    if motif.term in _VOLCANIC_BEDS:
        return "volcanic", 2.0
    if motif.group == "evaporite and volcanic":
        return "evaporite", 3.0
    return "quartz", 2.2
