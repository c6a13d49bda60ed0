"""Every hydraulics formula on a million values, as a multiple of numpy.exp on the same number of values in one run."""

from __future__ import annotations

import inspect
import sys
import time
import warnings
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "hydraulics"))

import sampling

COUNT = 1_000_000
AIM = 40.0
SEARCH = "implicit law: its root is found in a table, one search for each value"
DISPERSION = "solves the dispersion relation by Newton steps, several tanh for each value"
STATES = "seven soft edges; all six states are calculated, also to give one"
REASONS = {
    "waves.wavelength": DISPERSION,
    "waves.orbital_diameter": DISPERSION,
    "waves.breaking_height": DISPERSION,
    "waves.diem_chain": "two thresholds with four powers and a root",
    "waves.longest_period": "two thresholds with four powers and a root",
    "waves.wiberg_harris": "two heights, each a quadratic in logarithms",
    "wind.iversen_white": SEARCH,
    "settling.sphere_drag": SEARCH,
    "bedforms.p_": STATES,
    "bedforms.soft_criterion": STATES,
    "bedforms.transport_stage": "skin stress, D* and a threshold in five pieces",
    "resistance.van_rijn_manning_n": "a chain of transport stage, dune height, roughness and n",
    "threshold.hjulstrom_slope_ratio": "two erosion and two deposition lines, each with powers",
    "threshold.hjulstrom_erosion_slope_sign": "two erosion lines with two powers each",
    "turbidity.autosuspension_size": "solves for a size by iteration",
    "suspension.transport_mode": "a threshold, a settling velocity and words for each value",
    "bedforms.van_rijn_classes": "words for each value",
    "threshold.largest_clast_velocity": "four power laws, three results for each value",
    "settling.dietrich": "a logarithm, a tanh, two powers and an exponential",
    "settling.band": "four settling laws, three results for each value",
}
"""Why a formula may cost more than the aim, by the beginning of its id."""


def best_of(task: Callable[[], Any], repeats: int = 3) -> float:
    """Shortest of a few runs in processor time, s; other work on the machine does not count."""
    times = []
    for _ in range(repeats):
        begin = time.process_time()
        task()
        times.append(time.process_time() - begin)
    return min(times)


def arrays(record: Any) -> dict[str, Any]:
    """Sample arguments with every argument that must be given as a million values near the sample."""
    rng = np.random.default_rng(1)
    result: dict[str, Any] = {}
    parameters = inspect.signature(record.function).parameters
    for name, value in sampling.numeric_arguments(record).items():
        must = parameters[name].default is inspect.Parameter.empty
        result[name] = value * rng.uniform(0.8, 1.25, COUNT) if must and not isinstance(value, str) else value
    return result


def main() -> int:
    """Time all of them; exit 1 where one is above the aim without a stated reason."""
    array = np.random.default_rng(0).uniform(-1, 1, COUNT)
    base = best_of(lambda: np.exp(array), 7)
    print(f"numpy.exp on {COUNT} values: {1e3 * base:.1f} ms")
    rows, unexplained = [], []
    for record in sampling.hydraulic_records():
        arguments = sampling.numeric_arguments(record)
        if arguments is None or record.id == "depth.depth_over_set_thickness":
            continue
        given = arrays(record)
        if not any(isinstance(v, np.ndarray) for v in given.values()):
            continue
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            rows.append((best_of(lambda r=record, g=given: r.function(**g)) / base, record.id))
    for ratio, id in sorted(rows, reverse=True):
        reason = next((text for start, text in REASONS.items() if id.startswith(start)), "")
        if ratio > AIM and not reason:
            unexplained.append(id)
        print(f"{ratio:7.1f} x exp  {id}" + (f"  ({reason})" if ratio > AIM else ""))
    print(f"{len(rows)} formulas; {sum(r > AIM for r, _ in rows)} above {AIM:g} x, "
          f"without a stated reason: {', '.join(unexplained) or 'none'}")  # fmt: skip
    return 1 if unexplained else 0


if __name__ == "__main__":
    raise SystemExit(main())
