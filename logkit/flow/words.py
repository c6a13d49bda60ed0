"""The ledger in words: lines a geologist could put into a caption. No numbers are made here."""

from __future__ import annotations

from collections.abc import Sequence

from logkit.flow.conflict import CONFLICT_FROM, TENSION_FROM, conflict_words
from logkit.flow.criteria import CRITERIA
from logkit.flow.ledger import LedgerRow
from logkit.flow.phases import structure_term
from logkit.flow.tendency import BedPattern, Transition
from logkit.model import PhaseEstimate, Quantiles
from logkit.references import cited


def span(quantiles: Quantiles, unit: str) -> str:
    """P10-P90 with the middle, two digits."""
    return f"{quantiles.p10:.2g} to {quantiles.p90:.2g} {unit} (middle {quantiles.p50:.2g})".replace(
        " )", ")"
    )


def explain_phase(estimate: PhaseEstimate, rows: Sequence[LedgerRow], phases: int) -> list[str]:
    """Lines on one phase.

    Parameters
    ----------
    estimate, rows : the phase with its ledger
    phases : number of phases of the bed
    """
    lines = [f"{_title(estimate, phases)}: {_answer(estimate)}."]
    for row in sorted(rows, key=lambda r: -(r.gain_bits or 0.0)):
        lines.append("  - " + _criterion(row, estimate))
    if estimate.conflict >= CONFLICT_FROM and estimate.clash is not None:
        sentence = conflict_words(estimate.clash)
        lines.append(f"  ! {sentence[0].upper()}{sentence[1:]}")
    elif estimate.conflict >= TENSION_FROM:
        lines.append("  ! The criteria agree only at the edge of their ranges.")
    told = conflict_words(estimate.clash) if estimate.clash else ""
    lines += [f"  note: {note}" for note in estimate.notes if note != told]
    return lines


def explain_transition(transition: Transition) -> str:
    """One line on the change between two phases of a bed."""
    where = f"From phase {transition.from_phase + 1} to {transition.to_phase + 1}"
    verdict: str = transition.tendency
    if transition.p_waxing is not None:
        chance = transition.probability or 0.0
        if verdict == "not determinable":
            leaning = "waxing" if transition.p_waxing > 0.5 else "waning"
            verdict = f"not determinable (leaning to {leaning}, probability {chance:.2f})"
        else:
            verdict = f"{verdict}, probability {chance:.2f}"
    reason = f"; {transition.agreement}" if transition.agreement else ""
    return f"{where}: {verdict}{reason}."


def explain_pattern(pattern: BedPattern) -> str:
    """One line on the whole bed."""
    if pattern.probability is None:
        return "The bed as a whole: not determinable."
    return f"The bed as a whole: {pattern.pattern}, probability {pattern.probability:.2f}."


def _title(estimate: PhaseEstimate, phases: int) -> str:
    phase = estimate.phase
    term = structure_term(phase.structure)
    size = phase.size
    parts = [f"Bed {phase.bed}" + (f", phase {phase.index + 1} of {phases}" if phases > 1 else "")]
    if size is not None:
        parts.append(size.label or f"{size.low_mm:.2g}-{size.high_mm:.2g} mm")
    if term is not None:
        parts.append(term.label)
    parts.append("setting unknown" if phase.setting == "unknown" else phase.setting)
    return ", ".join(parts)


def _answer(estimate: PhaseEstimate) -> str:
    if estimate.status == "no estimate":
        return f"no estimate ({estimate.reason})"
    if estimate.bound == "above" and estimate.limit_velocity_m_s is not None:
        limit = f"{estimate.limit_velocity_m_s:.2g} m/s"
        if estimate.is_wind:
            return f"the wind 10 m above the ground was faster than {limit}; no upper limit is known"
        return f"the flow was faster than {limit} (nine chances in ten); no upper limit is known"
    if estimate.bound == "below" and estimate.limit_velocity_m_s is not None:
        return f"the current was slower than {estimate.limit_velocity_m_s:.2g} m/s"
    parts = []
    if estimate.velocity is not None:
        parts.append(f"velocity {span(estimate.velocity, 'm/s')}")
    if estimate.flow_depth is not None:
        parts.append(f"depth {span(estimate.flow_depth, 'm')}")
    if estimate.froude is not None:
        parts.append(f"Froude number {estimate.froude.p10:.2g} to {estimate.froude.p90:.2g}")
    if estimate.transport_mode:
        parts.append(f"transport by {estimate.transport_mode}")
    return "; ".join(parts)


def _criterion(row: LedgerRow, estimate: PhaseEstimate) -> str:
    """What one criterion allows and what it is worth."""
    text = row.says
    if row.bound == "above" and row.alone_p10_m_s is not None:
        text += f"; alone above {row.alone_p10_m_s:.2g} m/s"
    elif row.bound == "below" and row.alone_p90_m_s is not None:
        text += f"; alone below {row.alone_p90_m_s:.2g} m/s"
    elif row.alone_p10_m_s is not None and row.alone_p90_m_s is not None and not _is_depth(row):
        text += f"; alone {row.alone_p10_m_s:.2g} to {row.alone_p90_m_s:.2g} m/s"
    if row.narrows is not None and estimate.bound == "range":
        if row.narrows >= 1.05:
            text += f"; narrows the velocity {row.narrows:.1f} times"
        else:
            text += "; hardly narrows the velocity"
    status = "" if row.status == "published" else f", {_STATUS.get(row.status, row.status)}"
    return f"{text} [{cited(row.source)}{status}]".replace(
        "[own construction, own construction]", "[own construction]"
    )


def _is_depth(row: LedgerRow) -> bool:
    return row.criterion in CRITERIA and CRITERIA[row.criterion].kind == "depth"


_STATUS = {"ours": "own construction", "memory": "to be checked in print", "secondary": "cited second hand"}
