"""The parts of a report that tell the flow: summary, history, bed states, ledgers."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from logkit.model import PhaseEstimate
from logkit.report.document import Block, Column, Figure, Heading, Paragraph, Table
from logkit.report.ledger_view import LedgerLine, ledger_headings
from logkit.report.wells import Well
from logkit.report.wording import Units, depth_cell, size_cell, velocity_cell
from logkit.words import counted, digits, joined

P10_P90 = "Ranges are P10–P90: four chances in five that the value lies inside, given the criteria used."


def summary(well: Well, units: Units) -> Iterator[Block]:
    """What was found, in sentences; the counts of what could not be told come first."""
    estimates = well.history.estimates
    ranges = [e for e in estimates if e.bound == "range"]
    bounds = [e for e in estimates if e.bound in ("above", "below")]
    blank = [e for e in estimates if e.status != "estimated"]
    clashes = [e for e in estimates if e.clash is not None]
    log = well.log
    exposed = sum(bed.thickness_m for bed in log.real_beds)
    yield Paragraph(
        f"{well.name}: {counted(len(log.real_beds), 'bed')}, {units.height_words(exposed)} seen of "
        f"{units.height_words(log.thickness_m)}. Of {counted(len(estimates), 'phase')}, "
        f"{len(ranges)} have a velocity range, {len(bounds)} a one-sided bound, "
        f"{len(clashes)} a conflict, {len(blank)} no estimate.",
        "lead",
    )
    if ranges:
        yield Paragraph(_range_words(ranges, units))
    if blank:
        reasons = Counter(e.reason or "not said" for e in blank)
        words = joined([f"{reason} ({n})" for reason, n in reasons.most_common(6)])
        yield Paragraph(f"No estimate because of: {words}.")
    tendencies = Counter(e.tendency for e in estimates if e.tendency != "not determinable")
    if tendencies:
        words = joined([f"{word} {n} times" for word, n in tendencies.most_common()])
        yield Paragraph(
            f"Between phases that follow without a break the current is read as {words}; "
            f"{sum(e.tendency == 'not determinable' for e in estimates)} changes are not determinable."
        )
    for sentence in well.trends.summary():
        yield Paragraph(sentence)


def _range_words(ranges: list[PhaseEstimate], units: Units) -> str:
    by_state: dict[str, list[PhaseEstimate]] = {}
    for estimate in ranges:
        by_state.setdefault(estimate.bed_state or "moving bed", []).append(estimate)
    words = []
    for state, found in sorted(by_state.items(), key=lambda item: -len(item[1])):
        lows = sorted(e.velocity.p10 for e in found if e.velocity)
        highs = sorted(e.velocity.p90 for e in found if e.velocity)
        if lows:
            low, high = lows[len(lows) // 2], highs[len(highs) // 2]
            words.append(
                f"{state.replace('_', ' ')} {digits(units.number(low))}–{digits(units.number(high))} "
                f"{units.speed} ({counted(len(found), 'phase')})"
            )
    return f"Typical velocity range (median of the P10 and of the P90 of the phases): {'; '.join(words)}."


def history(well: Well, units: Units) -> Iterator[Block]:
    """Flow history as a figure and as a table of phases."""
    from logkit.report.history_figure import history_figure

    if any(e.velocity is not None or e.limit_velocity_m_s is not None for e in well.history.estimates):
        svg, width, height = history_figure(well, units)
        yield Figure(
            f"history-{well.keys[0]}",
            f"Flow history of {well.name}: velocity of each phase against {_axis(well)}, not to the scale of "
            f"the column. Bar P10–P90, line median, arrow a one-sided bound; a lean shows grain-size change "
            f"inside a phase. Source: the table of phases below.",
            f"Bars of velocity ranges of {counted(len(well.history.estimates), 'phase')} against {_axis(well)}.",
            svg,
            width,
            height,
        )
    rows, keys = [], []
    for e in well.history.estimates:
        change: str = e.tendency if e.tendency != "not determinable" else ""
        if change and e.tendency_probability is not None:
            change += f" ({e.tendency_probability:.2f})"
        rows.append(
            (
                e.phase.bed,
                str(e.phase.index + 1),
                units.height(e.phase.base_m),
                units.height(e.phase.top_m),
                e.phase.structure.replace("_", " "),
                velocity_cell(e, units),
                units.middle(e.velocity),
                depth_cell(e, units),
                "" if e.froude is None else f"{digits(e.froude.p10)}–{digits(e.froude.p90)}",
                e.bed_state.replace("_", " "),
                e.transport_mode.replace("_", " "),
                change,
                digits(e.conflict, 1) if e.conflict else "",
            )
        )
        keys.append(well.key_of(e))
    yield Table(
        f"phases-{well.keys[0]}" if well.keys else "phases",
        f"Phases of {well.name}, upward. {P10_P90} Median beside it only where there is a two-sided range. "
        "Tendency: change from the phase below with its probability. Source: flow engine; criteria in the "
        "ledgers.",
        (
            Column("bed", width=1.1),
            Column("phase", align="right", width=0.8),
            Column("base", units.length, "right", 1.1),
            Column("top", units.length, "right", 1.1),
            Column("structure", width=2.0),
            Column("velocity", units.speed, "right", 1.5),
            Column("median", units.speed, "right", 1.1),
            Column("depth", units.length, "right", 1.4),
            Column("Froude", "", "right", 1.4),
            Column("bed state", width=1.4),
            Column("transport", width=1.5),
            Column("tendency", width=1.6),
            Column("conflict", "0–1", "right", 1.0),
        ),
        tuple(rows),
        tuple(keys),
    )


def states(well: Well) -> Iterator[Block]:
    """The phases on the bed-state plane and on the classical velocity against grain-size chart."""
    from logkit.report.charts import bed_state_plane, velocity_size_chart

    plane = bed_state_plane(well)
    if plane is not None:
        yield Figure(
            f"plane-{well.keys[0]}",
            f"Phases of {well.name} on the plane of grain size and grain (skin) Shields number. Bars are size "
            "class and P10–P90 of the grain Shields number. Lines: threshold of motion (Soulsby & Whitehouse "
            "1997), ripple–dune edge at four times the threshold (van Rijn 1984), lower to upper plane bed at "
            "0.70 (own, from flume anchors), each with its scatter as a band. Source: table of phases.",
            "Chart of grain Shields number against grain size with the edges of bed states and the phases.",
            *plane,
        )
    chart = velocity_size_chart(well)
    if chart is not None:
        yield Figure(
            f"chart-{well.keys[0]}",
            f"Phases of {well.name} on the classical chart of mean velocity against grain size for flows about "
            "1 m deep. Erosion line with its cohesive branch and deposition line after Hjulstrom 1935, as "
            "algebraic fits by Miedema 2010 (recalled, factor 2 wide). Boxes are size class and velocity "
            "P10–P90. Source: table of phases.",
            "Chart of velocity against grain size with erosion and deposition lines and the phases.",
            *chart,
        )


def ledgers(well: Well, units: Units) -> Iterator[Block]:
    """The criteria that spoke, and the ledger of every phase that has one; phases that read alike share one."""
    found = list(well.ledgers(units))
    yield Heading(well.name)
    if not found:
        yield Paragraph("No phase has a ledger.")
        return
    criteria: dict[str, LedgerLine] = {}
    spoke: Counter[str] = Counter()
    for ledger in found:
        for line in ledger.lines:
            criteria.setdefault(line.criterion, line)
            spoke[line.criterion] += len(ledger.places)
    yield Table(
        f"criteria-{well.keys[0]}",
        f"Criteria that spoke in {well.name}, in how many phases, and the range in which each was tested. "
        "Source: ledgers below.",
        (
            Column("criterion", width=1.6),
            Column("phases", align="right", width=0.6),
            Column("tested range", width=3),
            Column("source", width=2.4),
            Column("status", width=0.9),
        ),
        tuple((n, str(spoke[n]), c.validity, c.source, c.status) for n, c in criteria.items()),
    )
    rows: list[tuple[str, ...]] = []
    for ledger in found:
        rows.append((well.places_words(ledger.places),))
        rows.extend(line.cells for line in ledger.lines)
    widths = (1.6, 2.2, 1.2, 1.2, 0.85, 0.6, 2.2, 1.0)
    right = {"alone", "without it", "narrows", "gain"}
    yield Table(
        f"ledger-{well.keys[0]}",
        f"Ledgers of {well.name}: the velocity (P10–P90) that each criterion gives alone with what is believed "
        "beforehand, the velocity from everything without it, by how many times it narrows the answer, and what it "
        "tells of velocity and depth in bits (0.1 is little, 1 decides). A bold line names the phases that share "
        "the lines under it. Source: flow engine, table of phases.",
        tuple(
            Column(name, unit, "right" if name in right else "left", width)
            for (name, unit), width in zip(ledger_headings(units), widths, strict=True)
        ),
        tuple(rows),
    )


def _axis(well: Well) -> str:
    return "depth" if well.log.header.direction == "down" else "height"


def size_words(estimate: PhaseEstimate) -> str:
    """Grain size of a phase as base → top, or one interval."""
    phase = estimate.phase
    if phase.base_size and phase.top_size and phase.base_size != phase.top_size:
        return f"{size_cell(phase.base_size)} → {size_cell(phase.top_size)}"
    return size_cell(phase.size)
