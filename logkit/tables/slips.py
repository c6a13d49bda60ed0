"""Slips of unit and decimal point in thicknesses: how a number could be meant otherwise, and which rows look odd.

Robust against real beds: thick and thin beds alternate, megabeds of tens of metres exist. A slip is asked about,
never refused.
"""

from __future__ import annotations

import math
import statistics
from collections.abc import Sequence
from dataclasses import dataclass

from logkit.tables.cells.lengths import Length
from logkit.units import METRES

_OTHERS = {"cm": ("m", "mm"), "m": ("cm",), "mm": ("cm",), "ft": ("in", "m"), "in": ("ft", "cm")}
NEIGHBOURS = 7
"""Rows on either side that a thickness is compared with."""
_LEAST = 8.0
_SPREADS = 3.5
_NORMAL = 1.4826  # median absolute deviation of a normal distribution to its standard deviation


@dataclass(frozen=True, slots=True)
class Slip:
    """A thickness that looks wrong: how many times too large, and how it could be meant.

    factor : thickness over the middle of its neighbours
    metres, words : another reading that fits its neighbours, in metres and as shown
    """

    factor: float
    metres: float
    words: str


def other_readings(length: Length) -> tuple[tuple[float, str], ...]:
    """Other lengths that the same digits give in a neighbouring unit; none when the unit is written.

    Returns
    -------
    Pairs (metres, words).
    """
    if length.unit_written:
        return ()
    value = length.metres / METRES[length.unit]
    return tuple((value * METRES[u], f"{value:.6g} {u}") for u in _OTHERS.get(length.unit, ()))


def find_slips(lengths: Sequence[Length | None]) -> dict[int, Slip]:
    """Thicknesses about 10 or 100 times their neighbours, by index.

    A row is odd when it is at least eight times the middle of its neighbours (or an eighth) and, on a logarithmic
    scale, far outside the spread of the whole log, while ten or a hundred times less (or more) would be ordinary.

    Parameters
    ----------
    lengths : thicknesses in row order; None for rows that are not compared (gaps, patterns)
    """
    logs = [math.log(x.metres) if x is not None and x.metres > 0 else None for x in lengths]
    known = [v for v in logs if v is not None]
    if len(known) < 5:
        return {}
    middle = statistics.median(known)
    spread = max(_NORMAL * statistics.median(abs(v - middle) for v in known), 0.35)
    limit = max(_SPREADS * spread, math.log(_LEAST))
    slips: dict[int, Slip] = {}
    for index, value in enumerate(logs):
        length = lengths[index]
        # far from the middle of the log first: the neighbours are looked at only for those few
        if value is None or length is None or abs(value - middle) < 0.8 * limit:
            continue
        around = [v for v in logs[max(0, index - NEIGHBOURS) : index + NEIGHBOURS + 1] if v is not None]
        around.remove(value)
        if len(around) < 3:
            continue
        near = statistics.median(around)
        away = value - near
        if abs(away) < limit:
            continue
        slip = _explained(length, away, spread)
        if slip:
            slips[index] = slip
    return slips


def _explained(length: Length, away: float, spread: float) -> Slip | None:
    """The slip that explains how far a thickness is away, None when ten or a hundred times do not."""
    written = length.metres / METRES[length.unit]
    choices = [(metres, words) for metres, words in other_readings(length)]
    for factor in (10.0, 100.0, 0.1, 0.01):
        choices.append((length.metres * factor, f"{written * factor:.6g} {length.unit}"))
    fitting = [
        (abs(away + math.log(metres / length.metres)), metres, words)
        for metres, words in choices
        if abs(away + math.log(metres / length.metres)) < 2 * spread
    ]
    if not fitting:
        return None
    _, metres, words = min(fitting, key=lambda entry: (round(entry[0], 6), entry[2]))
    return Slip(math.exp(away), metres, words)
