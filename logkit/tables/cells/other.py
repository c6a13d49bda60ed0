"""The smaller cells: colour, samples, photos, marker, plain numbers and intervals; traces are re-exported here."""

from __future__ import annotations

import re
from functools import lru_cache

from logkit.model import Colour
from logkit.tables.cells.lengths import number, unit_symbol
from logkit.tables.cells.reading import CACHE_SIZE, Reading, Remark, clean, error, note, question, quoted
from logkit.tables.cells.refused import refusal
from logkit.tables.cells.traces import (
    BioturbationCell,
    read_bioturbation_cell,
    read_fossils,
)
from logkit.units import METRES
from logkit.vocabulary import lexicon, vocabulary

__all__ = [
    "BioturbationCell", "read_bioturbation_cell", "read_colour", "read_fossils", "read_interval",
    "read_marker", "read_number", "read_photos", "read_samples",
]  # fmt: skip

_HUE = re.compile(
    r"\b(?P<hue>(?:\d{1,2}(?:\.\d)?)\s?(?:YR|GY|BG|PB|RP|R|Y|G|B|P))\s?(?P<value>\d(?:\.\d)?)"
    r"\s?/\s?(?P<chroma>\d{1,2}(?:\.\d)?)\b",
    re.I,
)
_NEUTRAL = re.compile(r"\bN\s?(?P<value>\d(?:\.\d)?)\b/?", re.I)
_PHOTO_WORD = re.compile(r"\b(?:ph(?:oto)?s?|pics?|img|images?|fig)\b\.?\s*(?:no\.?|nos\.?|#)?\s*", re.I)
_SAMPLE = re.compile(r"^[A-Za-z]{1,8}[-_]?(?:[A-Za-z\d]*[-_])?\d{1,6}[A-Za-z]?$")
_RANGE = re.compile(
    r"^(?P<stem>(?:[A-Za-z][A-Za-z\d]*[-_])?[A-Za-z_]{0,12}?)(?P<first>\d{1,8})\s*-\s*(?P<again>(?P=stem))(?P<last>\d{1,8})$"
)
_HALF_RANGE = re.compile(r"^(?P<stem>[A-Za-z]{1,8}[-_]?)(?P<first>[1-9]\d{0,5})-(?P<last>[1-9]\d{0,5})$")
_CAMERA = re.compile(r"^(?P<stem>(?:IMG|DSC[NF]?|P)[-_]?)(?P<first>\d{3,8})\s*-\s*(?P<last>\d{1,8})$", re.I)
_PHOTO = re.compile(r"^(?:IMG|DSC[NF]?|P)?[-_]?\d{1,8}$", re.I)
_ONE_NUMBER = re.compile(
    r"[~]?\s*(?P<n>[-+]?(?:\d+(?:[.,]\d+)*|[.,]\d+)(?:e[-+]?\d{1,3})?)\s*(?:s|sec|seconds?|°|deg|%|°?C)?\??",
    re.I,
)
_MOST_EXPANDED = 100
_INTERVAL = re.compile(
    r"^[~]?\s*(?P<a>-?(?:\d+(?:[.,]\d+)?|[.,]\d+)(?:e-?\d+)?)\s*(?P<ua>[A-Za-zµ]+)?\s*(?:(?:-|to|…|\.\.)\s*"
    r"(?P<b>-?(?:\d+(?:[.,]\d+)?|[.,]\d+)(?:e-?\d+)?))?\s*(?P<unit>[A-Za-zµ]+|'|\"|%|‰)?\s*\??$",
    re.I,
)
_PLUS_MINUS = re.compile(
    r"^(?P<mid>\d+(?:[.,]\d+)?)\s*(?:±|\+/-|\+-)\s*(?P<half>\d+(?:[.,]\d+)?)\s*(?P<unit>[A-Za-z]+|%)?$"
)


@lru_cache(maxsize=CACHE_SIZE)
def read_colour(text: str) -> Reading[Colour]:
    """The colour cell: the words stay, a Munsell notation is normalised, a clash of the two is asked about."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    match = _HUE.search(plain)
    if match:
        if float(match["value"]) > 10 or not 0 < float(re.match(r"[\d.]+", match["hue"])[0]) <= 10:  # type: ignore[index]
            return Reading(
                Colour(plain),
                (
                    note(
                        "colour.notation", f"{quoted(match[0])} is not on the Munsell scale; kept as written"
                    ),
                ),
            )
        hue = match["hue"].replace(" ", "").upper()
        return Reading(Colour(plain, f"{hue} {match['value']}/{match['chroma']}"))
    match = _NEUTRAL.search(plain)
    if not match:
        return Reading(Colour(plain))
    code = f"N{match['value']}"
    words = f"{plain[: match.start()]} {plain[match.end() :]}"
    return Reading(Colour(plain, code), _name_clash(code, words))


def _name_clash(code: str, words: str) -> tuple[Remark, ...]:
    """A question when the words name another neutral colour than the number."""
    names = vocabulary("colours")
    named = [p.term for p in lexicon("colours").scan(words) if p.term]
    whole = names.find(words)
    named = [whole] if whole else named
    if not named or named[0] is None or code not in names or named[0].id == code:
        return ()
    return (
        question("colour.name_clash", f"{code} is called {names[code].label}, but {named[0].label} is written",
                 "keep the number or the name", (f"{code} {names[code].label}", f"{named[0].id} {named[0].label}")),
    )  # fmt: skip


def _pieces(text: str) -> list[str]:
    return [p for p in re.split(r"\s*[,;&+]\s*|\s+(?!-)(?<!-\s)", text) if p]


@lru_cache(maxsize=CACHE_SIZE)
def read_samples(text: str) -> Reading[tuple[str, ...]]:
    """Sample names; `S7-S9` and `101-103` are taken apart, `K1-112` is one name.

    Photo numbers in the cell are left out and said.
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    rest, photos = _without_photos(plain)
    found: list[str] = []
    remarks: list[Remark] = []
    for piece in _pieces(re.sub(r"(?i)\b(?:samples?|spl|smpl)\b\.?\s*(?=\S)", "", rest)):
        names = _range_of_names(_RANGE.match(piece))
        if len(names) > 1:
            remarks.append(note("samples.range", f"{quoted(piece)} read as {len(names)} samples"))
        elif _range_of_names(_HALF_RANGE.match(piece)):
            remarks.append(note("samples.one_name", f"{quoted(piece)} is read as the name of one sample",
                                "write the letters on both sides of a range, for example S7-S9"))  # fmt: skip
        found.extend(names or [piece[:80]])
    if photos:
        remarks.append(
            note("samples.photos", f"{quoted(photos)} reads like photo numbers", "use the column photos")
        )
    return Reading(tuple(dict.fromkeys(found)) or None, tuple(remarks))


@lru_cache(maxsize=CACHE_SIZE)
def read_photos(text: str) -> Reading[tuple[str, ...]]:
    """Photo numbers; `231-34` is the four photos 231 to 234. Sample names in the cell are left out and said."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    found: list[str] = []
    others: list[str] = []
    remarks: list[Remark] = []
    for piece in _pieces(_PHOTO_WORD.sub("", plain)):
        names = _range_of_names(_RANGE.match(piece) or _CAMERA.match(piece), shortened=True)
        if not names and not _PHOTO.match(piece) and _SAMPLE.match(piece) and _PHOTO_WORD.search(plain):
            others.append(piece[:80])
            continue
        if len(names) > 1:
            remarks.append(
                note(
                    "photos.range", f"{quoted(piece)} read as {len(names)} photos, {names[0]} to {names[-1]}"
                )
            )
        found.extend(names or [piece[:80]])
    if others:
        shown = ", ".join(others)
        remarks.append(
            note("photos.samples", f"{quoted(shown)} reads like samples", "use the column samples")
        )
    return Reading(tuple(dict.fromkeys(found)) or None, tuple(remarks))


def _without_photos(text: str) -> tuple[str, str]:
    match = re.search(r"\b(?:ph(?:oto)?s?|pics?|img)\b\.?\s*[\d,\-\s]*\d", text, re.I)
    if match is None:
        return text, ""
    return f"{text[: match.start()]} {text[match.end() :]}", match[0].strip()


def _range_of_names(match: re.Match[str] | None, shortened: bool = False) -> list[str]:
    """Names of a range, empty when implausible; in a `shortened` one `231-34` runs to 234."""
    if match is None:
        return []
    stem, first, last = match["stem"], match["first"], match["last"]
    if shortened and len(last) < len(first):
        last = first[: len(first) - len(last)] + last
    start, end = int(first), int(last)
    if not start < end < start + _MOST_EXPANDED:
        return []
    return [f"{stem}{value:0{len(first)}d}" for value in range(start, end + 1)]


@lru_cache(maxsize=CACHE_SIZE)
def read_marker(text: str) -> Reading[tuple[str, bool]]:
    """A marker's name and whether it is sure: `Bentonite A?` is not."""
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    name = re.sub(
        r"(?i)^(?:\?|poss(?:ibly|ible)?\b\.?|prob(?:ably|able)?\b\.?)\s*|\s*\(?\?\)?$", "", plain
    ).strip()
    if not name:
        return Reading(None, (error("marker.no_name", f"{quoted(plain)} names no marker", "write its name"),))
    return Reading((name[:200], name == plain))


@lru_cache(maxsize=CACHE_SIZE)
def read_number(text: str, lo: float | None = None, hi: float | None = None) -> Reading[float]:
    """One number without a unit, between two limits (both allowed).

    Parameters
    ----------
    text : the cell; a unit such as s, ° or % behind the number is passed over
    lo, hi : limits, None where open
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    match = _ONE_NUMBER.fullmatch(plain)
    value, comma = number(match["n"]) if match else (None, False)
    limits = (f"from {lo:g} " if lo is not None else "") + (f"to {hi:g}" if hi is not None else "")
    if value is None:
        return Reading(None, (error("number.unreadable", f"{quoted(plain)} is not a number",
                                    f"write one number {limits}".strip()),))  # fmt: skip
    if (lo is not None and value < lo) or (hi is not None and value > hi):
        return Reading(None, (error("number.range", f"{value:g} is out of range",
                                    f"write a number {limits}".strip(), allowed=(limits.strip(),)),))  # fmt: skip
    remarks = (
        (note("number.decimal_comma", f"{quoted(plain)} read with a decimal comma as {value:g}"),)
        if comma
        else ()
    )
    return Reading(value, remarks)


@lru_cache(maxsize=CACHE_SIZE)
def read_interval(text: str, unit: str | None = None) -> Reading[tuple[float, float]]:
    """A range such as `2-3 m`, `2.5`, `2 ± 0.5 m` or `0.0002-0.0004`, low first.

    Parameters
    ----------
    text : the cell
    unit : length unit of a column that holds lengths, whose values come back in m; None for a pure number,
        where a percent or per-mille sign is applied
    """
    plain = clean(text)
    if not plain:
        return Reading(None)
    refused = refusal(plain)
    if refused:
        return Reading(None, (refused,))
    middle = _PLUS_MINUS.match(plain)
    match = None if middle else _INTERVAL.match(plain)
    found = middle or match
    values: list[float | None] = []
    if middle:
        mid, half = number(middle["mid"])[0], number(middle["half"])[0]
        values = [mid - half, mid + half] if mid is not None and half is not None else []
    elif match:
        values = [number(t)[0] for t in (match["a"], match["b"]) if t]
    symbol = (match["unit"] or match["ua"]) if match else (middle["unit"] if middle else None)
    factor = _factor(symbol, unit)
    numbers = sorted(v * factor for v in values if v is not None) if factor else []
    if not found or not numbers or None in values:
        kind = "a length or a range of lengths" if unit else "a number or a range of numbers"
        remedy = "write one value or a range, for example 2-3" + (f" {unit}" if unit else "")
        return Reading(None, (error("interval.unreadable", f"{quoted(plain)} is not {kind}", remedy),))
    if numbers[0] <= 0:
        return Reading(None, (error("interval.not_positive", f"{quoted(plain)} reaches zero or below",
                                    "write values above zero"),))  # fmt: skip
    return Reading((numbers[0], numbers[-1]))


def _factor(symbol: str | None, unit: str | None) -> float | None:
    """What a value is multiplied with; None when the unit does not fit."""
    if unit is None:
        return {None: 1.0, "%": 0.01, "‰": 0.001}.get(symbol)
    known = unit_symbol(symbol) if symbol else unit
    return METRES.get(known) if known else None
