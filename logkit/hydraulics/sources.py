"""The register of formulas for people: a table of all of them, and everything about one.

Works on the records of every family, not of hydraulics alone. Printing is left to the command line.
"""

from __future__ import annotations

import inspect
from dataclasses import dataclass
from typing import Any

from logkit.hydraulics.checks import CheckResult, outside_checks, run_check
from logkit.hydraulics.inputs import QUARTZ_KG_M3, SALINITY, TEMPERATURE_C
from logkit.references import all_references
from logkit.registry import FORMULAS, Formula
from logkit.units import split_suffix

_FILLED = {
    "temp_c": TEMPERATURE_C,
    "salinity": SALINITY,
    "rho_s_kg_m3": QUARTZ_KG_M3,
    "rho_kg_m3": "from temp_c and salinity",
    "mu_pa_s": "from temp_c and salinity",
    "nu_m2_s": "from temp_c and salinity",
    "submerged_gravity": "from temp_c, salinity and rho_s_kg_m3; 1.65 where nu_m2_s alone is given",
    "dstar": "from a size and the fluid",
    "rep": "from a size and the fluid",
}


@dataclass(frozen=True, slots=True)
class SourceRow:
    """One formula in the table of all formulas."""

    id: str
    gives: str
    unit: str
    source: str
    equation: str
    valid: str
    scatter: str
    status: str
    outside_checks: int


@dataclass(frozen=True, slots=True)
class InputRow:
    """One input of a formula.

    Attributes
    ----------
    name : public name; a length may be given in any unit by its suffix
    unit : unit symbol, "1" for a pure number
    meaning : in words with the textbook symbol
    default : value taken when it is not given; None when it must be given
    """

    name: str
    unit: str
    meaning: str
    default: Any


@dataclass(frozen=True, slots=True)
class Description:
    """Everything about one formula, with its checks held against it now."""

    row: SourceRow
    inputs: tuple[InputRow, ...]
    in_place_of: tuple[str, ...]
    locator: str
    reference: str
    homogeneous: bool
    pitfalls: str
    checks: tuple[CheckResult, ...]


def sources_table(family: str | None = None) -> list[SourceRow]:
    """Every formula with source, valid range, scatter, status and number of outside checks.

    Parameters
    ----------
    family : first part of the ids to keep, all by default

    Returns
    -------
    rows in the order of the families
    """
    counts: dict[str, int] = {}
    for check in outside_checks():
        counts[check.formula] = counts.get(check.formula, 0) + 1
    records = [record for _, record in FORMULAS.items() if family in (None, record.family)]
    return [_row(record, counts.get(record.id, 0)) for record in records]


def describe(id: str) -> Description:
    """One formula with its inputs, its source and its checks, computed against published value.

    Raises
    ------
    UnknownNameError : no such formula
    """
    record = FORMULAS[id]
    checks = tuple(run_check(check) for check in outside_checks() if check.formula == id)
    references = all_references()
    return Description(
        row=_row(record, len(checks)),
        inputs=tuple(_inputs(record)),
        in_place_of=tuple(getattr(record.resolve, "also", ())),
        locator=record.locator,
        reference=str(references[record.source]) if record.source in references else record.source,
        homogeneous=record.homogeneous,
        pitfalls=record.pitfalls,
        checks=checks,
    )


def _row(record: Formula, checks: int) -> SourceRow:
    limits = "; ".join(str(limit) for limit in record.limits)
    valid = " | ".join(part for part in (record.domain, limits) if part) or "everywhere"
    references = all_references()
    source = references[record.source].short if record.source in references else record.source
    if record.locator:
        source = f"{source}, {record.locator}"
    return SourceRow(
        id=record.id,
        gives=record.output.meaning,
        unit=record.output.unit,
        source=source,
        equation=record.equation,
        valid=valid,
        scatter=record.scatter,
        status=record.status,
        outside_checks=checks,
    )


def _inputs(record: Formula) -> list[InputRow]:
    meanings = {quantity.name: quantity for quantity in record.inputs}
    filled = getattr(record.resolve, "wanted", ())
    rows = []
    for name, parameter in inspect.signature(record.function).parameters.items():
        quantity = meanings.get(name)
        default = None if parameter.default is inspect.Parameter.empty else parameter.default
        if default is None and name in filled:
            default = _FILLED[name]
        unit = split_suffix(name)[1]
        rows.append(
            InputRow(
                name=name,
                unit=quantity.unit if quantity else (unit.symbol if unit else "1"),
                meaning=quantity.meaning if quantity else "",
                default=default,
            )
        )
    return rows
