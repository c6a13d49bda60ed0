"""Logs as data frames, and data frames as sheets: the table in memory that a written file has on disk.

The columns are those of `canonical`; only what both the frame and the file share belongs here.
"""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from dataclasses import fields
from typing import TYPE_CHECKING, Any

from logkit.model import Bed, Log
from logkit.tables.build import PLACES
from logkit.tables.canonical import ALWAYS, COLUMNS, NUMBERS, bed_cells
from logkit.tables.checks import mark_minimum
from logkit.tables.details import COLUMNS_OF, details_text
from logkit.tables.draft import Draft, Manner
from logkit.tables.rows import read_row
from logkit.tables.sheet import Collector, Row, Sheet, plain_number
from logkit.tables.text import plain_cell
from logkit.units import METRES

if TYPE_CHECKING:
    import pandas as pd

_DEFAULTS = {f.name: f.default for f in fields(Bed) if f.name in COLUMNS_OF}
_PLACED = frozenset({"base_m", "top_m", "depth_base", "depth_top", "name", "minimum_thickness"})


def log_to_frame(log: Log) -> pd.DataFrame:
    """One row a bed or gap in canonical columns, upward; `log_from_frame` gives the beds back.

    Returns
    -------
    Text columns hold "" where nothing is written, number columns NaN. Positions `base_m` and `top_m` are heights,
    m; a log of depths has `depth_base` and `depth_top` in its unit as well. The original wording is in
    `as_written`. In-bed size readings and the header are not part of the frame.
    """
    import pandas as pd

    rows = table_rows(log, depths=False)
    names = columns_used(rows)
    frame = pd.DataFrame(
        {
            COLUMNS[name]: [row.get(name, math.nan if name in NUMBERS else "") for row in rows]
            for name in names
        }
    )
    if log.header.direction == "down":
        place = list(frame.columns).index("top_m") + 1
        for offset, name in enumerate(("depth_base", "depth_top")):
            values = [math.nan if (v := getattr(bed, name)) is None else v for bed in log.beds]
            frame.insert(place + offset, name, values)
    return frame


def sheet_from_frame(frame: pd.DataFrame) -> Sheet:
    """A sheet from a data frame; missing values are empty cells, dates are kept as dates."""
    import datetime

    headings = [str(name) for name in frame.columns]
    dropped = {"depth_base", "depth_top"} if {"base_m", "top_m"} <= set(headings) else set()
    kept = [i for i, name in enumerate(headings) if name not in dropped]
    sheet = Sheet(rows=[Row(None, tuple(headings[i] for i in kept))])
    for number, values in enumerate(frame.itertuples(index=False, name=None), start=1):
        cells = []
        for place, i in enumerate(kept):
            value = values[i]
            if isinstance(value, datetime.date | datetime.datetime) and value == value:
                sheet.dates.add((number, place))
            cells.append(number_or_text(value))
        sheet.rows.append(Row(number, tuple(cells)))
    return sheet


def number_or_text(value: Any) -> str:
    """A value as the text of a cell; whole numbers without decimals, "" for a missing value."""
    if value is None or value is Ellipsis:
        return ""
    if isinstance(value, str):
        return value.strip()
    try:
        if value != value:
            return ""
    except (TypeError, ValueError):
        return str(value)
    if isinstance(value, bool):
        return "yes" if value else "no"
    if hasattr(value, "item"):
        value = value.item()
    if isinstance(value, float):
        return plain_number(value)
    text = str(value)
    return "" if text in ("NaT", "<NA>") else text


def columns_used(rows: Sequence[dict[str, Any]]) -> list[str]:
    """Canonical columns in order: those always written, and those that some row fills."""
    filled = {name for row in rows for name in row}
    return [name for name in COLUMNS if name in ALWAYS or name in filled]


def table_rows(log: Log, depths: bool) -> list[dict[str, Any]]:
    """The cells of every bed by canonical column, with the original wording and the exact values that need it.

    Parameters
    ----------
    depths : True writes a downward log as depths, from the top down; False writes heights, upward
    """
    down = log.header.direction == "down"
    unit = _depth_unit(log)
    expected = [bed.minimum_thickness for bed in mark_minimum([_plain(bed) for bed in log.beds])]
    rows = []
    for bed, minimum in zip(log.beds, expected, strict=True):
        cells = bed_cells(bed, log.header.section)
        exact: dict[str, Any] = {}
        if down and depths:
            exact.update(_depth_cells(bed, unit, cells))
        elif not down:
            heights = {name: getattr(bed, name) for name in ("base_m", "top_m")}
            exact.update(
                {name: height for name, height in heights.items() if round(height, PLACES) != height}
            )
        else:
            exact.update(
                {name: getattr(bed, name) for name in ("base_m", "top_m", "depth_base", "depth_top")}
            )
        if bed.minimum_thickness != minimum:
            exact["minimum_thickness"] = bed.minimum_thickness
        texts = cell_texts(cells)
        exact.update(_not_read_back(bed, texts, log))
        details = details_text(texts, exact)
        if bed.written:
            kept = {name: text for name, text in bed.written if name not in ("as_written", "details")}
            texts["as_written"] = plain_cell(json.dumps(kept, ensure_ascii=False, separators=(",", ":")))
        if details:
            texts["details"] = details
        rows.append({name: cells[name] if name in NUMBERS else text for name, text in texts.items() if text})
    return rows[::-1] if down and depths else rows


def _plain(bed: Bed) -> Bed:
    from dataclasses import replace

    return replace(bed, minimum_thickness=False) if bed.minimum_thickness else bed


def _depth_unit(log: Log) -> str:
    return log.header.unit if log.header.unit in METRES else "m"


def _depth_cells(bed: Bed, unit: str, cells: dict[str, Any]) -> dict[str, Any]:
    """Put depths in place of heights; what they do not give back exactly is returned."""
    factor = METRES[unit]
    exact: dict[str, Any] = {}
    for name, depth, height in (("base", bed.depth_base, bed.base_m), ("top", bed.depth_top, bed.top_m)):
        shown = depth if depth is not None else round(-height / factor, PLACES)
        cells[name] = shown
        read = round(shown * factor, PLACES)
        if -read != height:
            exact[f"{name}_m"] = height
        if depth is None or round(shown * factor / factor, PLACES) != depth:
            exact[f"depth_{name}"] = depth
    return exact


def cell_texts(cells: dict[str, Any]) -> dict[str, str]:
    """Cells as the text they have when the file is read again."""
    return {
        name: plain_cell(value) if isinstance(value, str) else number_or_text(float(value))
        for name, value in cells.items()
    }


def _not_read_back(bed: Bed, texts: dict[str, str], log: Log) -> dict[str, Any]:
    """Fields that the canonical cells alone would not give back the same."""
    manner = Manner(
        unit=log.header.unit or None,
        units={
            "d50": "mm",
            "largest": "mm",
            "set_thickness": "m",
            "ripple_wavelength": "m",
            "ripple_height": "m",
            "flow_depth": "m",
        },
        scale=log.header.size_scale,
    )
    described = {
        k: v for k, v in texts.items() if k not in ("base", "top", "section", "as_written", "details")
    }
    draft = read_row(Draft(None, texts.get("bed", ""), "", described), manner, Collector())
    exact: dict[str, Any] = {}
    for name, default in _DEFAULTS.items():
        if name in _PLACED:
            continue
        value = getattr(bed, name)
        if draft.fields.get(name, default) != value:
            exact[name] = value
    if draft.name != bed.name:
        exact["name"] = bed.name
    return exact
