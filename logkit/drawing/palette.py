"""Which colour a rock, its marks and a bed state get in a style.

Every family has its own ramp in which darker means finer, and its own mark, so that no meaning rests on hue
alone. The constants are data in the styles; colour arithmetic is in `colour`; shapes are in `textures`.
"""

from __future__ import annotations

from functools import lru_cache

from logkit.drawing.colour import contrast, oklch_hex
from logkit.drawing.style_records import FamilyStyle, StateStyle, Style

COARSEST_PHI, FINEST_PHI = -4.0, 8.0
"""The ramps are flat outside of these grain sizes."""

UNKNOWN_FAMILY = FamilyStyle(chroma=0.0, hue=0.0, offset=0.0, mark="no mark")
"""How a family that the style does not know is painted: grey."""

_PHI_STEP = 0.02


def fill(family: str, phi: float, style: Style) -> str:
    """Fill colour of a family at a grain size.

    Parameters
    ----------
    family : texture family of the lithology
    phi : grain size in phi; clamped to -4 … 8
    style : whose palette is used

    Returns
    -------
    sRGB "#rrggbb"
    """
    return _fill(family, round(min(max(phi, COARSEST_PHI), FINEST_PHI) / _PHI_STEP), style)


@lru_cache(maxsize=64)
def stipple(family: str, style: Style) -> str:
    """Colour of the dots and strokes of a family: its hue, moved away from the fill until it stands out.

    Returns
    -------
    sRGB "#rrggbb" with at least the style's `stipple_contrast` against the darkest sand and mud fill, or as
    near to it as black and white allow
    """
    palette, own = style.palette, _family(family, style)
    dark_family = own.offset * palette.offsets >= 0.08
    lightness = palette.stipple_dark if dark_family else palette.stipple
    fills = [fill(family, phi, style) for phi in (-1.0, 4.0, 8.0)]
    chroma = own.chroma * palette.chroma * palette.stipple_chroma
    on_dark = own.offset * palette.offsets >= 0.3 or palette.stipple > 0.6
    if on_dark:
        lightness = max(lightness, 0.74)
    step = 0.01 if on_dark else -0.01
    colour = oklch_hex(lightness, chroma, own.hue)
    while 0.02 < lightness < 0.98 and min(contrast(colour, f) for f in fills) < palette.stipple_contrast:
        lightness += step
        colour = oklch_hex(lightness, chroma, own.hue)
    return colour


@lru_cache(maxsize=256)
def state_tints(state: str, style: Style) -> tuple[str, str]:
    """Outer (P10-P90) and inner (P25-P75) tint of a bed state; "other" where the state is not known."""
    ribbon, own = style.ribbon, _state(state, style)
    outer = oklch_hex(own.lightness, own.chroma, own.hue)
    inner = oklch_hex(own.lightness - ribbon.inner_darker, own.chroma + ribbon.inner_chroma, own.hue)
    return outer, inner


def state_letter(state: str, style: Style) -> str:
    """The letter that names a bed state on the ribbon, "" where it is open."""
    return _state(state, style).letter


def state_label(state: str, style: Style) -> str:
    """A bed state in words, for the legend."""
    return _state(state, style).label


def family_mark(family: str, style: Style) -> str:
    """The mark of a family in words, for legends and descriptions."""
    return _family(family, style).mark


def _state(state: str, style: Style) -> StateStyle:
    return style.ribbon.states.get(state) or style.ribbon.states["other"]


def _family(family: str, style: Style) -> FamilyStyle:
    return style.palette.families.get(family, UNKNOWN_FAMILY)


@lru_cache(maxsize=8192)
def _fill(family: str, steps: int, style: Style) -> str:
    palette, own = style.palette, _family(family, style)
    lightness = palette.lightest - palette.step * (steps * _PHI_STEP - COARSEST_PHI)
    return oklch_hex(lightness - own.offset * palette.offsets, own.chroma * palette.chroma, own.hue)
