"""Time and size of the marks of 1,000 beds, as a multiple of writing the same beds as plain outlines.

Run: `python tests/benchmarks/bench_textures.py`. The baseline is the SVG text of the same 1,000 outlines without marks.
"""

from __future__ import annotations

from time import process_time

from logkit.drawing.motifs import structure_lines
from logkit.drawing.noise import seed_of
from logkit.drawing.shapes import Paint, Path, Shape, Sheet, polyline
from logkit.drawing.style import load_style
from logkit.drawing.svg import sheet_svg
from logkit.drawing.textures import bed_texture

BEDS = 1000
FAMILIES = (("quartz", 2.0), ("mud", 6.5), ("quartz", 3.0), ("lithic", 1.5), ("mud", 7.0), ("gravel", -2.5))


def main() -> None:
    """Print seconds, bytes a bed and the multiple of the baseline for beds of several thicknesses."""
    style = load_style("report")
    bed_texture([(0, 0), (20, 0), (20, 5), (0, 5)], [(0, 2)], "quartz", style, seed=1)
    for thickness in (1.2, 2.0, 4.0, 8.0):
        for structures in (False, True):
            outlines: list[Shape] = []
            marks: list[Shape] = []
            spent = 0.0
            for number in range(BEDS):
                family, phi = FAMILIES[number % len(FAMILIES)]
                y = number * thickness
                right = 36 + 5 + 4.0 * (8 - phi)
                outline = [(36, y), (right, y), (right + 2, y + thickness), (36, y + thickness)]
                outlines.append(Path(polyline(outline, closed=True), Paint(fill="#cccccc")))
                seed = seed_of(f"bed {number}")
                start = process_time()
                clear, windows = (), ()
                if structures and thickness >= style.texture.least_segment and family != "gravel":
                    term = "trough_cross_bedding" if phi < 4 else "roots"
                    box = (36.0, y, right + 2, y + thickness)
                    made = structure_lines(term, box, None, seed, style, outline)
                    marks.extend(made.lines)
                    clear, windows = made.clear, (made.window,) if made.window else ()
                marks.extend(
                    bed_texture(
                        outline,
                        [(y, phi + 0.5), (y + thickness, phi)],
                        family,
                        style,
                        seed=seed,
                        clear=clear,
                        windows=windows,
                    )
                )
                spent += process_time() - start
            height = BEDS * thickness
            start = process_time()
            plain = sheet_svg(Sheet(210, height, tuple(outlines)))
            baseline = process_time() - start
            full = sheet_svg(Sheet(210, height, (*outlines, *marks)))
            print(
                f"{BEDS} beds of {thickness} mm, {'with' if structures else 'without'} structures: {spent:.3f} s, "
                f"{spent / baseline:.1f} x the outlines' SVG ({baseline:.3f} s), "
                f"{(len(full) - len(plain)) / BEDS:.0f} bytes a bed"
            )


if __name__ == "__main__":
    main()
