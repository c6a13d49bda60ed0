"""Styles: what a drawing looks like, read from TOML files that inherit from each other.

The sections of a style file are the classes of `style_records`, its keys their fields: a key that is no field is
an error that names the nearest one. What the values do is decided where they are used, not here.
"""

from __future__ import annotations

import dataclasses
import types
from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Any

from logkit.drawing.data_file import (
    DataText,
    Origin,
    Reader,
    field_types,
    key_of,
    read_data,
)
from logkit.drawing.style_records import (
    LEAST_PAGE_MM,
    PAPER_MM,
    ColourStyle,
    FontStyle,
    LineStyle,
    NoteStyle,
    PageStyle,
    PaletteStyle,
    RibbonStyle,
    Style,
    TextureStyle,
    TrackStyle,
)
from logkit.errors import ArgumentError, LogkitError, UnknownNameError
from logkit.resources import shipped

BASE_STYLE = "report"
"""The style all others inherit from in the end."""

LEAST_TYPE_PT = 6.0
"""No text on a drawing is set smaller than this, points."""

LEAST_LINE_MM = 0.05
"""No line of a style is thinner than this, mm."""


_SECTIONS: dict[str, Any] = {
    "page": PageStyle,
    "fonts": FontStyle,
    "lines": LineStyle,
    "colours": ColourStyle,
    "palette": PaletteStyle,
    "texture": TextureStyle,
    "ribbon": RibbonStyle,
    "notes": NoteStyle,
}
_TOP = ("label", "source", "inherits", "tracks", *_SECTIONS)


def style_folder() -> Path:
    """Folder of the styles that ship with logkit."""
    return shipped("styles")


def list_styles() -> dict[str, str]:
    """Names of the shipped styles with their labels, the base style first."""
    names = sorted(path.stem for path in style_folder().glob("*.toml"))
    names.sort(key=lambda name: name != BASE_STYLE)
    return {name: load_style(name).label for name in names}


def load_style(name_or_path: str | Path | Style, overrides: Mapping[str, Any] | None = None) -> Style:
    """A style by name or from a file.

    Parameters
    ----------
    name_or_path : shipped name ("report", "field-mono"), path of a TOML file, or a style
    overrides : sections and keys that replace those of the style, as in a file: {"page": {"scale": 20}}

    Raises
    ------
    UnknownNameError : no shipped style has that name
    DataFileError : the file has an unknown key, a wrong type or a value out of range; names file and line
    """
    if isinstance(name_or_path, Style):
        if not overrides:
            return name_or_path
        tables, name = _as_tables(name_or_path), name_or_path.name
        origin: Origin = {}
    else:
        if not overrides:
            path = Path(name_or_path)
            return _by_name(str(name_or_path)) if path.suffix != ".toml" else _build_file(path)
        tables, origin, name = _merged(_find(name_or_path), ())
    text = _overrides_text(overrides)
    _merge(tables, text.tables, text, origin, ())
    return _build(tables, origin, name)


def dump(style: Style) -> str:
    """The style as a TOML file with every key; loading it gives an equal style."""
    lines: list[str] = []
    for key, value in _as_tables(style).items():
        if isinstance(value, dict):
            _dump_table(lines, key, value)
        else:
            lines.append(f"{key} = {_toml(value)}")
    return "\n".join(lines).strip() + "\n"


@cache
def _by_name(name: str) -> Style:
    return _build_file(_find(name))


def _find(name_or_path: str | Path) -> Path:
    path = Path(name_or_path)
    if path.suffix == ".toml":
        return path
    shipped_path = style_folder() / f"{name_or_path}.toml"
    if not shipped_path.is_file() or path.name != str(name_or_path):
        known = [entry.stem for entry in style_folder().glob("*.toml")]
        raise UnknownNameError("style", str(name_or_path), known)
    return shipped_path


def _build_file(path: Path) -> Style:
    tables, origin, name = _merged(path, ())
    return _build(tables, origin, name)


def _merged(path: Path, seen: tuple[Path, ...]) -> tuple[dict[str, Any], Origin, str]:
    """The tables of a style file over those it inherits from."""
    data = read_data(path)
    parent = data.tables.get("inherits")
    resolved = path.resolve()
    if resolved in seen:
        raise data.fail(("inherits",), "the style inherits from itself in a circle.", "Name another style.")
    is_base = resolved == (style_folder() / f"{BASE_STYLE}.toml").resolve()
    if parent is not None and not isinstance(parent, str):
        raise data.fail(("inherits",), "inherits must be the name or path of a style.")
    tables: dict[str, Any] = {}
    origin: Origin = {}
    if not is_base:
        beside = path.parent / str(parent)
        above = beside if parent and parent.endswith(".toml") else Path(parent or BASE_STYLE)
        try:
            tables, origin, _ = _merged(_find(above), (*seen, resolved))
        except UnknownNameError as problem:
            raise data.fail(("inherits",), problem.what, problem.remedy) from None
    own = {key: value for key, value in data.tables.items() if key != "inherits"}
    _merge(tables, own, data, origin, ())
    return tables, origin, path.stem


def _merge(
    into: dict[str, Any], new: Mapping[str, Any], data: DataText, origin: Origin, path: tuple[str, ...]
) -> None:
    for key, value in new.items():
        here = (*path, key)
        if isinstance(value, Mapping):
            if not isinstance(into.get(key, {}), dict):
                raise data.fail(here, f"{'.'.join(here)} must be a value, not a table.")
            into[key] = dict(into.get(key, {}))
            _merge(into[key], value, data, origin, here)
        else:
            into[key] = value
        origin[here] = data


def _build(tables: dict[str, Any], origin: Origin, name: str) -> Style:
    """Check merged tables and make the style."""
    check = Reader(origin, name)
    check.keys(tables, _TOP, ())
    sections = {key: check.record(cls, tables.get(key, {}), (key,)) for key, cls in _SECTIONS.items()}
    tracks = check.table(tables.get("tracks", {}), ("tracks",))
    order = check.value(tuple[str, ...], tracks.get("order", ()), ("tracks", "order"))
    named = {
        key: check.record(TrackStyle, value, ("tracks", key))
        for key, value in tracks.items()
        if key != "order"
    }
    for track in order:
        if track not in named:
            raise check.at(("tracks", "order")).unknown(("tracks", "order", track), named)
    style = Style(
        name=name,
        label=check.value(str, tables.get("label", name), ("label",)),
        source=check.value(str, tables.get("source", ""), ("source",)),
        order=order,
        tracks=types.MappingProxyType(named),
        **sections,
    )
    _check_ranges(style, check)
    return style


def _check_ranges(style: Style, check: Reader) -> None:
    """Limits that hold in every style: legible type, visible lines, real paper, pairs in order."""
    for name in field_types(FontStyle):
        size = getattr(style.fonts, name)
        if isinstance(size, float) and size < LEAST_TYPE_PT:
            path = ("fonts", name)
            raise check.at(path).fail(
                path, f"fonts.{name} is {size:g} pt; at least {LEAST_TYPE_PT:g} is legible."
            )
    for name in field_types(LineStyle):
        if getattr(style.lines, name) < LEAST_LINE_MM:
            path = ("lines", name)
            raise check.at(path).fail(path, f"lines.{name} must be at least {LEAST_LINE_MM} mm.")
    size = style.page.size
    if isinstance(size, str) and size not in PAPER_MM and size != "roll":
        problem = check.at(("page", "size")).unknown(("page", size), [*PAPER_MM, "roll"])
        raise check.at(("page", "size")).fail(
            ("page", "size"), f"there is no page size {size!r}.", problem.remedy
        )
    if not isinstance(size, str) and (len(size) != 2 or min(size) < LEAST_PAGE_MM):
        path = ("page", "size")
        raise check.at(path).fail(path, f"page.size must be two lengths of at least {LEAST_PAGE_MM:g} mm.")
    pairs = {
        ("ribbon", "velocity"): style.ribbon.velocity,
        ("ribbon", "flow_depth"): style.ribbon.flow_depth,
        ("texture", "scallop"): style.texture.scallop,
    }
    for path, pair in pairs.items():
        if len(pair) != 2 or not 0 < pair[0] < pair[1]:
            raise check.at(path).fail(
                path, f"{'.'.join(path)} must be two numbers above zero, the smaller first."
            )
    if style.texture.magnify <= 0:
        path = ("texture", "magnify")
        raise check.at(path).fail(path, "texture.magnify must be above zero.")
    if style.page.scale <= 0:
        raise check.at(("page", "scale")).fail(("page", "scale"), "page.scale must be above zero.")
    for name, track in style.tracks.items():
        if track.width <= 0 or track.gap < 0:
            path = ("tracks", name)
            raise check.at(path).fail(
                path, f"tracks.{name} needs a width above zero and a gap of zero or more."
            )


def _as_tables(style: Style) -> dict[str, Any]:
    tables: dict[str, Any] = {"label": style.label, "source": style.source}
    tables["page"] = _plain(style.page)
    tables["tracks"] = {"order": list(style.order)} | {k: _plain(v) for k, v in style.tracks.items()}
    return tables | {key: _plain(getattr(style, key)) for key in _SECTIONS if key != "page"}


def _plain(value: Any) -> Any:
    if dataclasses.is_dataclass(value):
        return {key_of(f.name): _plain(getattr(value, f.name)) for f in dataclasses.fields(value)}
    if isinstance(value, Mapping):
        return {key: _plain(item) for key, item in value.items()}
    if isinstance(value, tuple):
        return [_plain(item) for item in value]
    return value


def _dump_table(lines: list[str], path: str, table: dict[str, Any]) -> None:
    values = {k: v for k, v in table.items() if not isinstance(v, dict)}
    if values:
        lines += ["", f"[{path}]"] + [f"{key} = {_toml(value)}" for key, value in values.items()]
    for key, value in table.items():
        if isinstance(value, dict):
            _dump_table(lines, f"{path}.{key}", value)


def _toml(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        escaped = value.replace("\\", "\\\\").replace('"', '\\"')
        return '"' + "".join(c if c.isprintable() else f"\\U{ord(c):08x}" for c in escaped) + '"'
    if isinstance(value, list):
        return "[" + ", ".join(_toml(item) for item in value) + "]"
    return repr(value)


def _overrides_text(overrides: Mapping[str, Any]) -> DataText:
    """Overrides given in memory, checked like a file."""
    for key in overrides:
        if not isinstance(key, str):
            raise ArgumentError("overrides", key, "a table of sections by name")
    text = DataText("overrides", "")
    text.tables = dict(overrides)
    if "inherits" in text.tables:
        raise LogkitError("Overrides cannot inherit.", "Pass the style's name instead.")
    return text
