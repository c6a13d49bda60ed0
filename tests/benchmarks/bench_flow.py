"""Speed, accuracy and memory of the flow engine, beside a plain Monte Carlo in the same run, on one core.

Run: `python tests/benchmarks/bench_flow.py`. Wall times suffer from other work on the machine: the processor time
of the process is printed beside them.
"""

from __future__ import annotations

import os

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"

import resource  # noqa: E402
import sys  # noqa: E402
import time  # noqa: E402
from collections.abc import Callable  # noqa: E402
from pathlib import Path  # noqa: E402

import numpy as np  # noqa: E402

from logkit.flow import infer_flow  # noqa: E402
from logkit.flow.grid import Grid  # noqa: E402
from logkit.flow.settings import flow_settings  # noqa: E402
from logkit.flow.slices import SIZE_STEPS_PER_PHI  # noqa: E402
from logkit.flow.solver import Batch, Case, Solver  # noqa: E402
from logkit.flow.states import Fluid, StateTables, chezy  # noqa: E402
from logkit.hydraulics.bedstates import STATES, state_probabilities  # noqa: E402
from logkit.registry import GRAVITY_M_S2  # noqa: E402

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "flow"))
from synthetic import river_log  # noqa: E402
from test_solver import QUANTITIES, draw_cases  # noqa: E402

BEDS = 20_000
DRAWS = 10_000


def timed(action: Callable[[], object], repeats: int = 1) -> tuple[float, float]:
    """Best wall time and best processor time of some repeats, s."""
    walls, processors = [], []
    for _ in range(repeats):
        wall, processor = time.perf_counter(), time.process_time()
        action()
        walls.append(time.perf_counter() - wall)
        processors.append(time.process_time() - processor)
    return min(walls), min(processors)


def with_ledger(solver: Solver, batch: Batch) -> None:
    """Everything the ledger of each bed needs: quantiles, conflict, velocities without each criterion."""
    solver.solve(batch)
    solver.disagreement(batch)
    solver.leave_one_out(batch)


def monte_carlo(cases: list[Case], seed: int = 0) -> np.ndarray:
    """The plain way: draws from the prior, weighted by the sharp likelihood; P10, P50, P90 of the velocity."""
    rng = np.random.default_rng(seed)
    result = np.empty((3, len(cases)))
    for bed, case in enumerate(cases):
        prior = flow_settings().prior(case.signature.prior)
        intercept, slope, spread = prior.velocity_given_depth  # type: ignore[misc]
        ln_h = rng.normal(*prior.depth, DRAWS)  # type: ignore[misc]
        ln_u = rng.normal(intercept + slope * ln_h, spread, DRAWS)
        local = np.exp(ln_u + prior.delta * rng.normal(size=DRAWS))
        coarse, fine = (s / SIZE_STEPS_PER_PHI for s in case.signature.size)
        d, h = 1e-3 * 2.0 ** -rng.uniform(coarse, fine, DRAWS), np.exp(ln_h)
        theta = local**2 / (chezy(h, d) ** 2 * case.signature.fluid.submerged_gravity * d)
        shares = state_probabilities(
            theta, case.signature.fluid.dstar(d), local / np.sqrt(GRAVITY_M_S2 * h), d
        )
        weight = np.ones(DRAWS)
        for id, reading in case.signature.factors:
            if id == "motion":
                weight *= 1 - shares[0]
            elif id == "bed_state":
                moved = 1 - shares[0]
                likely = sum(shares[STATES.index(s)] for s in reading)  # type: ignore[attr-defined]
                weight *= (1 - prior.eps) * likely + 0.5 * prior.eps * moved
        for _, depth in case.depths:
            weight *= np.exp(-0.5 * ((ln_h - np.log(depth.median_m)) / depth.sd_ln_below) ** 2)
        order = np.argsort(ln_u)
        cumulated = np.cumsum(weight[order])
        at = np.searchsorted(cumulated, np.array([0.1, 0.5, 0.9]) * cumulated[-1])
        result[:, bed] = np.exp(ln_u[order][np.minimum(at, DRAWS - 1)])
    return result


def main() -> None:
    """Print the measured numbers."""
    StateTables(Grid(), Fluid())
    wall, processor = timed(lambda: StateTables(Grid(), Fluid()), 5)
    print(
        f"tables ready in {1e3 * wall:.0f} ms ({1e3 * processor:.0f} ms processor); asked for: below 100 ms"
    )

    plain = [
        c for c in draw_cases(400, seed=2) if all(id != "largest_clast" for id, _ in c.signature.factors)
    ]
    tables = Solver()
    baseline = timed(lambda: monte_carlo(plain[:100]))
    naive_rate = 100 / baseline[1]
    drawn, direct = monte_carlo(plain[:60]), tables.solve(tables.compile(plain[:60])).velocity[::2]
    error = 100 * np.abs(drawn / direct - 1)
    print(
        f"baseline, Monte Carlo of {DRAWS} draws a bed (velocity only): {naive_rate:,.0f} beds/s of processor time"
    )
    print(f"  its velocity against the tables: median {np.median(error):.1f} %, largest {error.max():.1f} %")

    for count in (1_000, BEDS, 100_000):
        batch = tables.compile(draw_cases(count, seed=4))
        cold_solver = Solver()
        cold = timed(lambda s=cold_solver, b=batch: with_ledger(s, b))  # type: ignore[misc]
        warm = timed(lambda s=cold_solver, b=batch: with_ledger(s, b), 5)  # type: ignore[misc]
        bare = timed(lambda s=cold_solver, b=batch: s.solve(b), 3)  # type: ignore[misc]
        for word, (wall, processor) in {
            "cold, ledger": cold,
            "warm, ledger": warm,
            "warm, bare": bare,
        }.items():
            print(
                f"{count:7,d} beds, {len(batch.signatures):5d} signatures, {word}: {count / wall:9,.0f} beds/s wall, "
                f"{count / processor:9,.0f} beds/s processor = {count / processor / naive_rate:6,.0f} x baseline"
            )
        peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
        print(f"{count:7,d} beds: peak memory of the process so far {peak:.0f} MB")

    truth = river_log(2_000, seed=1)
    infer_flow(truth.log)
    wall, processor = timed(lambda: infer_flow(truth.log), 3)
    print(
        f"infer_flow on a log of 2,000 beds, records and tendencies included: {2000 / processor:,.0f} beds/s"
    )
    short = river_log(300, seed=2)
    wall, processor = timed(lambda: infer_flow(short.log), 3)
    print(f"infer_flow on a log of 300 beds: {1e3 * processor:.0f} ms")

    cases = draw_cases(60)
    solver, fine = Solver(), Solver(Grid(16, 288, 168))
    found, expected = solver.solve(solver.compile(cases)), fine.solve(fine.compile(cases))
    for name in QUANTITIES:
        error = 100 * np.abs(getattr(found, name)[::2] / getattr(expected, name)[::2] - 1)
        print(
            f"error of P10/P50/P90 of {name:20s}: median {np.median(error):.2f} %, largest {error.max():.2f} %"
        )


if __name__ == "__main__":
    main()
