"""When the criteria of a phase leave no common ground: how much, and which pair clashes.

The numbers come from sharp likelihoods (`Solver.disagreement`); with the calibrated allowances nearly
nothing would conflict. A conflict is never averaged away: both readings are told.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations

import numpy as np

from logkit.flow.criteria import CRITERIA
from logkit.flow.grid import Array
from logkit.flow.ledger import criteria_of, lower_limit, pair_agreement, says
from logkit.flow.solver import Case, Disagreement, Solver
from logkit.model import Clash, Quantiles

TENSION_FROM, CONFLICT_FROM = 0.25, 0.5
"""Strengths from which there is a tension and a conflict: half a decade and one decade (judgement)."""


def strength(disagreement: Disagreement) -> Array:
    """Strength of the conflict of each bed, 0 (agree) to 1 (no flow satisfies all).

    Half of the worst of three numbers in decades: rarity together against independence, joint support over
    all flows, and how little the structure is expected in the size.

    Parameters
    ----------
    disagreement : from the solver
    """
    decades = np.maximum(-disagreement.agreement, -np.log10(np.maximum(disagreement.support, 1e-30)))
    decades = np.maximum(decades, -np.log10(np.maximum(disagreement.expected, 1e-30)))
    result: Array = np.round(np.clip(0.5 * decades, 0.0, 1.0), 3) + 0.0  # no negative zero
    return result


def find_clash(solver: Solver, case: Case, conflict: float) -> tuple[Clash, Case]:
    """The pair of criteria that clashes most, and the case without the later of the two.

    Parameters
    ----------
    solver, case : the phase in conflict
    conflict : its strength
    """
    pairs = [
        (*pair_agreement(solver, case, first, second), first, second)
        for first, second in combinations(criteria_of(case), 2)
    ]
    worst = min(pairs, key=lambda pair: pair[0], default=None)
    if worst is None or worst[0] > -2 * TENSION_FROM:
        return _unexpected_size(solver, case, conflict), case
    _, first_case, second_case, first, second = worst
    kept = Case(case.signature.without(second), tuple(d for d in case.depths if d[0] != second))
    clash = Clash(
        first, second, conflict,
        _reading(solver, case, first_case, first), _reading(solver, case, second_case, second),
        _velocity(solver, first_case, first), _velocity(solver, second_case, second),
    )  # fmt: skip
    return clash, kept


def conflict_words(clash: Clash) -> str:
    """A conflict as one sentence; both readings are told."""
    if clash.second == "grain_size":
        return (
            f"{clash.first_reading}, but {clash.second_reading}: check size and structure; "
            "the range is little more than what is believed of the setting."
        )
    return (
        f"{clash.first_reading}, but {clash.second_reading}: no single flow does both; "
        "the range is the first one's."
    )


def _unexpected_size(solver: Solver, case: Case, conflict: float) -> Clash:
    """A structure that is not expected in the size: it clashes with the grain size itself."""
    alone = Case(case.signature.only("bed_state"))
    return Clash(
        "bed_state", "grain_size", conflict, _reading(solver, case, alone, "bed_state"),
        "the structure is not expected in this grain size", _velocity(solver, alone, "bed_state"), None,
    )  # fmt: skip


def _reading(solver: Solver, case: Case, alone: Case, id: str) -> str:
    """What a criterion says, with the velocity it gives alone."""
    words = says(case, id)
    if CRITERIA[id].kind == "depth":
        return words
    if CRITERIA[id].side == "above":
        return f"{words} (above {lower_limit(solver, alone):.2g} m/s)"
    velocity = _velocity(solver, alone, id)
    return f"{words} ({velocity.p10:.2g} to {velocity.p90:.2g} m/s)" if velocity else words


def _velocity(solver: Solver, alone: Case, id: str) -> Quantiles | None:
    """Velocity from one criterion alone; None for a bound on one side and for a depth."""
    if CRITERIA[id].kind == "depth" or CRITERIA[id].side != "band":
        return None
    return Quantiles(*solver.solve(solver.compile([replace(alone, depths=())])).velocity[:, 0].tolist())
