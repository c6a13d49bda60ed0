"""Synthetic sections with a known truth, for the tests and the benchmark of trends. No tests here."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from logkit.model import Bed, GrainState, Log, SizeInterval

Array = npt.NDArray[np.float64]


def class_of(phi: float) -> SizeInterval:
    """The half-phi field class a size falls in."""
    coarse = np.floor(phi * 2) / 2
    return SizeInterval(float(2.0 ** -(coarse + 0.5)), float(2.0**-coarse))


def section(phi: npt.ArrayLike, thickness_m: npt.ArrayLike, gaps: Sequence[int] = ()) -> Log:
    """A log of beds with these sizes, written in field classes; beds in `gaps` are not exposed."""
    beds: list[Bed] = []
    base = 0.0
    pairs = zip(np.asarray(phi, float), np.asarray(thickness_m, float), strict=True)
    for number, (size, thickness) in enumerate(pairs):
        top = base + float(thickness)
        if number in gaps:
            beds.append(Bed(f"gap {number}", base, top, kind="gap", gap_reason="no_exposure"))
        else:
            beds.append(Bed(str(number), base, top, grain=(GrainState(0.5, class_of(float(size))),)))
        base = top
    return Log(beds=tuple(beds))


def stepped(
    generator: np.random.Generator, noise_phi: float, contrast_phi: float = 1.0
) -> tuple[Array, list[int]]:
    """Sizes of six packages of 8 to 16 beds, alternately coarser and finer, and where packages begin."""
    sizes: list[float] = []
    starts = []
    for number in range(6):
        starts.append(len(sizes))
        beds = int(generator.integers(8, 17))
        level = 2.0 + contrast_phi * (number % 2)
        sizes += list(level + noise_phi * generator.standard_normal(beds))
    return np.array(sizes), starts[1:]


def cycles(generator: np.random.Generator, noise_phi: float, number: int = 6) -> tuple[Array, list[int]]:
    """Sizes of fining-up cycles of 6 to 12 beds over 3 phi, and where cycles begin."""
    sizes: list[float] = []
    starts = []
    for _ in range(number):
        starts.append(len(sizes))
        beds = int(generator.integers(6, 13))
        sizes += list(np.linspace(0.5, 3.5, beds) + noise_phi * generator.standard_normal(beds))
    return np.array(sizes), starts[1:]


def thicknesses(generator: np.random.Generator, beds: int) -> Array:
    """Lognormal thicknesses with a median of 0.37 m."""
    return np.exp(generator.normal(-1.0, 0.7, beds))
