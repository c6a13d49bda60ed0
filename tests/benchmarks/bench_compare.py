"""Measures the comparison of wells and prints the numbers beside plain baselines of the same run.

python tests/benchmarks/bench_compare.py            everything
python tests/benchmarks/bench_compare.py --wells 100   a shorter run of many wells
"""

from __future__ import annotations

import argparse
import resource
import subprocess
import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

import numpy as np
import pandas as pd

sys.path.insert(0, str(Path(__file__).parents[1] / "compare"))
from synthetic_wells import second_well, section

from logkit.compare import ManyWells, compare_logs, draw_panel, process_wells
from logkit.compare.companions import Companions
from logkit.compare.placing import place_logs
from logkit.compare.suggestions import suggest_ties
from logkit.model import Log


def suggested(first: Log, second: Log):  # type: ignore[no-untyped-def]
    """Suggestions between two logs."""
    return suggest_ties(place_logs([first, second], "base", "true", [Companions()] * 2)[0])


def ties() -> None:
    """How often suggested ties are right in wells of one section, and confident in unrelated ones."""
    print("suggested ties (aim: within one bed for 90 % of the beds; unrelated wells 5 % confident at most)")
    print("habit         beds  within one bed  confident  of them right  unrelated confident")
    for habit in ("walk", "independent", "cycles"):
        for beds in (30, 60, 120):
            near, confident, right, unrelated = [], [], [], []
            for seed in range(15):
                first = section(seed, beds, habit)
                second, truth = second_well(first, 2000 + seed)
                found = suggested(first, second)
                best = {t.first_bed: t for t in sorted(found, key=lambda t: t.mutual)}
                near += [b in best and abs(int(best[b].second_bed) - int(j)) <= 1 for b, j in truth.items()]
                sure = [t for t in found if t.confident]
                confident.append(len({t.first_bed for t in sure}) / beds)
                right += [
                    abs(int(t.second_bed) - int(truth[t.first_bed])) <= 1
                    for t in sure
                    if t.first_bed in truth
                ]
            for seed in range(40):
                found = suggested(section(seed, beds, habit), section(7000 + seed, beds, habit, "B"))
                unrelated.append(np.mean([t.confident for t in found]) if found else 0.0)
            print(
                f"{habit:<13} {beds:>4}  {np.mean(near):>14.3f}  {np.mean(confident):>9.2f}  "
                f"{np.mean(right):>13.3f}  {np.mean(unrelated):>19.3f}"
            )


def panel() -> None:
    """Four wells of 500 beds to a panel in PDF."""
    wells = []
    for k in range(4):
        log = section(k, 500, "cycles", f"W{k}")
        wells.append(
            replace(
                log,
                beds=tuple(
                    replace(b, marker=f"m{i}" if i % 100 == 50 else "") for i, b in enumerate(log.beds)
                ),
            )
        )
    start = time.perf_counter()
    comparison = compare_logs(wells, "m50")
    compared = time.perf_counter()
    drawing = draw_panel(comparison)
    drawing.svg()
    drawn = time.perf_counter()
    pdf = drawing.pdf()
    end = time.perf_counter()
    baseline = time.perf_counter()
    frame = pd.DataFrame([(b.base_m, b.top_m) for w in wells for b in w.beds])
    frame.to_csv()
    baseline = time.perf_counter() - baseline
    print(
        f"\nfour wells of 500 beds: compare with flow and trends {compared - start:.2f} s, panel to SVG "
        f"{drawn - compared:.2f} s, to PDF {end - drawn:.2f} s ({len(pdf) / 1e6:.1f} MB); together "
        f"{end - start:.2f} s (aim: 5 s), {(end - start) / baseline:.0f} x a CSV of their 2000 bed boundaries"
    )
    start = time.perf_counter()
    compare_logs(wells, "m50", suggest_ties=True, histories=comparison.histories, trends=comparison.trends)
    print(f"suggested ties between them: {time.perf_counter() - start:.2f} s")


def many(wells: int, processes: int, folder: Path) -> None:
    """Many wells of 200 beds: tables and exports; prints wall time and peak memory of this process and a worker."""
    sources = sorted(folder.glob("w*.csv"))[:wells]
    kept = ManyWells()
    start = time.perf_counter()
    for _ in process_wells(sources, folder / f"out{wells}", kept, processes=processes):
        pass
    wall = time.perf_counter() - start
    usage = [resource.getrusage(who) for who in (resource.RUSAGE_SELF, resource.RUSAGE_CHILDREN)]
    cpu = sum(u.ru_utime + u.ru_stime for u in usage)
    own, worker = (u.ru_maxrss / 1024 for u in usage)
    start = time.perf_counter()
    for source in sources:
        pd.read_csv(source, comment="#").to_csv()
    plain = time.perf_counter() - start
    print(
        f"{wells:>4} wells of 200 beds, {processes} processes: {wall:.1f} s ({cpu:.1f} s of processor time), "
        f"{wall / plain:.1f} x pandas reading and "
        f"writing the same tables; peak memory {own:.0f} MB, largest worker {worker:.0f} MB; "
        f"{len(kept.failures)} failures",
        flush=True,
    )


def main() -> None:
    """Run all measurements."""
    parser = argparse.ArgumentParser()
    parser.add_argument("--wells", type=int, default=500)
    parser.add_argument("--processes", type=int, default=2)
    parser.add_argument("--folder", help="only the run of many wells, on the tables in this folder")
    options = parser.parse_args()
    if options.folder:
        many(options.wells, options.processes, Path(options.folder))
        return
    ties()
    panel()
    print("\nmany wells (aim: 500 in 60 s on two cores, memory flat in their number)")
    with tempfile.TemporaryDirectory() as name:
        for number in range(options.wells):
            section(number, 200, "cycles", f"W{number}").write(Path(name) / f"w{number:04d}.csv")
        for wells in (options.wells // 5, options.wells):
            # a process of its own for each run, so that peak memory can be compared
            command = [sys.executable, __file__, "--folder", name, "--wells", str(wells)]
            subprocess.run([*command, "--processes", str(options.processes)], check=True)


if __name__ == "__main__":
    main()
