"""From a phase to what it says: a case for the solver, an answer of another setting, or why there is none.

Which criteria there are is in `criteria`; here it is decided whether they may be asked at all.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from logkit.errors import ArgumentError
from logkit.flow import other_settings
from logkit.flow.builtin_criteria import GRAVEL_MM, bed_states
from logkit.flow.criteria import CRITERIA, ClastReading, Context, DepthReading
from logkit.flow.grid import Grid
from logkit.flow.other_settings import Answered, no_estimate
from logkit.flow.phases import SAND_MM, speaks, structure_term
from logkit.flow.settings import PRIORS, Setting, flow_settings
from logkit.flow.slices import Signature, size_steps
from logkit.flow.solver import Case
from logkit.flow.states import Fluid
from logkit.hydraulics.inputs import QUARTZ_KG_M3
from logkit.hydraulics.rest import fallout_velocity
from logkit.model import Bed, Header, Log, Phase, SizeInterval
from logkit.vocabulary.terms import vocabulary

GAP_WORDS = {"no_exposure": "no exposure", "lost_core": "lost core", "fault": "fault"}

ROCK_WORDS = {
    "evaporite": "chemical rock", "chert": "chemical rock", "iron": "chemical rock", "coal": "coal",
    "lava": "not a sediment", "crystalline": "not a sediment", "volcanic": "volcanic",
    "carbonate": "carbonate rock", "marl": "carbonate rock", "dolomite": "carbonate rock",
}  # fmt: skip
"""Texture family of a lithology -> why there is no estimate without a structure that a current made."""

NEVER = ("evaporite", "chert", "iron", "coal", "lava", "crystalline")


@dataclass(frozen=True, slots=True)
class Options:
    """What a person may tell the engine, see `infer_flow`."""

    setting: str | None = None
    temperature_c: float | None = None
    salinity: float | None = None
    grain_density_kg_m3: float | None = None
    flow_depth_m: tuple[float, float] | None = None
    slope: tuple[float, float] | None = None
    prior: str | None = None
    read_tb: bool = False


@dataclass(frozen=True, slots=True)
class Reading:
    """What a phase says to the solver.

    Attributes
    ----------
    case : for the middle of the phase
    base, top : for its base and top where the size differs
    context : what the criteria looked at
    notes : what must be said about the reading
    """

    case: Case
    context: Context
    base: Case | None = None
    top: Case | None = None
    notes: tuple[str, ...] = ()


def checked_range(name: str, value: float | tuple[float, float] | None) -> tuple[float, float] | None:
    """A number or a pair as (low, high).

    Raises
    ------
    ArgumentError : not positive, not finite, or not rising
    """
    if value is None:
        return None
    low, high = (value, value) if isinstance(value, int | float) else tuple(value)
    if not (math.isfinite(low) and math.isfinite(high) and 0 < low <= high):
        raise ArgumentError(name, value, "a number above zero, or a pair (low, high)")
    return float(low), float(high)


def checked_options(
    setting: str | None = None,
    temperature_c: float | None = None,
    salinity: float | None = None,
    grain_density_kg_m3: float | None = None,
    flow_depth_m: float | tuple[float, float] | None = None,
    slope: float | tuple[float, float] | None = None,
    prior: str | None = None,
    read_tb: bool = False,
) -> Options:
    """Options with every value checked.

    Raises
    ------
    UnknownNameError : no such setting
    ArgumentError : a value out of its range
    """
    if setting is not None:
        flow_settings().setting(setting)
    if prior is not None and prior not in PRIORS:
        raise ArgumentError("prior", prior, '"off", "broad" or "river"')
    return Options(
        setting, temperature_c, salinity, grain_density_kg_m3, checked_range("flow_depth_m", flow_depth_m),
        checked_range("slope", slope), prior, read_tb,
    )  # fmt: skip


def fluid_of(header: Header, setting: Setting, options: Options) -> Fluid:
    """Water and grains: what the user says, else the log, else the setting."""

    def first(*values: float | None) -> float:
        return next(v for v in values if v is not None)

    return Fluid(
        first(options.temperature_c, header.water_temperature_c, setting.temperature_c),
        first(options.salinity, header.salinity, setting.salinity),
        first(options.grain_density_kg_m3, header.grain_density_kg_m3, QUARTZ_KG_M3),
    )


class Reader:
    """Reads the phases of one log.

    Parameters
    ----------
    log : the log
    options : what the user says
    """

    def __init__(self, log: Log, options: Options) -> None:
        self.log, self.options = log, options
        self._fluids: dict[str, Fluid] = {}

    def read(self, phase: Phase, phases_of_bed: int) -> Reading | Answered:
        """What one phase says."""
        bed = self.log.beds[phase.bed_index]
        if bed.is_gap:
            return no_estimate(phase, GAP_WORDS.get(bed.gap_reason, "no data"))
        setting = flow_settings().setting(phase.setting)
        if setting.name not in self._fluids:
            self._fluids[setting.name] = fluid_of(self.log.header, setting, self.options)
        header, options = self.log.header, self.options
        context = Context(
            bed=bed,
            setting=setting,
            fluid=self._fluids[setting.name],
            flow_depth_m=_stated("flow_depth_m", bed, options.flow_depth_m, header.flow_depth_m),
            slope=_stated("slope", bed, options.slope, header.slope),
            whole_bed=phases_of_bed == 1,
        )
        refused = _refusal(phase, bed)
        if refused is not None:
            return refused
        other = self._other_setting(phase, context)
        return other if other is not None else self._current(phase, context)

    def _other_setting(self, phase: Phase, context: Context) -> Answered | None:
        """The answer of a setting that does not use the ladder of bed states; None under a current."""
        term = structure_term(phase.structure)
        group = term.group if term else ""
        reading = context.setting.reading
        if group == "wind" or (reading == "wind" and group != "wave"):
            return _strange(other_settings.read_wind(phase, context), group, "wind", phase)
        if group == "wave" or reading == "waves":
            return _strange(other_settings.read_waves(phase, context), group, "waves", phase)
        if reading == "combined":
            return no_estimate(
                phase, "waves and a current",
                "The share of the current is not determinable from this structure.",
            )  # fmt: skip
        if reading == "density":
            return other_settings.read_density_current(phase, context, self.options.read_tb)
        return None

    def _current(self, phase: Phase, context: Context) -> Reading | Answered:
        size = phase.size
        found = [(id, criterion, criterion.reads(phase, context)) for id, criterion in CRITERIA.items()]
        factors = tuple((id, r) for id, c, r in found if r is not None and c.kind != "depth")
        depths = tuple((id, r) for id, _, r in found if isinstance(r, DepthReading))
        ids = {id for id, _ in factors}
        if size is None and "largest_clast" not in ids:
            outside = phase.largest_mm is not None
            return no_estimate(phase, "outside validity" if outside else "no grain size")
        if size is not None and size.middle_mm < SAND_MM and "bed_state" not in ids:
            return no_estimate(phase, "mud", *_mud_notes(size, context))
        if size is not None and size.middle_mm < SAND_MM and _only_plane(phase):
            return no_estimate(
                phase, "outside validity", "Silt is laminated by fall-out as well as by plane beds."
            )
        if size is None:
            clast = next(r.phi for _, r in factors if isinstance(r, ClastReading))
            size = SizeInterval(2.0 ** -(clast + 0.25), 2.0 ** -(clast - 0.25))
        if not _on_grid(size):
            return no_estimate(phase, "outside validity", f"Sizes are read from {_GRID_WORDS}.")
        for _, depth in depths:
            if not Grid.depth_limits[0] <= depth.median_m <= Grid.depth_limits[1]:
                return no_estimate(
                    phase, "outside validity",
                    f"It says a depth of {depth.median_m:.2g} m; depths are read from {_DEPTH_WORDS}.",
                )  # fmt: skip
        signature = Signature(
            self._prior(context, size), context.fluid, size_steps(size.coarse_phi, size.fine_phi), factors
        )
        case = Case(signature, depths)
        ends = [
            self._at(case, end) if phase.base_size != phase.top_size else None
            for end in (phase.base_size, phase.top_size)
        ]
        return Reading(case, context, ends[0], ends[1], _notes(phase, context, size, depths))

    def _at(self, case: Case, size: SizeInterval | None) -> Case | None:
        if size is None or not _on_grid(size):
            return None
        return Case(replace(case.signature, size=size_steps(size.coarse_phi, size.fine_phi)), case.depths)

    def _prior(self, context: Context, size: SizeInterval) -> str:
        """Name of the prior: the user's, else the setting's; one made for other sizes gives way to the broad."""
        name = self.options.prior or context.setting.prior
        sizes = flow_settings().prior(name).sizes_mm
        if sizes is not None and not sizes[0] <= size.middle_mm <= sizes[1]:
            return "broad"
        return name


WAVES_ARE_STRANGE = ("river", "turbidity", "wind")
WIND_IS_STRANGE = ("turbidity", "waves", "combined")


def _strange(answer: Answered, group: str, maker: str, phase: Phase) -> Answered:
    """The answer, with a word where the setting of the log does not make such a structure."""
    settings = WAVES_ARE_STRANGE if maker == "waves" else WIND_IS_STRANGE
    if group not in ("wave", "wind") or phase.setting not in settings:
        return answer
    estimate, rows = answer
    note = f"A structure made by {maker} in a log of the setting {phase.setting}: check one of the two."
    return replace(estimate, notes=(*estimate.notes, note)), rows


def _stated(
    name: str, bed: Bed, by_user: tuple[float, float] | None, by_log: tuple[float, float] | None
) -> tuple[float, float] | None:
    """A stated range: the bed's own, else the user's, else the log's.

    Raises
    ------
    ArgumentError : not above zero or not rising; names the bed or the log
    """
    own = getattr(bed, name)
    if own is not None:
        return checked_range(f"{name} of bed {bed.name}", own)
    return by_user if by_user is not None else checked_range(f"{name} of the log", by_log)


_GRID_WORDS = f"{2.0**-Grid.fine_phi:.3f} to {2.0**-Grid.coarse_phi:g} mm"
_DEPTH_WORDS = f"{Grid.depth_limits[0]:g} to {Grid.depth_limits[1]:g} m"


def _on_grid(size: SizeInterval) -> bool:
    """True when at least half of a size interval lies on the grid."""
    low, high = max(size.coarse_phi, Grid.coarse_phi), min(size.fine_phi, Grid.fine_phi)
    return high - low >= 0.5 * (size.fine_phi - size.coarse_phi) and high >= low


def _refusal(phase: Phase, bed: Bed) -> Answered | None:
    """No estimate because of what the rock is; None when it may be read."""
    family = _family(bed)
    term = structure_term(phase.structure)
    traction = term is not None and term.group in ("current", "wave", "wind")
    if family in NEVER or (family in ROCK_WORDS and not traction):
        return no_estimate(phase, ROCK_WORDS[family])
    deformed = any(s.term in ("slump", "sand_injection", "ball_and_pillow") for s in bed.structures)
    if deformed and not any(speaks(s) for s in bed.structures):
        return no_estimate(phase, "deformed", "The bed was moved after it was laid down.")
    if phase.size is None and phase.largest_mm is None and family in ("mud", "organic_mud"):
        return no_estimate(phase, "mud")
    return None


def _family(bed: Bed) -> str:
    """Texture family of the bed's rock, "" when it is not known."""
    lithologies = vocabulary("lithologies")
    return lithologies[bed.lithology].family if bed.lithology in lithologies else ""


def _only_plane(phase: Phase) -> bool:
    """True for a structure that plane beds alone can make under a current."""
    return bool(phase.structure) and set(bed_states((phase.structure,))) in (
        {"lower_plane", "upper_plane"}, {"upper_plane"}, {"lower_plane"},
    )  # fmt: skip


def _told_apart(bed: Bed) -> int:
    """Number of ways in which the structures of a bed are read; "no structure" is one of them."""
    return len(
        {states for s in bed.structures if speaks(s)
         if (states := bed_states((s.term,))) or s.term == "massive"}
    )  # fmt: skip


def _mud_notes(size: SizeInterval, context: Context) -> tuple[str, ...]:
    """Where single grains would rain out of a metre of water; flocs fall sooner."""
    d = 1e-3 * size.high_mm
    fluid = context.fluid
    fallout = fallout_velocity(d, 1.5 * d, 1.0, fluid.submerged_gravity, fluid.nu_m2_s)
    return (
        f"Its grains settle one by one from flows slower than about {float(fallout):.1g} m/s (1 m deep); "
        "flocs settle sooner, so no velocity is read from mud.",
    )


def _notes(
    phase: Phase, context: Context, size: SizeInterval, depths: tuple[tuple[str, DepthReading], ...]
) -> tuple[str, ...]:
    """What must be said about how a phase was read."""
    notes = []
    if context.flow_depth_m is not None and context.flow_depth_m[0] == context.flow_depth_m[1]:
        notes.append(f"The flow depth of {context.flow_depth_m[0]:g} m was taken as known within 25 %.")
    sets = phase.set_thickness
    if sets is not None and sets.mean_m is None and any(id == "dune_sets" for id, _ in depths):
        notes.append("No mean of the sets was written: the geometric middle of their range was taken.")
    if context.slope is not None and (
        context.setting.name != "river" or not SAND_MM <= size.middle_mm <= GRAVEL_MM
    ):
        notes.append("The slope was not used: its resistance relation is for rivers with a bed of sand.")
    if not size.sure or not phase.structure_sure:
        notes.append("Size or structure was written as uncertain.")
    if size.middle_mm > GRAVEL_MM:
        notes.append("Coarser than the sand (0.06 to 2 mm) for which the bed states were observed.")
    if size.middle_mm < SAND_MM:
        notes.append("Finer than the sand (0.06 to 2 mm) for which the bed states were observed.")
    if phase.largest_mm is not None and phase.size is None:
        notes.append("The matrix was not described; the clast was taken as four times its bed's median size.")
    if _family(context.bed) in ("carbonate", "marl", "dolomite"):
        notes.append(
            "Carbonate grains differ from quartz in density and shape; the relations are for quartz."
        )
    if context.whole_bed and _told_apart(context.bed) > 1:
        notes.append("Several structures without recorded places: each of them may have been the last.")
    if phase.setting == "unknown":
        notes.append("The setting is unknown: read as a one-way current of water, with no prior.")
    return tuple(notes)
