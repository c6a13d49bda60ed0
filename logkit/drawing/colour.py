"""Colour arithmetic: OKLCH, sRGB, contrast, simulated colour-vision deficiency.

Numbers in, numbers out; which colour a rock or a bed state gets is decided in `palette`.

References
----------
ottosson_2020 (OKLab matrices); machado_2009 (deficiency matrices, severity 1); wcag_2018 (contrast ratio).
"""

from __future__ import annotations

import math
from functools import lru_cache

Triple = tuple[float, float, float]

DEFICIENCIES: dict[str, tuple[Triple, Triple, Triple]] = {
    "protan": (
        (0.152286, 1.052583, -0.204868),
        (0.114503, 0.786281, 0.099216),
        (-0.003882, -0.048116, 1.051998),
    ),
    "deutan": (
        (0.367322, 0.860646, -0.227968),
        (0.280085, 0.672501, 0.047413),
        (-0.011820, 0.042940, 0.968881),
    ),
    "tritan": (
        (1.255528, -0.076749, -0.178779),
        (-0.078411, 0.930809, 0.147602),
        (0.004733, 0.691367, 0.303900),
    ),
}
"""Linear sRGB to linear sRGB as seen with a complete deficiency (machado_2009, severity 1.0)."""


def oklab_to_linear(lightness: float, a: float, b: float) -> Triple:
    """OKLab to linear sRGB; components may leave 0 … 1 when the colour is out of gamut."""
    l = (lightness + 0.3963377774 * a + 0.2158037573 * b) ** 3
    m = (lightness - 0.1055613458 * a - 0.0638541728 * b) ** 3
    s = (lightness - 0.0894841775 * a - 1.2914855480 * b) ** 3
    return (
        4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s,
        -1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s,
        -0.0041960863 * l - 0.7034186147 * m + 1.7076147010 * s,
    )


def linear_to_oklab(rgb: Triple) -> Triple:
    """Linear sRGB to OKLab."""
    r, g, b = rgb
    l = math.cbrt(0.4122214708 * r + 0.5363325363 * g + 0.0514459929 * b)
    m = math.cbrt(0.2119034982 * r + 0.6806995451 * g + 0.1073969566 * b)
    s = math.cbrt(0.0883024619 * r + 0.2817188376 * g + 0.6299787005 * b)
    return (
        0.2104542553 * l + 0.7936177850 * m - 0.0040720468 * s,
        1.9779984951 * l - 2.4285922050 * m + 0.4505937099 * s,
        0.0259040371 * l + 0.7827717662 * m - 0.8086757660 * s,
    )


@lru_cache(maxsize=4096)
def oklch_hex(lightness: float, chroma: float, hue_deg: float) -> str:
    """OKLCH to sRGB "#rrggbb"; chroma is lowered, at the same lightness and hue, until the colour exists.

    Parameters
    ----------
    lightness : 0 … 1
    chroma : 0 … about 0.4
    hue_deg : degrees
    """
    lightness = min(max(lightness, 0.0), 1.0)
    angle = math.radians(hue_deg)
    low, high = 0.0, chroma
    rgb = oklab_to_linear(lightness, chroma * math.cos(angle), chroma * math.sin(angle))
    if not _in_gamut(rgb):
        for _ in range(18):
            middle = 0.5 * (low + high)
            rgb = oklab_to_linear(lightness, middle * math.cos(angle), middle * math.sin(angle))
            low, high = (middle, high) if _in_gamut(rgb) else (low, middle)
        rgb = oklab_to_linear(lightness, low * math.cos(angle), low * math.sin(angle))
    return linear_hex(rgb)


def linear_hex(rgb: Triple) -> str:
    """Linear sRGB to "#rrggbb", clipped to what can be shown."""
    return "#" + "".join(f"{round(255 * _encode(min(max(c, 0.0), 1.0))):02x}" for c in rgb)


@lru_cache(maxsize=4096)
def hex_linear(colour: str) -> Triple:
    """ "#rrggbb" to linear sRGB."""
    parts = (int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5))
    r, g, b = (_decode(c) for c in parts)
    return r, g, b


def luminance(colour: str) -> float:
    """Relative luminance of an sRGB colour, 0 black … 1 white."""
    r, g, b = hex_linear(colour)
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def lightness_cie(colour: str) -> float:
    """CIE lightness L*, 0 … 100: how light the colour is once it is printed grey."""
    y = luminance(colour)
    return 116 * math.cbrt(y) - 16 if y > (6 / 29) ** 3 else y * (29 / 3) ** 3


def contrast(first: str, second: str) -> float:
    """Contrast ratio of two colours, 1 … 21 (wcag_2018)."""
    a, b = luminance(first), luminance(second)
    return (max(a, b) + 0.05) / (min(a, b) + 0.05)


def mixed(first: str, second: str, share: float = 0.5) -> str:
    """The colour between two, mixed in OKLab; `share` of the second."""
    one, two = (linear_to_oklab(hex_linear(c)) for c in (first, second))
    l, a, b = (p + share * (q - p) for p, q in zip(one, two, strict=True))
    return linear_hex(oklab_to_linear(l, a, b))


def seen_with(colour: str, deficiency: str) -> str:
    """A colour as it looks with a colour-vision deficiency ("protan", "deutan", "tritan")."""
    rgb = hex_linear(colour)
    rows = DEFICIENCIES[deficiency]
    r, g, b = (sum(k * c for k, c in zip(row, rgb, strict=True)) for row in rows)
    return linear_hex((r, g, b))


def distance(first: str, second: str) -> float:
    """Distance of two colours in OKLab; about 0.02 is just seen side by side."""
    return math.dist(linear_to_oklab(hex_linear(first)), linear_to_oklab(hex_linear(second)))


def _in_gamut(rgb: Triple) -> bool:
    return all(-1e-4 <= c <= 1.0001 for c in rgb)


def _encode(c: float) -> float:
    return 12.92 * c if c <= 0.0031308 else 1.055 * c ** (1 / 2.4) - 0.055


def _decode(c: float) -> float:
    return c / 12.92 if c <= 0.04045 else float(((c + 0.055) / 1.055) ** 2.4)
