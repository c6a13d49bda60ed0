"""Sample arguments for any formula, and the same arguments in other units; used by tests and mutations."""

from __future__ import annotations

import inspect
from typing import Any

import numpy as np

from logkit.registry import FORMULAS, Formula
from logkit.units import NONE, Dimension, split_suffix

BY_NAME: dict[str, Any] = {
    "d_m": 4e-4, "d50_m": 4e-4, "d90_m": 6e-4, "d1_m": 2e-4, "d2_m": 5e-4, "d_fine_m": 2e-4, "d_coarse_m": 5e-4,
    "ks_m": 0.02, "submerged_gravity": 1.65, "nu_m2_s": 1.1e-6, "mu_pa_s": 1.1e-3, "rho_kg_m3": 1010.0,
    "rho_s_kg_m3": 2650.0, "rho_air_kg_m3": 1.2, "nu_air_m2_s": 1.5e-5, "flow_depth_m": 1.3, "velocity_m_s": 0.7,
    "ws_m_s": 0.05, "ustar_m_s": 0.06, "period_s": 6.0, "water_depth_m": 9.0, "wave_height_m": 0.8,
    "orbital_diameter_m": 0.5, "spacing_m": 0.1, "slope": 2e-3, "dstar": 9.0, "rep": 30.0, "temp_c": 12.0,
    "salinity": 20.0, "transport_stage": 6.0, "particle_reynolds": 3.0, "bedform_height_m": 0.3,
    "bedform_length_m": 6.0, "u_over_ustar": 15.0, "aggradation_rate_m_s": 2e-3, "bulk_density_kg_m3": 1300.0,
    "stress_ratio": 2.0, "manning_n_s_m1_3": 0.03, "migration_m_s": 1e-4, "cohesion_kg_s2": 3e-4,
    "csf": 0.7, "powers": 3.5, "sigma_motion": 0.2, "bed_slope_deg": 4.0, "concentration_vol": 0.1,
    "theta": 0.3, "theta_skin": 0.3, "froude": 0.4, "thickness_m": 20.0,
}  # fmt: skip
"""Arguments in SI that lie inside the tested range of the formulas."""

WORDS = {"bound": "lower", "percentile": "p50", "of": "D50"}
"""Words for formulas that take numbers and a word."""

BY_UNIT: dict[Dimension, float] = {NONE: 0.5, (1, 0, 0): 0.7, (0, 1, 0): 6.0, (1, -1, 0): 0.4}


def numeric_arguments(record: Formula) -> dict[str, Any] | None:
    """SI arguments for a formula that takes numbers; None where it takes nothing else than words or tables."""
    arguments: dict[str, Any] = {}
    parameters = inspect.signature(record.function).parameters
    if all(name in WORDS for name in parameters):
        return None
    for name, parameter in parameters.items():
        if name in WORDS:
            arguments[name] = WORDS[name]
            continue
        unit = split_suffix(name)[1]
        default = parameter.default
        if isinstance(default, str) or (
            default is inspect.Parameter.empty and name not in BY_NAME and unit is None
        ):
            if default is inspect.Parameter.empty:
                return None
            continue
        if default is not inspect.Parameter.empty and isinstance(default, int | float):
            arguments[name] = float(default)
        else:
            arguments[name] = BY_NAME.get(name, BY_UNIT.get(unit.dimension if unit else NONE, 0.5))
    return arguments


def hydraulic_records() -> list[Formula]:
    """Every formula of the hydraulics modules."""
    return [r for _, r in FORMULAS.items() if r.function.__module__.startswith("logkit.hydraulics")]


def dimensional_records() -> list[Formula]:
    """Formulas of every family that are declared homogeneous and have a dimension to rescale."""
    found = []
    for _, record in FORMULAS.items():
        units = [split_suffix(n)[1] for n in inspect.signature(record.function).parameters]
        dimensional = record.output.dimension != NONE or any(u and u.dimension != NONE for u in units)
        if record.homogeneous and dimensional:
            found.append(record)
    return found


LENGTH, TIME, MASS = 7.0, 3.0, 5.0


def factor(dimension: Dimension) -> float:
    """How much a number of this dimension grows when lengths, times and masses are read in other units."""
    return float(LENGTH ** dimension[0] * TIME ** dimension[1] * MASS ** dimension[2])


def scaling_error(record: Formula) -> float:
    """Largest relative difference between the rescaled result and the result of rescaled arguments."""
    arguments = numeric_arguments(record)
    if arguments is None:
        raise ValueError(f"{record.id} takes words: no sample arguments")
    scaled = {}
    for name, value in arguments.items():
        unit = split_suffix(name)[1]
        scaled[name] = value if name in WORDS else value * factor(unit.dimension if unit else NONE)
    if record.output.unit == "":
        return float(record.function(**arguments) != record.function(**scaled))
    before = np.asarray(record.function(**arguments), dtype=float) * factor(record.output.dimension)
    after = np.asarray(record.function(**scaled), dtype=float)
    assert np.all(np.isfinite(before)), f"{record.id} is not finite at the sample arguments"
    return float(np.max(np.abs(after - before) / np.maximum(np.abs(before), 1e-300)))
