"""Turbidity currents, waves and wind: what a phase tells there, without the ladder of bed states.

Each function answers one phase with an estimate and its ledger rows. A wave-made structure never gets the
velocity of a current; a turbidity current's depth is not asked for.
"""

from __future__ import annotations

import math
from dataclasses import replace
from functools import lru_cache

import numpy as np

from logkit.flow.criteria import Context, criterion_texts
from logkit.flow.grid import LEVELS, Array
from logkit.flow.ledger import LedgerRow
from logkit.flow.phases import SAND_MM, structure_term
from logkit.flow.settings import flow_settings
from logkit.flow.states import D90_OVER_D50, Fluid
from logkit.hydraulics import wave_ripples, waves, wind
from logkit.hydraulics.bedstates import soft_edge
from logkit.hydraulics.settling import ferguson_church
from logkit.hydraulics.threshold import MEASURED_SIGMA_LOG10
from logkit.model import WIND_TRANSPORT, Phase, PhaseEstimate, Quantiles, SizeInterval
from logkit.registry import GRAVITY_M_S2

SUSPENDED_LIMIT_MM = 1.0
"""Coarser grains need hindered settling or grain collisions to stay up: no dilute suspension (Lowe 1982)."""

WIND_HEIGHT_M = 10.0
"""Height at which a wind speed is reported, m; the friction velocity is in the notes."""

ANORBITAL_STEEPNESS = 0.10
"""Height over spacing below which wave ripples are anorbital (Wiberg & Harris 1994)."""

SHORT_PERIOD_S = 2.0
"""Period that gives the least orbital velocity where no period was stated, s."""

Answered = tuple[PhaseEstimate, tuple[LedgerRow, ...]]


def no_estimate(phase: Phase, reason: str, *notes: str) -> Answered:
    """No estimate, and why."""
    return PhaseEstimate(phase, "no estimate", reason=reason, notes=notes), ()


# turbidity currents


def read_density_current(phase: Phase, context: Context, read_tb: bool) -> Answered:
    """A phase laid down by a turbidity current.

    Parameters
    ----------
    phase, context : the phase and what belongs to it
    read_tb : read Tb as dilute upper plane bed, by the user's choice
    """
    division = bouma_division(phase)
    ends = [end for end in (phase.base_size, phase.top_size) if end is not None]
    size = max(ends, key=lambda end: end.middle_mm, default=None)
    if division in ("Td", "Te"):
        return no_estimate(
            phase,
            "fall-out" if division == "Td" else "fall-out of mud",
            "Td and Te need no traction: no velocity is read from them.",
        )
    if size is None:
        return no_estimate(phase, "no grain size")
    if size.middle_mm < SAND_MM and not phase.structure:
        return no_estimate(phase, "mud")
    if division == "Ta":
        if size.middle_mm > SUSPENDED_LIMIT_MM:
            return no_estimate(
                phase, "outside validity",
                "Grains above 1 mm are not held up by turbulence alone; the suspension rule does not hold.",
            )  # fmt: skip
        return _density_range(phase, context, size, "suspension",
                              "coarse grains (D90) held up at u* of 0.4 to 1.0 of their settling velocity")  # fmt: skip
    if division == "Tc":
        return _density_range(phase, context, size, "turbidite_ripples",
                              "ripples: above the motion of the sand, below the plane-bed edge")  # fmt: skip
    if division == "Tb":
        if not read_tb:
            return no_estimate(
                phase, "Tb is ambiguous",
                "Plane lamination in a turbidite can be a dense near-bed layer; choose read_tb to read it.",
            )  # fmt: skip
        return _density_above(phase, context, size, "turbidite_plane", "a dilute upper plane bed, by choice")
    return _density_above(phase, context, size, "turbidite_motion", "the flow moved the sand along the bed")


def bouma_division(phase: Phase) -> str:
    """Bouma division of a phase, from its letter or its words; "" for traction of another kind."""
    if phase.structure_code:
        return phase.structure_code
    structure = phase.structure
    term = structure_term(structure)
    if term is None:
        return ""
    if structure in ("massive", "graded_massive", "dish_structures", "water_escape_pipes"):
        return "Ta"
    if structure in ("plane_lamination", "upper_plane_lamination", "parting_lineation", "spaced_lamination"):
        return "Tb"
    if structure == "convolute" or term.bed_state == "ripple":
        return "Tc"
    return "Td" if structure == "fine_lamination" else ""


def _density_range(
    phase: Phase, context: Context, size: SizeInterval, criterion: str, words: str
) -> Answered:
    shear, velocity = density_quantiles(criterion, size.low_mm, size.high_mm, context.fluid)
    suspended = criterion == "suspension"
    estimate = PhaseEstimate(
        phase,
        "estimated",
        bound="range",
        velocity=velocity,
        shear_velocity=shear,
        bed_state="" if suspended else "ripple",
        transport_mode="suspension" if suspended else "bed load and suspension",
        notes=(
            "Velocity of the layer from its bed shear with a drag of 0.002 to 0.01; depth is not determinable.",
        ),
    )
    return _with_ends(estimate, context, criterion), (_row(phase, criterion, words, "band", velocity),)


def _with_ends(estimate: PhaseEstimate, context: Context, criterion: str) -> PhaseEstimate:
    """The estimate with velocities at base and top where the size differs."""
    phase = estimate.phase
    base, top = phase.base_size, phase.top_size
    if base is None or top is None or base == top:
        return estimate
    return replace(
        estimate,
        base_velocity=density_quantiles(criterion, base.low_mm, base.high_mm, context.fluid)[1],
        top_velocity=density_quantiles(criterion, top.low_mm, top.high_mm, context.fluid)[1],
    )


def _density_above(
    phase: Phase, context: Context, size: SizeInterval, criterion: str, words: str
) -> Answered:
    _, velocity = density_quantiles(criterion, size.low_mm, size.high_mm, context.fluid)
    estimate = PhaseEstimate(
        phase, "estimated", bound="above", limit_velocity_m_s=velocity.p10,
        bed_state="upper_plane" if criterion == "turbidite_plane" else "",
    )  # fmt: skip
    return estimate, (_row(phase, criterion, words, "above", velocity),)


@lru_cache(maxsize=4096)
def density_quantiles(
    criterion: str, low_mm: float, high_mm: float, fluid: Fluid
) -> tuple[Quantiles, Quantiles]:
    """Bed shear velocity and velocity of a turbidity current from one criterion.

    Parameters
    ----------
    criterion : "suspension", "turbidite_ripples", or an edge: "turbidite_plane", "turbidite_motion"
    low_mm, high_mm : grain-size class, uniform in phi
    fluid : water and grains

    Returns
    -------
    quantiles of u* and of U = u*/sqrt(Cd), m/s; of an edge: of the value at the edge

    Notes
    -----
    It is the coarse part of a suspended load that tells how strong the current was, hence D90 and not D50.

    References
    ----------
    bagnold_1966, komar_1985, parker_1987
    """
    numbers = flow_settings().density_current
    shares = (np.arange(12) + 0.5) / 12
    d = 1e-3 * low_mm * (high_mm / low_mm) ** shares
    unit = np.sqrt(fluid.submerged_gravity * GRAVITY_M_S2 * d)[:, None]
    if criterion == "suspension":
        ends = np.log(numbers["suspension_low"]), np.log(numbers["suspension_high"])
        ratio = np.exp(ends[0] + (ends[1] - ends[0]) * (np.arange(32) + 0.5) / 32)
        coarse = D90_OVER_D50 * d
        shear = ferguson_church(coarse, fluid.submerged_gravity, fluid.nu_m2_s)[:, None] * ratio[None, :]
        weight = np.ones_like(shear)
    elif criterion == "turbidite_ripples":
        theta = np.geomspace(0.005, 8.0, 240)[None, :]
        moved = soft_edge(theta, fluid.theta_critical(d)[:, None], MEASURED_SIGMA_LOG10)
        plane = soft_edge(theta, numbers["plane_theta"], numbers["plane_sigma_log10"])
        shear, weight = unit * np.sqrt(theta), moved * (1 - plane)
    else:
        plane_bed = criterion == "turbidite_plane"
        centre = numbers["plane_theta"] if plane_bed else fluid.theta_critical(d)[:, None]
        sigma = numbers["plane_sigma_log10"] if plane_bed else MEASURED_SIGMA_LOG10
        shear = unit * np.sqrt(centre * 10.0 ** (sigma * _normal_nodes(41)[None, :]))
        weight = np.ones_like(shear)
    velocity = shear[..., None] * np.exp(
        -0.5 * (np.log(numbers["drag_median"]) + numbers["drag_sd_ln"] * _normal_nodes(31))
    )
    return (
        _weighted_quantiles(shear.ravel(), weight.ravel()),
        _weighted_quantiles(velocity.ravel(), np.repeat(weight.ravel(), 31)),
    )


def _normal_nodes(count: int) -> Array:
    """Middles of equal shares of the standard normal."""
    from scipy.special import ndtri

    return np.asarray(ndtri((np.arange(count) + 0.5) / count))


def _weighted_quantiles(values: Array, weights: Array) -> Quantiles:
    order = np.argsort(values)
    cumulated = np.cumsum(weights[order]) - 0.5 * weights[order]
    return Quantiles(*np.interp(np.array(LEVELS) * weights.sum(), cumulated, values[order]).tolist())


def _row(phase: Phase, criterion: str, words: str, bound: str, velocity: Quantiles | None) -> LedgerRow:
    text = criterion_texts()[criterion]
    one_sided = bound != "band"
    return LedgerRow(
        phase.section, phase.bed, phase.index + 1, criterion, text.label, words, bound,
        alone_p10_m_s=velocity.p10 if velocity and bound != "below" else None,
        alone_p50_m_s=None if one_sided or velocity is None else velocity.p50,
        alone_p90_m_s=velocity.p90 if velocity and bound != "above" else None,
        source=text.source, validity=text.validity, status=text.status,
    )  # fmt: skip


# waves


def read_waves(phase: Phase, context: Context) -> Answered:
    """A phase with a wave-made structure, or any phase of a wave setting: orbital velocity, no current."""
    if phase.structure in ("hummocky", "swaley"):
        return _hummocky(phase, context)
    if phase.structure == "combined_ripples":
        return no_estimate(phase, "waves and a current", "The share of the current is not determinable.")
    if phase.structure == "wave_ripples":
        orbital = orbital_velocity(phase, context)
        if orbital is None:
            return no_estimate(phase, "waves")
        span = f"{orbital[0]:.2g}-{orbital[1]:.2g} m/s"
        text = f"waves: orbital velocity {span}; no current velocity follows from it"
        return no_estimate(phase, "waves", text, *_spacing_notes(phase, context))
    term = structure_term(phase.structure)
    plane = term is not None and (phase.structure == "plane_lamination" or term.bed_state == "upper_plane")
    if term is not None and term.group == "current" and not plane:
        return no_estimate(
            phase, "waves and a current",
            "A structure of a current in a setting of waves: they may have helped to make it.",
        )  # fmt: skip
    if phase.size is None or not SAND_MM <= phase.size.middle_mm <= 2.5:
        return no_estimate(phase, "waves")
    d, gravity = 1e-3 * phase.size.middle_mm, context.fluid.submerged_gravity
    if plane:
        least = float(waves.sheet_flow_velocity(d, gravity, "lower"))
        why = "where waves laid down the plane beds, ripples were washed out"
    else:
        period = context.bed.wave_period_s or SHORT_PERIOD_S
        least = float(waves.komar_miller_threshold(d, period, gravity))
        why = "waves moved the sand"
    return no_estimate(
        phase, "waves", f"{why}: orbital velocity above {least:.2g} m/s; no current velocity follows from it"
    )


def _spacing_notes(phase: Phase, context: Context) -> tuple[str, ...]:
    """What the spacing of wave ripples tells, if their size followed the orbit of the water.

    References
    ----------
    miller_komar_1980, diem_1985, wiberg_harris_1994
    """
    bed = context.bed
    spacing, height, period = bed.ripple_wavelength_m, bed.ripple_height_m, bed.wave_period_s
    if spacing is None or phase.size is None:
        return ()
    if height is not None and height / spacing < ANORBITAL_STEEPNESS:
        return (f"steepness {height / spacing:.2g}: anorbital ripples, whose spacing tells of no orbit",)
    d = 1e-3 * phase.size.middle_mm
    if spacing > float(wave_ripples.ripple_spacing_limit(d)):
        return ("the spacing is above that of orbital ripples in this sand: it tells of no orbit",)
    orbit = spacing / wave_ripples.ORBITAL_COEFFICIENT
    longest = float(wave_ripples.longest_period(spacing, d, context.fluid.submerged_gravity))
    notes = (
        f"orbital ripples of this spacing: orbit {orbit:.2g} m wide at the bed, periods up to {longest:.2g} s",
    )
    if period is None or period <= longest:
        return notes
    return (
        *notes,
        f"the stated period of {period:g} s is longer: check the period, or the ripples are anorbital",
    )


def _hummocky(phase: Phase, context: Context) -> Answered:
    """Hummocks bound the current from above (Dumas & Arnott 2006); the wave motion goes into the notes."""
    limit = Quantiles(0.05, 0.05, 0.05, 0.10, 0.10)
    spacing = context.bed.ripple_wavelength_m
    orbit = () if spacing is None else (
        f"spacing {spacing:.2g} m: orbit wider than {spacing / waves.hcs_spacing_over_orbital_maximum():.2g} m "
        "at the bed",
    )  # fmt: skip
    rate = waves.hcs_aggradation_rate(phase.structure)
    minutes = (phase.top_m - phase.base_m) / rate / 60.0
    estimate = PhaseEstimate(
        phase, "estimated", bound="below", limit_velocity_m_s=0.10,
        transport_mode="waves with a weak current",
        notes=(
            "waves: orbital velocity 0.5-0.9 m/s at periods of 8-10 s; the bound is on the current alone "
            "(0.05 m/s where hummocks are isotropic)",
            f"laid down in about {_duration(minutes)} at the aggradation of {60e3 * rate:.2g} mm/min measured "
            "in a flume",
            *orbit,
        ),
    )  # fmt: skip
    words = "a current above 0.05 to 0.10 m/s would stretch the hummocks into dune-like forms"
    return estimate, (_row(phase, "hummocky_current", words, "below", limit),)


def _duration(minutes: float) -> str:
    if minutes < 90:
        return f"{max(float(f'{minutes:.1g}'), 1):g} min"
    return f"{float(f'{minutes / 60:.2g}'):g} h"


def orbital_velocity(phase: Phase, context: Context) -> tuple[float, float] | None:
    """Range of the near-bed orbital velocity of wave ripples, m/s: from the motion of the sand to its wash-out.

    References
    ----------
    komar_miller_1975, van_der_a_2013, miller_komar_1980
    """
    if phase.size is None or not 0.05 <= phase.size.middle_mm <= 2.5:
        return None
    d = 1e-3 * phase.size.middle_mm
    gravity, period = context.fluid.submerged_gravity, context.bed.wave_period_s
    low = float(waves.komar_miller_threshold(d, period or SHORT_PERIOD_S, gravity))
    high = float(waves.sheet_flow_velocity(d, gravity, "upper"))
    spacing = context.bed.ripple_wavelength_m
    if spacing and period:
        orbital = float(waves.orbital_velocity(spacing / wave_ripples.ORBITAL_COEFFICIENT, period))
        if low <= orbital <= high:
            low, high = 0.8 * orbital, 1.25 * orbital
    return low, high


# wind


def read_wind(phase: Phase, context: Context) -> Answered:
    """A phase moved by wind: the wind was above the threshold of its sand.

    References
    ----------
    kok_2012, shao_lu_2000
    """
    if phase.size is None:
        return no_estimate(phase, "no grain size")
    size = phase.size
    if not 0.05 <= size.middle_mm <= 2.0:
        return no_estimate(phase, "outside validity")
    density = context.fluid.grain_density_kg_m3
    impact = float(wind.bagnold_impact(1e-3 * size.middle_mm, density))
    fluid = float(wind.shao_lu(1e-3 * size.middle_mm, density))
    low, high = min(impact, fluid), max(impact, fluid)
    speeds = [u / 0.4 * math.log(WIND_HEIGHT_M / (1e-3 * size.middle_mm / 15.0)) for u in (low, high)]
    estimate = PhaseEstimate(
        phase, "estimated", bound="above", limit_velocity_m_s=speeds[0], transport_mode=WIND_TRANSPORT,
        notes=(
            f"wind 10 m above the ground over {speeds[0]:.2g}-{speeds[1]:.2g} m/s; "
            f"its friction velocity over {low:.2g}-{high:.2g} m/s",
        ),
    )  # fmt: skip
    middle = math.sqrt(speeds[0] * speeds[1])
    quantiles = Quantiles(speeds[0], speeds[0], middle, speeds[1], speeds[1])
    return estimate, (_row(phase, "wind_threshold", "the wind moved the sand", "above", quantiles),)
