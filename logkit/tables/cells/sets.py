"""Cross-set thickness and the measures of ripples: `sets 8-22 n=4`, `set 0.9m`, `λ1.1m h 3 cm`, `climb 18°`."""

from __future__ import annotations

import math
import re
from functools import lru_cache

from logkit.errors import nearest
from logkit.model import SetThickness
from logkit.tables.cells.lengths import UNIT_WORDS, number, unit_symbol
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.units import METRES

_NUM = r"\d+(?:[.,]\d+)?|[.,]\d+"
_UNIT = r"mm|cm|metres?|m|ft|feet|in(?:ches|ch)?|'|\""
SETS = re.compile(
    rf"""(?:\b(?P<word>x?-?sets?|cosets?|set\s+(?:thk|thickness|height))\b\s*[:=~]?\s*|(?P<only>^))
        (?:(?:mean|av|avg|average|x̄)\.?\s*[:=]?\s*(?P<first_mean>{_NUM})\s*(?P<mean_unit>{_UNIT})?(?![A-Za-z])\s*[,;(]*\s*)?
        (?:(?P<a>{_NUM})\s*(?P<a_unit>{_UNIT})?\s*(?:(?:-|to|…|\.\.)\s*(?P<b>{_NUM})\s*)?(?P<unit>{_UNIT})?(?![A-Za-z])\)?)?
        (?P<tail>(?:\s*[,;(]*\s*(?:n\s*=?\s*\d+|x\s*\d+
            |(?:mean|av|avg|average)\.?\s*[:=]?\s*(?:{_NUM})\s*(?:{_UNIT})?(?![A-Za-z]))\)?)*)""",
    re.X | re.I,
)
_COUNT = re.compile(r"(?:\bn\s*=?\s*|\bx\s*)(\d+)", re.I)
_MEAN = re.compile(rf"(?:mean|avg?|average)\.?\s*[:=]?\s*({_NUM})\s*({_UNIT})?", re.I)
_VALUE = rf"\s*[:=~]?\s*({_NUM})\s*(?:-\s*({_NUM})\s*)?({_UNIT})?(?![A-Za-z])"
_WAVELENGTH = re.compile(rf"(?:λ|\b(?:lambda|wavelength|wl|spacing)\b){_VALUE}", re.I)
# the height of a set, a dune or a bar is not that of a ripple
_HEIGHT = re.compile(
    rf"(?<!set )(?<!dune )(?<!bar )(?:η|\b(?:eta|ht|height|amplitude|ampl?|h)\b){_VALUE}", re.I
)
_CLIMB = re.compile(
    r"\b(?:climb(?:ing)?(?:\s+(?:angle|at))?)\s*[:=~]?\s*(\d+(?:[.,]\d+)?)\s*(?:°|deg(?:rees)?\b)?", re.I
)


@lru_cache(maxsize=CACHE_SIZE)
def read_sets(text: str, unit: str | None = None) -> Reading[SetThickness]:
    """The set_thickness cell: a value, a range, a mean, a count. A mean is never invented.

    Parameters
    ----------
    text : the cell
    unit : unit of the column for numbers without one
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    remarks: list[Remark] = []
    rest, sets = take_sets(plain, unit, remarks, heading=False)
    if any(r.level == "error" for r in remarks):
        return Reading(None, tuple(remarks))
    if sets is None or any(c.isalnum() for c in rest):
        unknown = re.search(r"[A-Za-z]+", rest)
        near = nearest(unknown[0], UNIT_WORDS) if unknown else None
        return Reading(
            None,
            (error("sets.unreadable", f"{quoted(plain)} is not a set thickness",
                   "write a thickness or a range with a count, for example 8-22 cm n=4", nearest=near),),
        )  # fmt: skip
    return Reading(sets, tuple(remarks))


def take_sets(
    text: str, unit: str | None, remarks: list[Remark], heading: bool = True
) -> tuple[str, SetThickness | None]:
    """The text without its set thickness, and the thickness; with `heading` the word `set` must stand there."""
    for match in SETS.finditer(text):
        if heading and not match["word"]:
            continue
        if match["a"] or match["first_mean"] or _MEAN.search(match["tail"] or ""):
            break
    else:
        return text, None
    tail = match["tail"] or ""
    mean = _MEAN.search(tail)
    count = _COUNT.search(tail)
    mean_text = match["first_mean"] or (mean[1] if mean else None)
    written = match["unit"] or match["a_unit"] or match["mean_unit"] or (mean[2] if mean else None)
    symbol = _settled_unit(written, unit, match[0], remarks)
    factor = METRES[symbol]
    values = [v for t in (match["a"], match["b"]) if t and (v := number(t)[0])]
    mean_value = number(mean_text)[0] if mean_text else None
    if not values and mean_value:
        values = [mean_value]
    if not values:
        remarks.append(
            error("sets.zero", f"{quoted(match[0])} has no thickness above zero", "write it with a unit")
        )
        return _without(text, match), None
    low, high = min(values), max(values)
    if mean_value is not None and not low <= mean_value <= high:
        remarks.append(
            question("sets.mean_outside", f"the mean {mean_value:g} lies outside {low:g}-{high:g} {symbol}",
                     "correct the mean or the range",
                     (f"range {low:g}-{high:g} {symbol}", f"mean {mean_value:g} {symbol}"))
        )  # fmt: skip
        mean_value = None
    if mean_value is None and len(values) == 1:
        mean_value = values[0]
    sets = SetThickness(
        low * factor, high * factor, None if mean_value is None else mean_value * factor,
        int(count[1]) if count and len(count[1]) < 6 else None,
    )  # fmt: skip
    return _without(text, match), sets


def take_wavelength(text: str, unit: str | None, remarks: list[Remark]) -> tuple[str, float | None]:
    """The text without a ripple or hummock wavelength, and the wavelength in m."""
    return _take_length(_WAVELENGTH, text, unit, remarks)


def take_height(text: str, unit: str | None, remarks: list[Remark]) -> tuple[str, float | None]:
    """The text without a ripple height, and the height in m."""
    return _take_length(_HEIGHT, text, unit, remarks)


def take_climb(text: str, remarks: list[Remark]) -> tuple[str, float | None]:
    """The text without a climb angle, and the angle in degrees. The word `climbing` stays in the text."""
    match = _CLIMB.search(text)
    if match is None:
        return text, None
    angle = number(match[1])[0]
    if angle is None or not 0 <= angle < 90:
        remarks.append(
            error("ripples.climb", f"{quoted(match[0])} is not a climb angle", "write 0 to 90 degrees")
        )
        return _without(text, match), None
    remarks.append(
        note("ripples.climb", f"climb angle {angle:g}°; a rate of fall-out needs the ripple height as well")
    )
    return f"{text[: match.start()]} climbing {text[match.end() :]}", angle


def _take_length(
    pattern: re.Pattern[str], text: str, unit: str | None, remarks: list[Remark]
) -> tuple[str, float | None]:
    match = pattern.search(text)
    if match is None:
        return text, None
    value = number(match[1])[0]
    symbol = _settled_unit(match[3], unit, match[0], remarks)
    if value and match[2]:
        value = math.sqrt(value * (number(match[2])[0] or 0.0))
        remarks.append(note("ripples.range", f"{quoted(match[0])} read as its middle, {value:.3g} {symbol}"))
    if not value:
        remarks.append(error("ripples.zero", f"{quoted(match[0])} is not above zero", "write it with a unit"))
        return _without(text, match), None
    return _without(text, match), value * METRES[symbol]


def _settled_unit(written: str | None, unit: str | None, where: str, remarks: list[Remark]) -> str:
    symbol = unit_symbol(written) if written else unit
    if symbol is not None:
        return symbol
    remarks.append(
        question("length.no_unit", f"{quoted(where)} has no unit", "write the unit behind the number",
                 (f"{where.strip()} cm", f"{where.strip()} m"))
    )  # fmt: skip
    return "cm"


def _without(text: str, match: re.Match[str]) -> str:
    return f"{text[: match.start()]} {text[match.end() :]}"
