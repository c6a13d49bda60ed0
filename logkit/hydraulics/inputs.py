"""What hydraulic formulas share: the meaning of their symbols and how public inputs become their arguments.

A person gives a temperature and a salinity; a formula wants a viscosity. `Fluid` stands between them. The
formulas themselves, and anything with a source of its own, belong into the topic modules.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import partial
from typing import Any, TypeAlias

import numpy as np

from logkit.errors import ArgumentError
from logkit.grains.numbers import dimensionless_diameter, particle_reynolds_number
from logkit.registry import GRAVITY_M_S2
from logkit.registry import formula as register
from logkit.units import split_suffix

formula = partial(register, elementwise=True)
"""Registers a hydraulics formula: every one works value by value."""

Values: TypeAlias = Any
"""A float or an array of floats; formulas are vectorised and broadcast over all their arguments."""

TEMPERATURE_C = 20.0
SALINITY = 0.0
QUARTZ_KG_M3 = 2650.0
QUARTZ_SUBMERGED_GRAVITY = 1.65
"""Customary R of quartz in fresh water, where a fluid is known by its viscosity alone."""
AIR_KG_M3 = 1.225
AIR_NU_M2_S = 1.46e-5

SYMBOLS: dict[str, str] = {
    "d_m": "grain diameter D",
    "d50_m": "median grain diameter D50",
    "d90_m": "diameter D90 that 90 % of the grains do not reach",
    "submerged_gravity": "submerged specific gravity R = (rho_s - rho)/rho",
    "nu_m2_s": "kinematic viscosity nu",
    "mu_pa_s": "dynamic viscosity mu",
    "rho_kg_m3": "water density rho",
    "rho_s_kg_m3": "grain density rho_s",
    "rho_air_kg_m3": "air density rho_a",
    "nu_air_m2_s": "kinematic viscosity of air nu_a",
    "g_m_s2": "acceleration of gravity g",
    "temp_c": "water temperature T",
    "salinity": "practical salinity S",
    "dstar": "dimensionless diameter D*",
    "rep": "particle Reynolds number Rep",
    "ws_m_s": "settling velocity ws",
    "ustar_m_s": "shear velocity u*",
    "velocity_m_s": "depth-averaged velocity U",
    "flow_depth_m": "flow depth h",
    "ks_m": "roughness height ks",
    "slope": "water-surface or bed slope S, rise over run",
    "theta": "Shields number theta, total stress",
    "theta_skin": "skin-friction Shields number theta'",
    "concentration_vol": "volume fraction of grains C",
    "period_s": "wave period T",
    "water_depth_m": "water depth h",
    "wave_height_m": "wave height H",
    "orbital_diameter_m": "near-bed orbital diameter d0",
    "orbital_velocity_m_s": "near-bed orbital velocity amplitude um",
    "spacing_m": "ripple spacing lambda",
}
"""Meaning of the arguments by their names in the signatures."""

_FLUID_NAMES = (
    "temp_c", "salinity", "rho_kg_m3", "mu_pa_s", "nu_m2_s", "rho_s_kg_m3", "submerged_gravity",
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class Fluid:
    """Turns temperature, salinity and densities into what a formula in water asks for.

    What is not given is fresh water at 20 °C and quartz; a value that is given is always kept. A fluid that
    is given by its viscosity alone has no known density: R is then the customary 1.65.

    Attributes
    ----------
    wanted : names in the formula's signature that may be filled in
    size : the argument from which D* or Rep may be calculated when they are not given
    """

    wanted: tuple[str, ...]
    size: str = "d_m"

    @property
    def also(self) -> tuple[str, ...]:
        """Public inputs a person may give in place of the wanted ones."""
        names = ["temp_c", "salinity", "rho_s_kg_m3"]
        if "dstar" in self.wanted or "rep" in self.wanted:
            names.append(self.size)
        return tuple(n for n in names if n not in self.wanted)

    def __call__(self, given: dict[str, Any]) -> dict[str, Any]:
        """The given inputs with the wanted ones added and the others used up."""
        from logkit.hydraulics import water

        result = dict(given)
        fluid = {name: result.pop(name) for name in _FLUID_NAMES if name in result}
        for name in ("rho_kg_m3", "rho_s_kg_m3", "mu_pa_s", "nu_m2_s"):
            if name in fluid and np.any(np.asarray(fluid[name]) <= 0):
                raise ArgumentError(name, fluid[name], "above zero")
        temp, salt = fluid.get("temp_c", TEMPERATURE_C), fluid.get("salinity", SALINITY)
        makers: dict[str, Callable[[], Any]] = {
            "temp_c": lambda: temp,
            "salinity": lambda: salt,
            "rho_s_kg_m3": lambda: QUARTZ_KG_M3,
            "rho_kg_m3": lambda: water.density(temp, salt),
            "mu_pa_s": lambda: water.dynamic_viscosity(temp, salt),
            "nu_m2_s": lambda: value("mu_pa_s") / value("rho_kg_m3"),
            "submerged_gravity": lambda: (
                QUARTZ_SUBMERGED_GRAVITY
                if "nu_m2_s" in given and not {"temp_c", "salinity", "rho_kg_m3", "rho_s_kg_m3"} & set(given)
                else value("rho_s_kg_m3") / value("rho_kg_m3") - 1
            ),
        }

        def value(name: str) -> Any:
            if name not in fluid:
                fluid[name] = makers[name]()
            return fluid[name]

        diameter = self._take_size(result)
        for name in self.wanted:
            if name in result:
                continue
            if name in makers:
                result[name] = value(name)
            elif diameter is not None:
                number = dimensionless_diameter if name == "dstar" else particle_reynolds_number
                gravity = result.get("g_m_s2", GRAVITY_M_S2)
                result[name] = number(diameter, value("submerged_gravity"), value("nu_m2_s"), gravity)
        return result

    def _take_size(self, result: dict[str, Any]) -> Any:
        """A grain size given in place of D* or Rep, in metres, removed from the inputs."""
        if not {"dstar", "rep"} & set(self.wanted):
            return None
        stem = split_suffix(self.size)[0]
        for name in tuple(result):
            found, unit = split_suffix(name)
            if found == stem and unit is not None:
                diameter = unit.to_si(result.pop(name))
                if np.any(np.asarray(diameter) <= 0):
                    raise ArgumentError(name, diameter, "above zero")
                return diameter
        return None


def above_one(ratio: Values) -> Values:
    """The argument of a wall-law logarithm, NaN where roughness reaches through the flow."""
    return np.where(np.asarray(ratio) > 1, ratio, np.nan)


def chosen(argument: str, value: str, table: dict[str, Any]) -> Any:
    """Entry of a table of constants, with an error that lists the names.

    Raises
    ------
    ArgumentError : no such name
    """
    try:
        return table[value]
    except (KeyError, TypeError):
        raise ArgumentError(argument, value, "one of " + ", ".join(repr(k) for k in table)) from None
