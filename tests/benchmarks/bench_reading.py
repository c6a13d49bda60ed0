"""Measures reading and checking of a table of 5,000 beds, beside `pandas.read_csv` of the same file in one run.

python tests/benchmarks/bench_reading.py [BEDS]
"""

from __future__ import annotations

import random
import resource
import statistics
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import pandas as pd

from logkit.tables import read_log

HEAD = """# title: invented section for timing
# section: Z-1
# direction: up
# unit: cm
# setting: river
# bedding: 112/14
# declination: -3.5
Bed,Base (m),Thickness (cm),Lith,Grain size,Structures,Sets (cm),Base contact,Palaeocurrent,BI,Colour,Samples,Notes
"""
KINDS = (
    ("sst", ("mU", "mL-mU", "fU→vfL", "cL", "0.25 mm", "fL"), ("tr x-bed", "St", "Sp", "low-angle xb"), True),
    ("sst", ("fL", "vfU→vfL", "vfU"), ("rip xl", "climbing rip", "Sr"), False),
    ("mdst", ("",), ("mass", "roots", "lam"), False),
    ("slst", ("c slt",), ("fine lamination",), False),
    ("cgl", ("gran-pbl", "pbl"), ("Gm",), False),
)


def table(beds: int, seed: int = 1) -> str:
    """A table of that many beds; readings, thicknesses and notes differ from row to row as in the field."""
    rng = random.Random(seed)
    rows = []
    height = 0.0
    for number in range(1, beds + 1):
        rock, sizes, structures, sets = rng.choice(KINDS)
        thickness = max(2, round(rng.lognormvariate(3.4, 0.7)))
        low = max(1, thickness // 8)
        current = f'"fs {rng.randint(18, 38)}/{rng.randrange(360):03d}, {rng.randint(18, 38)}/{rng.randrange(360):03d}"'
        cells = (
            str(number), f"{height:.2f}" if number % 25 == 1 else "", str(thickness), rock, rng.choice(sizes),
            rng.choice(structures), f"{low}-{2 * low} n={rng.randint(3, 9)}" if sets else "",
            rng.choice(("sharp", "grad 3", f'"ero, relief {rng.randint(1, low)}"')), current if sets else "",
            str(rng.randint(0, 4)), rng.choice(("10YR 6/4", "5Y 6/1", "5YR 5/4")),
            f"S-{number}" if number % 9 == 0 else "", f"note {number}" if number % 4 == 0 else "",
        )  # fmt: skip
        rows.append(",".join(cells))
        height += thickness / 100
    return HEAD + "\n".join(rows) + "\n"


def seconds(work: Callable[[], object], repeats: int) -> list[float]:
    """Durations of repeated calls, s."""
    taken = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        taken.append(time.perf_counter() - start)
    return taken


def main() -> int:
    """Command line of this script."""
    beds = int(sys.argv[1]) if len(sys.argv) > 1 else 5000
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "beds.csv"
        path.write_text(table(beds), encoding="utf-8")
        first = seconds(lambda: read_log(path), 1)[0]
        again = statistics.median(seconds(lambda: read_log(path), 3))
        plain = statistics.median(seconds(lambda: pd.read_csv(path, comment="#"), 7))
        peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
        log = read_log(path)
    counts = {level: log.count(level) for level in ("error", "question", "note")}
    print(f"{beds} beds, {len(log.beds)} read, findings {counts}")
    print(f"pandas.read_csv (baseline)     {plain * 1e3:8.1f} ms")
    print(f"read_log, first in the process {first * 1e3:8.1f} ms   {first / plain:6.1f} x baseline")
    print(f"read_log, again                {again * 1e3:8.1f} ms   {again / plain:6.1f} x baseline")
    print(f"memory of the whole process at its peak, pandas and interpreter included: {peak:.0f} MB")
    return 0


if __name__ == "__main__":
    sys.exit(main())
