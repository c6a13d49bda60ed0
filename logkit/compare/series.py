"""A log as a series that can be aligned: size, thickness, structure and velocity of each bed, upward.

What is known of a bed becomes numbers here, and the likeness of two beds a cost between 0 and 1.
"""

from __future__ import annotations

import math
import zlib
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from logkit.model import Bed, Log

# ours: difference at which two beds count as wholly unlike, and weight, chosen on synthetic pairs of wells
SIZE_SCALE_PHI = 2.0
THICKNESS_SCALE = 1.2
VELOCITY_SCALE = 0.5
WEIGHTS = {"size": 1.0, "thickness": 0.6, "structure": 0.5, "velocity": 0.3}
GAP_COST = 0.4
"""Cost of any bed against a gap: neither likeness nor unlikeness."""


@dataclass(frozen=True, eq=False, slots=True)
class BedSeries:
    """What is known of the beds of a log, upward; NaN and -1 where nothing is.

    Attributes
    ----------
    size_phi, half_width_phi : middle and half width of the size interval
    log_thickness : natural logarithm of thickness over the well's median, so that even stretch cancels
    kind : number of lithology group and first structure
    log_velocity : decimal logarithm of the velocity in the middle, m/s
    gap : True for gaps
    """

    size_phi: NDArray[np.float64]
    half_width_phi: NDArray[np.float64]
    log_thickness: NDArray[np.float64]
    kind: NDArray[np.int64]
    log_velocity: NDArray[np.float64]
    gap: NDArray[np.bool_]

    def __len__(self) -> int:
        return len(self.gap)

    def take(self, index: NDArray[np.int64] | slice) -> BedSeries:
        """Some of the beds, in the order of the index."""
        return BedSeries(*(getattr(self, name)[index] for name in self.__dataclass_fields__))

    def seed(self) -> int:
        """A number from the content, so that resampling gives the same answer every time."""
        return zlib.crc32(np.nan_to_num(self.size_phi).tobytes() + self.log_thickness.tobytes())


def bed_series(log: Log, history: Any = None) -> BedSeries:
    """The series of a log, with velocities where a flow history is given."""
    velocity: dict[int, float] = {}
    for estimate in history.estimates if history is not None else ():
        if estimate.velocity is not None:
            velocity.setdefault(estimate.phase.bed_index, math.log10(estimate.velocity.p50))
    sizes = [_size_phi(bed) for bed in log.beds]
    thickness = np.log([bed.thickness_m for bed in log.beds]) if log.beds else np.empty(0)
    gap = np.array([bed.is_gap for bed in log.beds], dtype=bool)
    middle = float(np.median(thickness[~gap])) if (~gap).any() else 0.0
    return BedSeries(
        np.array([s[0] for s in sizes], dtype=float),
        np.array([s[1] for s in sizes], dtype=float),
        thickness - middle,
        np.array([_kind(bed) for bed in log.beds], dtype=np.int64),
        np.array([velocity.get(i, math.nan) for i in range(len(log.beds))], dtype=float),
        gap,
    )


def costs(first: BedSeries, seconds: Sequence[BedSeries]) -> NDArray[np.float64]:
    """Unlikeness of every bed of one series with every bed of others of equal length, 0 to 1.

    Returns
    -------
    shape (len(seconds), len(first), len(seconds[0]))
    """
    total: NDArray[Any] = np.zeros(1)
    weight: NDArray[Any] = np.zeros(1)
    numbers = (
        ("size", "size_phi", SIZE_SCALE_PHI),
        ("thickness", "log_thickness", THICKNESS_SCALE),
        ("velocity", "log_velocity", VELOCITY_SCALE),
    )
    for name, field, scale in numbers:
        other = np.stack([getattr(s, field) for s in seconds])
        apart = np.minimum(np.abs(getattr(first, field)[None, :, None] - other[:, None, :]) / scale, 1.0)
        known = np.isfinite(apart)
        total = total + WEIGHTS[name] * np.where(known, apart, 0.0)
        weight = weight + WEIGHTS[name] * known
    kinds = np.stack([s.kind for s in seconds])
    known = (first.kind[None, :, None] >= 0) & (kinds[:, None, :] >= 0)
    total = total + WEIGHTS["structure"] * (known & (first.kind[None, :, None] != kinds[:, None, :]))
    weight = weight + WEIGHTS["structure"] * known
    table = np.where(weight > 0, total / np.maximum(weight, 1e-9), GAP_COST)
    gaps = np.stack([s.gap for s in seconds])
    table[first.gap[None, :, None] | gaps[:, None, :]] = GAP_COST
    return np.asarray(table)


def resampled(series: BedSeries, random: np.random.Generator) -> BedSeries:
    """The same beds as another person on another day might have written them.

    Sizes move within their class, thicknesses by 15 %, and one bed in ten says nothing.
    """
    count = len(series)
    size = series.size_phi + random.uniform(-1, 1, count) * series.half_width_phi
    thickness = series.log_thickness + random.normal(0, 0.15, count)
    silent = series.gap | (random.random(count) < 0.1)
    return BedSeries(size, series.half_width_phi, thickness, series.kind, series.log_velocity, silent)


def surrogates(series: BedSeries, random: np.random.Generator, count: int, length: int) -> NDArray[np.int64]:
    """Places of beds for unrelated wells of the same habit, shape (count, length).

    Each next bed is one that followed a bed like the present one, so that short-range order (fining-up
    successions, couplets) is kept while the order over larger distances is lost.
    """
    beds = np.flatnonzero(~series.gap)
    if not len(beds):
        return np.zeros((count, length), dtype=np.int64)
    part = series.take(beds)
    like = np.argsort(costs(part, [part])[0], axis=1, kind="stable")[:, : max(3, len(beds) // 10)]
    at = random.integers(len(beds), size=count)
    pick = random.random((length, count))
    fresh = random.integers(len(beds), size=(length, count))
    chosen = np.empty((count, length), dtype=np.int64)
    for k in range(length):
        chosen[:, k] = beds[at]
        following = like[at, (pick[k] * like.shape[1]).astype(np.int64)] + 1
        at = np.where(following == len(beds), fresh[k], following)
    return chosen


def _size_phi(bed: Bed) -> tuple[float, float]:
    """Middle and half width of the size in phi: as written, else the usual range of the lithology."""
    size = bed.size
    if size is None:
        from logkit.vocabulary import vocabulary

        term = vocabulary("lithologies")[bed.lithology] if bed.lithology else None
        usual = getattr(term, "size_mm", None) if term is not None else None
        if not usual:
            return math.nan, 0.0
        low, high = (-math.log2(v) for v in usual)
        return 0.5 * (low + high), 0.5 * abs(low - high)
    return size.middle_phi, 0.5 * abs(size.fine_phi - size.coarse_phi)


def _kind(bed: Bed) -> int:
    """A number for lithology and first structure; -1 where neither is known."""
    structure = bed.structures[0].term if bed.structures else ""
    if not bed.lithology and not structure:
        return -1
    return zlib.crc32(f"{bed.lithology}/{structure}".encode())
