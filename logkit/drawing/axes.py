"""From quantities to millimetres on the page: position in the section, grain size, velocity and flow depth.

Only mappings and their ticks belong here; drawing an axis is the business of `frame`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from logkit.drawing.metrics import width_mm

PHI_FINE, PHI_SAND_FINE, PHI_SAND_COARSE, PHI_COARSE = 8.0, 4.0, -1.0, -7.0


@dataclass(frozen=True, slots=True)
class Piece:
    """A stretch of the section drawn at one rate; `cut` when it stands for more height than it shows."""

    base_m: float
    top_m: float
    y_base: float
    y_top: float
    cut: bool = False


@dataclass(frozen=True, slots=True)
class PositionScale:
    """Position in the section to y on the page; pieces run upward and join without holes."""

    pieces: tuple[Piece, ...]

    @property
    def base_m(self) -> float:
        """Lowest position, m."""
        return self.pieces[0].base_m

    @property
    def top_m(self) -> float:
        """Highest position, m."""
        return self.pieces[-1].top_m

    @property
    def y_base(self) -> float:
        """Lower edge on the page, mm."""
        return self.pieces[0].y_base

    @property
    def y_top(self) -> float:
        """Upper edge on the page, mm."""
        return self.pieces[-1].y_top

    def y(self, position_m: float) -> float:
        """Page coordinate of a position, mm; positions outside are held at the edges."""
        piece = self.pieces[0]
        for candidate in self.pieces[1:]:
            if candidate.base_m > position_m:
                break
            piece = candidate
        share = (position_m - piece.base_m) / (piece.top_m - piece.base_m)
        share = min(1.0, max(0.0, share))
        return piece.y_base + share * (piece.y_top - piece.y_base)


@dataclass(frozen=True, slots=True)
class PhiAxis:
    """Grain size to x. Sand gets three times the width per phi of mud and gravel: flow is read from sand.

    Parameters
    ----------
    x0 : spine, mm
    width : width of the whole axis, mm (46.9 at full size)
    """

    x0: float
    width: float

    @property
    def rate(self) -> float:
        """Ratio to the full-size axis."""
        return self.width / 46.9

    def x(self, phi: float) -> float:
        """Page coordinate of a size, mm; sizes are held between phi 8 and -7."""
        held = min(max(phi, PHI_COARSE), PHI_FINE)
        if held > PHI_SAND_FINE:
            at = 5 + 1.7 * (PHI_FINE - held)
        elif held > PHI_SAND_COARSE:
            at = 11.8 + 5.0 * (PHI_SAND_FINE - held)
        else:
            at = 36.8 + 1.7 * (PHI_SAND_COARSE - held)
        return self.x0 + at * self.rate

    @property
    def x1(self) -> float:
        """Right end, mm."""
        return self.x0 + self.width


@dataclass(frozen=True, slots=True)
class LogAxis:
    """A logarithmic axis between round ends.

    Parameters
    ----------
    x0, x1 : ends on the page, mm
    low, high : quantity at the ends
    """

    x0: float
    x1: float
    low: float
    high: float

    def x(self, value: float) -> float:
        """Page coordinate of a value, mm; values outside are held at the ends."""
        held = min(max(value, self.low), self.high)
        return self.x0 + (self.x1 - self.x0) * math.log(held / self.low) / math.log(self.high / self.low)

    def ticks(self, size_pt: float) -> tuple[tuple[float, str], ...]:
        """(value, label) of the 1-2-5 series; both ends, then the powers of ten, then 5 and 2 as far as they fit.

        A tick without room for its label has "".
        """
        values = [
            v for v in round_series(self.low, self.high) if v / self.low >= 0.9999 and v / self.high <= 1.0001
        ]
        labels = {value: f"{value:g}" for value in values}
        ranked = sorted(
            values, key=lambda v: (v not in (values[0], values[-1]), {1: 0, 5: 1, 2: 2}[_lead(v)], v)
        )
        placed: list[tuple[float, float]] = []
        shown: set[float] = set()
        for value in ranked:
            half = width_mm(labels[value], size_pt) / 2 + 0.5
            x = self.x(value)
            if all(x + half <= left or x - half >= right for left, right in placed):
                placed.append((x - half, x + half))
                shown.add(value)
        return tuple((value, labels[value] if value in shown else "") for value in values)


def round_series(low: float, high: float) -> list[float]:
    """The numbers 1, 2, 5 times powers of ten that cover a range, one beyond each end included."""
    values: list[float] = []
    for power in range(math.floor(math.log10(low)) - 1, math.ceil(math.log10(high)) + 2):
        values.extend(float(f"{lead}e{power}") for lead in (1, 2, 5))
    return values


def round_ends(low: float, high: float, least_decades: float = 1.0) -> tuple[float, float]:
    """Round ends (1, 2 or 5 times a power of ten) around a range, at least some decades apart.

    Notes
    -----
    The axis follows the log, so that its width is not spent on velocities nobody inferred.
    """
    while math.log10(high / low) < least_decades * 0.999:
        low, high = low / 1.02, high * 1.02
    series = round_series(low, high)
    return (
        max(v for v in series if v <= low * 1.0001),
        min(v for v in series if v >= high * 0.9999),
    )


def _lead(value: float) -> int:
    return round(value / 10 ** math.floor(math.log10(value) + 1e-9))
