"""A log as series of numbers and states: what of a bed goes into the statistics, and what stays out.

Gaps break a series and never count. A bed without a written size takes the usual range of its lithology,
which is counted and said. Layers of a written pattern ("6 x (8 vfs / 4 mdst)") are left out: neither their
order nor their thickness was measured.
"""

from __future__ import annotations

import math
import zlib
from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from logkit.model import Bed, Log, SizeInterval
from logkit.vocabulary import vocabulary

Array = npt.NDArray[np.float64]
Quantity = Literal["grain size", "thickness"]

SIZE_CLASSES: tuple[tuple[str, float], ...] = (
    ("mud", 0.0625), ("very fine sand", 0.125), ("fine sand", 0.25), ("medium sand", 0.5),
    ("coarse sand", 1.0), ("very coarse sand", 2.0), ("gravel", math.inf),
)  # fmt: skip
"""Name and upper limit in mm of the classes beds are grouped by."""


@dataclass(frozen=True, slots=True)
class Run:
    """An unbroken run of beds that have the quantity, upward.

    values : phi (coarse is small) or the natural logarithm of thickness in m
    widths : width of the interval each value stands for, same unit
    """

    beds: tuple[Bed, ...]
    values: Array
    widths: Array
    weights: Array


def bed_size(bed: Bed) -> SizeInterval | None:
    """Size interval of a bed: as written, from its readings, else the usual range of its lithology."""
    if bed.grain:
        return bed.size
    if bed.sizes:
        middles = [reading.d50_mm for reading in bed.sizes]
        return SizeInterval(min(middles), max(middles), label="in-bed readings")
    if bed.lithology:
        lithologies = vocabulary("lithologies")
        usual = lithologies[bed.lithology].size_mm if bed.lithology in lithologies.ids else None
        if usual is not None:
            return SizeInterval(usual[0], usual[1], label="usual for the lithology", sure=False)
    return None


def size_is_assumed(bed: Bed) -> bool:
    """True when the size of a bed is only the usual range of its lithology."""
    return not bed.grain and not bed.sizes and bed_size(bed) is not None


def size_class(size: SizeInterval | None) -> str:
    """Name of the class the middle of an interval falls in, "unknown" without one."""
    if size is None:
        return "unknown"
    return next(name for name, limit in SIZE_CLASSES if size.middle_mm < limit)


def series(log: Log, quantity: Quantity) -> tuple[Run, ...]:
    """The runs of a log for one quantity.

    A bed that lacks the quantity is stepped over; a gap ends the run. Weights are the square root of
    thickness over the median, within 0.7 to 1.4, so that neither a film nor one thick bed decides alone.
    """
    thickness = [bed.thickness_m for bed in log.real_beds if bed.thickness_m > 0]
    median = float(np.median(thickness)) if thickness else 1.0
    runs = []
    for beds in log.runs:
        rows = [(bed, *value) for bed in beds if (value := _value(bed, quantity)) is not None]
        if not rows:
            continue
        weights = (
            np.clip(np.sqrt([bed.thickness_m / median for bed, _, _ in rows]), 0.7, 1.4)
            if quantity == "grain size"
            else np.ones(len(rows))
        )
        runs.append(
            Run(
                tuple(bed for bed, _, _ in rows),
                np.array([value for _, value, _ in rows]),
                np.array([width for _, _, width in rows]),
                weights,
            )
        )
    return tuple(runs)


def _value(bed: Bed, quantity: Quantity) -> tuple[float, float] | None:
    if bed.thickness_m <= 0 or not bed.measured:
        return None
    if quantity == "thickness":
        return math.log(bed.thickness_m), 0.0
    size = bed_size(bed)
    return None if size is None else (size.middle_phi, size.fine_phi - size.coarse_phi)


def seed_of(*arrays: Array) -> int:
    """A seed made from the numbers themselves, so that the same log gives the same shuffles."""
    seed = 0
    for array in arrays:
        seed = zlib.crc32(np.round(np.asarray(array, dtype=float), 9).tobytes(), seed)
    return seed
