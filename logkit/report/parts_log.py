"""The parts of a report that show the log as it is: columns, bed table, findings."""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache

from logkit.model import LEVELS, Bed
from logkit.report.document import Block, Column, Figure, Heading, Paragraph, Table
from logkit.report.settings import ReportSettings
from logkit.report.wells import Well, depth_or_height
from logkit.report.wording import Units, size_cell
from logkit.vocabulary import vocabulary
from logkit.words import counted, one_line

LONG_LOG = 250
"""Beds above which the column goes without the dots of its texture, which would be specks at its scale."""


def columns(well: Well, settings: ReportSettings) -> Iterator[Figure]:
    """The column on its sheets, true to scale."""
    from logkit.drawing import draw_column
    from logkit.drawing.style import load_style

    style = load_style(
        settings.style, {"texture": {"dots": False}} if len(well.log.beds) > LONG_LOG else None
    )
    drawing = draw_column(
        well.log,
        well.history,
        well.trends,
        style=style,
        scale=column_scale(well, settings),
        page=settings.page,
    )
    of = len(drawing.sheets)
    for number, sheet in enumerate(drawing.sheets, 1):
        part = f", sheet {number} of {of}" if of > 1 else ""
        yield Figure(
            f"column-{well.keys[0] if well.keys else well.name}-{number}",
            f"Column of {well.name}{part} at 1:{drawing.scale:g} on paper of {sheet.width:g} × "
            f"{sheet.height:g} mm. Width is grain size; flow boxes are P10–P90 with P25–P75 and median. "
            "Source: bed table and table of phases.",
            f"Annotated column of {well.name}{part}: {counted(len(well.log.real_beds), 'bed')}.",
            drawing.svg(number),
            sheet.width,
            sheet.height,
            "column",
        )


LONGEST_COLUMN_MM = 2400.0
"""Columns longer than this, a dozen sheets, are drawn at a smaller scale unless one is asked for."""

SMALLER_SCALES = (100.0, 200.0, 500.0, 1000.0, 2000.0, 5000.0)


def column_scale(well: Well, settings: ReportSettings) -> float | None:
    """Scale of a column: as asked for, the style's own (None), or smaller for a long log."""
    from logkit.drawing.style import load_style

    if settings.scale is not None or not well.log.beds:
        return settings.scale
    longest = 1000 * well.log.thickness_m / LONGEST_COLUMN_MM
    if longest <= load_style(settings.style).page.scale:
        return None
    return next((scale for scale in SMALLER_SCALES if scale >= longest), SMALLER_SCALES[-1])


def bed_table(well: Well, units: Units) -> Table:
    """All beds and gaps upward, as read."""
    rows = []
    for bed in well.log.beds:
        grading = well.grading(bed)
        verdict = ""
        if grading is not None and grading.verdict != "not determinable":
            verdict = grading.verdict
            if grading.probability is not None:
                verdict += f" ({grading.probability:.2f})"
        rows.append(
            (
                bed.name,
                well.position(bed.base_m, units),
                well.position(bed.top_m, units),
                units.height(bed.thickness_m),
                rock(bed),
                sizes(bed),
                ", ".join(label("structures", s.term) + ("" if s.sure else "?") for s in bed.structures),
                verdict,
                contact(bed, units),
                one_line(bed.notes),
            )
        )
    unit = well.position_unit(units)
    return Table(
        f"beds-{well.keys[0]}" if well.keys else "beds",
        f"Beds of {well.name}, upward, as read from the table; {depth_or_height(well)}s "
        f"in {unit}. Grading with its probability, blank where not determinable. Source: the table that "
        "was read; the wording of every cell is kept in the tidy table.",
        (
            Column("bed"),
            Column("base", unit, "right"),
            Column("top", unit, "right"),
            Column("thickness", units.length, "right"),
            Column("rock"),
            Column("grain size"),
            Column("structures"),
            Column("grading"),
            Column("base contact"),
            Column("notes"),
        ),
        tuple(rows),
        well.keys,
    )


def rock(bed: Bed) -> str:
    """Lithology with its qualifiers, or the reason of a gap."""
    if bed.is_gap:
        return label("gaps", bed.gap_reason) or "gap"
    return " ".join(
        [*(label("qualifiers", q) for q in bed.qualifiers), label("lithologies", bed.lithology)]
    ).strip()


def sizes(bed: Bed) -> str:
    """Grain size: one interval, or states upward."""
    return " → ".join(size_cell(state.size) for state in bed.grain)


def contact(bed: Bed, units: Units) -> str:
    """Base contact with relief or zone."""
    if bed.contact is None:
        return ""
    words = [bed.contact.kind.replace("_", " ")]
    if bed.contact.relief_m:
        words.append(f"relief {units.height_words(bed.contact.relief_m)}")
    if bed.contact.zone_m:
        words.append(f"over {units.height_words(bed.contact.zone_m)}")
    return ", ".join(words)


@lru_cache(maxsize=1024)
def label(kind: str, term: str) -> str:
    """Words of a vocabulary term; the id itself when the vocabulary lacks it."""
    terms = vocabulary(kind)
    return terms[term].label if term in terms else term.replace("_", " ")


def findings(well: Well) -> Iterator[Block]:
    """What the reader had to say, questions first, and what the tool assumed."""
    ordered = sorted(well.log.findings, key=lambda f: (LEVELS.index(f.level), f.row or 0))
    if not ordered:
        yield Paragraph(f"{well.name}: the reader had nothing to say.")
        return
    counts = ", ".join(counted(well.log.count(level), level) for level in LEVELS if well.log.count(level))
    yield Heading(f"{well.name}: {counts}")
    yield Table(
        f"findings-{well.keys[0]}",
        f"Findings about the table of {well.name}. A question was read in the first way named; answer it in "
        "the table to be sure. Source: the reader's checks.",
        (
            Column("level"),
            Column("row", align="right"),
            Column("column"),
            Column("cell"),
            Column("finding"),
            Column("what to do"),
        ),
        tuple(
            (
                f.level,
                "" if f.row is None else str(f.row),
                f.column,
                one_line(f.cell),
                f.message + (f"; could be: {' | '.join(f.choices)}" if f.choices else ""),
                f.remedy,
            )
            for f in ordered
        ),
    )
