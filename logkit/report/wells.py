"""What a report is made from: each log with its results, and the keys that tie column, tables and cards."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

from logkit.flow import FlowHistory
from logkit.model import Bed, Grading, Log, PhaseEstimate
from logkit.report.ledger_view import PhaseLedger, phase_ledgers
from logkit.report.wording import FEET, Units
from logkit.trends import Trends
from logkit.words import joined


@dataclass(frozen=True, eq=False)
class Well:
    """One log with its results.

    keys : key of each bed, the element id it has in the drawing
    estimates : estimates of the phases of each bed, upward, by the bed's place in the log
    """

    log: Log
    history: FlowHistory
    trends: Trends
    keys: tuple[str, ...]
    estimates: dict[int, tuple[PhaseEstimate, ...]]

    @property
    def name(self) -> str:
        """Name of the log."""
        return self.log.name

    @property
    def downward(self) -> bool:
        """True for a log of depths."""
        return self.log.header.direction == "down"

    def position_unit(self, units: Units) -> str:
        """Unit of positions: depths keep the unit they were written in unless feet are wanted."""
        return "ft" if units.feet or (self.downward and self.log.header.unit == "ft") else "m"

    def position(self, position_m: float, units: Units) -> str:
        """A height, or the depth that people who work with the well know, without unit."""
        value = position_m / (FEET if self.position_unit(units) == "ft" else 1.0)
        return f"{-value if self.downward else value:.2f}"

    def grading(self, bed: Bed) -> Grading | None:
        """Grading of a bed, None without one."""
        return next((g for g in self.trends.gradings if g.bed == bed.name), None)

    def ledgers(self, units: Units) -> tuple[PhaseLedger, ...]:
        """The different ledgers of the log in the reader's units."""
        return tuple(phase_ledgers(self.history, units))

    def places_words(self, places: Sequence[int]) -> str:
        """Phases by their places in the estimates: `Bed 3, phases 1 and 2; 7; 9, phase 2`."""
        words: dict[int, list[int]] = {}
        for place in places:
            phase = self.history.estimates[place].phase
            words.setdefault(phase.bed_index, []).append(phase.index + 1)
        parts = []
        for index, numbers in words.items():
            name = self.log.beds[index].name
            if len(self.estimates[index]) > 1:
                noun = "phase" if len(numbers) == 1 else "phases"
                name += f" ({noun} {joined([str(n) for n in numbers])})"
            parts.append(name)
        return f"{'Bed' if len(parts) == 1 else 'Beds'} {', '.join(parts)}"

    def key_of(self, estimate: PhaseEstimate) -> str:
        """Key of the bed that a phase belongs to."""
        return self.keys[estimate.phase.bed_index]


def make_well(log: Log, history: FlowHistory | None, trends: Trends | None) -> Well:
    """A log with its results; what was not handed over is worked out."""
    from logkit.drawing.scene import measure_beds
    from logkit.flow import infer_flow
    from logkit.trends import find_trends

    history = history or infer_flow(log)
    trends = trends or find_trends(log)
    grouped: dict[int, list[PhaseEstimate]] = defaultdict(list)
    for estimate in history.estimates:
        grouped[estimate.phase.bed_index].append(estimate)
    keys = tuple(item.id for item in measure_beds(log, {}))
    return Well(log, history, trends, keys, {i: tuple(found) for i, found in grouped.items()})


def depth_or_height(well: Well) -> str:
    """The word for positions in this log."""
    return "depth" if well.downward else "height"


def facts_of(log: Log, units: Units) -> tuple[tuple[str, str], ...]:
    """Header data as (label, text), only what is known."""
    header = log.header
    bedding = header.bedding
    rows = [
        ("Section", header.section),
        ("Location", header.location),
        ("Coordinates", " ".join(t for t in (header.coordinates, header.coordinate_datum) if t)),
        ("Logged by", header.logged_by),
        ("Date", header.date),
        ("Beds", f"{len(log.real_beds)}, {units.height_words(sum(b.thickness_m for b in log.real_beds))}"),
        ("Whole interval", units.height_words(log.thickness_m) if log.beds else ""),
        ("Setting", header.setting),
        ("Bedding", f"{bedding[0]:03.0f}/{bedding[1]:02.0f} (dip direction/dip)" if bedding else ""),
        ("Declination", f"{header.declination_deg:+.1f}°" if header.declination_deg is not None else ""),
        ("Size scale", {"wentworth": "Udden-Wentworth", "iso14688": "ISO 14688"}[header.size_scale]),
        ("Grain-size method", header.grain_method),
        ("Depth reference", header.depth_reference),
        ("Thickness", header.thickness_type),
        *((key.replace("_", " ").capitalize(), value) for key, value in header.extra),
    ]
    return tuple((label, text) for label, text in rows if text)
