"""Logs whose flows are drawn from the model, for tests that need to know the truth."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from logkit.flow.settings import flow_settings
from logkit.flow.states import MOVING, Fluid, states_at
from logkit.model import Bed, GrainState, Header, Log, SizeInterval, Structure

STRUCTURES = {
    "ripple": "current_ripples",
    "dune": "trough_cross_bedding",
    "lower_plane": "lower_plane_lamination",
    "upper_plane": "upper_plane_lamination",
    "antidune": "antidunes",
}
LABELS = ("vfU", "fL", "fU", "mL", "mU", "cL", "cU")


@dataclass(frozen=True)
class Truth:
    """A log with the velocity and depth of each bed."""

    log: Log
    velocity_m_s: np.ndarray
    depth_m: np.ndarray


def size_class(coarse_phi: float) -> SizeInterval:
    """A half-phi class by its coarse limit."""
    return SizeInterval(2.0 ** -(coarse_phi + 0.5), 2.0**-coarse_phi, LABELS[::-1][round(2 * coarse_phi)])


def river_log(beds: int, seed: int, with_depth: float = 0.5) -> Truth:
    """Beds of a sand river: flow from the prior, structure from the bed state at the local velocity.

    Parameters
    ----------
    beds : number of beds
    seed : of the drawing
    with_depth : share of beds whose depth is stated within 25 %
    """
    rng = np.random.default_rng(seed)
    settings = flow_settings()
    prior = settings.priors["river"]
    assert prior.velocity_given_depth is not None
    assert prior.depth is not None
    intercept, slope, spread = prior.velocity_given_depth
    shared = np.sqrt(settings.tendency["shared_share"]) * prior.delta * rng.normal()
    own = np.sqrt(1 - settings.tendency["shared_share"]) * prior.delta
    result: list[Bed] = []
    velocities, depths = [], []
    while len(result) < beds:
        ln_h = rng.normal(*prior.depth)
        ln_u = rng.normal(intercept + slope * ln_h, spread)
        coarse = float(rng.integers(0, 6)) / 2
        phi = coarse + 0.5 * rng.random()
        local = np.exp(ln_u + shared + own * rng.normal())
        h = float(np.exp(ln_h))
        if not 0.03 < h < 50:
            continue
        shares = states_at(float(local), h, 2.0**-phi, Fluid())
        state = rng.choice(list(shares), p=list(shares.values()))
        if state not in MOVING:
            continue
        told = float(np.exp(ln_h + 0.15 * rng.normal()))
        place = len(result)
        result.append(
            Bed(
                str(place + 1), float(place), place + 1.0,
                grain=(GrainState(0.0, size_class(coarse)),),
                structures=(Structure(STRUCTURES[state]),),
                flow_depth_m=(0.77 * told, 1.3 * told) if rng.random() < with_depth else None,
            )
        )  # fmt: skip
        velocities.append(np.exp(ln_u))
        depths.append(h)
    return Truth(Log(Header(setting="river"), tuple(result)), np.array(velocities), np.array(depths))
