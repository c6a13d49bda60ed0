"""Units: factors to SI, unit suffixes of names, dimensions. Knows nothing of geology.

A public name ends in its unit (`d_mm`, `flow_depth_m`, `velocity_m_s`). This module turns such a
suffix into a factor to SI and a dimension (exponents of length, time and mass).
"""

from __future__ import annotations

from dataclasses import dataclass

Dimension = tuple[float, float, float]
"""Exponents of length, time and mass."""

NONE: Dimension = (0, 0, 0)
LENGTH: Dimension = (1, 0, 0)
TIME: Dimension = (0, 1, 0)
SPEED: Dimension = (1, -1, 0)
STRESS: Dimension = (-1, -2, 1)
DENSITY: Dimension = (-3, 0, 1)
KINEMATIC_VISCOSITY: Dimension = (2, -1, 0)
DYNAMIC_VISCOSITY: Dimension = (-1, -1, 1)


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit: SI value = factor x value + offset."""

    symbol: str
    factor: float
    dimension: Dimension
    offset: float = 0.0

    def to_si(self, value: float) -> float:
        """Value in SI from a value in this unit; arrays as well."""
        return value * self.factor + self.offset

    def from_si(self, value: float) -> float:
        """Value in this unit from a value in SI; arrays as well."""
        return (value - self.offset) / self.factor


SUFFIXES: dict[str, Unit] = {
    # longest suffixes first: `_m_s` must not be read as `_s`
    "m0_5_s": Unit("m^0.5/s", 1.0, (0.5, -1, 0)),
    "s_m1_3": Unit("s/m^(1/3)", 1.0, (-1 / 3, 1, 0)),
    "kg_m3": Unit("kg/m3", 1.0, DENSITY),
    "kg_s2": Unit("kg/s2", 1.0, (0, -2, 1)),
    "mm_min": Unit("mm/min", 1e-3 / 60, SPEED),
    "mm_s": Unit("mm/s", 1e-3, SPEED),
    "cm_s": Unit("cm/s", 1e-2, SPEED),
    "m_s2": Unit("m/s2", 1.0, (1, -2, 0)),
    "m2_s": Unit("m2/s", 1.0, KINEMATIC_VISCOSITY),
    "m_s": Unit("m/s", 1.0, SPEED),
    "w_m2": Unit("W/m2", 1.0, (0, -3, 1)),
    "pa_s": Unit("Pa s", 1.0, DYNAMIC_VISCOSITY),
    "pa": Unit("Pa", 1.0, STRESS),
    "um": Unit("µm", 1e-6, LENGTH),
    "mm": Unit("mm", 1e-3, LENGTH),
    "cm": Unit("cm", 1e-2, LENGTH),
    "ft": Unit("ft", 0.3048, LENGTH),
    "m": Unit("m", 1.0, LENGTH),
    "s": Unit("s", 1.0, TIME),
    # angles and temperatures stay as they are: formulas take degrees and degrees Celsius
    "deg": Unit("deg", 1.0, NONE),
    "rad": Unit("rad", 1.0, NONE),
    "c": Unit("°C", 1.0, NONE),
}

METRES: dict[str, float] = {
    "m": 1.0, "cm": 0.01, "mm": 0.001, "um": 1e-6, "µm": 1e-6, "μm": 1e-6, "km": 1000.0,
    "ft": 0.3048, "in": 0.0254,
}  # fmt: skip
"""Length units a person may write in a table, in metres."""


def split_suffix(name: str) -> tuple[str, Unit | None]:
    """The stem and the unit of a public name.

    Examples
    --------
    >>> split_suffix("velocity_m_s")[0], split_suffix("velocity_m_s")[1].symbol
    ('velocity', 'm/s')
    >>> split_suffix("dstar")
    ('dstar', None)
    """
    for suffix, unit in SUFFIXES.items():
        if name.endswith("_" + suffix):
            return name[: -len(suffix) - 1], unit
    return name, None
