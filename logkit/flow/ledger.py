"""One row of a ledger, and the ledger of a phase as rows.

A row says what one criterion allows alone, how much it narrows the answer, and where it is from. The words of
a geologist are in `words`; the arithmetic of leaving a criterion out of many beds at once is in `solver`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, fields, replace
from functools import lru_cache
from typing import TYPE_CHECKING, Any

import numpy as np

from logkit.flow.criteria import CRITERIA, criterion_texts
from logkit.flow.grid import Array, quantiles
from logkit.flow.settings import flow_settings
from logkit.flow.slices import Signature
from logkit.flow.solver import LEDGER_LEVELS, Case, Solver
from logkit.flow.states import OPEN_ABOVE

if TYPE_CHECKING:
    import pandas as pd


@dataclass(frozen=True, slots=True)
class LedgerRow:
    """What one criterion says about one phase.

    Attributes
    ----------
    criterion, label, says : id, short name, reading in words
    bound : "band", "above" or "below"; a lower bound leaves the middle and upper velocities empty
    alone_p10_m_s, alone_p50_m_s, alone_p90_m_s : velocity from the prior and this criterion alone
    without_p10_m_s … : velocity from everything else
    narrows : times by which the criterion narrows the P10-P90 span (of ln U)
    shift : P50 with everything over P50 without the criterion
    gain_bits : information of the criterion on velocity and depth; 0.1 is little, 1 decides
    source, validity, status : where it comes from, how far it holds
    """

    section: str
    bed: str
    phase: int
    criterion: str
    label: str
    says: str
    bound: str
    alone_p10_m_s: float | None = None
    alone_p50_m_s: float | None = None
    alone_p90_m_s: float | None = None
    without_p10_m_s: float | None = None
    without_p50_m_s: float | None = None
    without_p90_m_s: float | None = None
    narrows: float | None = None
    shift: float | None = None
    gain_bits: float | None = None
    source: str = ""
    validity: str = ""
    status: str = ""


def ledger_frame(rows: list[LedgerRow]) -> pd.DataFrame:
    """Ledger rows as a table."""
    import pandas as pd

    names = [f.name for f in fields(LedgerRow)]
    return pd.DataFrame([{name: getattr(row, name) for name in names} for row in rows], columns=names)


def ledger_rows(solver: Solver, case: Case, section: str, bed: str, phase: int) -> tuple[LedgerRow, ...]:
    """The ledger of a phase that was answered on the grid.

    Parameters
    ----------
    solver, case : what answered it, and what it said
    section, bed, phase : written into the rows
    """
    return tuple(replace(row, section=section, bed=bed, phase=phase) for row in _case_rows(solver, case))


@lru_cache(maxsize=4096)
def _case_rows(solver: Solver, case: Case) -> tuple[LedgerRow, ...]:
    """The ledger of a case, kept because the beds of a log often say the same."""
    signature = case.signature
    everything = _posterior(solver, case)
    rows = []
    for id, reading in signature.factors:
        alone = Case(signature.only(id))
        without = Case(signature.without(id), case.depths)
        criterion = CRITERIA[id]
        side = _side(id, reading, signature.prior)
        rows.append(
            LedgerRow("", "", 0, id, criterion.label, criterion.words(reading), side,
                      *_alone(solver, alone, side), **_effect(solver, everything, without),
                      source=criterion.source, validity=criterion.validity, status=criterion.status)
        )  # fmt: skip
    bare = replace(signature, factors=())
    for slot, (id, depth) in enumerate(case.depths):
        others = case.depths[:slot] + case.depths[slot + 1 :]
        criterion = CRITERIA[id]
        informed = signature.prior != "off"
        alone_numbers = _alone(solver, Case(bare, ((id, depth),)), "band") if informed else (None, None, None)
        rows.append(
            LedgerRow("", "", 0, id, criterion.label, criterion.words(depth), criterion.side,
                      *alone_numbers, **_effect(solver, everything, Case(signature, others)),
                      source=criterion.source, validity=criterion.validity, status=criterion.status)
        )  # fmt: skip
    if signature.prior != "off":
        rows.append(_prior_row(solver, case, everything))
    order = {id: place for place, id in enumerate(CRITERIA)}
    return tuple(sorted(rows, key=lambda row: order.get(row.criterion, len(order))))


def _side(id: str, reading: Any, prior: str) -> str:
    """Side of the bound: a bed state that no faster flow ends is a lower bound, but under measured rivers."""
    criterion = CRITERIA[id]
    if criterion.kind == "state" and prior != "river" and set(reading) & set(OPEN_ABOVE):
        return "above"
    return criterion.side


def _prior_row(solver: Solver, case: Case, everything: Array) -> LedgerRow:
    prior = flow_settings().prior(case.signature.prior)
    text = criterion_texts()["setting"]
    alone = Case(replace(case.signature, factors=()))
    without = Case(replace(case.signature, prior="off"), case.depths)
    fitted = prior.source == "calibration"
    return LedgerRow("", "", 0, "setting", text.label, f"believed beforehand: {prior.words}", "band",
                     *_alone(solver, alone, "band"), **_effect(solver, everything, without),
                     source=text.source if fitted else "ours", validity=text.validity, status=text.status)  # fmt: skip


def lower_limit(solver: Solver, case: Case) -> float:
    """Velocity that the flow exceeded, with nine chances in ten; the P10 of the edges of the criteria.

    Parameters
    ----------
    case : its criteria are edges that faster flows pass

    Returns
    -------
    m/s
    """
    rising = [id for id, _ in case.signature.factors if CRITERIA[id].side != "below"]
    passed = np.maximum.accumulate(_by_velocity(solver, case, case.signature.only(*rising)))
    passed = passed / passed[-1]
    axis = solver.grid.velocity
    return float(np.exp(np.interp(LEDGER_LEVELS[0], passed, axis.ln_nodes)))


def upper_limit(solver: Solver, case: Case) -> float:
    """Velocity that the flow did not exceed, with nine chances in ten, from edges that slower flows pass.

    Returns
    -------
    m/s
    """
    kept = np.minimum.accumulate(_by_velocity(solver, case, case.signature))
    axis = solver.grid.velocity
    return float(np.exp(np.interp(1 - LEDGER_LEVELS[0], 1 - kept / kept[0], axis.ln_nodes)))


def _by_velocity(solver: Solver, case: Case, signature: Signature) -> Array:
    """Likelihood of each velocity, averaged over the depths that the prior and the evidence allow."""
    depth = solver.slices.believed_depth(signature.prior)
    depth = depth * solver.depth_weights(solver.compile([case]))[:, 0]
    result: Array = solver.plane(signature.unbiased()) @ (depth / depth.sum())
    return result


def _posterior(solver: Solver, case: Case) -> Array:
    """Posterior mass on (velocity, depth), normalised."""
    mass = solver.plane(case.signature) * solver.depth_weights(solver.compile([case]))[:, 0]
    result: Array = mass / max(float(mass.sum()), 1e-30)
    return result


def velocity_alone(solver: Solver, case: Case) -> tuple[float, float, float]:
    """P10, P50 and P90 of the velocity of one case, m/s."""
    column = _posterior(solver, case).sum(axis=1)[:, None]
    low, middle, high = quantiles(column, solver.grid.velocity, LEDGER_LEVELS)[:, 0].tolist()
    return low, middle, high


def _alone(solver: Solver, case: Case, side: str) -> tuple[float | None, float | None, float | None]:
    if side == "above":
        return lower_limit(solver, case), None, None
    if side == "below":
        return None, None, upper_limit(solver, case)
    return velocity_alone(solver, case)


def _effect(solver: Solver, everything: Array, without: Case) -> dict[str, float | None]:
    """Numbers of what leaving the criterion out does."""
    other = _posterior(solver, without)
    axis = solver.grid.velocity
    now = quantiles(everything.sum(axis=1)[:, None], axis, LEDGER_LEVELS)[:, 0]
    then = quantiles(other.sum(axis=1)[:, None], axis, LEDGER_LEVELS)[:, 0]
    used = everything > 0
    gain = float(np.sum(everything[used] * np.log2(everything[used] / np.maximum(other[used], 1e-30))))
    bounded = without.signature.prior != "off" or any(
        CRITERIA[id].side == "band" for id, _ in without.signature.factors
    )
    return {
        "without_p10_m_s": float(then[0]) if bounded else None,
        "without_p50_m_s": float(then[1]) if bounded else None,
        "without_p90_m_s": float(then[2]) if bounded else None,
        "narrows": math.log(then[2] / then[0]) / max(math.log(now[2] / now[0]), 1e-9),
        "shift": float(now[1] / then[1]) if bounded else None,
        "gain_bits": max(gain, 0.0),
    }


def pair_agreement(solver: Solver, case: Case, first: str, second: str) -> tuple[float, Case, Case]:
    """Agreement of two criteria of a case: log10 as in `solver.Disagreement`, and each one's own case."""

    def only(*ids: str) -> Case:
        return Case(case.signature.only(*ids), tuple(d for d in case.depths if d[0] in ids))

    result = solver.disagreement(solver.compile([only(first, second)]))
    score = min(float(result.agreement[0]), float(np.log10(max(result.support[0], 1e-30))))
    return score, only(first), only(second)


def criteria_of(case: Case) -> list[str]:
    """Ids of the criteria of a case in the order of the registry; the prior is not one of them."""
    ids = [id for id, _ in case.signature.factors] + [id for id, _ in case.depths]
    order = {id: place for place, id in enumerate(CRITERIA)}
    return sorted(ids, key=lambda id: order[id])


def says(case: Case, id: str) -> str:
    """What a criterion of a case says, in words."""
    for found, reading in (*case.signature.factors, *case.depths):
        if found == id:
            return CRITERIA[id].words(reading)
    return ""
