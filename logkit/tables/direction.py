"""Which way a table runs, and which unit its bare numbers have, where the header does not say.

Looks at all rows of a section together; places are settled afterwards in `positions`.
"""

from __future__ import annotations

import re
import statistics
from collections.abc import Sequence
from dataclasses import replace
from typing import Literal

from logkit.model import Header
from logkit.tables.cells.lengths import Length, number
from logkit.tables.draft import Draft, Manner
from logkit.tables.sheet import Collector

Direction = Literal["up", "down"]

_BARE = re.compile(r"^[~<>]?\s*[-+]?[\d.,]+\s*(?:[-–—]\s*[-+]?[\d.,]+)?$")
_PLACES = ("thickness", "base", "top", "from", "to", "position")


def settle_units(drafts: Sequence[Draft], manner: Manner, header: Header, found: Collector) -> Manner:
    """The manner of reading with a unit for every column of positions; an assumed one is asked about once."""
    if manner.unit:
        return manner
    units = dict(manner.units)
    shared = next((u for c in _PLACES if (u := units.get(c))), None)
    for column in _PLACES:
        if column not in units or units[column]:
            continue
        texts = [(d, text) for d in drafts if (text := d.cells.get(column)) and _BARE.match(text)]
        if not texts:
            continue
        assumed = (
            shared if column != "thickness" and shared else _likely_unit(column, [text for _, text in texts])
        )
        units[column] = assumed
        others = [u for u in ("m", "cm", "ft") if u != assumed]
        found.add("question", "unit.none", f"no unit is given for {column}; read in {assumed}",
                  "add the unit to the heading, or a header line # unit: cm",
                  row=texts[0][0].row, column=column, cell=texts[0][1], choices=(assumed, *others))  # fmt: skip
    return replace(manner, units=units)


def _likely_unit(column: str, texts: Sequence[str]) -> str:
    """Metres for positions; for thicknesses cm when most of them would be giants in metres."""
    if column != "thickness":
        return "m"
    values = [abs(v) for text in texts if (v := number(text.strip("~<> "))[0]) is not None]
    return "cm" if values and statistics.median(values) > 5 else "m"


def find_direction(
    drafts: Sequence[Draft], header: Header, stated: bool, called_depths: bool, found: Collector
) -> Direction:
    """The direction of a section: what the header says, unless bases and tops say the opposite.

    Depths written as negative numbers are turned round, and bases and tops exchanged in every row are put
    right; both are said. `stated` is True when the header or the caller gave a direction, `called_depths` when
    a heading of positions says depth.
    """
    pairs = [(d, d.base, d.top) for d in drafts if d.base is not None and d.top is not None]
    deeper = sum(base.metres > top.metres for _, base, top in pairs if base and top)
    depths = len(pairs) > 1 and deeper >= 0.8 * len(pairs)
    heights = len(pairs) > 1 and deeper <= 0.2 * len(pairs)
    if header.direction == "up" and depths:
        said = "the header says upward, but" if stated else "no direction is given, and"
        _ask(pairs[0][0], found, "direction.depths", f"{said} the base is the larger number in {deeper} of "
             f"{len(pairs)} rows: read as depths, downward", "write # direction: down",
             ("down (depths)", "up (base and top exchanged)"))  # fmt: skip
        return "down"
    if header.direction == "down" and heights:
        _turn(drafts, pairs, found)
        return "down"
    if header.direction == "up" and not stated and called_depths and drafts:
        _ask(drafts[0], found, "direction.depths", "no direction is given, and the positions are called depths: read "
             "downward", "write # direction: down or up", ("down (depths)", "up (heights)"))  # fmt: skip
        return "down"
    return header.direction


def _turn(
    drafts: Sequence[Draft], pairs: Sequence[tuple[Draft, Length | None, Length | None]], found: Collector
) -> None:
    """Negative depths become positive; else base and top change places in every row."""
    negative = all(base.metres <= 0 and top.metres <= 0 for _, base, top in pairs if base and top)
    if negative:
        for d in drafts:
            d.base, d.top = _negated(d.base), _negated(d.top)
        _ask(pairs[0][0], found, "direction.negative", "depths are negative; read as depths below zero",
             "leave out the minus signs", ("depths", "heights below zero"))  # fmt: skip
        return
    for d in drafts:
        d.base, d.top = d.top, d.base
    _ask(
        pairs[0][0],
        found,
        "direction.mismatch",
        "the direction is down, but the top is the larger number in every row: base and top are exchanged",
        "exchange the headings, or write # direction: up",
        ("depths, headings exchanged", "heights, upward"),
    )


def _negated(length: Length | None) -> Length | None:
    return None if length is None else replace(length, metres=-length.metres)


def _ask(d: Draft, found: Collector, code: str, message: str, remedy: str, choices: tuple[str, ...]) -> None:
    column = next((c for c in ("top", "base", "position", "thickness") if d.cells.get(c)), "")
    found.add("question", code, message, remedy, row=d.row, column=column, cell=d.cells.get(column, ""),
              choices=choices, section=d.section, bed=d.name)  # fmt: skip
