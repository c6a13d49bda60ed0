"""How long drawing takes and how large the files are, as multiples of a plain baseline measured in the same run.

Baseline: svgwrite alone writing one outline and one label a bed, nothing else. The log is an invented river section:
half of the beds graded, most with a structure, a fifth with a note, flow estimates for all sand beds.
"""

from __future__ import annotations

import random
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import svgwrite

sys.path.insert(0, str(Path(__file__).parents[1] / "drawing"))

from random_logs import Results, quantiles

from logkit.drawing import Drawing, draw_column
from logkit.drawing.style import load_style
from logkit.model import Bed, Contact, GrainState, Header, Log, Phase, PhaseEstimate, SizeInterval, Structure

FLAT = load_style("report", {"texture": {"dots": False, "least_segment": 1e6}})
"""The default style without the marks of texture and structure."""


def river(count: int, mean_m: float = 0.3) -> tuple[Log, Results]:
    """A section of fining-up cycles."""
    rng = random.Random(7)
    beds, estimates, base = [], [], 0.0
    cycle = (
        ("trough_cross_bedding", 0.7),
        ("planar_cross_bedding", 0.45),
        ("plane_lamination", 0.3),
        ("current_ripples", 0.18),
    )
    for number in range(count):
        thickness = mean_m * rng.uniform(0.3, 1.7)
        place = number % 6
        if place < 4:
            term, mm = cycle[place]
            sizes = [SizeInterval(mm * f, mm * f * 1.41, f"{mm * f:.2g} mm") for f in (1.0, 0.7)]
            states = (
                (GrainState(0.0, sizes[0]), GrainState(1.0, sizes[1]))
                if number % 2
                else (GrainState(0.5, sizes[0]),)
            )
            lithology, structures = "sandstone", (Structure(term),)
        else:
            states = (GrainState(0.5, SizeInterval(0.008, 0.016, "silt")),)
            lithology, structures = "mudstone", ()
        contact = Contact("erosive", relief_m=0.05) if place == 0 else Contact("sharp")
        beds.append(
            Bed(str(number + 1), base, base + thickness, lithology=lithology, grain=states, structures=structures,
                contact=contact, notes="Sets thin upward, red mottles near the top" if number % 5 == 0 else "")
        )  # fmt: skip
        phase = Phase("", str(number + 1), 0, base, base + thickness, "bed", "river", bed_index=number)
        if place < 4:
            velocity = quantiles(0.3 + 0.3 * (4 - place), 0.3)
            state = ("dune", "dune", "upper_plane", "ripple")[place]
            estimates.append(PhaseEstimate(phase, "estimated", bound="range", velocity=velocity, bed_state=state,
                                           flow_depth=quantiles(2.0, 0.4)))  # fmt: skip
        else:
            estimates.append(PhaseEstimate(phase, "no estimate", reason="mud"))
        base += thickness
    return Log(Header(title="Invented river", setting="river"), tuple(beds)), Results(
        tuple(estimates), (), (), ()
    )


def baseline(log: Log) -> str:
    """One outline and one label a bed by svgwrite."""
    drawing = svgwrite.Drawing(debug=False)
    for bed in log.beds:
        drawing.add(
            drawing.path(d=f"M0 {bed.base_m:.2f}H40V{bed.top_m:.2f}H0z", fill="#dacda8", stroke="#1d2430")
        )
        drawing.add(drawing.text(bed.name, insert=(45, bed.base_m)))
    return str(drawing.tostring())


def best_of(times: int, work: Callable[[], Any]) -> tuple[float, Any]:
    """Shortest processor time of several runs, s, and the last result."""
    shortest, result = float("inf"), None
    for _ in range(times):
        start = time.process_time()
        result = work()
        shortest = min(shortest, time.process_time() - start)
    return shortest, result


def svgs(drawing: Drawing) -> list[str]:
    """Every sheet as text."""
    return [drawing.svg(number) for number in range(1, len(drawing.sheets) + 1)]


def main() -> None:
    """Print the table."""
    log, results = river(1000)
    first, _ = best_of(1, lambda: svgs(draw_column(log, results)))
    base, _ = best_of(5, lambda: baseline(log))
    print(f"baseline, 1,000 beds by svgwrite alone: {base:.3f} s of processor time")

    def line(what: str, seconds: float, aim: str) -> None:
        print(f"{what:<52} {seconds:7.2f} s  {seconds / base:7.1f} x baseline   aim {aim}")

    line("1,000 beds to SVG at 1:50, first drawing of a process", first, "-")
    for scale in (50, 200, 500):
        seconds, texts = best_of(3, lambda scale=scale: svgs(draw_column(log, results, scale=scale)))
        aim = "0.5 s" if scale == 50 else "-"
        line(f"1,000 beds to SVG at 1:{scale}, {len(texts)} sheets", seconds, aim)
        print(
            f"    {sum(map(len, texts)) / 1000:6.0f} bytes a bed                                     aim 3000"
        )
        flat, texts = best_of(1, lambda scale=scale: svgs(draw_column(log, style=FLAT, scale=scale)))
        line("    the same, profile alone, no textures", flat, "-")
        print(
            f"    {sum(map(len, texts)) / 1000:6.0f} bytes a bed                                     aim 400"
        )
    drawing = draw_column(log, results, scale=50)
    seconds, _ = best_of(2, lambda: svgs(drawing))
    line("    of which writing the SVG", seconds, "-")
    seconds, document = best_of(1, drawing.pdf)  # once: the typesetter remembers what it has set
    line("1,000 beds, drawing to PDF at 1:50", seconds, "1.5 s")
    print(f"    {len(document) / 1000:6.0f} kB")
    log, results = river(10_000, 0.1)
    seconds, texts = best_of(1, lambda: svgs(draw_column(log, results, scale=100)))
    line(f"10,000 beds to SVG at 1:100, {len(texts)} sheets", seconds, "6 s")


if __name__ == "__main__":
    main()
