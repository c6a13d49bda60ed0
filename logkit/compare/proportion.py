"""The vertical proportion curve: what share of the wells is gravel, sand or mud at each height above the datum."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from logkit.compare.measures import bed_size_mm
from logkit.compare.placing import PlacedLog
from logkit.errors import ArgumentError

if TYPE_CHECKING:
    import pandas as pd

    from logkit.model import Bed

CLASSES = ("mud", "fine sand", "coarse sand", "gravel", "other")
"""Below 0.0625 mm; to 0.25 mm; to 2 mm; coarser; rocks without grain size (coal, ash, chemical rocks)."""

MOST_SLICES = 60


def proportion_curve(placed: Sequence[PlacedLog], slice_m: float | None = None) -> pd.DataFrame:
    """Shares of the classes in slices along the datum.

    Parameters
    ----------
    slice_m : height of a slice, m; by default the smallest of 0.1, 0.25, 0.5, 1, 2.5, … m that gives at most
        60 slices

    Returns
    -------
    one row a slice, upward: height of its middle above the datum, m; number of wells and metres described in
    it; metres of gaps; share of each class in what is described (NaN where nothing is)

    Raises
    ------
    ArgumentError : a slice that is not above zero
    """
    import pandas as pd

    if slice_m is not None and not slice_m > 0:
        raise ArgumentError("slice_m", slice_m, "above zero")
    filled = [p for p in placed if p.hung.beds]
    if not filled:
        return pd.DataFrame(columns=["height_m", "wells", "described_m", "gaps_m", *CLASSES])
    low = min(p.hung.base_m for p in filled)
    high = max(p.hung.top_m for p in filled)
    step = slice_m or _slice(high - low)
    edges = np.arange(math.floor(low / step), math.ceil(high / step) + 1) * step
    thick = np.zeros((len(CLASSES), len(edges) - 1))
    gaps = np.zeros(len(edges) - 1)
    wells = np.zeros(len(edges) - 1, dtype=int)
    for p in filled:
        seen = np.zeros(len(edges) - 1, dtype=bool)
        for bed in p.hung.beds:
            part = np.clip(np.minimum(edges[1:], bed.top_m) - np.maximum(edges[:-1], bed.base_m), 0, None)
            if bed.is_gap:
                gaps += part
            else:
                thick[CLASSES.index(class_of(bed))] += part
                seen |= part > 0
        wells += seen
    described = thick.sum(axis=0)
    shares = np.divide(thick, described, out=np.full_like(thick, math.nan), where=described > 0)
    return pd.DataFrame(
        {
            "height_m": np.round(0.5 * (edges[1:] + edges[:-1]), 6),
            "wells": wells,
            "described_m": np.round(described, 4),
            "gaps_m": np.round(gaps, 4),
        }
        | {name: np.round(shares[k], 4) for k, name in enumerate(CLASSES)}
    )


def class_of(bed: Bed) -> str:
    """Class of a bed by the middle of its grain size."""
    size = bed_size_mm(bed)
    if math.isnan(size):
        return "other"
    return "mud" if size < 0.0625 else "fine sand" if size < 0.25 else "coarse sand" if size < 2 else "gravel"


def _slice(height_m: float) -> float:
    """A round slice that gives at most MOST_SLICES."""
    for power in range(-1, 5):
        for factor in (1.0, 2.5, 5.0):
            step: float = factor * 10.0**power
            if height_m / step <= MOST_SLICES:
                return step
    return height_m / MOST_SLICES
