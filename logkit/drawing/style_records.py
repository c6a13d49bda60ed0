"""The records a style is made of: one class a section of a style file, one field a key.

No logic belongs here but what a page is; reading, checking and dumping are in `style`.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from logkit.drawing.data_file import HexColour
from logkit.errors import ArgumentError

LEAST_PAGE_MM = 40.0
"""No page is narrower or lower than this."""

PAPER_MM: dict[str, tuple[float, float]] = {
    "A0": (841.0, 1189.0),
    "A1": (594.0, 841.0),
    "A2": (420.0, 594.0),
    "A3": (297.0, 420.0),
    "A4": (210.0, 297.0),
    "A5": (148.0, 210.0),
    "Letter": (215.9, 279.4),
    "Legal": (215.9, 355.6),
    "Tabloid": (279.4, 431.8),
}
"""Upright width and height of named paper sizes, mm. "roll" is as long as the drawing needs."""


@dataclass(frozen=True, slots=True)
class PageStyle:
    """Paper and the fixed heights on it; mm from the top edge."""

    size: str | tuple[float, ...]
    landscape: bool
    margin: float
    scale: float
    rule: float
    summary: float
    heads: float
    section_top: float
    legend: bool


@dataclass(frozen=True, slots=True)
class TrackStyle:
    """One track: free space before it and its width, mm, and its head ("" for none)."""

    gap: float
    width: float
    title: str


@dataclass(frozen=True, slots=True)
class FontStyle:
    """Type sizes in points; the type is DejaVu Sans, which ships with the installation."""

    title: float
    subtitle: float
    head: float
    label: float
    metre: float
    note: float
    caution: float


@dataclass(frozen=True, slots=True)
class LineStyle:
    """Line weights, mm."""

    spine: float
    erosive: float
    profile: float
    contact: float
    set: float
    crest: float
    clast: float
    stroke: float
    lamina: float
    hairline: float
    thread: float
    link: float
    drape: float
    rule: float
    glyph: float
    outline: float


@dataclass(frozen=True, slots=True)
class ColourStyle:
    """Inks and other colours that do not follow grain size."""

    paper: HexColour
    ink: HexColour
    ink2: HexColour
    structure: HexColour
    grid: HexColour
    drape: HexColour
    chip: HexColour
    clast: HexColour
    trend: HexColour
    rose: HexColour
    conflict: HexColour
    on_conflict: HexColour
    break_: HexColour


@dataclass(frozen=True, slots=True)
class FamilyStyle:
    """Fill of a texture family: OKLCH chroma and hue, lightness offset (darker), and its mark in words."""

    chroma: float
    hue: float
    offset: float
    mark: str


@dataclass(frozen=True, slots=True)
class PaletteStyle:
    """How a family and a grain size become fill and stipple colours; see `palette.fill`."""

    lightest: float
    step: float
    offsets: float
    chroma: float
    stipple: float
    stipple_dark: float
    stipple_chroma: float
    stipple_contrast: float
    families: Mapping[str, FamilyStyle] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class TextureStyle:
    """Sizes and limits of the texture marks, mm; see `textures.bed_texture`."""

    dots: bool
    diameter: float
    diameter_rate: float
    spacing: float
    spacing_rate: float
    clear: float
    triangles: float
    magnify: float
    least_bed: float
    least_segment: float
    least_glyph: float
    most_dots: int
    most_clasts: int
    scallop: tuple[float, ...]
    least_relief: float


@dataclass(frozen=True, slots=True)
class StateStyle:
    """A bed state on the ribbon: its letter, its label, OKLCH of the outer tint."""

    letter: str
    label: str
    lightness: float
    chroma: float
    hue: float


@dataclass(frozen=True, slots=True)
class RibbonStyle:
    """The flow ribbon: line, free edges, axis limits, tints of the bed states."""

    outline: float
    outline_inner: bool
    edge: float
    letter_gap: float
    velocity: tuple[float, ...]
    flow_depth: tuple[float, ...]
    fit_axis: bool
    inner_darker: float
    inner_chroma: float
    sail_fill: bool
    states: Mapping[str, StateStyle] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class NoteStyle:
    """Notes in the margin: gap between them, mm; line height as a factor on the type size."""

    gap: float
    line_height: float


@dataclass(frozen=True, slots=True)
class Style:
    """A complete style.

    Attributes
    ----------
    name : name or file it was loaded from
    label : in words
    source : whose design it is
    order : tracks from left to right; `tracks` holds their sizes
    """

    name: str
    label: str
    source: str
    page: PageStyle
    order: tuple[str, ...]
    tracks: Mapping[str, TrackStyle]
    fonts: FontStyle
    lines: LineStyle
    colours: ColourStyle
    palette: PaletteStyle
    texture: TextureStyle
    ribbon: RibbonStyle
    notes: NoteStyle

    def __hash__(self) -> int:
        return hash((self.name, self.label))

    def page_size_mm(self) -> tuple[float, float | None]:
        """Width and height of the page, mm; the height of a roll is None."""
        size = self.page.size
        if not isinstance(size, str):
            return size[0], size[1]
        if size == "roll":
            return PAPER_MM["A4"][0], None
        width, height = PAPER_MM[size]
        return (height, width) if self.page.landscape else (width, height)


def read_page(words: str) -> dict[str, Any]:
    """Page keys of a style from a page in words: `A4`, `Letter landscape`, `roll`, `180x240` in mm.

    Raises
    ------
    ArgumentError : none of these; the message lists what is allowed
    """
    allowed = (
        f"{', '.join(PAPER_MM)} (with ` landscape` or ` portrait` if wanted), roll, or WIDTHxHEIGHT in mm"
    )
    lengths = re.fullmatch(r"\s*(\d+(?:\.\d+)?)\s*[xX×]\s*(\d+(?:\.\d+)?)\s*(?:mm)?\s*", words)
    if lengths:
        size = [float(length) for length in lengths.groups()]
        if min(size) < LEAST_PAGE_MM:
            raise ArgumentError("page", words, f"at least {LEAST_PAGE_MM:g} mm wide and high; or {allowed}")
        return {"size": size}
    name, *turn = words.lower().split() or [""]
    known = {paper.lower(): paper for paper in (*PAPER_MM, "roll")}
    if name not in known or len(turn) > 1 or (turn and turn[0] not in ("landscape", "portrait")):
        raise ArgumentError("page", words, allowed)
    page: dict[str, Any] = {"size": known[name]}
    if turn:
        page["landscape"] = turn[0] == "landscape"
    return page
