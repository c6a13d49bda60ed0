"""Synthetic sections for the tests of this folder: known truth, made from a seed."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from logkit.model import Bed, GrainState, Header, Log, SizeInterval, Structure

STRUCTURES = (
    "trough_cross_bedding",
    "plane_lamination",
    "ripple_cross_lamination",
    "massive",
    "fine_lamination",
)


def bed(name: str, base_m: float, thickness_m: float, phi: float, structure: str, **more: object) -> Bed:
    """A bed of one half-phi class."""
    size = SizeInterval(2.0 ** -(phi + 0.25), 2.0 ** -(phi - 0.25))
    lithology = "sandstone" if phi < 4 else "mudstone"
    return Bed(
        name,
        base_m,
        base_m + thickness_m,
        lithology=lithology,
        grain=(GrainState(0.0, size),),
        structures=(Structure(structure),),
        **more,  # type: ignore[arg-type]
    )


def section(seed: int, beds: int = 60, habit: str = "walk", name: str = "A") -> Log:
    """A section: sizes as a walk, independent, or in fining-up cycles of about seven beds."""
    random = np.random.default_rng(seed)
    phis: list[float] = []
    while len(phis) < beds:
        if habit == "cycles":
            length = int(random.integers(5, 10))
            phis.extend(
                np.linspace(random.uniform(0, 1.5), random.uniform(4, 6), length)
                + random.normal(0, 0.3, length)
            )
        elif habit == "walk":
            last = phis[-1] if phis else 2.0
            phis.append(float(np.clip(last + random.normal(0, 1.0), -0.5, 6)))
        else:
            phis.append(float(random.uniform(-0.5, 6)))
    thickness = np.exp(random.normal(-1.2, 0.7, beds))
    base, made = 0.0, []
    for i in range(beds):
        phi = round(2 * phis[i]) / 2
        structure = STRUCTURES[int(np.clip(phi + random.normal(0, 0.7), 0, 4))]
        made.append(bed(str(i + 1), base, float(thickness[i]), phi, structure))
        base = made[-1].top_m
    return Log(Header(section=name), tuple(made))


def second_well(log: Log, seed: int, loss: float = 0.12, name: str = "B") -> tuple[Log, dict[str, str]]:
    """Another well through the same section: stretched, some beds lost, sizes seen a class off now and then.

    Returns the log and the true partner of each bed of the first log that is still there.
    """
    random = np.random.default_rng(seed)
    count = len(log.beds)
    stretch = np.exp(0.3 * np.sin(np.linspace(0, random.uniform(2, 6), count) + random.uniform(0, 6)))
    base, made, truth = 0.0, [], {}
    for i, old in enumerate(log.beds):
        if random.random() < loss:
            continue
        phi = old.grain[0].size.middle_phi + (random.choice([-0.5, 0.5]) if random.random() < 0.25 else 0.0)
        thick = old.thickness_m * float(stretch[i]) * float(np.exp(random.normal(0, 0.15)))
        name_here = str(len(made) + 1)
        structure = old.structures[0].term if random.random() < 0.9 else "massive"
        made.append(bed(name_here, base, thick, float(phi), structure))
        truth[old.name] = name_here
        base = made[-1].top_m
    return replace(log, header=Header(section=name), beds=tuple(made)), truth
