"""Geometry of tilted beds: restoring tilt of planes and lines, true thickness, net to gross.

Angles in degrees, azimuths clockwise from north; a plane is a dip direction and a dip, a line a trend and
a plunge. Numbers in, numbers out: which reading is corrected by which bedding is decided elsewhere.
"""

from __future__ import annotations

import math
from typing import Literal

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError
from logkit.registry import formula

_BEDDING = {
    "bedding_dip_direction_deg": "dip direction of bedding, b",
    "bedding_dip_deg": "dip of bedding, d; above 90 for overturned beds",
}
_PLANE = {"plane_dip_direction_deg": "dip direction of the plane, a", "plane_dip_deg": "dip of the plane, p"}
_LINE = {"line_trend_deg": "trend of the line, t", "line_plunge_deg": "plunge of the line, q"}


def _rotation(bedding_dip_direction_deg: float, bedding_dip_deg: float) -> npt.NDArray[np.float64]:
    """Matrix (east, north, up) that turns the bedding level about its strike."""
    b, d = math.radians(bedding_dip_direction_deg), math.radians(bedding_dip_deg)
    s, c, level, rise = math.sin(b), math.cos(b), math.cos(d), math.sin(d)
    return np.array(
        [
            [c * c + level * s * s, s * c * (level - 1), -rise * s],
            [s * c * (level - 1), s * s + level * c * c, -rise * c],
            [rise * s, rise * c, level],
        ]
    )


def restored_plane(
    plane_dip_direction_deg: float,
    plane_dip_deg: float,
    bedding_dip_direction_deg: float,
    bedding_dip_deg: float,
) -> tuple[float, float]:
    """Dip direction and dip of a plane after the bedding is turned level, degrees.

    A dip above 90 says that the plane is upside down after the turn.

    Notes
    -----
    The pole n = (sin p sin a, sin p cos a, cos p) is rotated about the strike of the bedding.

    References
    ----------
    ours; example of gsab_1970
    """
    a, p = math.radians(plane_dip_direction_deg), math.radians(plane_dip_deg)
    pole = np.array([math.sin(p) * math.sin(a), math.sin(p) * math.cos(a), math.cos(p)])
    east, north, up = _rotation(bedding_dip_direction_deg, bedding_dip_deg) @ pole
    return math.degrees(math.atan2(east, north)) % 360, math.degrees(math.acos(np.clip(up, -1, 1)))


def restored_line(
    line_trend_deg: float, line_plunge_deg: float, bedding_dip_direction_deg: float, bedding_dip_deg: float
) -> tuple[float, float]:
    """Trend and plunge of a line after the bedding is turned level, degrees."""
    t, q = math.radians(line_trend_deg), math.radians(line_plunge_deg)
    line = np.array([math.cos(q) * math.sin(t), math.cos(q) * math.cos(t), -math.sin(q)])
    east, north, up = _rotation(bedding_dip_direction_deg, bedding_dip_deg) @ line
    return math.degrees(math.atan2(east, north)) % 360, -math.degrees(math.asin(np.clip(up, -1, 1)))


def plunge_in_bedding(
    line_trend_deg: float, bedding_dip_direction_deg: float, bedding_dip_deg: float
) -> float:
    """Plunge of a line that lies in the bedding and has this trend, degrees (apparent dip along the trend)."""
    turn = math.radians(line_trend_deg - bedding_dip_direction_deg)
    return math.degrees(math.atan(math.tan(math.radians(bedding_dip_deg)) * math.cos(turn)))


@formula(
    "geometry.tilt_plane_dip_direction", gives="restored dip direction, a'", unit="deg",
    equation="a' = atan2(n'_1, n'_2), n' = M n, M the rotation about the strike of bedding",
    source="gsab_1970", locator="p. 537 (example); matrix ours", status="ours", inputs=_PLANE | _BEDDING,
    domain="one rigid tilt about a horizontal axis; not for plunging folds",
    pitfalls="Rotate each reading, not the mean. Below 2 degrees of restored dip the azimuth means nothing.",
)  # fmt: skip
def tilt_plane_dip_direction(
    plane_dip_direction_deg: float,
    plane_dip_deg: float,
    bedding_dip_direction_deg: float,
    bedding_dip_deg: float,
) -> float:
    """Dip direction of a plane with the bedding level, degrees."""
    return restored_plane(plane_dip_direction_deg, plane_dip_deg, bedding_dip_direction_deg, bedding_dip_deg)[
        0
    ]


@formula(
    "geometry.tilt_plane_dip", gives="restored dip, p'", unit="deg", equation="p' = arccos(n'_3)",
    source="gsab_1970", locator="p. 537 (example); matrix ours", status="ours", inputs=_PLANE | _BEDDING,
    domain="one rigid tilt about a horizontal axis", scatter="2 degrees of dip move a gentle azimuth by many",
)  # fmt: skip
def tilt_plane_dip(
    plane_dip_direction_deg: float,
    plane_dip_deg: float,
    bedding_dip_direction_deg: float,
    bedding_dip_deg: float,
) -> float:
    """Dip of a plane with the bedding level, degrees."""
    return restored_plane(plane_dip_direction_deg, plane_dip_deg, bedding_dip_direction_deg, bedding_dip_deg)[
        1
    ]


@formula(
    "geometry.tilt_line_trend", gives="restored trend, t'", unit="deg", equation="t' = atan2(l'_1, l'_2), l' = M l",
    source="ours", status="ours", inputs=_LINE | _BEDDING, domain="one rigid tilt about a horizontal axis",
)  # fmt: skip
def tilt_line_trend(
    line_trend_deg: float, line_plunge_deg: float, bedding_dip_direction_deg: float, bedding_dip_deg: float
) -> float:
    """Trend of a line with the bedding level, degrees."""
    return restored_line(line_trend_deg, line_plunge_deg, bedding_dip_direction_deg, bedding_dip_deg)[0]


@formula(
    "geometry.tst", gives="true stratigraphic thickness, TST", unit="m",
    equation="TST = MT (cos W cos d - sin W sin d cos(HAZ - b))", source="bateman_konen_1979",
    domain="straight hole, one dip", scatter="that of the dip", status="published",
    inputs={
        "measured_m": "length along the hole, MT", "hole_inclination_deg": "inclination from vertical, W",
        "hole_azimuth_deg": "azimuth of the hole, HAZ", "dip_deg": "dip, d", "dip_direction_deg": "dip direction, b",
    },
    pitfalls="Negative: the hole enters the bed from below. Use survey coordinates where the hole curves.",
)  # fmt: skip
def true_stratigraphic_thickness(
    measured_m: npt.ArrayLike,
    hole_inclination_deg: npt.ArrayLike,
    hole_azimuth_deg: npt.ArrayLike,
    dip_deg: npt.ArrayLike,
    dip_direction_deg: npt.ArrayLike,
) -> npt.NDArray[np.float64]:
    """True stratigraphic thickness from the length along a hole, m.

    References
    ----------
    bateman_konen_1979
    """
    w, d = np.radians(hole_inclination_deg), np.radians(dip_deg)
    turn = np.radians(np.asarray(hole_azimuth_deg, float) - np.asarray(dip_direction_deg, float))
    length = np.asarray(measured_m, float)
    result: npt.NDArray[np.float64] = length * (np.cos(w) * np.cos(d) - np.sin(w) * np.sin(d) * np.cos(turn))
    return result


@formula(
    "geometry.thickness_level_ground", gives="true thickness, t", unit="m", equation="t = w sin d",
    source="ours", locator="plane trigonometry of course notes", status="published", domain="planar beds",
    inputs={"width_across_strike_m": "width across strike on level ground, w", "dip_deg": "dip, d"},
    scatter="pace and compass errors reach 50 %", not_negative=("width_across_strike_m",),
)  # fmt: skip
def thickness_level_ground(
    width_across_strike_m: npt.ArrayLike, dip_deg: npt.ArrayLike
) -> npt.NDArray[np.float64]:
    """True thickness from a width across strike on level ground, m."""
    return np.asarray(width_across_strike_m, float) * np.sin(np.radians(dip_deg))


@formula(
    "geometry.thickness_slope", gives="true thickness, t", unit="m",
    equation="t = w sin(d + g) where the ground dips against the beds, w |sin(d - g)| where it dips with them",
    source="ours", locator="plane trigonometry of course notes", status="published", domain="planar beds",
    inputs={
        "slope_distance_m": "distance along the slope, across strike, w", "dip_deg": "dip, d",
        "ground_slope_deg": "slope of the ground, g",
        "slope_direction": "'opposite to dip' or 'with dip'",
    },
    scatter="pace and compass errors reach 50 %", not_negative=("slope_distance_m",),
)  # fmt: skip
def thickness_slope(
    slope_distance_m: npt.ArrayLike,
    dip_deg: npt.ArrayLike,
    ground_slope_deg: npt.ArrayLike,
    slope_direction: Literal["opposite to dip", "with dip"] = "opposite to dip",
) -> npt.NDArray[np.float64]:
    """True thickness from a distance along sloping ground, m."""
    d, g = np.radians(dip_deg), np.radians(ground_slope_deg)
    length = np.asarray(slope_distance_m, float)
    if slope_direction == "opposite to dip":
        result: npt.NDArray[np.float64] = length * np.sin(d + g)
    elif slope_direction == "with dip":
        result = length * np.abs(np.sin(d - g))
    else:
        raise ArgumentError("slope_direction", slope_direction, "'opposite to dip' or 'with dip'")
    return result


@formula(
    "geometry.thickness_oblique_traverse", gives="true thickness, t", unit="m",
    equation="t = t_a cos d/cos al, al = arctan(sin be tan d)", source="ours",
    locator="plane trigonometry of field notes", status="published", domain="planar beds",
    inputs={
        "apparent_thickness_m": "thickness with the staff set to the apparent dip, t_a", "dip_deg": "dip, d",
        "angle_road_strike_deg": "angle between road and strike, be",
    },
    not_negative=("apparent_thickness_m",),
)  # fmt: skip
def thickness_oblique_traverse(
    apparent_thickness_m: npt.ArrayLike, dip_deg: npt.ArrayLike, angle_road_strike_deg: npt.ArrayLike
) -> npt.NDArray[np.float64]:
    """True thickness along a road oblique to strike, m."""
    d = np.radians(dip_deg)
    apparent = np.arctan(np.sin(np.radians(angle_road_strike_deg)) * np.tan(d))
    result: npt.NDArray[np.float64] = np.asarray(apparent_thickness_m, float) * np.cos(d) / np.cos(apparent)
    return result


@formula(
    "geometry.net_to_gross", gives="net to gross, N:G", unit="1", equation="N:G = net/gross", source="ours",
    locator="definition", status="published", positive=("gross",), not_negative=("net",),
    inputs={"net": "thickness that passes the cut-off, net", "gross": "whole thickness in the same unit, gross"},
    domain="state the cut-off and whether gaps count", scatter="depends on the cut-off: show the sensitivity",
)  # fmt: skip
def net_to_gross(net: float, gross: float) -> float:
    """Share of the thickness that passes a cut-off, 0 to 1."""
    return net / gross
