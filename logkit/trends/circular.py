"""Statistics of directions and axes: means, spread, the Rayleigh test, rose radii. Angles in, numbers out."""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt

from logkit.errors import ArgumentError
from logkit.registry import formula

_AZIMUTHS = {"azimuths_deg": "azimuths clockwise from north, a"}
_AXES = {"axes_deg": "azimuths of axes, a"}

UNDEFINED_RESULTANT = 1e-9
"""Below this resultant length there is no direction."""


def _components(azimuths_rad: npt.ArrayLike, name: str) -> tuple[float, float, int]:
    angles = np.atleast_1d(np.asarray(azimuths_rad, dtype=float))
    if angles.ndim != 1 or angles.size == 0 or not np.isfinite(angles).all():
        raise ArgumentError(name, azimuths_rad, "a list of one or more finite angles")
    return float(np.cos(angles).mean()), float(np.sin(angles).mean()), angles.size


@formula(
    "stat.vector_mean", gives="vector mean, 0 to 360; NaN when undefined", unit="deg",
    equation="atan2(mean sin a, mean cos a) mod 360", source="davis_2002", locator="ch. 5",
    domain="directions with a sense, one mode", status="published", inputs=_AZIMUTHS,
    pitfalls="Never the arithmetic mean. Fewer than 10 readings are unreliable.",
)  # fmt: skip
def vector_mean(azimuths_deg: npt.ArrayLike) -> float:
    """Vector mean of azimuths, degrees; NaN where the resultant vanishes.

    References
    ----------
    davis_2002
    """
    c, s, _ = _components(np.radians(azimuths_deg), "azimuths_deg")
    return math.degrees(math.atan2(s, c)) % 360 if math.hypot(c, s) >= UNDEFINED_RESULTANT else math.nan


@formula(
    "stat.resultant", gives="mean resultant length, Rbar", unit="1", equation="sqrt(C^2 + S^2)",
    source="davis_2002", locator="ch. 5", status="published", inputs=_AZIMUTHS,
)  # fmt: skip
def resultant(azimuths_deg: npt.ArrayLike) -> float:
    """Mean resultant length, 0 to 1.

    References
    ----------
    davis_2002
    """
    c, s, _ = _components(np.radians(azimuths_deg), "azimuths_deg")
    return min(math.hypot(c, s), 1.0)


@formula(
    "stat.circular_variance", gives="circular variance, V", unit="1", equation="V = 1 - Rbar",
    source="mardia_1972", status="secondary", inputs=_AZIMUTHS, domain="one mode",
)  # fmt: skip
def circular_variance(azimuths_deg: npt.ArrayLike) -> float:
    """Circular variance, 0 to 1.

    References
    ----------
    mardia_1972
    """
    return 1 - resultant(azimuths_deg)


@formula(
    "stat.circular_sd", gives="circular standard deviation", unit="rad", equation="sqrt(-2 ln Rbar)",
    source="mardia_1972", status="secondary", inputs=_AZIMUTHS, domain="one mode",
    pitfalls="Not the angular deviation: name the one used.",
)  # fmt: skip
def circular_sd(azimuths_deg: npt.ArrayLike) -> float:
    """Circular standard deviation, radians; infinite where the resultant vanishes.

    References
    ----------
    mardia_1972
    """
    length = resultant(azimuths_deg)
    return math.sqrt(max(-2 * math.log(length), 0.0) + 0.0) if length >= UNDEFINED_RESULTANT else math.inf


@formula(
    "stat.angular_deviation", gives="angular deviation", unit="rad", equation="sqrt(2 (1 - Rbar))",
    source="batschelet_1981", status="secondary", inputs=_AZIMUTHS, domain="one mode",
)  # fmt: skip
def angular_deviation(azimuths_deg: npt.ArrayLike) -> float:
    """Angular deviation, radians.

    References
    ----------
    batschelet_1981
    """
    return math.sqrt(2 * (1 - resultant(azimuths_deg)))


@formula(
    "stat.rayleigh_p", gives="probability of so long a resultant without a preferred direction, p", unit="1",
    equation="z = n Rbar^2; p = exp(-z)(1 + (2z - z^2)/(4n) - (24z - 132z^2 + 76z^3 - 9z^4)/(288 n^2)), n < 50",
    source="wilkie_1983", locator="series; exp(-z) from 50 readings on; Zar's form below 0", status="secondary",
    inputs=_AZIMUTHS | {"n": "number of readings, instead of azimuths", "resultant": "Rbar, instead of azimuths"},
    domain="alternative of one preferred direction, 5 readings or more", scatter="1 % of p; 8 % low at n = 4",
    pitfalls="Blind to two opposite modes: test doubled angles then.",
)  # fmt: skip
def rayleigh_p(
    azimuths_deg: npt.ArrayLike | None = None, n: int | None = None, resultant: float | None = None
) -> float:
    """Rayleigh test of uniformity from azimuths, or from a number and a resultant length.

    References
    ----------
    mardia_1972, wilkie_1983, zar_1999
    """
    if azimuths_deg is not None:
        c, s, n = _components(np.radians(azimuths_deg), "azimuths_deg")
        resultant = math.hypot(c, s)
    elif n is None or resultant is None:
        raise ArgumentError("azimuths_deg", None, "given, or both n and resultant")
    z = n * resultant**2
    factor = 1.0
    if n < 50:
        factor += (2 * z - z**2) / (4 * n)
        factor -= (24 * z - 132 * z**2 + 76 * z**3 - 9 * z**4) / (288 * n**2)
    if factor <= 0:  # the series has left its range: few readings that nearly agree
        return _closed_form_p(n, resultant)
    return min(math.exp(-z) * factor, 1.0)


@formula(
    "stat.rayleigh_p_zar", gives="probability of so long a resultant, Zar's form, p", unit="1",
    equation="p = exp(sqrt(1 + 4n + 4(n^2 - (n Rbar)^2)) - (1 + 2n))", source="zar_1999", status="secondary",
    inputs={"azimuths_rad": "angles, radians"}, domain="5 readings or more",
)  # fmt: skip
def rayleigh_p_zar(azimuths_rad: npt.ArrayLike) -> float:
    """Rayleigh test in the closed form.

    References
    ----------
    zar_1999
    """
    c, s, n = _components(azimuths_rad, "azimuths_rad")
    return _closed_form_p(n, math.hypot(c, s))


def _closed_form_p(n: int, length: float) -> float:
    """Zar's closed form from a number and a resultant length."""
    opposed = max(1 - length**2, 0.0)
    return min(math.exp(math.sqrt(1 + 4 * n + 4 * n**2 * opposed) - (1 + 2 * n)), 1.0)


@formula(
    "stat.axial_mean", gives="mean axis, 0 to 180; NaN when undefined", unit="deg",
    equation="half the vector mean of doubled angles", source="krumbein_1939", status="secondary", inputs=_AXES,
    domain="parting lineation, grooves, wave-ripple crests", pitfalls="Never mix axes and directions in one mean.",
)  # fmt: skip
def axial_mean(axes_deg: npt.ArrayLike) -> float:
    """Mean of lines without a sense, degrees.

    References
    ----------
    krumbein_1939, davis_2002
    """
    return vector_mean(2 * np.asarray(axes_deg, float)) / 2


@formula(
    "stat.axial_resultant", gives="mean resultant length of doubled angles", unit="1",
    equation="Rbar of 2a", source="krumbein_1939", status="secondary", inputs=_AXES,
)  # fmt: skip
def axial_resultant(axes_deg: npt.ArrayLike) -> float:
    """Mean resultant length of lines without a sense, 0 to 1.

    References
    ----------
    krumbein_1939, davis_2002
    """
    return resultant(2 * np.asarray(axes_deg, float))


@formula(
    "stat.rose_radius", gives="radius of a rose class", unit="1", equation="r = r_max sqrt(f/f_max)",
    source="nemec_1988", locator="149-152; davis_2002 eq. 5.38", status="published",
    inputs={"frequency": "count of the class, f", "max_frequency": "largest count, f_max", "max_radius": "r_max"},
    positive=("max_frequency",), not_negative=("frequency",),
    pitfalls="A radius linear in frequency exaggerates large classes.",
)  # fmt: skip
def rose_radius(
    frequency: npt.ArrayLike, max_frequency: float, max_radius: float = 1.0
) -> npt.NDArray[np.float64]:
    """Radius by the square root of frequency, so that area goes with count.

    References
    ----------
    nemec_1988
    """
    return max_radius * np.sqrt(np.asarray(frequency, float) / max_frequency)
