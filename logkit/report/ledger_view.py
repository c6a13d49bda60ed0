"""The ledger as people read it: one line a criterion, the same numbers on screen, on paper and in the page.

Full numbers stay in `FlowHistory.ledger`; here they are rounded, put into the reader's units and cited by author
and year. Nothing is calculated.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from logkit.flow import FlowHistory
from logkit.flow.ledger import LedgerRow
from logkit.references import cited
from logkit.report.wording import Units
from logkit.words import NO_BREAK, digits


@dataclass(frozen=True, slots=True)
class LedgerLine:
    """One criterion of a phase, in words.

    alone, without : velocity from this criterion (with the prior) and from everything else, P10–P90 or a bound
    narrows : times by which it narrows the P10–P90 span of the velocity
    gain : information on velocity and depth, bits
    """

    criterion: str
    says: str
    alone: str
    without: str
    narrows: str
    gain: str
    source: str
    status: str
    validity: str

    @property
    def cells(self) -> tuple[str, ...]:
        """What stands in a table, in the order of `ledger_headings`."""
        return (
            self.criterion, self.says, self.alone, self.without, self.narrows, self.gain, self.source, self.status,
        )  # fmt: skip


def ledger_headings(units: Units) -> tuple[tuple[str, str], ...]:
    """(heading, unit) of the columns of a ledger."""
    return (
        ("criterion", ""),
        ("says", ""),
        ("alone", units.speed),
        ("without it", units.speed),
        ("narrows", "times"),
        ("gain", "bits"),
        ("source", ""),
        ("status", ""),
    )


def ledger_lines(rows: Sequence[LedgerRow], units: Units) -> tuple[LedgerLine, ...]:
    """Rows of a ledger in words, in their order."""
    return tuple(
        LedgerLine(
            criterion=row.label,
            says=units.words(row.says),
            alone=_velocity(row.bound, row.alone_p10_m_s, row.alone_p90_m_s, units),
            without=_velocity("band", row.without_p10_m_s, row.without_p90_m_s, units),
            narrows="" if row.narrows is None else f"{row.narrows:.1f}",
            gain="" if row.gain_bits is None else f"{row.gain_bits:.2f}",
            source=cited(row.source),
            status=row.status,
            validity=units.words(row.validity),
        )
        for row in rows
    )


@dataclass(frozen=True, slots=True)
class PhaseLedger:
    """A ledger with all phases that share it, as places in the estimates of the history."""

    places: tuple[int, ...]
    lines: tuple[LedgerLine, ...]


def phase_ledgers(history: FlowHistory, units: Units) -> Iterator[PhaseLedger]:
    """The different ledgers of a log, upward by the lowest phase; phases that read alike share one."""
    shared: dict[tuple[LedgerLine, ...], list[int]] = {}
    for place in range(len(history.estimates)):
        lines = ledger_lines(history.ledger_at(place), units)
        if lines:
            shared.setdefault(lines, []).append(place)
    for lines, places in shared.items():
        yield PhaseLedger(tuple(places), lines)


def _velocity(bound: str, low: float | None, high: float | None, units: Units) -> str:
    if bound == "above" and low is not None:
        return f"above{NO_BREAK}{digits(units.number(low))}"
    if bound == "below" and high is not None:
        return f"below{NO_BREAK}{digits(units.number(high))}"
    if low is None or high is None:
        return ""
    return f"{digits(units.number(low))}–{digits(units.number(high))}"
