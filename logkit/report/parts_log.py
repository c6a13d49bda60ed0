"""The parts of a report that show the log as it is: columns, bed table, findings."""

from __future__ import annotations

from collections.abc import Iterator

from logkit.model import LEVELS, Bed
from logkit.report.document import Block, Column, Figure, Heading, Paragraph, Table
from logkit.report.settings import ReportSettings
from logkit.report.wells import Well, depth_or_height
from logkit.report.wording import Units, size_cell
from logkit.vocabulary import vocabulary
from logkit.words import counted, one_line


def columns(well: Well, settings: ReportSettings, *, dots: bool = True) -> Iterator[Figure]:
    """The column on its sheets, true to scale; without the dots of the texture on request."""
    from logkit.drawing import draw_column
    from logkit.drawing.style import load_style

    style = load_style(settings.style, None if dots else {"texture": {"dots": False}})
    drawing = draw_column(
        well.log, well.history, well.trends, style=style, scale=settings.scale, page=settings.page
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
        position = (bed.depth_base, bed.depth_top)
        base, top = (units.height(bed.base_m), units.height(bed.top_m))
        if None not in position:
            base, top = (f"{p:g}" for p in position)
        rows.append(
            (
                bed.name,
                base,
                top,
                units.height(bed.thickness_m),
                rock(bed),
                sizes(bed),
                ", ".join(label("structures", s.term) + ("" if s.sure else "?") for s in bed.structures),
                verdict,
                contact(bed, units),
                one_line(bed.notes),
            )
        )
    unit = well.log.header.unit or "m"
    written = unit if any(b.depth_base is not None for b in well.log.beds) else units.length
    return Table(
        f"beds-{well.keys[0]}" if well.keys else "beds",
        f"Beds of {well.name}, upward, as read from the table; {depth_or_height(well)}s "
        f"in {written}. Grading with its probability, blank where not determinable. The wording of every "
        "cell is kept in the tidy table.",
        (
            Column("bed", width=0.7),
            Column("base", written, "right", 0.9),
            Column("top", written, "right", 0.9),
            Column("thickness", units.length, "right", 1.0),
            Column("rock", width=1.5),
            Column("grain size", width=2.0),
            Column("structures", width=2.2),
            Column("grading", width=1.3),
            Column("base contact", width=1.2),
            Column("notes", width=3.0),
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
            Column("level", width=0.8),
            Column("row", align="right", width=0.5),
            Column("column", width=1.1),
            Column("cell", width=1.5),
            Column("finding", width=3.5),
            Column("what to do", width=2.5),
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
