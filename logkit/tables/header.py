"""Header lines (`# key: value`, or a sheet of keys and values) into a Header, and back into lines.

Only what stands above the table belongs here. Each known key has one reader; keys nobody knows are kept.
"""

from __future__ import annotations

import json
import math
import re
from collections.abc import Callable, Iterable, Mapping
from dataclasses import fields
from typing import Any

from logkit.errors import ArgumentError, nearest
from logkit.model import SETTINGS, Header
from logkit.tables.cells.currents import read_attitude
from logkit.tables.cells.lengths import number, read_length, unit_symbol
from logkit.tables.cells.other import read_interval
from logkit.tables.cells.reading import Reading, Remark, error, note, question, quoted
from logkit.tables.sheet import Collector
from logkit.vocabulary import vocabulary

Line = tuple[str, str, int | None]

WORDS: dict[str, dict[str, str]] = {
    "direction": {
        "up": "up", "upward": "up", "upwards": "up", "bottom up": "up", "base up": "up", "outcrop": "up",
        "down": "down", "downward": "down", "downwards": "down", "top down": "down", "core": "down", "well": "down",
    },
    "size_scale": {
        "wentworth": "wentworth", "udden-wentworth": "wentworth", "udden wentworth": "wentworth",
        "iso14688": "iso14688", "iso 14688": "iso14688", "iso 14688-1": "iso14688", "iso": "iso14688",
    },
    "thickness_type": {
        "true": "true", "tst": "true", "true stratigraphic": "true", "vertical": "vertical", "tvt": "vertical",
        "true vertical": "vertical", "measured": "measured", "along hole": "measured", "md": "measured",
    },
}  # fmt: skip
"""Keys with a closed list of words: word as written -> value."""

ALIASES = {
    "kb_elevation": "kb_elevation_m", "kb": "kb_elevation_m", "declination": "declination_deg",
    "magnetic_declination": "declination_deg", "grain_density": "grain_density_kg_m3",
    "density": "grain_density_kg_m3", "flow_depth": "flow_depth_m", "water_depth": "flow_depth_m",
    "water_temperature": "water_temperature_c", "temperature": "water_temperature_c",
    "temperature_c": "water_temperature_c", "author": "logged_by", "logger": "logged_by", "well": "section",
    "name": "section", "log": "section", "units": "unit", "datum": "coordinate_datum", "position": "coordinates",
    "scale_of_sizes": "size_scale", "dip": "bedding", "attitude": "bedding", "structural_dip": "bedding",
    "way_up": "direction", "depth_datum": "depth_reference", "method": "grain_method",
}  # fmt: skip
"""Other names of header keys."""

KEYS = tuple(f.name for f in fields(Header) if f.name != "extra")
"""Header keys that mean something to logkit."""

_WRITTEN_AS = {
    "kb_elevation_m": "kb_elevation",
    "declination_deg": "declination",
    "flow_depth_m": "flow_depth",
}
_TEXTS = frozenset({
    "title", "section", "location", "coordinates", "coordinate_datum", "logged_by", "date", "grain_method",
    "sorting_of_sizes", "depth_reference",
})  # fmt: skip
_LONGEST = 200
_LIMITS = {
    "water_temperature_c": (-2.0, 100.0, "°C"), "salinity": (0.0, 350.0, "practical salinity"),
    "grain_density_kg_m3": (500.0, 8000.0, "kg/m3"), "declination_deg": (-180.0, 180.0, "degrees"),
}  # fmt: skip
_PART = r"(\d+(?:[.,]\d+)?(?:[eE][-+]?\d+)?)"
_PAIR = re.compile(rf"^\s*{_PART}\s*°?\s*/\s*{_PART}\s*°?\s*$")
_NUMBER = re.compile(r"^\s*([-+]?(?:\d+(?:[.,]\d+)?|[.,]\d+)(?:[eE][-+]?\d+)?)\s*(.*)$", re.S)


def read_header(lines: Iterable[Line], found: Collector) -> Header:
    """The header from its lines; what cannot be read is found and left at its default."""
    values: dict[str, Any] = {}
    extra: list[tuple[str, str]] = []
    # the unit of the sheet is wanted by other keys, wherever it stands
    for key, raw, row in sorted(lines, key=lambda line: canonical_key(line[0]) != "unit"):
        name, text = canonical_key(key), plain_text(raw)
        if name not in KEYS:
            near = nearest(name, [*KEYS, *ALIASES]) if name else None
            if near:
                found.add("note", "header.unknown", f"no header key is called {key!r}; the line is kept",
                          "correct the key, or leave it if it is your own",
                          row=row, column="header", cell=key, nearest=canonical_key(near))  # fmt: skip
            extra.append((key or "note", text))
            continue
        if not text:
            continue
        if name in values:
            found.add("question", "header.doubled", f"{name} stands twice in the header; the first one is read",
                      "keep one of them", row=row, column="header", cell=text,
                      choices=(str(values[name]), text))  # fmt: skip
            continue
        unit = "m" if key.strip().casefold().endswith("_m") else values.get("unit")
        reading = read_value(name, text, unit)
        for remark in reading.remarks:
            found.remark(remark, row=row, column="header", cell=f"{key}: {text}")
        if reading.value is not None:
            values[name] = reading.value
    return Header(**values, extra=tuple(extra))


def with_options(header: Header, options: Mapping[str, Any]) -> dict[str, Any]:
    """Header fields from keyword options, which may be values or text as in a header line.

    Raises
    ------
    ArgumentError : an option that is no header key, or a value that cannot be read
    """
    changed: dict[str, Any] = {}
    for key, value in options.items():
        name = canonical_key(key)
        if name not in KEYS:
            near = nearest(key, KEYS)
            raise ArgumentError(
                key, value, f"one of the options of read_log{f'; did you mean {near!r}?' if near else ''}"
            )
        if value is None:
            continue
        if not isinstance(value, str):
            value = "/".join(map(repr, value)) if name == "bedding" else value
            value = " - ".join(map(repr, value)) if isinstance(value, tuple | list) else str(value)
        if name in _TEXTS:
            changed[name] = plain_text(value)
            continue
        unit = "m" if key.endswith("_m") else changed.get("unit") or header.unit or None
        reading = read_value(name, value, unit)
        if reading.value is None:
            said = reading.remarks[0].message if reading.remarks else "not empty"
            raise ArgumentError(key, value, f"a {name.replace('_', ' ')}: {said}")
        changed[name] = reading.value
    return changed


def canonical_key(key: str) -> str:
    """A header key in the form logkit uses.

    Examples
    --------
    >>> canonical_key("Logged by"), canonical_key("KB elevation")
    ('logged_by', 'kb_elevation_m')
    """
    plain = re.sub(r"[\s\-]+", "_", key.strip().casefold())
    return ALIASES.get(plain, plain)


def plain_text(text: str) -> str:
    """Header text on one line; text in quotation marks is taken out of them."""
    stripped = text.strip()
    if len(stripped) > 1 and stripped[0] == '"' == stripped[-1]:
        try:
            inner = json.loads(stripped)
        except ValueError:
            inner = stripped
        if isinstance(inner, str):
            return inner
    return " ".join("".join(c if c.isprintable() else " " for c in stripped).split())


def read_value(name: str, text: str, unit: str | None) -> Reading[Any]:
    """The value of one header key."""
    if name in _TEXTS:
        return Reading(text)
    if len(text) > _LONGEST:
        return Reading(
            None, (error("header.too_long", f"{name} has {len(text)} characters", "write one value"),)
        )
    return _READERS[name](name, text, unit)


def _word(name: str, text: str, unit: str | None) -> Reading[str]:
    known = WORDS[name]
    value = known.get(" ".join(text.casefold().replace("_", " ").split()))
    if value:
        return Reading(value)
    allowed = tuple(dict.fromkeys(known.values()))
    return Reading(None, (error("header.word", f"{quoted(text)} is not a {name.replace('_', ' ')}",
                                "use one of the words", allowed=allowed, nearest=nearest(text, known)),))  # fmt: skip


def _unit(name: str, text: str, unit: str | None) -> Reading[str]:
    symbol = unit_symbol(text)
    if symbol:
        return Reading(symbol)
    return Reading(None, (error("header.unit", f"{quoted(text)} is not a length unit", "use m, cm, mm or ft",
                                allowed=("m", "cm", "mm", "ft", "in")),))  # fmt: skip


def _setting(name: str, text: str, unit: str | None) -> Reading[str]:
    if text.casefold() in SETTINGS:
        return Reading(text.casefold())
    known = vocabulary("settings")
    term = known.find(text)
    if term and term.id in SETTINGS:
        return Reading(term.id, (note("header.setting", f"setting {quoted(text)} read as {term.id}"),))
    return Reading(None, (error("header.setting", f"{quoted(text)} is not a setting", "use one of the words",
                                allowed=SETTINGS, nearest=known.nearest(text)),))  # fmt: skip


def _number(name: str, text: str, unit: str | None) -> Reading[float]:
    match = _NUMBER.match(text)
    value = number(match[1])[0] if match else None
    if value is None or match is None:
        return Reading(None, (error("header.number", f"{quoted(text)} is not a number", "write one number"),))
    low, high, words = _LIMITS[name]
    tail = match[2].strip().casefold().rstrip(".")
    if name == "declination_deg" and tail.lstrip("°deg").strip() in ("w", "west"):
        value = -abs(value)
    if name == "grain_density_kg_m3" and (value < 20 or tail.startswith(("g/cm", "g cm"))):
        value *= 1000
    if not low <= value <= high:
        said = f"{quoted(text)} is outside {low:g} to {high:g} {words}"
        return Reading(None, (error("header.range", said, "check the number"),))
    return Reading(value)


def _elevation(name: str, text: str, unit: str | None) -> Reading[float]:
    reading = read_length(text, unit or "m")
    if reading.value is None:
        return Reading(None, reading.remarks)
    kept = tuple(r for r in reading.remarks if r.level != "note")
    return Reading(reading.value.metres, kept)


def _bedding(name: str, text: str, unit: str | None) -> Reading[tuple[float, float]]:
    match = _PAIR.match(text)
    if match is None:
        return read_attitude(text)
    first, second = (number(part)[0] or 0.0 for part in match.groups())
    remarks: tuple[Remark, ...] = ()
    if second > 90 and first <= 90:
        remarks = (
            question(
                "header.bedding",
                f"{quoted(text)} read as dip {first:g} towards {second:g}",
                "write dip direction/dip",
                (f"{second:g}/{first:g}", f"{first:g}/{second:g}"),
            ),
        )
        first, second = second, first
    if first > 360 or second > 90:
        return Reading(None, (error("header.bedding", f"{quoted(text)} is no dip direction and dip",
                                    "write dip direction/dip, for example 140/22"),))  # fmt: skip
    return Reading((first % 360, second), remarks)


def _interval(name: str, text: str, unit: str | None) -> Reading[tuple[float, float]]:
    reading = read_interval(text, "m" if name == "flow_depth_m" else None)
    value = reading.value
    if value is not None and not (0 < value[0] <= value[1] and math.isfinite(value[1])):
        return Reading(
            None, (error("header.range", f"{quoted(text)} is not above zero", "check the number"),)
        )
    return reading


_READERS: dict[str, Callable[[str, str, str | None], Reading[Any]]] = {
    **dict.fromkeys(WORDS, _word), **dict.fromkeys(_LIMITS, _number), "unit": _unit, "setting": _setting,
    "kb_elevation_m": _elevation, "bedding": _bedding, "flow_depth_m": _interval, "slope": _interval,
}  # fmt: skip


def header_lines(header: Header) -> list[tuple[str, str]]:
    """Keys and values as they are written above a table; defaults are left out."""
    lines: list[tuple[str, str]] = []
    plain = Header()
    for key in KEYS:
        value = getattr(header, key)
        if value == getattr(plain, key) and key not in ("direction", "unit"):
            continue
        if value == "" or value is None:
            continue
        lines.append((_WRITTEN_AS.get(key, key), _line_text(key, value)))
    return lines + [(key, _quoted_if_needed(text)) for key, text in header.extra]


def _line_text(key: str, value: Any) -> str:
    if isinstance(value, str):
        return _quoted_if_needed(value)
    unit = " m" if key.endswith("_m") else ""
    if isinstance(value, tuple):
        return ("/" if key == "bedding" else " - ").join(repr(float(part)) for part in value) + unit
    return repr(float(value)) + unit


def _quoted_if_needed(text: str) -> str:
    """Text that reads back the same: in quotation marks where spaces, marks or line ends would be lost."""
    return text if text == plain_text(text) else json.dumps(text, ensure_ascii=False)
