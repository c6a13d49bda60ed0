"""The criteria that ship with logkit for beds under a current. Their words and sources are criteria.toml.

Turbidity currents, waves and wind are read in `other_settings`; they do not use the ladder of bed states.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Hashable
from typing import Any

import numpy as np

from logkit.flow.criteria import (
    CRITERIA,
    Cells,
    ClastReading,
    Context,
    Criterion,
    DepthReading,
    Kind,
    Side,
    criterion_texts,
    state_readings,
)
from logkit.flow.grid import Array, Grid
from logkit.flow.phases import SAND_MM, speaks, structure_term
from logkit.flow.settings import flow_settings
from logkit.flow.states import MOVING, skin_shear_velocity
from logkit.hydraulics.settling import ferguson_church
from logkit.hydraulics.threshold import GRAVEL_SHIFT_LOG10
from logkit.model import Phase
from logkit.registry import GRAVITY_M_S2

STATE_WORDS = {
    "ripple": "ripples",
    "dune": "dunes",
    "lower_plane": "a lower plane bed",
    "upper_plane": "an upper plane bed",
    "antidune": "antidunes",
}

HIDING_EXPONENT = 0.8
"""Middle of the published power laws for mixed gravel, 0.6 to 0.98."""

NEVER_SUSPENDED_MM = 1.0
"""Coarser grains are not held up by turbulence alone (Lowe 1982)."""

CEILING_TO_MM = 4.0
"""Coarser grains are lifted by no flow of the grid: the ceiling says nothing there."""

SUSPENSION_SIGMA = 0.20
"""Spread of the criteria of suspension, log10."""

GRAVEL_MM = 2.0
MATRIX_OF_CLAST = 4.0
"""Largest clast over median size where the median is not recorded (judgement, on the safe side)."""


def structures_of(phase: Phase, context: Context) -> tuple[str, ...]:
    """Structures of a phase: its own, and those of the bed whose place in it was not recorded."""
    if not context.whole_bed:
        return (phase.structure,) if phase.structure else ()
    return tuple(s.term for s in context.bed.structures if speaks(s))


def bed_states(structures: tuple[str, ...]) -> tuple[str, ...]:
    """Bed states that can have made the structures, in the order of the ladder; empty for none."""
    found: set[str] = set()
    for structure in structures:
        term = structure_term(structure)
        if term is not None and term.bed_state in MOVING:
            found.add(term.bed_state)
        found.update(state_readings().get(structure, ()))
    return tuple(state for state in MOVING if state in found)


def _state(phase: Phase, context: Context) -> Hashable | None:
    return bed_states(structures_of(phase, context)) or None


def _motion(phase: Phase, context: Context) -> Hashable | None:
    if phase.size is None or bed_states(structures_of(phase, context)):
        return None
    return ("moved",)


def _stated_depth(phase: Phase, context: Context) -> Hashable | None:
    if context.flow_depth_m is None:
        return None
    numbers = flow_settings().depth["stated"]
    low, high = context.flow_depth_m
    spread = numbers["single_value_sd_ln"]
    if high > low * (1 + 1e-9):
        spread = max(math.log(high / low) / math.sqrt(12.0), numbers["least_sd_ln"])
    return DepthReading(math.sqrt(low * high), spread, spread)


def _dune_sets(phase: Phase, context: Context) -> Hashable | None:
    sets = phase.set_thickness
    if sets is None or not sets.central_m > 0:
        return None
    numbers = flow_settings().depth["dune_sets"]
    spread = numbers["sd_ln"]
    if sets.count is not None:
        spread = math.hypot(spread, numbers["set_variability"] / math.sqrt(max(sets.count, 1)))
    return DepthReading(numbers["median_over_set"] * sets.central_m, spread, spread)


def _accretion_sets(phase: Phase, context: Context) -> Hashable | None:
    if "lateral_accretion" not in structures_of(phase, context):
        return None
    numbers = flow_settings().depth["accretion_sets"]
    thickness = phase.top_m - phase.base_m
    return DepthReading(
        numbers["median_over_thickness"] * thickness, numbers["sd_ln_below"], numbers["sd_ln_above"]
    )


def _bar_front(phase: Phase, context: Context) -> Hashable | None:
    if "bar_front_set" not in structures_of(phase, context):
        return None
    numbers = flow_settings().depth["bar_front"]
    thickness = phase.top_m - phase.base_m
    return DepthReading(numbers["least_over_thickness"] * thickness, numbers["sd_ln_below"], math.inf)


def _stated_slope(phase: Phase, context: Context) -> Hashable | None:
    """A stated slope, where the resistance of sand-bed rivers holds."""
    if context.slope is None or context.setting.name != "river" or phase.size is None:
        return None
    if not SAND_MM <= phase.size.middle_mm <= GRAVEL_MM:
        return None
    return (math.sqrt(context.slope[0] * context.slope[1]), math.log(context.slope[1] / context.slope[0]))


def _slope_likelihood(reading: tuple[float, float], cells: Cells) -> Array:
    """U from u* = sqrt(g h S) and the resistance of sand rivers."""
    numbers = flow_settings().resistance
    slope, width = reading
    shear = 0.5 * np.log(GRAVITY_M_S2 * cells.flow_depth_m * slope)
    expected = shear + numbers["intercept"] + numbers["slope"] * np.log(cells.flow_depth_m / cells.d_m)
    spread = math.hypot(numbers["sd_ln_slope_known"], 0.5 * width / math.sqrt(12.0))
    result: Array = -0.5 * ((np.log(cells.velocity_m_s) - expected) / spread) ** 2
    return result


def _suspension_ceiling(phase: Phase, context: Context) -> Hashable | None:
    """Coarse grains in a bed of a current were not carried in full suspension."""
    if phase.size is None or not NEVER_SUSPENDED_MM <= phase.size.middle_mm <= CEILING_TO_MM:
        return None
    return "not suspended"


def _ceiling_likelihood(_: str, cells: Cells) -> Array:
    """Soft edge of the skin shear velocity at the settling velocity; the criteria span 0.4 to 1.0."""
    shear = skin_shear_velocity(cells.velocity_m_s, cells.flow_depth_m, cells.d_m)
    settling = ferguson_church(cells.d_m, cells.fluid.submerged_gravity, cells.fluid.nu_m2_s)
    passed = 1.702 * np.log10(shear / settling) / SUSPENSION_SIGMA
    result: Array = -np.logaddexp(0.0, passed)
    return result


def _mud_chips(phase: Phase, context: Context) -> Hashable | None:
    return "torn up" if "mud_chips" in {s.term for s in context.bed.structures} and phase.index == 0 else None


def _mud_chips_likelihood(_: str, cells: Cells) -> Array:
    """Soft edge of the skin stress at the strength of mud."""
    numbers = flow_settings().mud
    shear = skin_shear_velocity(cells.velocity_m_s, cells.flow_depth_m, cells.d_m)
    stress = cells.fluid.density_kg_m3 * shear**2
    passed = 1.702 * np.log10(stress / numbers["erosion_pa"]) / numbers["erosion_sigma_log10"]
    result: Array = -np.logaddexp(0.0, -passed)
    return result


def _largest_clast(phase: Phase, context: Context) -> Hashable | None:
    """The clast as a grain of a uniform bed that is as hard to move."""
    if phase.largest_mm is None or not phase.largest_mm > 0:
        return None
    clast = -math.log2(phase.largest_mm)
    if phase.size is None:
        clast += HIDING_EXPONENT * math.log2(MATRIX_OF_CLAST)
    elif phase.size.middle_mm >= GRAVEL_MM:
        clast = HIDING_EXPONENT * phase.size.middle_phi + (1 - HIDING_EXPONENT) * clast
    elif phase.largest_mm <= phase.size.high_mm:
        return None
    else:
        # The tables count gravel as beds of gravel, which move below the curve; a single clast on sand is no bed.
        clast += GRAVEL_SHIFT_LOG10 * math.log2(10.0)
    if not Grid.coarse_phi + 0.07 < clast < Grid.fine_phi - 0.07:
        return None
    return ClastReading(round(clast, 3), phase.largest_mm)


def _depth_words(what: str) -> Callable[[DepthReading], str]:
    def words(reading: DepthReading) -> str:
        if math.isinf(reading.sd_ln_above):
            return f"{what}: at least about {reading.median_m:.2g} m"
        low = reading.median_m * math.exp(-1.2816 * reading.sd_ln_below)
        high = reading.median_m * math.exp(1.2816 * reading.sd_ln_above)
        return f"{what}: {low:.2g} to {high:.2g} m"

    return words


def _state_words(states: tuple[str, ...]) -> str:
    return "the bed carried " + " or ".join(STATE_WORDS[state] for state in states)


def _clast_words(reading: ClastReading) -> str:
    return f"the flow moved a clast of {reading.written_mm:.3g} mm"


def _register(
    id: str,
    kind: Kind,
    side: Side,
    reads: Callable[[Phase, Context], Hashable | None],
    words: Callable[[Any], str],
    log_likelihood: Callable[[Any, Cells], Array] | None = None,
) -> None:
    text = criterion_texts()[id]
    CRITERIA.register(
        id,
        Criterion(id, text.label, kind, side, reads, words, text.source, text.validity, text.status,
                  log_likelihood,
            text.formulas),
    )  # fmt: skip


_register("stated_depth", "depth", "band", _stated_depth, _depth_words("depth as stated"))
_register("bed_state", "state", "band", _state, _state_words)
_register("motion", "state", "above", _motion, lambda _: "the flow moved the grains of the bed")
_register(
    "stated_slope", "cells", "band", _stated_slope,
    lambda reading: f"slope {reading[0]:.2g} with the resistance of sand rivers", _slope_likelihood,
)  # fmt: skip
_register("dune_sets", "depth", "band", _dune_sets, _depth_words("depth from the sets"))
_register("accretion_sets", "depth", "band", _accretion_sets, _depth_words("depth from the accretion sets"))
_register("bar_front", "depth", "above", _bar_front, _depth_words("depth above the bar front"))
_register(
    "suspension_ceiling",
    "cells",
    "below",
    _suspension_ceiling,
    lambda _: "the flow did not hold the grains in full suspension",
    _ceiling_likelihood,
)
_register(
    "mud_chips", "cells", "above", _mud_chips, lambda _: "the flow tore up mud", _mud_chips_likelihood
)  # fmt: skip
_register("largest_clast", "clast", "above", _largest_clast, _clast_words)
