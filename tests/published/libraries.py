"""Values from independent, widely used libraries on grids; the libraries are needed for tests only."""

from __future__ import annotations

from typing import Any

import numpy as np
from printed import Printed


def sphere_drag() -> Printed:
    """Terminal velocity of smooth spheres by `fluids`, 0.05 to 60 mm."""
    from fluids import v_terminal

    sizes = np.geomspace(5e-5, 0.06, 25)
    expected = [v_terminal(D=d, rhop=2650.0, rho=1000.0, mu=1e-3, Method="Barati") for d in sizes]
    inputs: dict[str, Any] = {
        "d_m": sizes.tolist(),
        "submerged_gravity": 1.65,
        "nu_m2_s": 1e-6,
        "g_m_s2": 9.80665,
    }
    return Printed("settling.sphere_drag", inputs, expected, 1e-5, "fluids, drag of smooth spheres")


def fresh_viscosity() -> Printed:
    """Viscosity of liquid water at 0.1 MPa by `iapws`."""
    from iapws import _iapws

    temperatures = np.arange(0.0, 60.0, 5.0)
    expected = [_iapws._Liquid(t + 273.15, 0.1)["mu"] for t in temperatures]
    return Printed(
        "water.viscosity_fresh", {"temp_c": temperatures.tolist()}, expected, 1e-6, "iapws, SR6-08"
    )


def density() -> Printed:
    """Density of sea water by `gsw`, 0-30 °C, salinity 5-40."""
    import gsw

    t, s = (a.ravel() for a in np.meshgrid(np.arange(0.0, 31.0, 5.0), np.arange(5.0, 41.0, 7.0)))
    absolute = s * 35.16504 / 35
    expected = gsw.rho_t_exact(absolute, t, 0)
    return Printed(
        "water.density", {"temp_c": t.tolist(), "salinity": s.tolist()}, expected, 1e-5, "gsw, TEOS-10"
    )


def wavelength() -> Printed:
    """Wavelengths of linear theory by a bracketing root finder of `scipy`."""
    from scipy.optimize import brentq

    t, h = (a.ravel() for a in np.meshgrid(np.geomspace(0.5, 30, 8), np.geomspace(0.05, 400, 8)))
    expected = []
    for period, depth in zip(t, h, strict=True):
        omega2 = (2 * np.pi / period) ** 2
        top = omega2 / 9.81 + np.sqrt(omega2 / (9.81 * depth))
        k = brentq(
            lambda k, w=omega2, d=depth: 9.81 * k * np.tanh(k * d) - w, 1e-9, top, xtol=1e-14, rtol=1e-13
        )
        expected.append(2 * np.pi / k)
    inputs = {"period_s": t.tolist(), "water_depth_m": h.tolist()}
    return Printed("waves.wavelength", inputs, expected, 1e-9, "scipy.optimize.brentq")


def load() -> list[Printed]:
    """Every library comparison."""
    return [sphere_drag(), fresh_viscosity(), density(), wavelength()]
