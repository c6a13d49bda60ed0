"""Thresholds in mixed sizes: how neighbours hide fine grains and expose coarse ones.

Curves for one size are in `threshold`; velocities read from the largest clasts are in `competence`.
"""

from __future__ import annotations

import numpy as np

from logkit.hydraulics.inputs import Values, formula
from logkit.registry import Limit

_TRANSPORT_JOIN = 1.35
_EGIAZAROFF_JOIN = 0.38889
_RELATIVE = {
    "sand_fraction": "sand fraction of the surface Fs, 0-1",
    "di_over_dsm": "size over geometric mean surface size Di/Dsm",
    "di_over_dm": "size over mean size Di/Dm",
    "di_over_d50": "size over median size Di/D50",
    "stress_ratio": "stress over reference stress f = tau/tau_ri",
}


@formula(
    "threshold.wilcock_crowe_reference",
    gives="reference Shields number of the mean surface size tau*_rm",
    unit="1",
    equation="tau*_rm = 0.021 + 0.015 exp(-20 Fs)",
    source="wilcock_crowe_2003",
    domain="sand-gravel surfaces",
    status="secondary",
    inputs=_RELATIVE,
    limits=(Limit("sand_fraction", 0, 1, lambda sand_fraction, **_: sand_fraction),),
    not_negative=("sand_fraction",),
    pitfalls="A reference stress (W* = 0.002), not first motion.",
)
def wilcock_crowe_reference(sand_fraction: Values) -> Values:
    """Reference Shields number of a sand-gravel surface.

    Parameters
    ----------
    sand_fraction : Fs, 0-1

    Returns
    -------
    tau*_rm, pure number

    References
    ----------
    wilcock_crowe_2003
    """
    return 0.021 + 0.015 * np.exp(-20 * np.asarray(sand_fraction))


@formula(
    "threshold.wilcock_crowe_hiding",
    gives="reference stress of a size over that of the mean size tau_ri/tau_rm",
    unit="1",
    equation="(Di/Dsm)^b, b = 0.67/(1 + exp(1.5 - Di/Dsm))",
    source="wilcock_crowe_2003",
    domain="sand-gravel surfaces",
    status="secondary",
    inputs=_RELATIVE,
    positive=("di_over_dsm",),
    pitfalls="Dsm is the geometric mean, not D50.",
)
def wilcock_crowe_hiding(di_over_dsm: Values) -> Values:
    """Hiding function of a sand-gravel surface, for stresses.

    Parameters
    ----------
    di_over_dsm : Di/Dsm

    Returns
    -------
    tau_ri/tau_rm, pure number

    References
    ----------
    wilcock_crowe_2003
    """
    ratio = np.asarray(di_over_dsm, dtype=float)
    return ratio ** (0.67 / (1 + np.exp(1.5 - ratio)))


@formula(
    "threshold.wilcock_crowe_transport",
    gives="dimensionless transport rate W*",
    unit="1",
    equation="W* = 0.002 f^7.5 (f < 1.35), 14 (1 - 0.894/f^0.5)^4.5 (f >= 1.35)",
    source="wilcock_crowe_2003",
    domain="sand-gravel surfaces",
    status="secondary",
    inputs=_RELATIVE,
    not_negative=("stress_ratio",),
)
def wilcock_crowe_transport(stress_ratio: Values) -> Values:
    """Dimensionless transport rate of a size.

    Parameters
    ----------
    stress_ratio : f = tau/tau_ri

    Returns
    -------
    W*, pure number

    References
    ----------
    wilcock_crowe_2003
    """
    f = np.asarray(stress_ratio, dtype=float)
    strong = np.maximum(f, _TRANSPORT_JOIN)
    return np.where(f < _TRANSPORT_JOIN, 0.002 * f**7.5, 14 * (1 - 0.894 / np.sqrt(strong)) ** 4.5)


@formula(
    "threshold.egiazaroff",
    gives="critical Shields number of a size over that of the mean size",
    unit="1",
    equation="(log10 19/log10(19 r))^2 for r = Di/Dm > 0.389; 0.843/r below",
    source="egiazaroff_1965",
    locator="fine branch: Ashida & Michiue 1972",
    domain="mixtures",
    status="secondary",
    inputs=_RELATIVE,
    positive=("di_over_dm",),
    pitfalls="The fine branch needs the 1/r that some printed versions lose.",
)
def egiazaroff(di_over_dm: Values) -> Values:
    """Hiding function with a fine branch, for Shields numbers.

    Parameters
    ----------
    di_over_dm : Di/Dm

    Returns
    -------
    theta_ci/theta_cm, pure number

    References
    ----------
    egiazaroff_1965, ashida_michiue_1972
    """
    ratio = np.asarray(di_over_dm, dtype=float)
    coarse = np.square(np.log(19) / np.log(19 * np.maximum(ratio, _EGIAZAROFF_JOIN)))
    return np.where(ratio > _EGIAZAROFF_JOIN, coarse, 0.843 / ratio)


def _hiding_power(
    name: str, coefficient: float, exponent: float, source: str, status: str, note: str
) -> None:
    """Register one power law theta_ci = coefficient (Di/D50)^exponent."""

    def critical(di_over_d50: Values) -> Values:
        return coefficient * np.asarray(di_over_d50, dtype=float) ** exponent

    critical.__name__ = critical.__qualname__ = name
    critical.__doc__ = f"Critical Shields number of size Di in a mixture, {coefficient} (Di/D50)^{exponent}."
    globals()[name] = formula(
        f"threshold.{name}",
        gives="critical Shields number of size Di",
        unit="1",
        equation=f"{coefficient} (Di/D50)^{exponent}",
        source=source,
        domain="gravel beds",
        scatter="exponents from -0.6 to -1.0 are the scatter",
        status=status,
        inputs=_RELATIVE,
        positive=("di_over_d50",),
        pitfalls=note,
    )(critical)


_hiding_power(
    "parker_klingeman", 0.0876, -0.982, "parker_klingeman_1982", "secondary", "Median of the substrate."
)
_hiding_power("andrews", 0.0834, -0.872, "andrews_1983", "memory", "Median of the substrate.")
_hiding_power(
    "komar",
    0.045,
    -0.6,
    "komar_1987",
    "memory",
    "Never 0.045 for the largest clast without the hiding power.",
)
