"""Fits what the engine may learn from measured rivers and writes `logkit/flow/calibration.toml`.

Fitted: the allowance delta and the share eps of each prior, and the river prior's velocity against depth.
The edges of the bed states are published and stay as they are. Run: `python tests/calibration/calibrate.py`.
"""

from __future__ import annotations

import datetime
import itertools
import math
import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
from coverage import table
from rivers import CITATION, DUNES_FROM_MM, River, read_rivers

from logkit.flow.criteria import DepthReading
from logkit.flow.settings import Settings, flow_settings
from logkit.flow.slices import Signature, size_steps
from logkit.flow.solver import Case, Solver
from logkit.flow.states import Fluid

TARGET = Path(__file__).resolve().parents[2] / "logkit" / "flow" / "calibration.toml"

STAGE_SD = 0.37
"""Beds form at other stages than bankfull: spread in ln U added to the fitted one (judgement)."""

STUDENT_DEGREES = 6
DELTAS = tuple(np.round(np.arange(0.25, 0.66, 0.03), 2).tolist())
RIVER_DELTAS = tuple(np.round(np.arange(0.30, 0.80, 0.01), 2).tolist())
MISLABELLED = 0.05
"""Share of rivers told as dunes that had none (judgement: the data name no bed states)."""

OTHER_RIVERS = 0.03
"""Widening for rivers that are not these: the allowance was chosen on the very rivers it covers (judgement)."""

SHARES = (0.005, 0.01, 0.02, 0.03, 0.05, 0.08)


def velocity_against_depth(rivers: list[River]) -> tuple[float, float, float]:
    """Intercept and slope of ln U against ln h (Student t, for the outliers), and the plain residual spread."""
    from scipy.optimize import minimize
    from scipy.stats import t

    u = np.log([r.velocity_m_s for r in rivers])
    h = np.log([r.depth_m for r in rivers])

    def loss(p: np.ndarray) -> float:
        return -float(t.logpdf(u - p[0] - p[1] * h, STUDENT_DEGREES, scale=math.exp(p[2])).sum())

    fit = minimize(loss, np.array([0.0, 0.2, -1.0]), method="Nelder-Mead", options={"maxiter": 4000}).x
    residual = u - fit[0] - fit[1] * h
    return float(fit[0]), float(fit[1]), float(np.sqrt(np.mean(residual**2)))


def told(rivers: list[River], prior: str, states: tuple[str, ...], with_depth: bool) -> list[Case]:
    """The rivers as cases: size class, state of the bed, depth within 25 % or none."""
    kind = "motion" if states == ("moved",) else "bed_state"
    cases = []
    for river in rivers:
        size = size_steps(river.size.coarse_phi, river.size.fine_phi)
        depth = (("stated_depth", DepthReading(river.depth_m, 0.15, 0.15)),) if with_depth else ()
        cases.append(Case(Signature(prior, Fluid(), size, ((kind, states),)), depth))
    return cases


def with_prior(settings: Settings, name: str, **changes: object) -> Settings:
    """The settings with one prior changed."""
    return replace(settings, priors=settings.priors | {name: replace(settings.priors[name], **changes)})


def log_score(solver: Solver, rivers: list[River], cases: list[Case]) -> float:
    """Mean of ln of the posterior density at the measured velocity."""
    mass = solver.velocity_mass(solver.compile(cases))
    axis = solver.grid.velocity
    cell = ((np.log([r.velocity_m_s for r in rivers]) - axis.ln_edges[0]) / axis.step).astype(int)
    return float(np.mean(np.log(mass[cell, np.arange(len(rivers))] / axis.step)))


def coverages(solver: Solver, rivers: list[River], prior: str) -> list[float]:
    """Share of rivers inside P10-P90 in the four cases: moved and dunes, with and without depth."""
    result = []
    for states, with_depth in itertools.product((("moved",), ("dune",)), (False, True)):
        part = [r for r in rivers if states == ("moved",) or r.d50_mm >= DUNES_FROM_MM]
        low, *_, high = solver.solve(solver.compile(told(part, prior, states, with_depth))).velocity
        u = np.array([r.velocity_m_s for r in part])
        result.append(float(np.mean((low <= u) & (u <= high))))
    return result


def fit_by_score(settings: Settings, name: str, rivers: list[River]) -> tuple[float, float]:
    """Delta and eps by the largest log score on dunes, with and without depth."""
    dunes = [r for r in rivers if r.d50_mm >= DUNES_FROM_MM]
    best = (-math.inf, 0.0, 0.0)
    for delta, eps in itertools.product(DELTAS, SHARES):
        solver = Solver(settings=with_prior(settings, name, delta=delta, eps=eps))
        score = sum(log_score(solver, dunes, told(dunes, name, ("dune",), depth)) for depth in (False, True))
        best = max(best, (score, delta, eps))
    return best[1], best[2]


def fit_by_coverage(settings: Settings, name: str, rivers: list[River]) -> tuple[float, float]:
    """Smallest delta that covers four fifths on average, dunes with depth too, and no case under 75 %; and a little.

    The river prior gets its velocities from the same rivers: a score would drive delta up without limit,
    since every river carries the label and the prior alone does nearly as well.
    """
    for delta in RIVER_DELTAS:
        solver = Solver(settings=with_prior(settings, name, delta=delta, eps=MISLABELLED))
        found = coverages(solver, rivers, name)
        if np.mean(found) >= 0.80 and found[-1] >= 0.80 and min(found) >= 0.75:
            return round(delta + OTHER_RIVERS, 2), MISLABELLED
    raise SystemExit("No allowance covers the rivers: look at the data before anything else.")


def main() -> None:
    """Fit, write the file, print the table of coverage."""
    rivers = read_rivers()
    settings = flow_settings()
    intercept, slope, spread = velocity_against_depth(rivers)
    given = (round(intercept, 3), round(slope, 3), round(math.hypot(spread, STAGE_SD), 2))
    settings = with_prior(settings, "river", velocity_given_depth=given)
    lines = ["# Written by tests/calibration/calibrate.py; do not edit by hand."]
    for name in ("off", "broad", "river"):
        fit = fit_by_coverage if name == "river" else fit_by_score
        delta, eps = fit(settings, name, rivers)
        settings = with_prior(settings, name, delta=delta, eps=eps)
        lines += ["", f"[{name}]", f"delta = {delta:g}", f"eps = {eps:g}"]
    lines += [
        f"velocity_intercept = {given[0]:g}", f"velocity_slope = {given[1]:g}",
        f"velocity_sd_ln = {given[2]:g}",
    ]  # fmt: skip
    rows = table(rivers, Solver(settings=settings))
    lines += [
        "", "[made]", f'date = "{datetime.date.today().isoformat()}"', f'data = "{CITATION}"',
        f"rivers = {len(rivers)}", f"fitted_spread_ln = {spread:.3f}", f"stage_spread_ln = {STAGE_SD}", "",
        "# In-sample, prior of the river setting: share of measured velocities inside P10-P90, median P90/P10,",
        "# median P50 over measured.", "[made.coverage]",
    ]  # fmt: skip
    for row in rows:
        lines.append(f"{row.key} = [{row.coverage:.3f}, {row.width:.2f}, {row.bias:.2f}]")
    TARGET.write_text("\n".join(lines) + "\n", encoding="utf-8")
    print(f"Wrote {TARGET}", file=sys.stderr)
    for row in rows:
        print(row)


if __name__ == "__main__":
    main()
