"""Processor time of `find_trends` on 5,000 beds, beside plain scipy calls for comparable statistics in the same run.

Run as a script: `python tests/benchmarks/bench_trends.py`.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from functools import partial
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1] / "trends"))

from sections import cycles, section, thicknesses

from logkit.model import Log
from logkit.trends import Trends, find_trends
from logkit.trends.series import series

BEDS = 5000


def fastest(action: Callable[[], object], times: int = 3) -> float:
    """Least processor time of some calls, s: other work on the machine does not count."""
    best = float("inf")
    for _ in range(times):
        start = time.process_time()
        action()
        best = min(best, time.process_time() - start)
    return best


def plain_scipy(log: Log, trends: Trends) -> None:
    """The main statistics one call at a time: tau and slope of the log and of each package, shuffled order,
    three fitted distributions with their goodness, one chi-square."""
    from scipy import stats

    sizes = np.concatenate([run.values for run in series(log, "grain size")])
    thickness = np.array([bed.thickness_m for bed in log.real_beds])
    generator = np.random.default_rng(1)
    for values in (sizes, np.log(thickness)):
        stats.kendalltau(np.arange(values.size), values)
        stats.permutation_test(
            (values,), lambda x, axis: -np.sum(np.diff(x, axis=axis) ** 2, axis=axis), vectorized=True,
            permutation_type="pairings", n_resamples=99, rng=generator,
        )  # fmt: skip
    bases = np.array([bed.base_m for bed in log.real_beds])
    for package in trends.packages:
        values = (sizes if package.quantity == "grain size" else thickness)[
            (bases >= package.base_m - 1e-9) & (bases < package.top_m - 1e-9)
        ]
        stats.kendalltau(np.arange(values.size), values)
    some = np.sort(thickness)[:: max(thickness.size // 400, 1)]
    for family in (stats.lognorm, stats.expon, stats.pareto):
        stats.goodness_of_fit(
            family, some, known_params={"loc": 0} if family is not stats.expon else None, statistic="ks",
            n_mc_samples=99, rng=generator,
        )  # fmt: skip
    codes = np.floor(sizes).astype(int)
    table = np.ones((codes.max() - codes.min() + 1,) * 2)
    np.add.at(table, (codes[:-1] - codes.min(), codes[1:] - codes.min()), 1)
    stats.chi2_contingency(table)


def main() -> None:
    """Print the measured times and their ratio for three kinds of section."""
    generator = np.random.default_rng(3)
    cyclic = np.concatenate([cycles(generator, 0.3, 100)[0] for _ in range(8)])[:BEDS]
    stepped = np.repeat([2.0, 3.0, 2.0, 3.0, 2.0], BEDS // 5) + 0.4 * generator.standard_normal(BEDS)
    sections = {
        "fining-up cycles": cyclic,
        "five long steps": stepped,
        "random order": generator.normal(2, 1, BEDS),
    }
    for name, phi in sections.items():
        log = section(phi, thicknesses(generator, BEDS))
        trends = find_trends(log)  # libraries are loaded and tables of ties filled once
        ours = fastest(partial(find_trends, log))
        theirs = fastest(partial(plain_scipy, log, trends), 1)
        found = len(trends.significant_packages)
        print(
            f"{name:18s} {BEDS} beds: trends {ours:.2f} s, plain scipy {theirs:.2f} s, ratio {ours / theirs:.2f}; "
            f"{found} significant packages"
        )


if __name__ == "__main__":
    main()
