"""Draws and writes every output of the examples, into a folder `out` beside each example's input.

python examples/build.py            writes them all (columns, panel, flow, trends, reports, hand-over set)
python examples/build.py --only river
python examples/build.py --check    draws every committed svg again and fails where it differs
"""

from __future__ import annotations

import argparse
import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import logkit
from logkit.files import write_atomic

HERE = Path(__file__).resolve().parent
WELLS = ("plover_1", "plover_2", "sandling_1", "teal_1")
DATUM = "ash 2"


@dataclass(frozen=True)
class Read:
    """One log with its results."""

    log: Any
    history: Any
    trends: Any


@dataclass(frozen=True)
class Picture:
    """One drawing of an example: where it goes, how it is drawn, and whether a png belongs beside it."""

    path: Path
    draw: Callable[[], Any]
    png: bool = False


def read(*parts: str) -> Read:
    """Read a log of the examples and take all steps."""
    log = logkit.read_log(HERE.joinpath(*parts))
    return Read(log, logkit.infer_flow(log), logkit.find_trends(log))


def column(source: Read, **options: Any) -> Any:
    """The column of one log."""
    return logkit.draw_column(source.log, source.history, source.trends, **options)


def compared() -> tuple[list[Read], Any]:
    """The four wells and their comparison."""
    wells = [read("wells", f"{name}.csv") for name in WELLS]
    comparison = logkit.compare_logs(
        [well.log for well in wells],
        datum=DATUM,
        histories=[well.history for well in wells],
        trends=[well.trends for well in wells],
        suggest_ties=True,
    )
    return wells, comparison


def pictures(only: str) -> list[Picture]:
    """Every drawing of the examples wanted."""
    found: list[Picture] = []
    if only in ("", "river"):
        river, out = read("river", "tarrow_bend.csv"), HERE / "river" / "out"
        found += [
            Picture(out / "tarrow_bend.svg", lambda: column(river, scale=50), png=True),
            Picture(out / "tarrow_bend_200.svg", lambda: column(river, scale=200)),
            Picture(out / "tarrow_bend_mono.svg", lambda: column(river, style="field-mono", scale=100)),
        ]
    if only in ("", "turbidites"):
        skerry, out = read("turbidites", "skerry_point.csv"), HERE / "turbidites" / "out"
        found += [
            Picture(out / "skerry_point.svg", lambda: column(skerry, scale=20), png=True),
            Picture(
                out / "skerry_point_journal.svg", lambda: column(skerry, style="journal-double", scale=100)
            ),
        ]
    if only in ("", "well"):
        kestrel, out = read("well", "kestrel_1.xlsx"), HERE / "well" / "out"
        found.append(Picture(out / "kestrel_1.svg", lambda: column(kestrel, scale=200), png=True))
    if only in ("", "wells"):
        out = HERE / "wells" / "out"
        found.append(Picture(out / "panel.svg", lambda: logkit.draw_panel(compared()[1]), png=True))
    return found


def sheet_paths(path: Path, sheets: int) -> list[Path]:
    """Where the sheets of a drawing are: the name itself, or numbered."""
    if sheets == 1:
        return [path]
    return [path.with_name(f"{path.stem}-{number}{path.suffix}") for number in range(1, sheets + 1)]


def check(only: str) -> int:
    """Draw every svg again; the number that differ from those on disk, are missing there or left over."""
    wrong: list[str] = []
    drawn: set[Path] = set()
    for picture in pictures(only):
        drawing = picture.draw()
        for number, path in enumerate(sheet_paths(picture.path, len(drawing.sheets)), start=1):
            drawn.add(path)
            if not path.exists():
                wrong.append(f"missing    {path.relative_to(HERE)}")
            elif path.read_text(encoding="utf-8") != drawing.svg(number):
                wrong.append(f"different  {path.relative_to(HERE)}")
    for folder in sorted({path.parent for path in drawn}):
        wrong += [
            f"left over  {path.relative_to(HERE)}"
            for path in sorted(folder.glob("*.svg"))
            if path not in drawn
        ]
    for line in wrong:
        print(line)
    return len(wrong)


def tables(name: str, stem: str, source: Read) -> None:
    """The tables of one log: tidy table, flow, grading and packages."""
    out = HERE / name / "out"
    source.log.write(out / f"{stem}_tidy.csv")
    write_atomic(out / f"{stem}_flow.csv", source.history.to_frame().to_csv(index=False))
    write_atomic(out / f"{stem}_findings.txt", "\n".join(str(f) for f in source.log.findings) + "\n")
    write_atomic(out / f"{stem}_trends.txt", "\n".join(source.trends.summary()) + "\n")


def build(only: str) -> None:
    """Write everything."""
    for picture in pictures(only):
        picture.path.parent.mkdir(parents=True, exist_ok=True)
        drawing = picture.draw()
        drawing.save(picture.path)
        if picture.png:
            drawing.save(picture.path.with_suffix(".png"))
        print(f"wrote {picture.path.relative_to(HERE)}")
    singles = (
        ("river", "tarrow_bend", "tarrow_bend.csv"),
        ("turbidites", "skerry_point", "skerry_point.csv"),
        ("well", "kestrel_1", "kestrel_1.xlsx"),
    )
    for name, stem, file in singles:
        if only in ("", name):
            source = read(name, file)
            tables(name, stem, source)
            for ending in ("pdf", "html"):
                logkit.write_report(
                    [source.log],
                    HERE / name / "out" / f"{stem}_report.{ending}",
                    histories=[source.history],
                    trends=[source.trends],
                )
            print(f"wrote tables and reports of {stem}")
    if only in ("", "wells"):
        build_wells()


def build_wells() -> None:
    """The comparison tables and the hand-over set of the four wells."""
    out = HERE / "wells" / "out"
    wells, comparison = compared()
    for name, frame in comparison.tables().items():
        write_atomic(out / f"{name}.csv", frame.to_csv(index=False))
    write_atomic(out / "summary.txt", "\n".join(comparison.summary()) + "\n")
    logkit.export(
        [well.log for well in wells],
        out / "handover",
        histories=[well.history for well in wells],
        trends=[well.trends for well in wells],
    )
    print("wrote comparison and hand-over set of the wells")


def main() -> int:
    """Command line of this script."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0] if __doc__ else None)
    parser.add_argument("--only", default="", choices=("", "river", "turbidites", "well", "wells"))
    parser.add_argument("--check", action="store_true", help="compare the svg files on disk with new ones")
    options = parser.parse_args()
    if options.check:
        different = check(options.only)
        print(f"{different} files differ" if different else "every svg is as drawn today")
        return 1 if different else 0
    build(options.only)
    return 0


if __name__ == "__main__":
    sys.exit(main())
