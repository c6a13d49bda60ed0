"""Placed drafts into beds: names, gaps, layers of counted patterns, depths, and what logkit wrote down exactly.

Only the making of beds belongs here; nothing is checked or asked beyond names.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any

from logkit.model import Bed
from logkit.tables.details import apply_details
from logkit.tables.draft import Draft
from logkit.tables.sheet import Collector
from logkit.units import METRES

PLACES = 9
"""Decimals of a position in metres; what is smaller is noise of adding thicknesses."""


def name_rows(drafts: Sequence[Draft], found: Collector) -> None:
    """Give rows without a name one: gaps are counted, beds as well."""
    taken = {d.name for d in drafts if d.name}
    named = any(d.name for d in drafts if not d.gap)
    gaps = beds = 0
    for d in drafts:
        if d.name:
            continue
        if d.gap:
            gaps += 1
            while f"gap {gaps}" in taken:
                gaps += 1
            d.name = f"gap {gaps}"
            continue
        beds += 1
        pattern = "unnamed {}" if named else "{}"
        while pattern.format(beds) in taken:
            beds += 1
        d.name = pattern.format(beds)
        if named:
            found.add("note", "bed.unnamed", f"the bed has no name; it is called {d.name!r}", "give it a number",
                      row=d.row, column="bed", section=d.section, bed=d.name)  # fmt: skip


def build_beds(drafts: Iterable[Draft], down: bool, unit: str, found: Collector) -> list[Bed]:
    """Beds of the placed drafts, upward.

    Parameters
    ----------
    drafts : in the order of the rows; those without a place are left out (each has an error already)
    down : True for depths; the beds are then turned round
    unit : unit in which depths are kept as written
    """
    beds: list[Bed] = []
    for d in drafts:
        if not d.placed or d.end_m <= d.start_m:
            continue
        beds += _layers(d, down, unit) if d.pattern is not None else [_bed(d, down, unit, found)]
    return beds[::-1] if down else beds


def _bed(d: Draft, down: bool, unit: str, found: Collector) -> Bed:
    fields: dict[str, Any] = dict(d.fields)
    fields.update(_place(d.start_m, d.end_m, down, unit))
    fields["name"] = d.name
    if d.cells.get("details"):
        fields = apply_details(fields, d, found)
    return Bed(kind="gap" if d.gap else "bed", gap_reason=d.gap, row=d.row, written=d.written, **fields)


def _layers(d: Draft, down: bool, unit: str) -> list[Bed]:
    """The beds of a counted pattern, in the order of the rows."""
    if d.pattern is None:
        return []
    beds: list[Bed] = []
    here = d.start_m
    kept = {
        k: v for k, v in d.fields.items() if k in ("contact", "marker", "marker_sure", "notes", "confidence")
    }
    for _ in range(d.pattern.count):
        for part in d.pattern.parts:
            fields = kept if not beds else {k: kept[k] for k in ("confidence",) if k in kept}
            end = here + part.thickness_m
            beds.append(
                Bed(name=f"{d.name}.{len(beds) + 1}", lithology=part.lithology, grain=part.grain,
                    structures=part.structures, measured=False, row=d.row, written=d.written,
                    **fields, **_place(here, end, down, unit))
            )  # fmt: skip
            here = end
    return beds


def _place(start: float, end: float, down: bool, unit: str) -> dict[str, Any]:
    start, end = round(start, PLACES), round(end, PLACES)
    if not down:
        return {"base_m": start, "top_m": end}
    per_unit = METRES[unit]
    # a depth as written had few decimals; the rest is noise of the way to metres and back
    base, top = round(end / per_unit, PLACES), round(start / per_unit, PLACES)
    return {"base_m": -end, "top_m": -start, "depth_base": base, "depth_top": top}
