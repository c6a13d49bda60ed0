"""What the flow engine gives for each phase: quantiles, status, bound, state, conflict, tendency."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from logkit.model.bed import Contact, SetThickness, SizeInterval

Bound = Literal["range", "above", "below", ""]
Tendency = Literal["waxing", "waning", "steady", "not determinable"]

WIND_TRANSPORT = "saltation in wind"
"""Transport mode of every estimate whose velocity is that of a wind."""


@dataclass(frozen=True, slots=True)
class Quantiles:
    """10, 25, 50, 75 and 90 % points of a quantity in SI."""

    p10: float
    p25: float
    p50: float
    p75: float
    p90: float


@dataclass(frozen=True, slots=True)
class Phase:
    """Part of a bed with one grain-size state and one structure.

    boundary : "recorded" when base and top inside the bed were written down, "unknown" when the bed was
        divided evenly for want of a record, "bed" when the phase is the whole bed
    base_size, top_size : size at the base and the top of the phase
    structure : vocabulary id, "" for none recorded
    structure_code : Bouma letter it was written with ("Tb"), "" when it was written otherwise
    """

    section: str
    bed: str
    index: int
    base_m: float
    top_m: float
    boundary: Literal["recorded", "unknown", "bed"]
    setting: str
    structure: str = ""
    structure_sure: bool = True
    base_size: SizeInterval | None = None
    top_size: SizeInterval | None = None
    largest_mm: float | None = None
    set_thickness: SetThickness | None = None
    contact: Contact | None = None
    bed_index: int = 0
    structure_code: str = ""

    @property
    def size(self) -> SizeInterval | None:
        """Hull of base and top size; None when neither is known."""
        sizes = [s for s in (self.base_size, self.top_size) if s is not None]
        if not sizes:
            return None
        if len(sizes) == 1 or sizes[0] == sizes[1]:
            return sizes[0]
        low, high = min(s.low_mm for s in sizes), max(s.high_mm for s in sizes)
        return SizeInterval(low, high, sure=all(s.sure for s in sizes))


@dataclass(frozen=True, slots=True)
class Clash:
    """Two criteria that leave nearly no common ground.

    first, second : criterion ids; `first_reading`, `second_reading` velocity in words for each alone
    first_velocity, second_velocity : velocity quantiles of each alone, m/s (None when it gives none)
    strength : 0 (agree) … 1 (no flow satisfies both)
    """

    first: str
    second: str
    strength: float
    first_reading: str = ""
    second_reading: str = ""
    first_velocity: Quantiles | None = None
    second_velocity: Quantiles | None = None


@dataclass(frozen=True, slots=True)
class PhaseEstimate:
    """The flow read from one phase. Quantities are None where there is no estimate.

    status : "estimated" or "no estimate" (then `reason` says why)
    bound : "range"; "above" / "below" for a one-sided answer, whose limit is `limit_velocity_m_s`
        (and `limit_flow_depth_m`), the quantiles staying None; "" without an estimate
    base_velocity, top_velocity : velocity at the base and the top of the phase where the grain size differs
    conflict : 0 … 1
    tendency : change from the phase below to this one, with its probability
    """

    phase: Phase
    status: Literal["estimated", "no estimate"]
    reason: str = ""
    bound: Bound = ""
    velocity: Quantiles | None = None
    flow_depth: Quantiles | None = None
    shear_velocity: Quantiles | None = None
    total_shear_velocity: Quantiles | None = None
    froude: Quantiles | None = None
    base_velocity: Quantiles | None = None
    top_velocity: Quantiles | None = None
    limit_velocity_m_s: float | None = None
    limit_flow_depth_m: float | None = None
    bed_state: str = ""
    transport_mode: str = ""
    conflict: float = 0.0
    clash: Clash | None = None
    tendency: Tendency = "not determinable"
    tendency_probability: float | None = None
    notes: tuple[str, ...] = ()

    @property
    def is_wind(self) -> bool:
        """True when the velocity is that of the wind 10 m above the ground, and not of water."""
        return self.transport_mode == WIND_TRANSPORT
