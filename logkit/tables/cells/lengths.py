"""Lengths and spans as people write them: `45 cm`, `1,32 m`, `1'6"`, `0-45`, `45 - 1.32`, `2104'6"–2112'3"`.

Only text belongs here: whether a length is a thickness or a height, and whether it fits its neighbours, is
decided where rows are known.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from functools import lru_cache

from logkit.errors import nearest
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.units import METRES

UNIT_WORDS: dict[str, str] = {
    "m": "m", "mtr": "m", "metre": "m", "metres": "m", "meter": "m", "meters": "m", "cm": "cm", "cms": "cm",
    "centimetre": "cm", "centimetres": "cm", "centimeter": "cm", "centimeters": "cm", "mm": "mm", "mms": "mm",
    "millimetre": "mm", "millimetres": "mm", "millimeter": "mm", "millimeters": "mm", "µm": "µm", "um": "µm",
    "micron": "µm", "microns": "µm", "micrometre": "µm", "micrometres": "µm", "micrometer": "µm",
    "micrometers": "µm", "mu": "µm", "km": "km", "ft": "ft", "feet": "ft", "foot": "ft", "'": "ft",
    "in": "in", "ins": "in",
    "inch": "in", "inches": "in", '"': "in", "''": "in",
}  # fmt: skip
"""Words for a length unit -> symbol in `logkit.units.METRES`."""

NUMBER = r"[-+]?(?:\d+(?:[.,]\d+)*|[.,]\d+)(?:[eE][-+]?\d{1,3})?"
"""A number with a decimal point or comma, as a regular expression."""

_APPROXIMATE = re.compile(
    r"^(?:~|≃|ca?\.?(?=\s|\d)|circa|approx(?:\.|imately)?|about|abt\.?|>=?|<=?|≥|≤|min\.?|max\.?)\s*", re.I
)
_FEET_INCHES = re.compile(
    r"""^(?P<ft>-?\d+(?:[.,]\d+)?)\s*(?:'(?!')|ft\.?|feet|foot)\s*-?\s*
        (?:(?P<in>\d+(?:[.,]\d+)?)?\s*(?:(?P<num>\d+)/(?P<den>\d+))?\s*(?:"|''|in\.?|ins|inch|inches)?)$""",
    re.X | re.I,
)
_INCHES = re.compile(
    r"""^(?P<in>\d+(?:[.,]\d+)?)?\s*(?:(?P<num>\d+)/(?P<den>\d+))?
        \s*(?:"|''|in\.?|ins|inch|inches)$""",
    re.X | re.I,
)
_FRACTION = re.compile(r"^(?P<whole>\d+(?!\d*/))?\s*(?P<num>\d+)/(?P<den>\d+)\s*(?P<unit>[A-Za-zµ'\"]*)\.?$")
_PLAIN = re.compile(rf"^(?P<number>{NUMBER})\s*(?P<unit>[A-Za-zµ]+|'+|\")?\.?$")
_AROUND = re.compile(r"(?<=[\da-zµ])\s*(?:±|\+/-|\+-)\s*\d+(?:[.,]\d+)?(?=\s*(?:[a-zµ'\"]|$))", re.I)
_METRES_CM = re.compile(r"^(?P<m>\d+)\s*m\s*(?P<cm>\d{1,2})(?:\s*cm)?$", re.I)
_THOUSANDS = re.compile(r"^\d{1,3}(?:,\d{3})+\.\d+$|^\d{1,3}(?:\.\d{3})+,\d+$|^\d{1,3}(?:,\d{3}){2,}$")
_SPLIT = re.compile(r"\s*(?:(?<=[\d'\"a-zµ.)])\s*-\s*|\.\.+|…|\bto\b)\s*", re.I)
_LONGEST_M = 1e7
_LARGER = {"cm": "m", "mm": "cm", "in": "ft"}
_SMALLER = {"m": "cm", "ft": "in"}


@dataclass(frozen=True, slots=True)
class Length:
    """A length as written.

    Attributes
    ----------
    metres : the length, m
    unit : symbol of the unit it was read in
    unit_written : False when the unit was not in the cell but taken from the sheet
    comma : True for a decimal comma
    approximate : True for `~`, `ca`, `?`, `>` and the like
    """

    metres: float
    unit: str
    unit_written: bool = True
    comma: bool = False
    approximate: bool = False


@dataclass(frozen=True, slots=True)
class Span:
    """Two lengths in the order written: `low` first, `high` second. They are not swapped here."""

    low: Length
    high: Length


@lru_cache(maxsize=CACHE_SIZE)
def read_length(text: str, unit: str | None = None) -> Reading[Length]:
    """One length.

    Parameters
    ----------
    text : the cell
    unit : unit of the sheet for a number without one (`m`, `cm`, `ft` …), None when the sheet does not say
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    return _length(plain, unit)


@lru_cache(maxsize=CACHE_SIZE)
def read_span(text: str, unit: str | None = None) -> Reading[Span]:
    """Two lengths such as `0-45`, in the order written.

    A unit written once counts for both. Where the second number is smaller than the first and becomes larger
    in the next unit (`45 - 1.32` on a sheet in cm), it is read that way and asked.
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    parts = [part for part in _SPLIT.split(plain, maxsplit=2) if part]
    if len(parts) != 2:
        return Reading(
            None, (error("span.unreadable", f"{quoted(plain)} is not a span", "write two numbers as 0-45"),)
        )
    first, second = _length(parts[0], None), _length(parts[1], None)
    shared = next((r.value.unit for r in (second, first) if r.value and r.value.unit_written), unit)
    first, second = _length(parts[0], shared), _length(parts[1], shared)
    if first.value is None or second.value is None:
        return Reading(None, first.remarks if first.value is None else second.remarks)
    low, high = first.value, second.value
    span, flip = _flipped(low, high)
    # a comma that might be metres is settled by the pair, so only notes and questions on both sides remain
    kept = [r for r in first.remarks + second.remarks if r.code != "length.comma_unit"]
    unique = tuple(dict.fromkeys(kept))
    return Reading(span, unique + flip)


def is_span(text: str) -> bool:
    """True when the cell holds two numbers joined as a span; a number with an exponent such as 1e-05 is none."""
    plain = clean(text)
    if number(plain)[0] is not None:
        return False
    parts = [part for part in _SPLIT.split(plain, maxsplit=2) if part]
    return len(parts) == 2 and all(any(c.isdigit() for c in part) for part in parts)


def unit_symbol(word: str) -> str | None:
    """The symbol of a unit word in any case (`CM`, `metres`), None when it is not a length unit."""
    return UNIT_WORDS.get(word.strip().strip(".").casefold())


def number(text: str) -> tuple[float | None, bool]:
    """A number from text and whether it had a decimal comma; None when it is not a finite number."""
    comma = False
    plain = text.strip()
    if _THOUSANDS.match(plain):
        decimal = "," if plain.rfind(",") > plain.rfind(".") and "." in plain else "."
        comma = decimal == ","
        plain = plain.replace("." if comma else ",", "").replace(",", ".")
    elif plain.count(",") == 1 and "." not in plain:
        comma, plain = True, plain.replace(",", ".")
    try:
        value = float(plain)
    except ValueError:
        return None, comma
    return (value, comma) if math.isfinite(value) else (None, comma)


def _length(plain: str, unit: str | None) -> Reading[Length]:
    body = _APPROXIMATE.sub("", re.sub(r"\s*\(?(?:approx\.?|ca\.?|est\.?)\)?$", "", plain, flags=re.I))
    sign = plain[:2].strip() if plain[:1] in ("~", "<", ">", "≤", "≥") else ""
    approximate = body != plain or body.endswith("?") or body.endswith("+")
    body = body.rstrip("?+ ").strip()
    remarks: list[Remark] = []
    around = _AROUND.search(body)
    if around:
        body, approximate = f"{body[: around.start()]}{body[around.end() :]}", True
        remarks.append(
            note("length.spread", f"{quoted(plain)} read as {body}; the spread is kept in the text only")
        )
    if sign[:1] in (">", "<", "≥", "≤"):
        word = "at least" if sign[0] in ">≥" else "at most"
        remarks.append(note("length.limit", f"{quoted(plain)} read as {body}, {word}"))
    both = _METRES_CM.match(body)
    if both:
        return Reading(
            Length(int(both["m"]) + int(both["cm"]) / 100, "m", True, False, approximate), tuple(remarks)
        )
    feet = _feet_inches(body)
    if feet is not None:
        return Reading(Length(feet, "ft", True, False, approximate), tuple(remarks))
    match = _PLAIN.match(body)
    if match is None:
        return Reading(
            None,
            (error("length.unreadable", f"{quoted(plain)} is not a length",
                   "write a number with its unit, for example 45 cm", allowed=_UNITS_SHOWN),),
        )  # fmt: skip
    written = match["unit"]
    symbol = unit_symbol(written) if written else unit
    if written and symbol is None:
        return Reading(
            None,
            (error("length.unknown_unit", f"{quoted(written)} is not a length unit", "use one of the units",
                   allowed=_UNITS_SHOWN, nearest=nearest(written, UNIT_WORDS)),),
        )  # fmt: skip
    value, comma = number(match["number"])
    if value is None:
        return Reading(None, (error("length.unreadable", f"{quoted(plain)} is not a finite number",
                                    "write one number with a decimal point"),))  # fmt: skip
    if abs(value) > _LONGEST_M:
        return Reading(None, (error("length.absurd", f"{quoted(plain)} is longer than any section",
                                    "check the number and its unit"),))  # fmt: skip
    if symbol is None:
        symbol = "m"
        remarks.append(
            question("length.no_unit", f"{quoted(plain)} has no unit and the sheet names none",
                     "add a unit to the cell or the heading", (f"{value:g} m", f"{value:g} cm", f"{value:g} ft"))
        )  # fmt: skip
    if comma:
        remarks.append(_comma_remark(match["number"], value, symbol, bool(written)))
    return Reading(Length(value * METRES[symbol], symbol, bool(written), comma, approximate), tuple(remarks))


def _comma_remark(digits: str, value: float, symbol: str, unit_written: bool) -> Remark:
    """What a comma in a number asks for: thousands, another unit, or just a note."""
    after = digits.rpartition(",")[2]
    if len(after) == 3 and not digits.startswith("0"):
        thousand = f"{digits.replace(',', '')} {symbol}"
        return question("length.comma_thousands", f"the comma in {quoted(digits)} may part decimals or thousands",
                        "write a decimal point", (f"{value:g} {symbol}", thousand))  # fmt: skip
    if not unit_written and symbol in _LARGER and abs(value) < 10:
        message = f"{quoted(digits)} has a decimal comma but no unit on a sheet in {symbol}"
        choices = (f"{value:g} {symbol}", f"{value:g} {_LARGER[symbol]}")
        return question("length.comma_unit", message, "write the unit into the cell", choices)
    return note("length.decimal_comma", f"{quoted(digits)} read with a decimal comma as {value:g} {symbol}")


def _feet_inches(body: str) -> float | None:
    match = _FEET_INCHES.match(body) or _INCHES.match(body)
    if match:
        groups = match.groupdict()
        feet = number(groups.get("ft") or "0")[0] or 0.0
        inches = number(groups.get("in") or "0")[0] or 0.0
        if groups.get("num"):
            if not int(groups["den"]):
                return None
            inches += int(groups["num"]) / int(groups["den"])
        if not (groups.get("ft") or groups.get("in") or groups.get("num")):
            return None
        size = abs(feet) * METRES["ft"] + inches * METRES["in"]
        return -size if body.startswith("-") else size
    match = _FRACTION.match(body)
    if match and int(match["den"]) and unit_symbol(match["unit"] or ""):
        value = float(match["whole"] or 0) + int(match["num"]) / int(match["den"])
        return value * METRES[UNIT_WORDS[match["unit"].casefold()]]
    return None


def _flipped(low: Length, high: Length) -> tuple[Span, tuple[Remark, ...]]:
    """The span, with a unit slip between its two numbers put right and asked about."""
    as_written = Span(low, high)
    if not (low.unit_written or high.unit_written) and low.unit == high.unit == "cm":
        in_metres = _metres_on_a_cm_sheet(low, high)
        if in_metres:
            return in_metres
    if low.unit != high.unit or high.metres >= low.metres or (low.unit_written and high.unit_written):
        return as_written, ()
    values = low.metres / METRES[low.unit], high.metres / METRES[high.unit]
    if low.unit in _LARGER:
        units = low.unit, _LARGER[low.unit]
    elif low.unit in _SMALLER:
        units = _SMALLER[low.unit], low.unit
    else:
        return as_written, ()
    ends = [value * METRES[unit] for value, unit in zip(values, units, strict=True)]
    # a slip of unit: a whole number of the small unit below a fraction of the large one, and close by
    plausible = (
        values[0] == int(values[0]) and values[1] != int(values[1]) and ends[0] < ends[1] < 20 * ends[0]
    )
    if not plausible:
        return as_written, ()
    asked = question(
        "span.unit_flip",
        f"the unit changes inside the span: {values[0]:g} {units[0]} to {values[1]:g} {units[1]}, "
        f"thickness {ends[1] - ends[0]:.4g} m",
        "write a unit behind each number",
        (f"{values[0]:g} {units[0]} to {values[1]:g} {units[1]}",
         f"{values[0]:g} {low.unit} to {values[1]:g} {high.unit}"),
    )  # fmt: skip
    pair = [
        Length(end, unit, False, part.comma, part.approximate)
        for end, unit, part in zip(ends, units, (low, high), strict=True)
    ]
    return Span(pair[0], pair[1]), (asked,)


def _metres_on_a_cm_sheet(low: Length, high: Length) -> tuple[Span, tuple[Remark, ...]] | None:
    """Heights with decimals that lie within a centimetre (`2.1-2.4`) are metres, and asked about."""
    values = low.metres * 100, high.metres * 100
    if not 0 < abs(values[1] - values[0]) < 1 or any(abs(v - round(v)) < 1e-9 for v in values):
        return None
    first, second = (
        Length(v, "m", False, part.comma, part.approximate)
        for v, part in zip(values, (low, high), strict=True)
    )
    shown = f"{values[0]:.6g} to {values[1]:.6g}"
    asked = question("span.unit_decimals", f"{shown} has decimals on a sheet in cm: read as metres",
                     "write a unit behind each number", (f"{shown} m", f"{shown} cm"))  # fmt: skip
    return Span(first, second), (asked,)


_UNITS_SHOWN = ("m", "cm", "mm", "ft", "in", "1'6\"")
