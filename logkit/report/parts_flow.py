"""The parts of a report that tell the flow: summary, history, bed states, ledgers."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from logkit.model import PhaseEstimate
from logkit.report.document import Block, Column, Figure, Heading, Paragraph, Table
from logkit.report.ledger_view import LedgerLine, ledger_headings
from logkit.report.parts_log import label
from logkit.report.wells import Well, depth_or_height
from logkit.report.wording import Units, depth_cell, size_cell, velocity_cell
from logkit.words import counted, digits, joined

LEAST_CONFLICT = 0.05
"""Conflicts below this are left blank in the table."""

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
        yield Paragraph(units.words(sentence))


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
            f"Flow history of {well.name}: velocity of each phase against {depth_or_height(well)}, not to the scale of "
            f"the column. Bar P10–P90, line median, arrow a one-sided bound; a lean shows grain-size change "
            f"inside a phase. Source: table of phases.",
            f"Bars of velocity ranges of {counted(len(well.history.estimates), 'phase')} by {depth_or_height(well)}.",
            svg,
            width,
            height,
        )
    yield from _phase_tables(well, units)


def _phase_tables(well: Well, units: Units) -> Iterator[Table]:
    """The phases with an estimate, and by their reasons those without."""
    told = [e for e in well.history.estimates if e.status == "estimated"]
    silent: dict[str, list[int]] = {}
    for place, e in enumerate(well.history.estimates):
        if e.status != "estimated":
            silent.setdefault(e.reason or "not said", []).append(place)
    unit = well.position_unit(units)
    if told:
        yield Table(
            f"phases-{well.keys[0]}",
            f"Phases of {well.name} with an estimate, upward. {P10_P90} Median beside it only where there is a "
            "two-sided range. Tendency: change from the phase below with its probability. Conflict: blank below 0.05. "
            "Source: flow engine; criteria in the ledgers.",
            (
                Column("bed"),
                Column("phase", align="right"),
                Column("base", unit, "right"),
                Column("top", unit, "right"),
                Column("structure"),
                Column("velocity", units.speed, "right"),
                Column("median", units.speed, "right"),
                Column("depth", units.length, "right"),
                Column("Froude", "", "right"),
                Column("bed state"),
                Column("transport"),
                Column("tendency"),
                Column("conflict", "0–1", "right"),
            ),
            tuple(_phase_row(well, e, units) for e in told),
            tuple(well.key_of(e) for e in told),
        )
    if silent:
        yield Table(
            f"silent-{well.keys[0]}",
            f"Phases and gaps of {well.name} without an estimate, and why. No estimate is not still water. Source: "
            "flow engine.",
            (Column("because"), Column("number", align="right"), Column("where")),
            tuple((reason, str(len(places)), well.places_words(places)) for reason, places in silent.items()),
        )


def _phase_row(well: Well, e: PhaseEstimate, units: Units) -> tuple[str, ...]:
    change: str = e.tendency if e.tendency != "not determinable" else ""
    if change and e.tendency_probability is not None:
        change += f" ({e.tendency_probability:.2f})"
    return (
        e.phase.bed,
        str(e.phase.index + 1),
        well.position(e.phase.base_m, units),
        well.position(e.phase.top_m, units),
        label("structures", e.phase.structure),
        velocity_cell(e, units),
        units.middle(e.velocity),
        depth_cell(e, units),
        "" if e.froude is None else f"{digits(e.froude.p10)}–{digits(e.froude.p90)}",
        e.bed_state.replace("_", " "),
        e.transport_mode.replace("_", " "),
        change,
        f"{e.conflict:.2f}" if e.conflict >= LEAST_CONFLICT else "",
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
            Column("criterion"),
            Column("phases", align="right"),
            Column("tested range"),
            Column("source"),
            Column("status"),
        ),
        tuple((n, str(spoke[n]), c.validity, c.source, c.status) for n, c in criteria.items()),
    )
    rows: list[tuple[str, ...]] = []
    for ledger in found:
        rows.append((well.places_words(ledger.places),))
        rows.extend(line.cells for line in ledger.lines)
    right = {"alone", "without it", "narrows", "gain"}
    yield Table(
        f"ledger-{well.keys[0]}",
        f"Ledgers of {well.name}: the velocity (P10–P90) that each criterion gives alone with what is believed "
        "beforehand, the velocity from everything without it, by how many times it narrows the answer, and what it "
        "tells of velocity and depth in bits (0.1 is little, 1 decides). A bold line names the phases that share "
        "the lines under it. Source: flow engine, table of phases.",
        tuple(
            Column(name, unit, "right" if name in right else "left") for name, unit in ledger_headings(units)
        ),
        tuple(rows),
    )


def size_words(estimate: PhaseEstimate) -> str:
    """Grain size of a phase as base → top, or one interval."""
    phase = estimate.phase
    if phase.base_size and phase.top_size and phase.base_size != phase.top_size:
        return f"{size_cell(phase.base_size)} → {size_cell(phase.top_size)}"
    return size_cell(phase.size)
