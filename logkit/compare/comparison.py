"""Comparing wells: hang, tie, count, test. `compare_logs` puts the steps together; each lives in its module."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from logkit.compare import measures
from logkit.compare.companions import Companions, find_companions
from logkit.compare.differences import LEVEL, Difference, compare_values, differences_frame, gather
from logkit.compare.placing import THICKNESS_NAMES, PlacedLog, Thickness, place_logs
from logkit.compare.proportion import proportion_curve
from logkit.compare.suggestions import SuggestedTie
from logkit.compare.suggestions import suggest_ties as find_suggestions
from logkit.compare.ties import Tie, find_ties
from logkit.errors import ArgumentError, LogkitError

if TYPE_CHECKING:
    import pandas as pd

    from logkit.model import Log


@dataclass(frozen=True, slots=True)
class Comparison:
    """Wells side by side.

    Attributes
    ----------
    placed : the logs in the order given, hung on the datum
    datum : marker or word the wells hang on
    histories, trends : results of each log, None where not taken
    ties : between neighbours at shared markers
    suggested : ties that the alignment suggests, for a person to accept; empty unless asked for
    differences : tests between wells
    notes : what was assumed
    """

    placed: tuple[PlacedLog, ...]
    datum: str
    histories: tuple[Any, ...]
    trends: tuple[Any, ...]
    ties: tuple[Tie, ...]
    suggested: tuple[SuggestedTie, ...]
    differences: tuple[Difference, ...]
    notes: tuple[str, ...]
    cutoffs_mm: tuple[float, ...] = measures.CUTOFFS_MM
    slice_m: float | None = None

    @property
    def logs(self) -> tuple[Log, ...]:
        """The logs as read."""
        return tuple(p.log for p in self.placed)

    @property
    def thickness_means(self) -> str:
        """What a height difference in the panel and the tables means."""
        return THICKNESS_NAMES[self.placed[0].measure]

    def tables(self) -> dict[str, pd.DataFrame]:
        """All tables by name; those that nothing is known for are empty."""
        placed = self.placed
        return {
            "wells": measures.wells_table(placed),
            "net_to_gross": measures.net_to_gross_table(placed, self.cutoffs_mm),
            "beds": measures.beds_table(placed),
            "facies": measures.facies_table(placed),
            "bed_states": measures.bed_states_table(placed, self.histories),
            "grading": measures.grading_table(placed, self.trends),
            "flow": measures.flow_table(placed, self.histories),
            "packages": measures.packages_table(placed, self.trends),
            "differences": differences_frame(self.differences),
            "proportion": proportion_curve(placed, self.slice_m),
            "ties": _records(self.ties),
            "suggested_ties": _records(self.suggested),
        }

    def summary(self) -> list[str]:
        """The comparison in sentences."""
        said = [
            f"{len(self.placed)} wells hang on {self.datum!r}; a height difference is {self.thickness_means}."
        ]
        said += [f"{note}." for note in self.notes]
        cutoff = self.cutoffs_mm[0]
        table = measures.net_to_gross_table(self.placed, (cutoff,))
        for row in table.to_dict("records"):
            said.append(
                f"{row['section']}: net {row['net_m']:.1f} m of {row['gross_without_gaps_m']:.1f} m described "
                f"(net-to-gross {row['net_to_gross_without_gaps']:.2f}, with gaps in the gross "
                f"{row['net_to_gross_with_gaps']:.2f}; cut-off {cutoff:g} mm)."
            )
        said += self._ties_in_words()
        found = [d for d in self.differences if d.p_rank_adjusted < LEVEL or d.p_ks_adjusted < LEVEL]
        said += [f"{d.reading[0].upper()}{d.reading[1:]}." for d in found]
        tested = sum(d.p_rank == d.p_rank for d in self.differences)
        said.append(
            f"{len(found)} of {tested} tested pairs of wells differ after correction for {2 * tested} tests; "
            "beds of one well are not independent, so a p close to the level should not be leaned on."
        )
        return said

    def _ties_in_words(self) -> list[str]:
        kinds = Counter(tie.kind for tie in self.ties)
        counted = ", ".join(f"{n} {kind}" for kind, n in sorted(kinds.items())) or "none"
        said = [f"Ties at shared markers: {counted}."]
        if self.suggested:
            sure = sum(tie.confident for tie in self.suggested)
            said.append(
                f"Suggested ties: {len(self.suggested)}, of them {sure} confident; none is accepted by itself."
            )
        return said


def compare_logs(
    logs: Sequence[Log],
    datum: str | float | None = None,
    *,
    histories: Sequence[Any] | None = None,
    trends: Sequence[Any] | None = None,
    thickness: Thickness = "true",
    suggest_ties: bool = False,
    companions: Sequence[Companions] | None = None,
    cutoffs_mm: Sequence[float] = measures.CUTOFFS_MM,
    slice_m: float | None = None,
) -> Comparison:
    """Hang wells on a datum, tie their markers, compare what they hold.

    Parameters
    ----------
    logs : two or more, in the order of the panel
    datum : marker name; "base", "top", "elevation", "depth"; or a depth (downward logs) or height, m. By
        default the marker that most logs share
    histories, trends : results of each log in the same order (None for a log without); worked out when left
        out
    thickness : "true", "vertical" or "measured": what a height difference shall mean
    suggest_ties : look for ties between the markers as well
    companions : survey, shifts and curves of each log; by default the files beside it
    cutoffs_mm : grain sizes from which a bed is net, mm
    slice_m : slice of the proportion curve, m

    Returns
    -------
    Comparison

    Raises
    ------
    ArgumentError : fewer than two logs, or lists of unlike length
    UnknownNameError : no log has the marker
    LogkitError : two logs have the same name, a companion file cannot be used, or a well cannot be placed

    Examples
    --------
    >>> comparison = compare_logs(logs, datum="ash 2")              # doctest: +SKIP
    >>> comparison.tables()["net_to_gross"]                         # doctest: +SKIP
    """
    logs = tuple(logs)
    _check(logs, histories=histories, trends=trends, companions=companions)
    if not cutoffs_mm or not all(c > 0 for c in cutoffs_mm):
        raise ArgumentError("cutoffs_mm", tuple(cutoffs_mm), "sizes above zero, at least one")
    beside = tuple(companions) if companions is not None else tuple(find_companions(log) for log in logs)
    if histories is None:
        from logkit.flow import infer_flow

        histories = [infer_flow(log) for log in logs]
    if trends is None:
        from logkit.trends import find_trends

        trends = [find_trends(log) for log in logs]
    placed, chosen = place_logs(logs, datum, thickness, beside)
    ties, tie_notes = find_ties(placed)
    suggested = find_suggestions(placed, histories) if suggest_ties else ()
    values = {p.name: gather(p, history) for p, history in zip(placed, histories, strict=True)}
    notes = (*dict.fromkeys(note for p in placed for note in p.notes), *tie_notes)
    return Comparison(
        placed,
        chosen,
        tuple(histories),
        tuple(trends),
        ties,
        suggested,
        compare_values(values),
        notes,
        tuple(cutoffs_mm),
        slice_m,
    )


def _check(logs: tuple[Log, ...], **lists: Sequence[Any] | None) -> None:
    if len(logs) < 2:
        raise ArgumentError("logs", f"{len(logs)} log", "two logs or more")
    doubled = [name for name, count in Counter(log.name for log in logs).items() if count > 1]
    if doubled:
        raise LogkitError(
            f"Two logs are called {doubled[0]!r}.",
            "Give each a name of its own in the header line `section`.",
        )
    for name, values in lists.items():
        if values is not None and len(values) != len(logs):
            raise ArgumentError(name, f"{len(values)} items", f"a list of {len(logs)}, one a log")


def _records(items: Sequence[Any]) -> pd.DataFrame:
    import pandas as pd

    return pd.DataFrame([{n: getattr(item, n) for n in item.__slots__} for item in items])
