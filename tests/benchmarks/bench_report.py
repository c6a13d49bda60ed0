"""How long a report takes and how large it is, beside plain baselines measured in the same run.

Baselines: typst on an empty page for PDF, `json.dumps` of the same beds for HTML. The long log is the invented river
section of the drawing benchmark, read back from its table. Wall times suffer from other work on the machine, so the
processor time of the process stands beside them.

Run: `python tests/benchmarks/bench_report.py`.
"""

from __future__ import annotations

import os

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"

import json  # noqa: E402
import sys  # noqa: E402
import tempfile  # noqa: E402
import time  # noqa: E402
from collections.abc import Callable  # noqa: E402
from dataclasses import replace  # noqa: E402
from pathlib import Path  # noqa: E402
from typing import Any  # noqa: E402

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "tests/benchmarks"))

from bench_drawing import river  # noqa: E402

from logkit.pipeline import Settings, run  # noqa: E402
from logkit.report import write_report  # noqa: E402


def timed(action: Callable[[], Any]) -> tuple[float, float]:
    """Wall and processor time of one call, s."""
    wall, processor = time.perf_counter(), time.process_time()
    action()
    return time.perf_counter() - wall, time.process_time() - processor


def main() -> None:
    """Print a line for each log and form."""
    import typst

    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        long, _ = river(1000)
        long = replace(long, header=replace(long.header, setting="river", section="long"))
        long.write(folder / "long.csv")
        sources = {
            "60 beds": ROOT / "examples/river/tarrow_bend.csv",
            "four wells": ROOT / "examples/wells",
            "1,000 beds": folder / "long.csv",
        }
        empty: Any = {"main": b"#set page(width: 50mm, height: 50mm)\n."}
        compile_document: Any = typst.compile
        base_pdf = timed(lambda: compile_document(empty, format="pdf"))[1]
        base_json = timed(lambda: json.dumps([repr(bed) for bed in long.beds]))[1]
        print(f"baselines, processor time: empty PDF {base_pdf:.3f} s, 1,000 beds as JSON {base_json:.3f} s")
        for words, source in sources.items():
            steps: list[Any] = []
            wanted = Settings((str(source),), frozenset({"flow", "trends"}))
            wall, processor = timed(lambda wanted=wanted, steps=steps: steps.append(run(wanted)))
            print(f"{words:11s} read, flow, trends: wall {wall:5.2f} s, processor {processor:5.2f} s")
            runs = steps[0].runs
            for ending in ("pdf", "html", "docx"):
                path = folder / f"report.{ending}"
                wall, processor = timed(
                    lambda path=path, runs=runs: write_report(
                        [r.log for r in runs],
                        path,
                        histories=[r.history for r in runs],
                        trends=[r.trends for r in runs],
                    )
                )
                base = base_pdf if ending == "pdf" else base_json
                print(
                    f"{words:11s} {ending:4s}: wall {wall:5.2f} s, processor {processor:5.2f} s "
                    f"({processor / base:,.0f} baselines), {path.stat().st_size / 1e6:.2f} MB"
                )


if __name__ == "__main__":
    main()
