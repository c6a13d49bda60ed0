"""Largest clasts and measured medians inside a cell: `MPS 9,7,6,6,5 cm`, `max 12 cm b-axis`, `D50~2`."""

from __future__ import annotations

import re

from logkit.model import LargestClasts
from logkit.tables.cells.lengths import number
from logkit.tables.cells.reading import Remark, note, question, quoted
from logkit.units import METRES

_NUM = r"(?:\d+(?:\.\d+)?|\.\d+)"
_UNIT = r"mm|cm|m|µm|um|in"
_LARGEST = re.compile(
    rf"""(?<!\w)(?P<word>MPS|D\s?max|max(?:imum)?\.?(?:\s+(?:clasts?|size|grain\s*size|particle\s*size))?
        |largest(?:\s+clasts?)?|(?:clasts?|pbls?|pebbles?|cobbles?|cbls?|boulders?|blds?|blocks?)\s+(?:up\s+)?to
        |up\s+to(?=\s*~?\s*[\d.]+\s*(?:mm|cm|m)\b))
        \s*(?:\(?\s*(?:n\s*=\s*)?(?P<n>5|10)\s*\)\s*)?[:=~≤<]*\s*
        (?P<numbers>{_NUM}(?:\s*[,;/&+x]\s*{_NUM}|\s+{_NUM})*)\s*(?P<unit>{_UNIT})?(?![A-Za-z0-9])
        (?:\s*\(?(?P<axis>[abc])[\s-]?ax(?:is|es)?\)?)?""",
    re.X | re.I,
)
_MEDIAN = re.compile(
    rf"(?<!\w)D\s?_?50\s*[:=~≈]*\s*(?P<number>\d+(?:[.,]\d+)?|\.\d+)"
    rf"\s*(?P<unit>{_UNIT}|phi|φ)?(?![A-Za-z0-9])",
    re.I,
)
_OTHER_PERCENTILE = re.compile(rf"(?<!\w)D\s?_?(?!50)\d{{1,2}}\s*[:=~≈]+\s*{_NUM}\s*(?:{_UNIT})?(?![A-Za-z0-9])"
                               rf"|(?<!\w)D_?(?!50)\d{{2}}\s+{_NUM}\s*(?:{_UNIT})?(?![A-Za-z0-9])", re.I)  # fmt: skip
_CLAST_WORD = re.compile(r"(?:pbl|pebble|cobble|cbl|boulder|bld|block)s?", re.I)
_SPLIT = re.compile(r"\s*[,;/&+x]\s*|\s+")


def take_largest(text: str, remarks: list[Remark]) -> tuple[str, LargestClasts | None]:
    """The text without its largest clasts, and the clasts; None when there are none.

    A missing unit is taken as cm and asked about.
    """
    match = _LARGEST.search(text)
    if match is None:
        return text, None
    listed = match["numbers"]
    values = [v for part in _SPLIT.split(listed) if part and (v := number(part)[0])]
    if not values:
        return text, None
    unit = (match["unit"] or "cm").casefold().replace("um", "µm")
    if re.fullmatch(r"\d+,\d", listed):
        remarks.append(
            question("largest.comma", f"the comma in {quoted(listed)} may part two clasts or a decimal",
                     "write clasts with a space behind the comma",
                     (f"{values[0]:g} and {values[1]:g} {unit}", f"{listed.replace(',', '.')} {unit}"))
        )  # fmt: skip
    if not match["unit"]:
        remarks.append(
            question("largest.no_unit", f"{quoted(match[0])} has no unit", "write cm or mm behind the sizes",
                     (f"mean {_mean(values):.3g} cm", f"mean {_mean(values):.3g} mm"))
        )  # fmt: skip
    sizes = tuple(value * METRES[unit] * 1000.0 for value in values)
    if len(sizes) > 1:
        remarks.append(
            note("largest.mean", f"mean of {len(sizes)} largest clasts {_mean(values):.3g} {unit}"
                 + ("" if match["axis"] else ", axis not stated"))
        )  # fmt: skip
    clasts = LargestClasts(sizes, _mean(sizes), (match["axis"] or "").casefold())
    # `boulders to 1.2 m`: the class in front of the size stays in the text
    kept = word[0] if (word := _CLAST_WORD.match(match["word"])) else ""
    return f"{text[: match.start()]}{kept} | {text[match.end() :]}", clasts


def take_median(text: str, largest: LargestClasts | None, remarks: list[Remark]) -> tuple[str, float | None]:
    """The text without its D50, and the D50 in mm; a missing unit is that of the largest clasts, and asked."""
    percentile = _OTHER_PERCENTILE.search(text)
    if percentile:
        remarks.append(
            note(
                "grain.percentile",
                f"{quoted(percentile[0])} is not read here",
                "write it into the sheet sizes",
            )
        )
        text = f"{text[: percentile.start()]} | {text[percentile.end() :]}"
    match = _MEDIAN.search(text)
    if match is None:
        return text, None
    value = number(match["number"])[0] or 0.0
    unit = (match["unit"] or "").casefold().replace("um", "µm")
    rest = f"{text[: match.start()]} | {text[match.end() :]}"
    if unit in ("phi", "φ"):
        return rest, 2.0**-value
    if not unit:
        unit, other = ("cm", "mm") if largest else ("mm", "cm")
        remarks.append(
            question("grain.d50_no_unit", f"{quoted(match[0])} has no unit", "write the unit behind D50",
                     (f"{value:g} {unit}", f"{value:g} {other}"))
        )  # fmt: skip
    size = value * METRES[unit] * 1000.0
    return rest, size if size > 0 else None


def _mean(values: list[float] | tuple[float, ...]) -> float:
    return sum(values) / len(values)
