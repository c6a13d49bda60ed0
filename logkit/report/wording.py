"""Numbers and ranges in words: units of the report, no more digits than a number deserves."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from logkit.model import PhaseEstimate, Quantiles, SizeInterval
from logkit.words import NO_BREAK, digits

FEET = 0.3048
MEASURE = re.compile(r"\d+(?:\.\d+)?")
IN_METRES = re.compile(
    r"(?P<numbers>(?<![\w.])\d+(?:\.\d+)?(?:(?: to |[-–])\d+(?:\.\d+)?)?)[ \u00a0](?P<unit>m/s|m)(?![\w/²])"
)


@dataclass(frozen=True, slots=True)
class Units:
    """Language of units: metres and m/s, or feet and ft/s. Grain sizes stay in mm, angles in degrees."""

    feet: bool = False

    @property
    def length(self) -> str:
        """Unit of heights, thicknesses and depths."""
        return "ft" if self.feet else "m"

    @property
    def speed(self) -> str:
        """Unit of velocities."""
        return "ft/s" if self.feet else "m/s"

    def number(self, metres: float) -> float:
        """A length or velocity in the report's unit."""
        return metres / FEET if self.feet else metres

    def height(self, metres: float) -> str:
        """A height or thickness to the centimetre (or a twentieth of a foot), without unit."""
        return f"{self.number(metres):.2f}"

    def height_words(self, metres: float) -> str:
        """A height or thickness with its unit."""
        return f"{self.height(metres)}{NO_BREAK}{self.length}"

    def span(self, quantiles: Quantiles | None) -> str:
        """`P10–P90` of a length or velocity without unit, "" when there is none."""
        if quantiles is None:
            return ""
        return f"{digits(self.number(quantiles.p10))}–{digits(self.number(quantiles.p90))}"

    def words(self, text: str) -> str:
        """Lengths in m and velocities in m/s inside a sentence, in the report's unit."""
        if not self.feet:
            return text

        def turn(match: re.Match[str]) -> str:
            unit = self.speed if match["unit"] == "m/s" else self.length
            return MEASURE.sub(lambda m: digits(self.number(float(m[0]))), match["numbers"]) + f" {unit}"

        return IN_METRES.sub(turn, text)

    def middle(self, quantiles: Quantiles | None) -> str:
        """Median of a length or velocity without unit."""
        return "" if quantiles is None else digits(self.number(quantiles.p50))


def chance(p: float | None) -> str:
    """A probability of a test; one that rounds to nothing is said to be below 0.001."""
    if p is None:
        return ""
    return "below 0.001" if p < 0.001 else f"{p:.3f}"


def velocity_cell(estimate: PhaseEstimate, units: Units) -> str:
    """Velocity as shown in a table: the range, a bound, or nothing."""
    if estimate.bound in ("above", "below") and estimate.limit_velocity_m_s is not None:
        wind = " (wind, 10 m up)" if estimate.is_wind else ""
        return f"{estimate.bound}{NO_BREAK}{digits(units.number(estimate.limit_velocity_m_s))}{wind}"
    return units.span(estimate.velocity)


def depth_cell(estimate: PhaseEstimate, units: Units) -> str:
    """Flow depth as shown in a table."""
    if estimate.flow_depth is not None:
        return units.span(estimate.flow_depth)
    if estimate.limit_flow_depth_m is not None:
        return f"above{NO_BREAK}{digits(units.number(estimate.limit_flow_depth_m))}"
    return ""


def size_cell(size: SizeInterval | None) -> str:
    """A size interval in mm, with the class as written in front when it has one."""
    if size is None:
        return ""
    span = (
        digits(size.low_mm)
        if size.low_mm == size.high_mm
        else f"{digits(size.low_mm)}–{digits(size.high_mm)}"
    )
    return (
        f"{size.label} ({span}{NO_BREAK}mm)"
        if size.label and "mm" not in size.label
        else f"{span}{NO_BREAK}mm"
    )


def frame_cell(value: Any) -> str:
    """A value of a table of statistics: three digits, `yes` and `no`, nothing where there is none."""
    plain = value.item() if hasattr(value, "item") else value
    if plain is None or plain != plain:
        return ""
    if isinstance(plain, bool):
        return "yes" if plain else "no"
    return digits(plain, 3) if isinstance(plain, float) else str(plain)
