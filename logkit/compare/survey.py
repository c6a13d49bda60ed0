"""The path of a hole: a directional survey and the positions along it. Knows depths and angles, no beds."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from logkit.errors import ArgumentError

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True, slots=True)
class Survey:
    """Stations of a directional survey, downwards.

    Attributes
    ----------
    measured_depth_m : depths along the hole, m, increasing
    inclination_deg : from the vertical, 0 is a vertical hole
    azimuth_deg : of the hole, from north
    """

    measured_depth_m: tuple[float, ...]
    inclination_deg: tuple[float, ...]
    azimuth_deg: tuple[float, ...]

    def __post_init__(self) -> None:
        depths = np.asarray(self.measured_depth_m, dtype=float)
        columns = (self.measured_depth_m, self.inclination_deg, self.azimuth_deg)
        if not len(depths) or len({len(c) for c in columns}) != 1:
            raise ArgumentError("survey", tuple(len(c) for c in columns), "three columns of equal length")
        if not all(np.isfinite(np.asarray(c, dtype=float)).all() for c in columns):
            raise ArgumentError("survey", "an empty or non-finite station", "numbers in every station")
        if (np.diff(depths) <= 0).any():
            raise ArgumentError(
                "measured_depth_m", self.measured_depth_m, "increasing from station to station"
            )
        if not all(0 <= i < 180 for i in self.inclination_deg):
            raise ArgumentError("inclination_deg", self.inclination_deg, "from 0 to below 180 degrees")

    @classmethod
    def straight(cls, inclination_deg: float = 0.0, azimuth_deg: float = 0.0) -> Survey:
        """A straight hole."""
        return cls((0.0,), (inclination_deg,), (azimuth_deg,))

    def positions(self, measured_depth_m: ArrayLike) -> NDArray[np.float64]:
        """Coordinates along the hole by minimum curvature.

        Parameters
        ----------
        measured_depth_m : depths along the hole, m, shape (n,)

        Returns
        -------
        east, north and down from the well head, m, shape (n, 3). Above the first and below the last
        station the hole goes straight on.

        References
        ----------
        taylor_mason_1972
        """
        wanted = np.atleast_1d(np.asarray(measured_depth_m, dtype=float))
        stations = np.asarray(self.measured_depth_m, dtype=float)
        tangents = self._tangents()
        starts = [stations[0] * tangents[0]]
        for i in range(len(stations) - 1):
            length = stations[i + 1] - stations[i]
            starts.append(starts[-1] + _arc(length, tangents[i], tangents[i + 1], np.array([1.0]))[0])
        place = np.clip(np.searchsorted(stations, wanted, side="right") - 1, -1, len(stations) - 1)
        found = np.empty((len(wanted), 3))
        for i in np.unique(place):
            here = place == i
            if i < 0 or i == len(stations) - 1:
                k = max(i, 0)
                found[here] = starts[k] + (wanted[here] - stations[k])[:, None] * tangents[k]
            else:
                length = stations[i + 1] - stations[i]
                share = (wanted[here] - stations[i]) / length
                found[here] = starts[i] + _arc(length, tangents[i], tangents[i + 1], share)
        return found

    def _tangents(self) -> NDArray[np.float64]:
        """Unit vectors along the hole at the stations: east, north, down."""
        tilt, bearing = np.radians(self.inclination_deg), np.radians(self.azimuth_deg)
        return np.column_stack((np.sin(tilt) * np.sin(bearing), np.sin(tilt) * np.cos(bearing), np.cos(tilt)))


def depth_below_head(survey: Survey, measured_depth_m: ArrayLike) -> NDArray[np.float64]:
    """Vertical depth below the depth reference, m, shape (n,)."""
    return survey.positions(measured_depth_m)[:, 2]


def stratigraphic_depth(
    survey: Survey, measured_depth_m: ArrayLike, dip_direction_deg: float, dip_deg: float
) -> NDArray[np.float64]:
    """Distance across the beds from the well head: differences are true stratigraphic thicknesses.

    Parameters
    ----------
    measured_depth_m : depths along the hole, m, shape (n,)
    dip_direction_deg, dip_deg : one attitude of the beds for the whole hole, degrees

    Returns
    -------
    m, shape (n,), growing downwards through the beds; falling where the hole climbs up through them

    Notes
    -----
    For a straight hole this equals the formula `geometry.tst`; where the hole curves, coordinates are right
    and the formula is not.
    """
    dip, direction = np.radians(dip_deg), np.radians(dip_direction_deg)
    # downward normal of the beds in east, north, down
    normal = np.array([-np.sin(dip) * np.sin(direction), -np.sin(dip) * np.cos(direction), np.cos(dip)])
    return survey.positions(measured_depth_m) @ normal


def _arc(
    length: float, start: NDArray[np.float64], end: NDArray[np.float64], share: NDArray[np.float64]
) -> NDArray[np.float64]:
    """Displacement after a share of a circular arc between two directions, shape (n, 3)."""
    # half-angle forms: differences of cosines lose all digits where the hole hardly turns
    angle = 2.0 * float(np.arcsin(min(1.0, 0.5 * float(np.linalg.norm(end - start)))))
    if angle < 1e-9:
        return share[:, None] * length * start
    half = 0.5 * share * angle
    first = (2.0 * np.sin(angle - half) * np.sin(half))[:, None] * start
    second = (2.0 * np.sin(half) ** 2)[:, None] * end
    return length / (angle * np.sin(angle)) * (first + second)
