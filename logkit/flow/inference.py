"""`infer_flow`: from a log to its flow history. The order of the steps, and nothing else, is decided here."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from functools import cache
from typing import Any

import numpy as np

from logkit.flow.builtin_criteria import GRAVEL_MM
from logkit.flow.conflict import CONFLICT_FROM, conflict_words, find_clash, strength
from logkit.flow.criteria import CRITERIA, ClastReading
from logkit.flow.history import FlowHistory
from logkit.flow.ledger import LedgerRow, lower_limit
from logkit.flow.phases import split_phases
from logkit.flow.reading import Options, Reader, Reading, checked_options
from logkit.flow.solver import Answer, Case, Solver
from logkit.flow.states import OPEN_ABOVE, Fluid
from logkit.flow.tendency import find_tendencies, with_tendencies
from logkit.hydraulics.suspension import transport_mode
from logkit.model import Log, Phase, PhaseEstimate, Quantiles

RIM_LIMIT = 0.05
"""Mass on the rim of the grid above which the answer is one of the grid's limits."""

NEAR_CRITICAL = 0.8
"""Froude number from which plane beds and antidunes are not told apart: both were seen at 0.83-0.96."""

SHALLOW_M = 1.0
"""Depth below which the measured rivers were slower than the calibrated ranges more often than they should."""


@cache
def shared_solver() -> Solver:
    """The solver that all logs share; it keeps its tables and slices."""
    return Solver()


def infer_flow(log: Log, **options: Any) -> FlowHistory:
    """Ranges of velocity, depth, shear velocity and Froude number for every phase of a log, with reasons.

    Parameters
    ----------
    log : the log
    setting : replaces the log's setting ("river", "tidal", "turbidity", "waves", "combined", "wind", "unknown")
    temperature_c, salinity, grain_density_kg_m3 : replace the log's values
    flow_depth_m, slope : a number or (low, high) for beds that do not state their own
    prior : "off", "broad" or "river"; the setting's own by default
    read_tb : read Bouma Tb as a dilute upper plane bed (disputed, therefore a choice)

    Returns
    -------
    FlowHistory

    Raises
    ------
    ArgumentError, UnknownNameError : an option out of its range

    Notes
    -----
    Deterministic. Velocity is the depth-averaged velocity of the moment the phase formed, from published
    empirical relations; outside their ranges there is no estimate.

    References
    ----------
    soulsby_whitehouse_1997, van_rijn_1984_iii, leclair_bridge_2001, bradley_venditti_2017
    """
    chosen = checked_options(**options)
    phases = split_phases(log, chosen.setting)
    answers = read_phases(log, phases, chosen)
    solver = shared_solver()
    readings = {place: answer for place, answer in enumerate(answers) if isinstance(answer, Reading)}
    estimates: list[PhaseEstimate] = []
    rows: dict[int, tuple[LedgerRow, ...]] = {}
    solved = estimate_phases(solver, [phases[place] for place in readings], list(readings.values()))
    for place, answer in enumerate(answers):
        if isinstance(answer, Reading):
            estimates.append(next(solved))
        else:
            estimates.append(answer[0])
            rows[place] = answer[1]
    tendencies = find_tendencies(solver, log, estimates, readings)
    return FlowHistory(
        log=log,
        estimates=with_tendencies(estimates, tendencies),
        tendency=tendencies,
        solver=solver,
        readings=readings,
        rows=rows,
    )


def read_phases(log: Log, phases: Sequence[Phase], options: Options) -> list[Any]:
    """What each phase says: a `Reading` for the solver, or an answer with its ledger rows."""
    reader = Reader(log, options)
    counts: dict[int, int] = {}
    for phase in phases:
        counts[phase.bed_index] = counts.get(phase.bed_index, 0) + 1
    return [reader.read(phase, counts[phase.bed_index]) for phase in phases]


def estimate_phases(solver: Solver, phases: Sequence[Phase], readings: Sequence[Reading]) -> Any:
    """Estimates of phases that the solver answers, one after the other.

    Parameters
    ----------
    solver : answers them
    phases, readings : of equal length
    """
    cases = [reading.case for reading in readings]
    if not cases:
        return iter(())
    batch = solver.compile(cases)
    answer = solver.solve(batch)
    ends = [(i, end, c) for i, r in enumerate(readings) for end, c in (("base", r.base), ("top", r.top)) if c]
    end_velocity: dict[tuple[int, str], Quantiles] = {}
    if ends:
        found = solver.solve(solver.compile([case for _, _, case in ends])).velocity.T.tolist()
        end_velocity = {(i, end): Quantiles(*v) for (i, end, _), v in zip(ends, found, strict=True)}
    strengths = strength(solver.disagreement(batch))
    states = solver.likely_states(batch)
    modes = _modes(answer, phases, readings)
    numbers = {name: getattr(answer, name).T.tolist() for name in _QUANTITIES}
    limits: dict[Case, float] = {}

    def build(i: int) -> PhaseEstimate:
        phase, reading = phases[i], readings[i]
        conflict = float(strengths[i])
        common: dict[str, Any] = {"bed_state": states[i], "conflict": conflict, "notes": reading.notes}
        if conflict >= CONFLICT_FROM:
            return _in_conflict(solver, phase, reading, common)
        if _one_sided(reading.case):
            if reading.case not in limits:
                limits[reading.case] = lower_limit(solver, reading.case)
            deeper = [d.median_m for _, d in reading.case.depths if math.isinf(d.sd_ln_above)]
            return PhaseEstimate(phase, "estimated", bound="above", limit_velocity_m_s=limits[reading.case],
                                 limit_flow_depth_m=max(deeper, default=None), **common)  # fmt: skip
        quantities: dict[str, Any] = {q: Quantiles(*numbers[q][i]) for q in _quantities_of(phase)}
        if answer.rim[i] > RIM_LIMIT:
            common["notes"] = (*reading.notes, "The answer reaches the limits of the grid.")
        if reading.case.signature.prior == "river" and quantities["flow_depth"].p50 < SHALLOW_M:
            common["notes"] = (*common["notes"], _SHALLOW_WORDS)
        if states[i] == "upper_plane" and quantities["froude"].p90 > NEAR_CRITICAL:
            common["notes"] = (*common["notes"], "Near Fr 0.9 plane beds and antidunes pass into each other.")
        return PhaseEstimate(
            phase, "estimated", bound="range", **common, transport_mode=modes[i],
            **quantities,
            base_velocity=end_velocity.get((i, "base")), top_velocity=end_velocity.get((i, "top")),
        )  # fmt: skip

    return map(build, range(len(cases)))


_SHALLOW_WORDS = (
    "Less than 1 m deep: of the measured streams so shallow four in ten lie outside such a range, most of them "
    "slower, held back by banks, bars and plants."
)

_QUANTITIES = ("velocity", "flow_depth", "shear_velocity", "total_shear_velocity", "froude")


def _quantities_of(phase: Phase) -> tuple[str, ...]:
    """Quantities that are reported: total shear velocity for sand only, where its resistance was fitted."""
    size = phase.size
    sand = size is not None and 0.0625 <= size.middle_mm <= 2.0
    return _QUANTITIES if sand else tuple(q for q in _QUANTITIES if q != "total_shear_velocity")


def _one_sided(case: Case) -> bool:
    """True when the criteria of a case only say "faster than", and no calibrated prior ends the range.

    A prior that was fitted to measured rivers ends a range for sand that moved or lay in plane beds; no other
    prior may. A clast that had to move tells of the fastest moment, which a prior of ordinary flows must not
    cap.
    """
    ids = dict(case.signature.factors)
    clast = ids.get("largest_clast")
    if isinstance(clast, ClastReading) and clast.written_mm >= GRAVEL_MM and "bed_state" not in ids:
        return True
    prior = case.signature.prior
    for id, reading in ids.items():
        criterion = CRITERIA[id]
        if criterion.side != "band":
            continue
        if criterion.kind != "state" or prior == "river":
            return False
        if not set(reading) & set(OPEN_ABOVE):  # type: ignore[call-overload]
            return False
        if case.depths and "antidune" not in reading:  # type: ignore[operator]
            return False
    return prior != "river"


def _in_conflict(solver: Solver, phase: Phase, reading: Reading, common: dict[str, Any]) -> PhaseEstimate:
    """The estimate of a phase whose criteria clash: the earlier criterion's, the other one told beside it."""
    clash, kept = find_clash(solver, reading.case, common["conflict"])
    notes = (*reading.notes, conflict_words(clash))
    common = {**common, "notes": notes, "clash": clash}
    if _one_sided(kept):
        return PhaseEstimate(phase, "estimated", bound="above", limit_velocity_m_s=lower_limit(solver, kept),
                             **common)  # fmt: skip
    answer = solver.solve(solver.compile([kept]))
    quantities: dict[str, Any] = {
        name: Quantiles(*getattr(answer, name)[:, 0].tolist()) for name in _quantities_of(phase)
    }
    mode = _modes(answer, [phase], [replace(reading, case=kept)])[0]
    return PhaseEstimate(phase, "estimated", bound="range", transport_mode=mode, **quantities, **common)


def _modes(answer: Answer, phases: Sequence[Phase], readings: Sequence[Reading]) -> list[str]:
    """Transport mode of the bed's grains between the quartiles of the skin shear velocity.

    Skin and not total stress: form drag over dunes does not lift the grains that the bed is made of.
    """
    fluids: dict[Fluid, list[int]] = {}
    for place, reading in enumerate(readings):
        if phases[place].size is not None:
            fluids.setdefault(reading.context.fluid, []).append(place)
    modes = [""] * len(phases)
    for fluid, places in fluids.items():
        d = np.array([1e-3 * phases[p].size.middle_mm for p in places])  # type: ignore[union-attr]
        shear = answer.shear_velocity[:, places]
        low, high = (
            np.atleast_1d(transport_mode(shear[row], d, fluid.submerged_gravity, fluid.nu_m2_s))
            for row in (1, 3)
        )
        for place, slow, fast in zip(places, low.tolist(), high.tolist(), strict=True):
            modes[place] = _mode_words(slow, fast)
    return modes


def _mode_words(slow: str, fast: str) -> str:
    """One word for a range of transport modes; a bed that formed had moved."""
    slow = "traction" if slow == "at rest" else slow
    if slow == fast:
        return slow
    return f"{slow.split(' or ')[0]} to {fast.split(' or ')[-1]}"
