"""The parts of a report about trends: grading, packages, order of beds, palaeocurrents."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from logkit.report.document import Block, Column, Figure, Heading, Paragraph, Table
from logkit.report.wells import Well
from logkit.report.wording import Units, chance, frame_cell
from logkit.words import joined


def grading(well: Well, units: Units) -> Iterator[Block]:
    """How many beds are graded how, and the packages with their tests."""
    yield Heading(well.name)
    words = Counter(g.verdict for g in well.trends.gradings)
    if words:
        yield Paragraph(
            "Grading: " + joined([f"{word} {n}" for word, n in words.most_common()]) + ". "
            "Each verdict carries the width of the size classes and has its probability in the bed table; "
            "ungraded means not distinguished from ungraded."
        )
    packages = well.trends.packages
    if packages:
        yield Table(
            f"packages-{well.keys[0]}",
            f"Packages of {well.name}, upward. Tau is Kendall's tau of the quantity against height; p adjusted "
            "after Benjamini & Hochberg over all tests of the log. Source: trends of the bed table.",
            (
                Column("from bed"),
                Column("to bed"),
                Column("base", well.position_unit(units), "right"),
                Column("top", well.position_unit(units), "right"),
                Column("beds", align="right"),
                Column("trend"),
                Column("of"),
                Column("tau", align="right"),
                Column("p", align="right"),
                Column("p adjusted", align="right"),
                Column("verdict"),
            ),
            tuple(
                (
                    p.first_bed,
                    p.last_bed,
                    well.position(p.base_m, units),
                    well.position(p.top_m, units),
                    str(p.beds),
                    p.trend,
                    p.quantity,
                    f"{p.tau:+.2f}",
                    chance(p.p),
                    chance(p.p_adjusted),
                    "significant" if p.significant else "not distinguished from random",
                )
                for p in packages
            ),
        )
    else:
        yield Paragraph("No package was found: the series of beds is not distinguished from random order.")
    for title, frame in well.trends.tables().items():
        if title in ("thickness", "transitions") and len(frame):
            yield Table(
                f"{title}-{well.keys[0]}",
                TABLE_CAPTIONS[title].format(well.name),
                tuple(
                    Column(str(c).replace("_", " "), align="left" if frame[c].dtype == object else "right")
                    for c in frame.columns
                ),
                tuple(tuple(frame_cell(v) for v in row) for row in frame.itertuples(index=False, name=None)),
            )


TABLE_CAPTIONS = {
    "thickness": "Bed thickness of {}: statistics by class. Gaps and layers of written patterns are left out. "
    "Source: bed table.",
    "transitions": "Upward transitions of {}: counts against quasi-independence (embedded chain). Gaps and "
    "faults break the chain. Source: bed table.",
}


def currents(well: Well) -> Iterator[Block]:
    """Summaries of directions as roses and as a table."""
    from logkit.report.charts import roses

    summaries = [s for s in well.trends.currents if s.n]
    if not summaries:
        return
    yield Heading(well.name)
    picture = roses(summaries)
    if picture is not None:
        yield Figure(
            f"roses-{well.keys[0]}",
            f"Palaeocurrents of {well.name} after correction, 20° sectors, radius with the square root of "
            "frequency so that area is share. Source: table of directions.",
            "; ".join(f"{s.indicator.replace('_', ' ')} n {s.n}" for s in summaries),
            *picture,
        )
    yield Table(
        f"directions-{well.keys[0]}",
        f"Directions of {well.name} by kind of indicator; spread is the circular standard deviation. Lines "
        "without a sense are doubled before averaging. Source: corrected readings of the bed table.",
        (
            Column("indicator"),
            Column("sense"),
            Column("n", align="right"),
            Column("mean", "°", "right"),
            Column("resultant", "0–1", "right"),
            Column("spread", "°", "right"),
            Column("Rayleigh p", align="right"),
            Column("say with it"),
        ),
        tuple(
            (
                s.indicator.replace("_", " "),
                s.sense,
                str(s.n),
                "undefined" if s.mean_deg is None else f"{s.mean_deg:03.0f}",
                f"{s.resultant:.2f}",
                "" if s.spread_deg is None else f"{s.spread_deg:.0f}",
                chance(s.rayleigh_p),
                "; ".join(s.notes),
            )
            for s in summaries
        ),
    )
