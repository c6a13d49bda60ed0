"""What `find_trends` gives: all results of one log, as tables, as sentences, as plain data for JSON."""

from __future__ import annotations

import dataclasses
import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from logkit.model import CurrentSummary, Grading, Package
from logkit.trends.currents import Currents, CurrentTrend
from logkit.trends.order import OrderTest
from logkit.trends.packages import Boundary
from logkit.trends.thickness import Thickness
from logkit.trends.transitions import Transitions
from logkit.vocabulary import vocabulary

if TYPE_CHECKING:
    import pandas as pd


@dataclass(frozen=True, slots=True)
class Trends:
    """Statistics of one log.

    Attributes
    ----------
    gradings : one a bed, in the order of the log, gaps included
    packages : tilings of the log for grain size and for thickness; "no trend" where there is none
    boundaries : boundaries between packages, with their support
    order_tests : the log against random order, for grain size and thickness
    thickness, transitions : statistics of thickness; the embedded chain
    current_results : readings, summaries and trends of palaeocurrents
    assumed_sizes : beds that count with the usual size range of their lithology
    level : level of all tests
    """

    name: str
    gradings: tuple[Grading, ...]
    packages: tuple[Package, ...]
    boundaries: tuple[Boundary, ...]
    order_tests: tuple[OrderTest, ...]
    thickness: Thickness
    transitions: Transitions
    current_results: Currents
    assumed_sizes: int = 0
    level: float = 0.05

    @property
    def order_test(self) -> OrderTest:
        """Grain size of the whole log against random order."""
        return self.order_tests[0]

    @property
    def currents(self) -> tuple[CurrentSummary, ...]:
        """Summaries of palaeocurrents by kind of indicator and, where allowed, by rank."""
        return self.current_results.summaries

    @property
    def current_trends(self) -> tuple[CurrentTrend, ...]:
        """Turning of directions up-section."""
        return self.current_results.trends

    @property
    def current_table(self) -> pd.DataFrame:
        """One row a reading: as written, raw, corrected, used or why not."""
        return self.current_results.table()

    @property
    def significant_packages(self) -> tuple[Package, ...]:
        """Packages with a trend that random order does not give."""
        return tuple(package for package in self.packages if package.significant)

    def grading(self, bed: str) -> Grading:
        """Grading of a bed by name.

        Raises
        ------
        UnknownNameError : no such bed
        """
        from logkit.errors import UnknownNameError

        for grading in self.gradings:
            if grading.bed == bed:
                return grading
        raise UnknownNameError("bed", bed, (g.bed for g in self.gradings), where=self.name)

    def to_frame(self, what: str = "grading") -> pd.DataFrame:
        """One of the tables of `tables()`.

        Raises
        ------
        UnknownNameError : no such table
        """
        from logkit.errors import UnknownNameError

        tables = self.tables()
        if what not in tables:
            raise UnknownNameError("table", what, tables)
        return tables[what]

    def tables(self) -> dict[str, pd.DataFrame]:
        """All results as tables: grading, packages, thickness, net to gross, and so on."""
        import pandas as pd

        gradings = pd.DataFrame(
            [[g.bed, g.verdict, g.probability, g.style, g.basis, g.readings, g.tau, g.p, g.slope_phi_per_m,
              g.slope_low, g.slope_high] for g in self.gradings],
            columns=["bed", "verdict", "probability", "style", "basis", "readings", "tau", "p",
                     "slope_phi_per_m", "slope_low", "slope_high"],
        )  # fmt: skip
        return {
            "grading": gradings,
            "packages": _frame(self.packages, Package),
            "boundaries": _frame(self.boundaries, Boundary),
            "order": pd.DataFrame(
                [[t.quantity, t.beds, t.shuffles, t.p, t.p_packages, t.strongest] for t in self.order_tests],
                columns=["quantity", "beds", "shuffles", "p", "p_packages", "strongest"],
            ),
            "thickness": self.thickness.to_frame(),
            "net to gross": self.thickness.net_to_gross_frame(),
            "distributions": self.thickness.distributions_frame(),
            "transitions": self.transitions.to_frame(),
            "currents": self.current_results.to_frame(),
            "current readings": self.current_results.table(),
            "current trends": _frame(self.current_trends, CurrentTrend),
        }

    def to_dict(self) -> dict[str, Any]:
        """Everything as plain lists, texts, numbers and None, ready for JSON."""
        return {
            "name": self.name,
            "level": self.level,
            "assumed_sizes": self.assumed_sizes,
            "summary": self.summary(),
            **{
                name: plain(value)
                for name, value in (
                    ("grading", self.gradings), ("packages", self.packages), ("boundaries", self.boundaries),
                    ("order", self.order_tests), ("thickness", self.thickness),
                    ("transitions", self.transitions), ("currents", self.currents),
                    ("current_readings", self.current_results.readings),
                    ("current_trends", self.current_trends),
                )
            },
        }  # fmt: skip

    def summary(self) -> list[str]:
        """The main results in sentences."""
        lines = [self._grading_sentence()] if self.gradings else []
        if self.assumed_sizes:
            lines.append(
                f"{self.assumed_sizes} beds without a written size count with the usual range of their lithology."
            )
        lines += [test.sentence(self.level) for test in self.order_tests]
        for package in self.significant_packages:
            lines.append(
                f"{package.trend.capitalize()} package from {package.base_m:.2f} to {package.top_m:.2f} m "
                f"({package.beds} beds, {package.first_bed} to {package.last_bed}; tau {package.tau:.2f}, "
                f"adjusted p {_chance(package.p_adjusted)})."
            )
        if not self.significant_packages:
            lines.append("No package has a trend that could be told from random order.")
        lines += self.thickness.sentences()
        lines += self.transitions.sentences()
        lines += [current_sentence(summary) for summary in self.currents]
        for turn in self.current_trends:
            if turn.p <= self.level:
                way = "clockwise" if turn.turn_deg_per_m > 0 else "anticlockwise"
                lines.append(
                    f"Palaeocurrents, {indicator_words(turn.indicator)}: turn {way} up-section, "
                    f"{abs(turn.turn_deg_per_m):.2g}° a metre (n = {turn.n}, tau {turn.tau:.2f}, "
                    f"p {_chance(turn.p)})."
                )
        return lines

    def _grading_sentence(self) -> str:
        counts: dict[str, int] = {}
        for grading in self.gradings:
            counts[grading.verdict] = counts.get(grading.verdict, 0) + 1
        parts = [f"{n} {'not distinguished from ungraded' if w == 'ungraded' else w}"
                 for w, n in sorted(counts.items(), key=lambda item: -item[1])]  # fmt: skip
        return f"Grading of {len(self.gradings)} intervals: {', '.join(parts)}."


def indicator_words(indicator: str) -> str:
    """An indicator in words: its label, or what it says when several kinds are put together."""
    known = vocabulary("indicators")
    return known[indicator].label if indicator in known else indicator.replace("_", " ")


def current_sentence(summary: CurrentSummary) -> str:
    """One summary of palaeocurrents in words."""
    name = indicator_words(summary.indicator)
    if summary.mean_deg is None:
        return " ".join(
            [f"Palaeocurrents, {name} ({summary.n} readings): no mean direction.", *summary.notes]
        )
    kind = "mean axis" if summary.sense == "axis" else "mean toward"
    mean = round(summary.mean_deg) % (180 if summary.sense == "axis" else 360)
    chance = f", Rayleigh p {_chance(summary.rayleigh_p)}" if summary.rayleigh_p is not None else ""
    spread = (
        f", circular standard deviation {summary.spread_deg:.0f}°" if summary.spread_deg is not None else ""
    )
    head = f"Palaeocurrents, {name}: {kind} {mean:03d}°, n = {summary.n}, resultant {summary.resultant:.2f}"
    return " ".join([f"{head}{spread}{chance}.", *summary.notes])


def _chance(p: float) -> str:
    return "below 0.001" if p < 0.001 else f"{p:.2g}"


def _frame(rows: tuple[Any, ...], kind: type) -> pd.DataFrame:
    import pandas as pd

    columns = [field.name for field in dataclasses.fields(kind)]
    return pd.DataFrame([[getattr(row, c) for c in columns] for row in rows], columns=columns)


def plain(value: Any) -> Any:
    """A result as lists, texts, numbers and None; numbers that are not finite become None."""
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return {field.name: plain(getattr(value, field.name)) for field in dataclasses.fields(value)}
    if isinstance(value, np.ndarray | np.generic):
        return plain(value.tolist())
    if isinstance(value, tuple | list):
        return [plain(item) for item in value]
    if isinstance(value, float):
        return value if math.isfinite(value) else None
    return value
