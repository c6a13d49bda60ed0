"""Motifs: the glyph of every term and how a structure fills a bed, read from motifs.toml.

A motif names its steps (see `marks`), a way of filling with lines (see `strata`, `laminae`) and how objects are
placed (see `objects`). This module reads and checks the file, cuts the lines to the bed and paints them.
"""

from __future__ import annotations

import dataclasses
import itertools
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from pathlib import Path as FilePath
from types import MappingProxyType
from typing import Any

import numpy as np

from logkit.drawing.cutting import inside
from logkit.drawing.data_file import DataText, Reader, field_types, read_data
from logkit.drawing.ground import Array, LineSegment
from logkit.drawing.laminae import Folds, Laminae, Ripples
from logkit.drawing.marks import Mark, Place, draw_mark, mark_outline, parse_step
from logkit.drawing.noise import seed_of
from logkit.drawing.objects import PLACINGS, Objects, Placed
from logkit.drawing.packed import Polylines
from logkit.drawing.shapes import Circle, Lines, Paint, Path, Point, Shape
from logkit.drawing.strata import FORMS, ROLES, Box, Domes, Foresets, Troughs, Way
from logkit.drawing.strips import Window, window, window_lines
from logkit.drawing.style import Style
from logkit.errors import ArgumentError
from logkit.vocabulary import vocabulary

GENERIC = "unknown_term"
"""The motif of a term that has none."""

WAYS: dict[str, type[Way]] = {
    "troughs": Troughs,
    "foresets": Foresets,
    "domes": Domes,
    "laminae": Laminae,
    "ripples": Ripples,
    "folds": Folds,
}
"""Name in motifs.toml -> way of filling with lines."""

_ABOVE_ZERO = (
    "angle", "depth", "height", "kept", "lean", "least", "row", "set", "spacing", "stoss", "wavelength", "width",
)  # fmt: skip
_WORDS = {"form": FORMS, "role": ROLES}
_KEYS = ("label", "group", "glyph", "fill", "mark", "objects", "like", "source")
_SLACK = 0.86  # objects may touch the edge of their bed: this share of them must lie inside


@dataclass(frozen=True, slots=True)
class Motif:
    """How one term is drawn.

    Attributes
    ----------
    term : vocabulary id
    label, group : in words and for the symbol sheet
    glyph : steps of the small symbol
    fill : way of filling a bed with lines, None for none
    mark, objects : what stands in the bed and where, `objects` None for nothing
    """

    term: str
    label: str
    group: str
    glyph: Mark
    fill: Way | None = None
    mark: Mark = ()
    objects: Objects | None = None


@dataclass(frozen=True, slots=True)
class StructureLines:
    """A structure in its bed.

    Attributes
    ----------
    lines : shapes
    clear : edges of objects that grains keep clear of (x0, y0, x1, y1)
    window : the lines that grains keep clear of, None without lines
    """

    lines: tuple[Shape, ...]
    clear: tuple[LineSegment, ...]
    window: Window | None = None


@cache
def all_motifs() -> Mapping[str, Motif]:
    """The motifs that ship with logkit, by term."""
    return load_motifs(FilePath(__file__).parent / "motifs.toml")


def load_motifs(path: str | FilePath) -> Mapping[str, Motif]:
    """Read and check a motif file.

    Raises
    ------
    DataFileError : an unknown key, a step that cannot be read, a missing glyph; names file and line
    """
    data = read_data(FilePath(path))
    return MappingProxyType({term: _motif(term, data) for term in data.tables})


def motif(term: str) -> Motif:
    """The motif of a term; a term without one gets the generic mark under its own name."""
    found = all_motifs().get(term)
    if found is not None:
        return found
    return dataclasses.replace(all_motifs()[GENERIC], term=term, label=term.replace("_", " "))


def has_motif(term: str) -> bool:
    """True when the term has a motif of its own."""
    return term in all_motifs()


def glyph(
    term: str, centre: Point, width: float, height: float, style: Style, ink: str | None = None
) -> tuple[Path | Circle, ...]:
    """The small symbol of a structure, fossil, contact or other term.

    Parameters
    ----------
    term : vocabulary id; any other text gives the generic mark
    centre, width, height : where and how large, mm
    style : whose inks and line weights are used
    ink : colour instead of the style's ink
    """

    def place(x: float, y: float) -> Point:
        return centre[0] + x * width / 2, centre[1] - y * height / 2

    unit = min(width, height) / 2
    return draw_mark(motif(term).glyph, place, unit, style, ink or style.colours.ink, style.lines.glyph)


def structure_lines(
    term: str,
    box: Box,
    set_mm: float | None,
    seed: int,
    style: Style,
    outline: Sequence[Point] | None = None,
) -> StructureLines:
    """A structure drawn in its bed.

    Parameters
    ----------
    term : vocabulary id; a term without a motif gives a few generic marks
    box : x0, y of the top, x1, y of the base on the page, mm
    set_mm : thickness of one set on the page, None when not recorded
    seed : the same seed gives the same drawing
    style : whose inks and weights are used
    outline : polygon to cut to, the box by default

    Raises
    ------
    ArgumentError : the box has no area or is not finite
    """
    return structures_lines([Filling(term, box, set_mm, seed, outline)], style)[0]


@dataclass(frozen=True, slots=True)
class Filling:
    """A structure to draw in its bed; see `structure_lines`."""

    term: str
    box: Box
    set_mm: float | None
    seed: int
    outline: Sequence[Point] | None = None


def structures_lines(fillings: Sequence[Filling], style: Style) -> list[StructureLines]:
    """Many structures, each drawn in its bed; the lines of all are cut together."""
    factor = style.texture.magnify
    polygons: list[Array] = []
    pieces: list[Window | None] = []
    for filling in fillings:
        x0, top, x1, base = box = filling.box
        if not all(map(math.isfinite, box)) or x1 <= x0 or base <= top:
            raise ArgumentError("box", box, "x0, y of the top, x1, y of the base with some area")
        corners = filling.outline or [(x0, top), (x1, top), (x1, base), (x0, base)]
        polygons.append(np.array(corners, dtype=float))
        way = motif(filling.term).fill
        piece = None
        if way is not None:
            piece = window(way, box, filling.set_mm, factor, filling.seed, seed_of(filling.term))
        pieces.append(piece)
    there = [number for number, piece in enumerate(pieces) if piece is not None]
    found = window_lines([piece for piece in pieces if piece is not None], [polygons[n] for n in there])
    lines = dict(zip(there, found, strict=True))
    return [
        _structure(filling, pieces[n], polygons[n], lines.get(n, {}), style)
        for n, filling in enumerate(fillings)
    ]


def _structure(
    filling: Filling, piece: Window | None, polygon: Array, lines: Mapping[str, Polylines], style: Style
) -> StructureLines:
    """One structure: its lines painted, then its objects."""
    drawn, factor = motif(filling.term), style.texture.magnify
    shapes = _painted(lines, style)
    clear: list[LineSegment] = []
    if drawn.objects is not None:
        random = np.random.default_rng(filling.seed ^ seed_of(filling.term))
        x0, top, x1, base = filling.box
        inner = (x0 / factor, top / factor, x1 / factor, base / factor)
        places = [placed.times(factor) for placed in drawn.objects.places(inner, random)]
        made, clear = _objects_in(drawn.mark or drawn.glyph, places, polygon, style)
        shapes += made
    return StructureLines(tuple(shapes), tuple(clear), piece)


def _painted(lines: Mapping[str, Polylines], style: Style) -> list[Shape]:
    """Lines of one role as one shape each."""
    widths = style.lines
    weight = {"set": widths.set, "crest": widths.crest, "drape": widths.drape}
    colour = {"set": style.colours.ink, "drape": style.colours.drape}
    return [
        Lines(
            own,
            Paint(
                stroke=colour.get(role, style.colours.structure),
                width=weight.get(role, widths.lamina),
                cap="round",
            ),
        )
        for role, own in lines.items()
    ]


def _objects_in(
    mark: Mark, places: Sequence[Placed], polygon: Array, style: Style
) -> tuple[list[Shape], list[LineSegment]]:
    """The objects that stay inside the bed, with their edges."""
    outlines: list[list[list[Point]]] = []
    around: list[Array] = []
    for placed in places:
        edges = mark_outline(mark, _placer(placed), min(placed.half_width, placed.half_height))
        points = np.array([point for line in edges for point in line])
        centre = np.array([placed.x, placed.y])
        outlines.append(edges)
        around.append(centre + _SLACK * (points - centre))
    if not places:
        return [], []
    held = np.all(inside(np.concatenate(around), polygon).reshape(len(places), -1), axis=1)
    shapes: list[Shape] = []
    clear: list[LineSegment] = []
    for placed, edges, kept in zip(places, outlines, held, strict=True):
        if kept:
            unit = min(placed.half_width, placed.half_height)
            ink, width = style.colours.structure, style.lines.crest
            shapes += draw_mark(mark, _placer(placed), unit, style, ink, width)
            clear += [(*a, *b) for line in edges for a, b in itertools.pairwise(line)]
    return shapes, clear


def _placer(placed: Placed) -> Place:
    """Page position of a point of a mark's box."""
    cos, sin = math.cos(placed.turn), math.sin(placed.turn)

    def place(x: float, y: float) -> Point:
        across, up = x * placed.half_width, -y * placed.half_height
        return placed.x + across * cos - up * sin, placed.y + across * sin + up * cos

    return place


def _motif(term: str, data: DataText, chain: tuple[str, ...] = ()) -> Motif:
    table = data.tables[term]
    reader = Reader({(term,): data}, data.name)
    reader.keys(reader.table(table, (term,)), _KEYS, (term,))
    base = _like(term, table, data, chain)
    words = {
        key: reader.value(str, table[key], (term, key))
        for key in ("label", "group", "source")
        if key in table
    }
    made = Motif(
        term=term,
        label=words.get("label") or _label(term),
        group=words.get("group") or (base.group if base else ""),
        glyph=_steps(term, "glyph", table, data) or (base.glyph if base else ()),
        fill=_way(term, table, reader) if "fill" in table else (base.fill if base else None),
        mark=_steps(term, "mark", table, data) or (base.mark if base else ()),
        objects=_objects(term, table, reader, data)
        if "objects" in table
        else (base.objects if base else None),
    )
    if not made.glyph:
        raise data.fail((term,), f"{term} has no glyph.", "Give it steps, or like = another term.")
    if not made.group:
        raise data.fail((term,), f"{term} has no group.", "Give it the heading it stands under.")
    return made


def _like(term: str, table: dict[str, Any], data: DataText, chain: tuple[str, ...]) -> Motif | None:
    other = table.get("like")
    if other is None:
        return None
    if other in (*chain, term):
        raise data.fail((term, "like"), f"{term} is like itself in a circle.", "Name another term.")
    if other not in data.tables:
        problem = data.unknown((term, str(other)), data.tables)
        raise data.fail((term, "like"), f"there is no motif called {other!r}.", problem.remedy)
    return _motif(other, data, (*chain, term))


def _label(term: str) -> str:
    for name in ("structures", "fossils", "contacts"):
        if term in vocabulary(name):
            return vocabulary(name)[term].label
    return term.replace("_", " ")


def _steps(term: str, key: str, table: dict[str, Any], data: DataText) -> Mark:
    texts = Reader({(term,): data}, data.name).value(tuple[str, ...], table.get(key, []), (term, key))
    try:
        return tuple(parse_step(text) for text in texts)
    except ValueError as problem:
        raise data.fail((term, key), f"{problem}.") from None


def _way(term: str, table: dict[str, Any], reader: Reader) -> Way:
    path = (term, "fill")
    fill = dict(reader.table(table["fill"], path))
    name = reader.value(str, fill.pop("way", ""), (*path, "way"))
    if name not in WAYS:
        raise reader.at(path).fail(path, f"way of {term} is {name!r}; it must be one of {', '.join(WAYS)}.")
    way: Way = reader.record(WAYS[name], fill, path)
    for field in field_types(WAYS[name]):
        value = getattr(way, field)
        if field in _WORDS and value not in _WORDS[field]:
            words = ", ".join(_WORDS[field])
            raise reader.at(path).fail(path, f"{field} of {term} is {value!r}; it must be one of {words}.")
        if field in _ABOVE_ZERO and not value > 0:
            raise reader.at(path).fail(path, f"{field} of {term} must be above zero.")
    return way


def _objects(term: str, table: dict[str, Any], reader: Reader, data: DataText) -> Objects:
    placing: Objects = reader.record(Objects, table["objects"], (term, "objects"))
    if placing.where not in PLACINGS:
        words = ", ".join(PLACINGS)
        raise data.fail(
            (term, "objects"), f"where of {term} is {placing.where!r}; it must be one of {words}."
        )
    if min(placing.width, placing.height, placing.spacing) <= 0:
        raise data.fail((term, "objects"), f"width, height and spacing of {term} must be above zero.")
    return placing
