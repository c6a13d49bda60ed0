"""Exact values beside a canonical cell, for what shorthand cannot say, as compact JSON in a column of its own.

A cell counts before its details: they are used only while the cells they belong to stand as they were written.
Only the coding of records and this rule belong here.
"""

from __future__ import annotations

import dataclasses
import functools
import json
import math
import types
import typing
import zlib
from collections.abc import Mapping
from typing import Any

from logkit.model import Bed
from logkit.tables.draft import Draft
from logkit.tables.sheet import Collector

COLUMNS_OF: dict[str, tuple[str, ...]] = {
    "name": ("bed",), "base_m": ("base", "top"), "top_m": ("base", "top"),
    "depth_base": ("base", "top"), "depth_top": ("base", "top"), "lithology": ("lithology",),
    "qualifiers": ("lithology",), "grain": ("grain",), "d50_mm": ("d50",), "largest": ("largest",),
    "sorting": ("sorting",),
    "structures": ("structures",), "structures_upward": ("structures",), "climb_angle_deg": ("structures",),
    "set_thickness": ("set_thickness",), "ripple_wavelength_m": ("ripple_wavelength",),
    "ripple_height_m": ("ripple_height",), "wave_period_s": ("wave_period",), "contact": ("contact",),
    "currents": ("palaeocurrent",), "flow_depth_m": ("flow_depth",), "slope": ("slope",),
    "bioturbation": ("bioturbation",), "colour": ("colour",), "fossils": ("fossils",), "samples": ("samples",),
    "photos": ("photos",), "marker": ("marker",), "marker_sure": ("marker",), "confidence": ("confidence",),
    "notes": ("notes",), "measured": ("measured",), "minimum_thickness": ("base", "top"),
}  # fmt: skip
"""Field of a bed -> the canonical columns it is written in."""

_HINTS = typing.get_type_hints(Bed)


def encode(value: Any) -> Any:
    """A record, tuple or plain value as JSON holds it; records become lists of their fields."""
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return [encode(getattr(value, f.name)) for f in dataclasses.fields(value)]
    if isinstance(value, tuple):
        return [encode(part) for part in value]
    return value


def decode(kind: Any, data: Any) -> Any:
    """A value of a kind (a type hint) from what JSON held.

    Raises
    ------
    ValueError : the data does not fit the kind
    """
    origin = typing.get_origin(kind)
    if origin is typing.Literal:
        if data in typing.get_args(kind):
            return data
        raise ValueError(f"{data!r} is not allowed")
    if origin in (types.UnionType, typing.Union):
        if data is None:
            return None
        return decode(next(part for part in typing.get_args(kind) if part is not type(None)), data)
    if origin is tuple:
        parts = typing.get_args(kind)
        if not isinstance(data, list):
            raise ValueError("a list is wanted")
        if parts[-1] is Ellipsis:
            return tuple(decode(parts[0], part) for part in data)
        return tuple(decode(part, value) for part, value in zip(parts, data, strict=True))
    if dataclasses.is_dataclass(kind):
        if not isinstance(data, list):
            raise ValueError("a list is wanted")
        record: Any = kind
        return record(*(decode(hint, value) for hint, value in zip(_hints(record), data, strict=True)))
    if kind is float and isinstance(data, int | float) and not isinstance(data, bool) and math.isfinite(data):
        return float(data)
    if kind in (int, str, bool) and type(data) is kind:
        return data
    raise ValueError(f"{data!r} is not a {getattr(kind, '__name__', kind)}")


@functools.cache
def _hints(kind: Any) -> tuple[Any, ...]:
    hints = typing.get_type_hints(kind)
    return tuple(hints[f.name] for f in dataclasses.fields(kind))


def mark(cells: Mapping[str, str], field: str) -> str:
    """A short mark of the cells that a field is written in; it changes when a person edits them."""
    text = "\x1f".join(cells.get(column, "") for column in COLUMNS_OF[field])
    return f"{zlib.crc32(text.encode('utf-8')):x}"


def details_text(cells: Mapping[str, str], values: Mapping[str, Any]) -> str:
    """The JSON of exact values of fields, each with the mark of its cells; "" without any."""
    if not values:
        return ""
    body = {field: [mark(cells, field), encode(value)] for field, value in values.items()}
    return json.dumps(body, separators=(",", ":"))


def apply_details(fields: dict[str, Any], draft: Draft, found: Collector) -> dict[str, Any]:
    """The fields with the exact values of a row's details put in, as far as its cells are unchanged."""
    text = draft.cells.get("details", "")
    try:
        body = json.loads(text)
        if not isinstance(body, dict):
            raise ValueError("not a JSON object")
        exact: dict[str, Any] = {}
        edited: list[str] = []
        for field, (written_mark, data) in body.items():
            if field not in COLUMNS_OF:
                raise ValueError(f"there is no field {field!r}")
            if written_mark != mark(draft.cells, field):
                edited.append(field)
                continue
            exact[field] = decode(_HINTS[field], data)
        _check({**fields, **exact})
    except (ValueError, TypeError, RecursionError) as problem:
        found.add("question", "details.unreadable", f"the exact values cannot be read ({problem}); the cells count",
                  "leave the column details as it was written, or clear it", row=draft.row, column="details",
                  cell=text, choices=("the cells",), section=draft.section, bed=draft.name)  # fmt: skip
        return fields
    if edited:
        found.add("note", "details.edited", f"cells were edited since the table was written: {', '.join(edited)}",
                  "", row=draft.row, column="details", section=draft.section, bed=draft.name)  # fmt: skip
    return {**fields, **exact}


def _check(fields: Mapping[str, Any]) -> None:
    """What no bed may have, whoever wrote it."""
    if not fields["base_m"] < fields["top_m"]:
        raise ValueError("base is not below top")
    for state in fields.get("grain", ()):
        if not 0 <= state.fraction <= 1:
            raise ValueError("a fraction is outside 0 to 1")
        if not 0 < state.size.low_mm <= state.size.high_mm:
            raise ValueError("a size interval is not above zero and rising")
    for current in fields.get("currents", ()):
        if not 0 <= current.azimuth_deg < 360:
            raise ValueError("an azimuth is outside 0 to 360")
    sets = fields.get("set_thickness")
    if sets is not None and not 0 < sets.low_m <= sets.high_m:
        raise ValueError("a set thickness is not above zero and rising")
    for name in ("d50_mm", "ripple_wavelength_m", "ripple_height_m", "wave_period_s"):
        if fields.get(name) is not None and fields[name] <= 0:
            raise ValueError(f"{name} is not above zero")
