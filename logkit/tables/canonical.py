"""A bed as canonical cells: one field in one column, worded so that it reads back.

Only the wording belongs here. What the wording cannot carry goes into the column `details`.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from logkit.model import Bed, Contact, CurrentReading, LargestClasts, SetThickness, Structure
from logkit.vocabulary import vocabulary

COLUMNS: dict[str, str] = {
    "section": "section", "bed": "bed", "gap": "gap", "base": "base_m", "top": "top_m", "lithology": "lithology",
    "grain": "grain", "d50": "d50_mm", "largest": "largest_mm", "sorting": "sorting", "structures": "structures",
    "set_thickness": "set_thickness_m", "ripple_wavelength": "ripple_wavelength_m",
    "ripple_height": "ripple_height_m", "wave_period": "wave_period_s", "contact": "contact",
    "palaeocurrent": "palaeocurrent", "flow_depth": "flow_depth_m", "slope": "slope",
    "bioturbation": "bioturbation", "colour": "colour", "fossils": "fossils", "samples": "samples",
    "photos": "photos", "marker": "marker", "measured": "measured", "confidence": "confidence", "notes": "notes",
    "as_written": "as_written", "details": "details",
}  # fmt: skip
"""Canonical column -> heading in the written table."""

ALWAYS = frozenset({"bed", "base", "top", "lithology", "grain", "structures", "notes"})
"""Columns that are written even when no bed fills them."""

NUMBERS = frozenset({"base", "top", "d50", "ripple_wavelength", "ripple_height", "wave_period"})
"""Columns whose cells are plain numbers."""


def bed_cells(bed: Bed, section: str) -> dict[str, Any]:
    """The canonical cells of a bed: text, or numbers in the columns of `NUMBERS`; empty cells are left out.

    Positions are heights in metres; a table of depths changes them afterwards.
    """
    cells: dict[str, Any] = {
        "section": section,
        "bed": bed.name,
        "gap": bed.gap_reason if bed.is_gap else "",
        "base": bed.base_m,
        "top": bed.top_m,
        "lithology": _lithology(bed),
        "grain": "→".join(
            state.size.label or _size(state.size.low_mm, state.size.high_mm) for state in bed.grain
        ),
        "d50": bed.d50_mm,
        "largest": _largest(bed.largest),
        "sorting": vocabulary("sorting")[bed.sorting].label
        if bed.sorting in vocabulary("sorting")
        else bed.sorting,
        "structures": _structures(bed.structures, bed.structures_upward),
        "set_thickness": _sets(bed.set_thickness),
        "ripple_wavelength": bed.ripple_wavelength_m,
        "ripple_height": bed.ripple_height_m,
        "wave_period": bed.wave_period_s,
        "contact": _contact(bed.contact),
        "palaeocurrent": _currents(bed.currents),
        "flow_depth": _interval(bed.flow_depth_m),
        "slope": _interval(bed.slope),
        "bioturbation": _bioturbation(bed),
        "colour": bed.colour.text if bed.colour is not None else "",
        "fossils": ", ".join(_label("fossils", id) for id in bed.fossils),
        "samples": ", ".join(bed.samples),
        "photos": ", ".join(bed.photos),
        "marker": bed.marker + ("" if bed.marker_sure or not bed.marker else " ?"),
        "measured": "" if bed.measured else "no",
        "confidence": bed.confidence,
        "notes": bed.notes,
    }
    return {name: value for name, value in cells.items() if value not in ("", None)}


def _label(kind: str, id: str) -> str:
    terms = vocabulary(kind)
    return terms[id].label if id in terms else id


def _size(low_mm: float, high_mm: float) -> str:
    return f"{low_mm:.6g} mm" if low_mm == high_mm else f"{low_mm:.6g}-{high_mm:.6g} mm"


def _lithology(bed: Bed) -> str:
    words = [_label("qualifiers", id) for id in bed.qualifiers]
    if bed.lithology:
        words.append(_label("lithologies", bed.lithology))
    return ", ".join(reversed(words))


def _largest(clasts: LargestClasts | None) -> str:
    if clasts is None:
        return ""
    axis = f" {clasts.axis}-axis" if clasts.axis else ""
    return f"MPS {', '.join(f'{size:.6g}' for size in clasts.sizes_mm)} mm{axis}"


def _structures(structures: Sequence[Structure], upward: bool) -> str:
    words = []
    for structure in structures:
        label = _label("structures", structure.term)
        words.append(label if structure.sure else f"{label}?")
    return (" passing up into " if upward else ", ").join(words)


def _sets(sets: SetThickness | None) -> str:
    if sets is None:
        return ""
    size = f"{sets.low_m:.6g}" if sets.low_m == sets.high_m else f"{sets.low_m:.6g}-{sets.high_m:.6g}"
    mean = f", mean {sets.mean_m:.6g} m" if sets.mean_m is not None and sets.low_m != sets.high_m else ""
    count = f" n={sets.count}" if sets.count is not None else ""
    return f"{size} m{mean}{count}"


def _contact(contact: Contact | None) -> str:
    if contact is None:
        return ""
    words = _label("contacts", contact.kind) + ("" if contact.sure else "?")
    if contact.relief_m is not None:
        words += f", relief {contact.relief_m:.6g} m"
    if contact.zone_m is not None:
        words += f" over {contact.zone_m:.6g} m"
    return words


def _currents(currents: Sequence[CurrentReading]) -> str:
    words = []
    for current in currents:
        name = "" if current.indicator == "unspecified" else _label("indicators", current.indicator) + " "
        azimuth = f"{current.azimuth_deg:05.1f}".removesuffix(".0") if current.azimuth_deg < 360 else "0"
        dip = (
            f"{current.dip_deg:g}{'→' if current.nature == 'line' else '/'}"
            if current.dip_deg is not None
            else ""
        )
        axis = f"-{(current.azimuth_deg + 180) % 360:03.0f}" if current.sense == "axis" and not dip else ""
        words.append(f"{name}{dip}{azimuth}{axis}{'' if current.sure else '?'}")
    return ", ".join(words)


def _interval(pair: tuple[float, float] | None) -> str:
    if pair is None:
        return ""
    return f"{pair[0]!r}" if pair[0] == pair[1] else f"{pair[0]!r}-{pair[1]!r}"


def _bioturbation(bed: Bed) -> str:
    value = bed.bioturbation
    if value is None:
        return ""
    grade = f"{value.low:g}" if value.low == value.high else f"{value.low:g}-{value.high:g}"
    prefix = {"taylor_goldring": "TG ", "ichnofabric": "ii "}.get(value.scheme, "")
    return f"{prefix}{grade}"
