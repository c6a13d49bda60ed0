"""Waxing and waning between neighbouring phases, with probabilities.

Unknowns that two neighbouring phases share (the allowance for local velocities and sizes, the edges, inside a
bed the depth, in a turbidity current the drag) are drawn together: they cancel in the ratio of the two
velocities. Grading inside a bed counts as evidence of its own, and it is said where it disagrees with the
structures.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from logkit.flow.grid import Array
from logkit.flow.other_settings import bouma_division
from logkit.flow.reading import Reading
from logkit.flow.settings import flow_settings
from logkit.flow.solver import Case, Solver
from logkit.flow.states import Fluid
from logkit.hydraulics.settling import ferguson_church
from logkit.model import Log, PhaseEstimate, SizeInterval, Tendency

GRADED_PHI = 0.5
"""Change of the middle size between two phases that counts as grading: half a phi, one field class."""


@dataclass(frozen=True, slots=True)
class Transition:
    """The change of the flow from one phase to the next one up.

    Attributes
    ----------
    section, from_bed, from_phase, to_bed, to_phase : the two phases
    within_bed : True when both belong to one bed
    tendency, probability : the verdict and its probability; of the likelier direction when not determinable
    p_waxing : probability that the flow became faster, None when nothing tells
    grading : "fining", "coarsening" or "" for no change or unknown sizes
    agreement : how grading and structures agree, in words
    """

    section: str
    from_bed: str
    from_phase: int
    to_bed: str
    to_phase: int
    within_bed: bool
    tendency: Tendency
    probability: float | None
    p_waxing: float | None
    grading: str
    agreement: str


@dataclass(frozen=True, slots=True)
class BedPattern:
    """The tendencies inside one bed as one word.

    Attributes
    ----------
    bed_index, bed : the bed
    pattern : "waxing", "waning", "steady", "waxing-then-waning", "waning-then-waxing" or "not determinable"
    probability : of the weakest step of each run of like steps, multiplied where the flow turned; None when
        not determinable
    """

    bed_index: int
    bed: str
    pattern: str
    probability: float | None


def find_tendencies(
    solver: Solver, log: Log, estimates: Sequence[PhaseEstimate], readings: Mapping[int, Reading]
) -> tuple[Transition | None, ...]:
    """The transition from each phase to the next; None where a gap breaks the chain.

    Parameters
    ----------
    solver : answers the comparisons
    log, estimates : of all phases, upward
    readings : what the solver was told, by place among the estimates

    Returns
    -------
    one entry for each pair of neighbours, len(estimates) - 1
    """
    pairs = list(zip(range(len(estimates)), range(1, len(estimates)), strict=False))
    gaps = {index for index, bed in enumerate(log.beds) if bed.is_gap}
    on_grid = [
        (i, j) for i, j in pairs
        if all(k in readings and _comparable(estimates[k], readings[k]) for k in (i, j))
    ]  # fmt: skip
    compared = _compare(solver, on_grid, estimates, readings)
    result: list[Transition | None] = []
    for i, j in pairs:
        if estimates[i].phase.bed_index in gaps or estimates[j].phase.bed_index in gaps:
            result.append(None)
            continue
        waxing, steady = compared.get((i, j)) or _compare_density(estimates[i], estimates[j])
        result.append(_transition(estimates[i], estimates[j], waxing, steady, (i, j) in compared, log))
    return tuple(result)


def with_tendencies(
    estimates: Sequence[PhaseEstimate], transitions: Sequence[Transition | None]
) -> tuple[PhaseEstimate, ...]:
    """The estimates with the tendency from the phase below written into each."""
    result = list(estimates[:1])
    for estimate, transition in zip(estimates[1:], transitions, strict=True):
        if transition is None:
            result.append(estimate)
        else:
            result.append(
                replace(estimate, tendency=transition.tendency, tendency_probability=transition.probability)
            )
    return tuple(result)


def bed_patterns(
    estimates: Sequence[PhaseEstimate], transitions: Sequence[Transition | None]
) -> tuple[BedPattern, ...]:
    """One pattern for every bed of two or more phases."""
    inside: dict[int, list[Transition]] = {}
    for estimate, transition in zip(estimates[1:], transitions, strict=True):
        if transition is not None and transition.within_bed:
            inside.setdefault(estimate.phase.bed_index, []).append(transition)
    patterns = []
    for index, steps in inside.items():
        known = [s for s in steps if s.tendency != "not determinable"]
        words: list[str] = []
        chances: list[float] = []  # like steps rest on the same evidence: they stand or fall together
        for step in known:
            if step.tendency != "steady" and (not words or words[-1] != step.tendency):
                words.append(step.tendency)
                chances.append(1.0)
            chances = chances or [1.0]
            chances[-1] = min(chances[-1], step.probability or 1.0)
        chance = math.prod(chances)
        if not known or len(words) > 2:
            patterns.append(BedPattern(index, steps[0].to_bed, "not determinable", None))
        else:
            word = "-then-".join(words) if words else "steady"
            patterns.append(BedPattern(index, steps[0].to_bed, word, chance))
    return tuple(patterns)


def _comparable(estimate: PhaseEstimate, reading: Reading) -> bool:
    """True for a range, and for a bed state that is open above where a prior says how fast flows usually are."""
    signature = reading.case.signature
    return _has_range(estimate) or (
        signature.prior != "off" and any(id == "bed_state" for id, _ in signature.factors)
    )


def _has_range(estimate: PhaseEstimate) -> bool:
    return estimate.bound == "range" and estimate.velocity is not None


def _compare(
    solver: Solver,
    pairs: Sequence[tuple[int, int]],
    estimates: Sequence[PhaseEstimate],
    readings: Mapping[int, Reading],
) -> dict[tuple[int, int], tuple[float, float]]:
    """P(faster) and P(steady) of pairs that the solver answers."""
    settings = flow_settings()
    used = sorted({k for pair in pairs for k in pair})
    cases = {k: _case_of(estimates[k], readings[k]) for k in used}
    kernels: dict[tuple[str, str], Array] = {}
    mistaken: dict[tuple[str, str], float] = {}
    apart: dict[tuple[str, str], list[tuple[int, int]]] = {}
    chances: dict[tuple[int, int], tuple[float, float]] = {}
    inside: dict[tuple[Case, Case], tuple[float, float]] = {}
    for i, j in pairs:
        names = (cases[i].signature.prior, cases[j].signature.prior)
        if names not in kernels:
            priors = [settings.prior(name) for name in names]
            own = (1 - settings.tendency["shared_share"]) * sum(p.delta**2 for p in priors)
            kernels[names], mistaken[names] = solver.grid.kernel(math.sqrt(own)), max(p.eps for p in priors)
        if estimates[i].phase.bed_index != estimates[j].phase.bed_index:
            apart.setdefault(names, []).append((i, j))
            continue
        key = (cases[i], cases[j])
        if key not in inside:
            inside[key] = _together(solver, *key, kernels[names])
        chances[i, j] = inside[key]
    if apart:
        mass = solver.velocity_mass(solver.compile([cases[k] for k in used]), sharp=True)
        place = {k: n for n, k in enumerate(used)}
        for names, found in apart.items():
            first, second = (mass[:, [place[pair[end]] for pair in found]] for end in (0, 1))
            waxing, steady = _chances(first, kernels[names] @ second, solver)
            chances |= dict(zip(found, zip(waxing.tolist(), steady.tolist(), strict=True), strict=True))
    result = {}
    for (i, j), (waxing_ij, steady_ij) in chances.items():
        wrong = mistaken[cases[i].signature.prior, cases[j].signature.prior]
        result[i, j] = (waxing_ij * (1 - 2 * wrong) + wrong, steady_ij)
    return result


def _case_of(estimate: PhaseEstimate, reading: Reading) -> Case:
    """What the range of a phase rests on: in a conflict without the criterion that gave way."""
    if estimate.clash is None:
        return reading.case
    left_out = estimate.clash.second
    return Case(
        reading.case.signature.without(left_out), tuple(d for d in reading.case.depths if d[0] != left_out)
    )


def _together(solver: Solver, first: Case, second: Case, own: Array) -> tuple[float, float]:
    """Chances for two phases of one bed: the depth is the same unknown for both."""
    weights = solver.depth_weights(solver.compile([first]))[:, 0]
    believed = solver.slices.believed_depth(first.signature.prior)
    shared = np.where(believed > 0, weights / np.maximum(believed, 1e-30), 0.0)
    planes = [solver.plane(case.signature, sharp=True) for case in (first, second)]
    first_plane, second_plane = planes[0] * shared, own @ planes[1]
    weight = first_plane.sum(axis=0) * second_plane.sum(axis=0)
    if not weight.sum() > 0:
        return 0.5, 0.0
    waxing, steady = _chances(first_plane, second_plane, solver)
    return float(waxing @ weight / weight.sum()), float(steady @ weight / weight.sum())


def _chances(first: Array, second: Array, solver: Solver) -> tuple[Array, Array]:
    """P(second faster) and P(within the steady ratio) of each column, for masses of shape (velocity, columns)."""
    first, second = first.astype(np.float64), second.astype(np.float64)
    whole = np.maximum(first.sum(axis=0) * second.sum(axis=0), 1e-300)
    slower = np.cumsum(first, axis=0) - 0.5 * first
    waxing = (slower * second).sum(axis=0) / whole
    cells = max(round(math.log(flow_settings().tendency["steady_ratio"]) / solver.grid.velocity.step), 1)
    up = np.vstack([np.zeros_like(slower[:cells]), slower[:-cells]])
    faster = first.sum(axis=0, keepdims=True) - slower
    down = np.vstack([faster[cells:], np.zeros_like(faster[:cells])])
    steady = 1.0 - ((up + down) * second).sum(axis=0) / whole
    return waxing, np.maximum(steady, 0.0)


def _compare_density(below: PhaseEstimate, above: PhaseEstimate) -> tuple[float | None, float | None]:
    """P(faster) inside the bed of a turbidity current: drag cancels; between two suspended loads u*/ws as well.

    Two beds are two currents, however much one cuts into the other: they are not compared.
    """
    if (
        not (_has_range(below) and _has_range(above))
        or below.shear_velocity is None
        or above.shear_velocity is None
    ):
        return None, None
    if not _one_current(below, above):
        return None, None
    numbers = flow_settings().tendency
    both = _both_suspended(below, above)
    sizes = [below.phase.size, above.phase.size]
    if both and sizes[0] is not None and sizes[1] is not None:
        ends = [_settling(size) for size in sizes if size is not None]
        middle = 0.5 * (sum(ends[1]) - sum(ends[0]))
        spread = math.hypot(numbers["suspension_scatter_ln"],
                            *((high - low) / math.sqrt(12.0) for low, high in ends))  # fmt: skip
    else:
        first, second = below.shear_velocity, above.shear_velocity
        middle = math.log(second.p50 / first.p50)
        spread = math.hypot(*(math.log(q.p90 / q.p10) / 2.563 for q in (first, second)))
    ratio = math.log(numbers["steady_ratio"])
    doubt = numbers["doubt"]
    waxing = doubt + (1 - 2 * doubt) * _normal(middle / spread)
    return waxing, _normal((ratio - middle) / spread) - _normal((-ratio - middle) / spread)


def _one_current(below: PhaseEstimate, above: PhaseEstimate) -> bool:
    """True for two phases of one bed of a turbidity current."""
    first, second = below.phase, above.phase
    return first.setting == second.setting == "turbidity" and first.bed_index == second.bed_index


def _both_suspended(below: PhaseEstimate, above: PhaseEstimate) -> bool:
    return all(e.transport_mode == "suspension" for e in (below, above))


def _settling(size: SizeInterval) -> tuple[float, float]:
    """ln of the settling velocity at both limits of a size."""
    fluid = Fluid()
    d = 1e-3 * np.array([size.low_mm, size.high_mm])
    low, high = np.log(ferguson_church(d, fluid.submerged_gravity, fluid.nu_m2_s)).tolist()
    return low, high


def _normal(z: float) -> float:
    return 0.5 * (1.0 + math.erf(z / math.sqrt(2.0)))


def _transition(
    below: PhaseEstimate,
    above: PhaseEstimate,
    waxing: float | None,
    steady: float | None,
    on_grid: bool,
    log: Log,
) -> Transition:
    numbers = flow_settings().tendency
    first, second = below.phase, above.phase
    within = first.bed_index == second.bed_index
    change = _size_change(below, above)
    structure = waxing
    thin = log.beds[second.bed_index].thickness_m < numbers["thin_inverse_m"]
    measured_by_size = waxing is not None and not on_grid and _both_suspended(below, above)
    if measured_by_size and waxing is not None and waxing > 0.5:
        # A traction carpet or sieving sorts grains the same way: sizes alone never prove a waxing current.
        waxing, steady = (None, None) if thin else (min(waxing, numbers["inverse_alone"]), steady)
    graded = within and change is not None and abs(change) >= GRADED_PHI and not measured_by_size
    if graded and change is not None and not (change < 0 and thin):
        weight = numbers["grading_weight"] * (1 - math.exp(-abs(change) / numbers["grading_scale_phi"]))
        chance = 0.5 - math.copysign(weight, change)
        base = 0.5 if waxing is None else min(max(waxing, 1e-6), 1 - 1e-6)
        waxing = base * chance / (base * chance + (1 - base) * (1 - chance))
    steps = _divisions(below, above) if within else 0
    if steps:
        chance = 0.5 - math.copysign(numbers["division_weight"], steps)
        base = 0.5 if waxing is None else min(max(waxing, 1e-6), 1 - 1e-6)
        waxing = base * chance / (base * chance + (1 - base) * (1 - chance))
    tendency: Tendency = "not determinable"
    probability = None if waxing is None else max(waxing, 1 - waxing)
    if waxing is not None and steady is not None and steady >= numbers["steady_from"]:
        tendency, probability = "steady", steady
    elif waxing is not None and waxing >= numbers["call_from"]:
        tendency = "waxing"
    elif waxing is not None and waxing <= 1 - numbers["call_from"]:
        tendency = "waning"
    grading = "" if change is None or abs(change) < GRADED_PHI else ("fining" if change > 0 else "coarsening")
    agreement = _agreement(grading, structure if on_grid else None, within, thin, measured_by_size)
    if not within and first.setting == second.setting == "turbidity":
        agreement = "each bed is a current of its own"
    if steps:
        order = "rising" if steps > 0 else "falling back"
        if grading and (grading == "fining") != (steps > 0):
            agreement = f"{grading} points the other way: they disagree"
        agreement = "; ".join(filter(None, (f"Bouma divisions {order} in the bed", agreement)))
    return Transition(first.section, first.bed, first.index, second.bed, second.index, within, tendency,
                      probability, waxing, grading, agreement)  # fmt: skip


def _divisions(below: PhaseEstimate, above: PhaseEstimate) -> int:
    """Steps between the Bouma divisions of two phases; 0 where they have none. Rising means falling stress."""
    if below.phase.setting != "turbidity" or above.phase.setting != "turbidity":
        return 0
    order = [" abcde".find(bouma_division(phase)[1:] or "-") for phase in (below.phase, above.phase)]
    return order[1] - order[0] if min(order) > 0 else 0


def _size_change(below: PhaseEstimate, above: PhaseEstimate) -> float | None:
    """Change of the middle size upward, phi; positive when it becomes finer."""
    if below.phase.size is None or above.phase.size is None:
        return None
    return above.phase.size.middle_phi - below.phase.size.middle_phi


def _agreement(grading: str, structure: float | None, within: bool, thin: bool, by_size: bool) -> str:
    """How the grain-size change and the structures fit together."""
    if by_size:
        if grading == "coarsening":
            layer = "in so thin a layer" if thin else "without a change of structure"
            return f"inverse grading {layer} is no proof of waxing"
        return "the sizes themselves measure the suspension" if grading else ""
    from_structure = ""
    if structure is not None:
        from_structure = "waxing" if structure >= 0.75 else "waning" if structure <= 0.25 else ""
    if not grading:
        return f"structures alone point to {from_structure}" if from_structure else ""
    from_grading = "waning" if grading == "fining" else "waxing"
    if grading == "coarsening" and within and thin:
        return "inverse grading in so thin a layer is no proof of waxing"
    if not from_structure:
        return f"{grading} alone points to {from_grading}"
    if from_structure == from_grading:
        return f"{grading} and structures agree: {from_grading}"
    return f"{grading} points to {from_grading}, the structures to {from_structure}: they disagree"
