"""What the trends layer gives: grading of a bed, packages of beds, summaries of directions."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

GradingWord = Literal[
    "normal", "inverse", "inverse-then-normal", "normal-then-inverse", "ungraded", "not determinable"
]


@dataclass(frozen=True, slots=True)
class Grading:
    """Grading of one bed: the most probable word with its probability.

    verdict : the word; "ungraded" reads as "not distinguished from ungraded"
    probability : of the verdict, None when not determinable
    probabilities : (word, probability) of all words
    style : "coarse-tail", "distribution" or "" where the data cannot tell
    basis : "base and top sizes", "in-bed readings" or the reason why not determinable
    readings, tau, p, slope_phi_per_m, slope_low, slope_high : statistics of in-bed readings, None without
    break_fractions : heights of turning points, 0 base … 1 top
    """

    bed: str
    verdict: GradingWord
    probability: float | None = None
    probabilities: tuple[tuple[str, float], ...] = ()
    style: Literal["", "coarse-tail", "distribution"] = ""
    basis: str = ""
    readings: int = 0
    tau: float | None = None
    p: float | None = None
    slope_phi_per_m: float | None = None
    slope_low: float | None = None
    slope_high: float | None = None
    break_fractions: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Package:
    """A run of beds with a common trend.

    trend : "fining-up", "coarsening-up", "thickening-up", "thinning-up" or "no trend"
    tau, p, p_adjusted : Kendall's tau of the series against height, its p, and p after Benjamini-Hochberg,
        doubled because half the level is spent on the search for the packages
    significant : p_adjusted below the level used
    level : 0 for the outermost packages, 1 for those nested in one, …
    """

    trend: str
    base_m: float
    top_m: float
    first_bed: str
    last_bed: str
    beds: int
    tau: float
    p: float
    p_adjusted: float
    significant: bool
    quantity: Literal["grain size", "thickness"] = "grain size"
    level: int = 0


@dataclass(frozen=True, slots=True)
class CurrentSummary:
    """Directions of one kind of indicator, or of all of one rank ("all of medium rank").

    azimuths_deg : corrected azimuths used; axes 0 <= a < 180 when sense is "axis"
    mean_deg : None when undefined; resultant 0 … 1; rayleigh_p None below 5 readings
    spread_deg : circular standard deviation sqrt(-2 ln R), degrees
    notes : warnings (few readings, tilt limits, no declination)
    """

    indicator: str
    sense: Literal["direction", "axis"]
    azimuths_deg: tuple[float, ...]
    mean_deg: float | None
    resultant: float
    spread_deg: float | None
    rayleigh_p: float | None
    rank: str = ""
    notes: tuple[str, ...] = ()

    @property
    def n(self) -> int:
        """Number of readings."""
        return len(self.azimuths_deg)
