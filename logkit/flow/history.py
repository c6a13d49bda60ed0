"""The flow history of a log: estimates in order of time, as a table, with the ledger behind every number."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from logkit.errors import ArgumentError
from logkit.flow import words
from logkit.flow.conflict import CONFLICT_FROM
from logkit.flow.criteria import CRITERIA, criterion_texts
from logkit.flow.ledger import LedgerRow, ledger_frame, ledger_rows
from logkit.flow.reading import Reading
from logkit.flow.solver import Solver
from logkit.flow.tendency import BedPattern, Transition, bed_patterns
from logkit.model import Log, PhaseEstimate

if TYPE_CHECKING:
    import pandas as pd

_GRID_FORMULAS = ("grain.dstar", "water.density", "resistance.grain_chezy", "bedforms.froude")
"""Formulas behind the coordinates of every estimate on the grid."""

QUANTITIES = {
    "velocity": "_m_s", "flow_depth": "_m", "shear_velocity": "_m_s", "total_shear_velocity": "_m_s",
    "froude": "",
}  # fmt: skip
"""Quantity -> suffix of its unit in column names."""


@dataclass(frozen=True)
class FlowHistory:
    """The phases of a log in order of time, each with its estimate.

    Attributes
    ----------
    log : the log it was read from
    estimates : one for each phase, upward; gaps are in it with "no estimate"
    tendency : the transition between each two neighbours, None where a gap breaks the chain
    """

    log: Log
    estimates: tuple[PhaseEstimate, ...]
    tendency: tuple[Transition | None, ...]
    solver: Solver = field(repr=False)
    readings: Mapping[int, Reading] = field(repr=False)
    rows: Mapping[int, tuple[LedgerRow, ...]] = field(repr=False)

    def of_bed(self, bed: str) -> tuple[PhaseEstimate, ...]:
        """The estimates of one bed, upward.

        Raises
        ------
        UnknownNameError : no such bed; names the nearest one
        """
        return tuple(self.estimates[place] for place in self.places_of(bed))

    def to_rows(self) -> list[dict[str, Any]]:
        """The rows of `to_frame` without a frame; None stands where there is no number."""
        return [_row(estimate) for estimate in self.estimates]

    def to_frame(self) -> pd.DataFrame:
        """One row a phase; a one-sided answer leaves the quantiles empty and fills the limit columns."""
        import pandas as pd

        frame = pd.DataFrame(self.to_rows(), columns=_COLUMNS)
        numbers = [name for name in _COLUMNS if name not in _TEXT and name != "phase"]
        return frame.astype(dict.fromkeys(numbers, float))

    def tendency_frame(self) -> pd.DataFrame:
        """One row a transition between neighbouring phases."""
        import pandas as pd

        names = list(Transition.__dataclass_fields__)
        rows = [{name: getattr(t, name) for name in names} for t in self.tendency if t is not None]
        return pd.DataFrame(rows, columns=names)

    @property
    def bed_patterns(self) -> tuple[BedPattern, ...]:
        """Waxing, waning, waxing-then-waning … of every bed of two or more phases."""
        return bed_patterns(self.estimates, self.tendency)

    def ledger(self, bed: str, phase: int | None = None) -> pd.DataFrame:
        """What each criterion says about a bed: bound alone, narrowing, validity, source.

        Parameters
        ----------
        bed : name of the bed
        phase : number of the phase counted from 1 at the base, None for all of the bed

        Raises
        ------
        UnknownNameError : no such bed
        ArgumentError : the bed has no such phase
        """
        places = self.places_of(bed)
        if phase is not None:
            if not 1 <= phase <= len(places):
                raise ArgumentError("phase", phase, f"from 1 to {len(places)} in bed {bed}")
            places = places[phase - 1 : phase]
        return ledger_frame([row for place in places for row in self.ledger_at(place)])

    def ledger_at(self, place: int) -> tuple[LedgerRow, ...]:
        """Rows of the ledger of one phase, by its place in `estimates`; none for a phase that nothing speaks for."""
        phase = self.estimates[place].phase
        if place in self.readings:
            return ledger_rows(
                self.solver, self.readings[place].case, phase.section, phase.bed, phase.index + 1
            )
        return self.rows.get(place, ())

    def explain(self, bed: str) -> tuple[str, ...]:
        """The numbers of a bed as a geologist would explain them, line by line.

        Raises
        ------
        UnknownNameError : no such bed
        """
        places = self.places_of(bed)
        lines: list[str] = []
        for place in places:
            lines += words.explain_phase(self.estimates[place], self.ledger_at(place), len(places))
        inside = [t for t in self.tendency if t is not None and t.to_bed == bed == t.from_bed]
        lines += [words.explain_transition(t) for t in inside]
        lines += [
            words.explain_pattern(p) for p in self.bed_patterns
            if p.bed_index == self.estimates[places[0]].phase.bed_index and len(places) > 2
        ]  # fmt: skip
        return tuple(lines)

    @property
    def formulas(self) -> tuple[str, ...]:
        """Ids of the registered formulas behind the estimates, in order of the alphabet."""
        used: set[str] = set()
        for reading in self.readings.values():
            used.update(_GRID_FORMULAS)
            for id, _ in (*reading.case.signature.factors, *reading.case.depths):
                used.update(CRITERIA[id].formulas)
        for rows in self.rows.values():
            for row in rows:
                used.update(criterion_texts()[row.criterion].formulas)
        return tuple(sorted(used))

    def summary(self) -> dict[str, int]:
        """Numbers of phases: in all, ranges, bounds on one side, conflicts, no estimate; and of tendencies."""
        phases = [e for e in self.estimates if not self.log.beds[e.phase.bed_index].is_gap]
        called = Counter(t.tendency for t in self.tendency if t is not None)
        return {
            "phases": len(phases),
            "ranges": sum(e.bound == "range" for e in phases),
            "bounds": sum(e.bound in ("above", "below") for e in phases),
            "conflicts": sum(e.conflict >= CONFLICT_FROM for e in phases),
            "no_estimate": sum(e.status == "no estimate" for e in phases),
            "waxing": called["waxing"],
            "waning": called["waning"],
            "steady": called["steady"],
            "not_determinable": called["not determinable"],
        }

    def places_of(self, bed: str) -> list[int]:
        """Places in `estimates` of the phases of one bed, upward.

        Raises
        ------
        UnknownNameError : no such bed; names the nearest one
        """
        places = [place for place, e in enumerate(self.estimates) if e.phase.bed == bed]
        if not places:
            self.log.bed(bed)
        return places


def _quantile_columns(name: str, unit: str) -> list[str]:
    return [f"{name}_{level}{unit}" for level in ("p10", "p50", "p90")]


_COLUMNS = [
    "section", "bed", "phase", "base_m", "top_m", "setting", "structure", "d50_mm", "status", "reason", "bound",
    *(column for name, unit in QUANTITIES.items() for column in _quantile_columns(name, unit)),
    "bed_state", "transport_mode", "conflict", "tendency", "tendency_probability",
    "limit_velocity_m_s", "limit_flow_depth_m", "base_velocity_p50_m_s", "top_velocity_p50_m_s", "boundary",
    "notes",
]  # fmt: skip

_TEXT = {
    "section", "bed", "setting", "structure", "status", "reason", "bound", "bed_state", "transport_mode",
    "tendency", "boundary", "notes",
}  # fmt: skip


def _row(estimate: PhaseEstimate) -> dict[str, Any]:
    """One estimate as a row of the table."""
    phase = estimate.phase
    row: dict[str, Any] = {
        "section": phase.section, "bed": phase.bed, "phase": phase.index + 1, "base_m": phase.base_m,
        "top_m": phase.top_m, "setting": phase.setting, "structure": phase.structure,
        "d50_mm": phase.size.middle_mm if phase.size else None, "status": estimate.status,
        "reason": estimate.reason, "bound": estimate.bound,
    }  # fmt: skip
    for name, unit in QUANTITIES.items():
        found = getattr(estimate, name)
        for level in ("p10", "p50", "p90"):
            row[f"{name}_{level}{unit}"] = getattr(found, level) if found else None
    base, top = estimate.base_velocity, estimate.top_velocity
    row |= {
        "bed_state": estimate.bed_state, "transport_mode": estimate.transport_mode,
        "conflict": estimate.conflict if estimate.status == "estimated" else None,
        "tendency": estimate.tendency, "tendency_probability": estimate.tendency_probability,
        "limit_velocity_m_s": estimate.limit_velocity_m_s, "limit_flow_depth_m": estimate.limit_flow_depth_m,
        "base_velocity_p50_m_s": base.p50 if base else None, "top_velocity_p50_m_s": top.p50 if top else None,
        "boundary": phase.boundary, "notes": " ".join(estimate.notes),
    }  # fmt: skip
    return row
