"""`find_trends`: every statistic of one log, in one call. The statistics are in the modules of their subject."""

from __future__ import annotations

from collections.abc import Mapping

from logkit.errors import ArgumentError
from logkit.model import Log
from logkit.trends.currents import Attitude, find_currents
from logkit.trends.grading import grade_bed
from logkit.trends.order import order_test
from logkit.trends.packages import MINIMUM_BEDS, find_packages
from logkit.trends.results import Trends
from logkit.trends.series import Quantity, series, size_is_assumed
from logkit.trends.thickness import CUT_OFFS_MM, find_thickness
from logkit.trends.transitions import States, find_transitions

QUANTITIES: tuple[Quantity, ...] = ("grain size", "thickness")


def find_trends(
    log: Log,
    *,
    level: float = 0.05,
    minimum_beds: int = MINIMUM_BEDS,
    states: States = "lithology",
    cut_offs_mm: tuple[float, ...] = CUT_OFFS_MM,
    bedding: Mapping[str, Attitude] | None = None,
) -> Trends:
    """Grading, packages, thickness, transitions and palaeocurrents of a log.

    Parameters
    ----------
    log : the log
    level : level of all tests; also the share of logs in random order that may get a significant package
    minimum_beds : fewest beds of a package, 3 or more
    states : what a state of the transitions is: "lithology", "size class", "structure" or a function of a bed
    cut_offs_mm : grain sizes for net to gross, mm
    bedding : dip direction and dip by bed name, degrees, where a bed has its own

    Returns
    -------
    Trends; the same log gives the same result

    Raises
    ------
    ArgumentError : an option is out of its range
    """
    if not 0 < level < 1:
        raise ArgumentError("level", level, "between 0 and 1")
    if minimum_beds < 3:
        raise ArgumentError("minimum_beds", minimum_beds, "3 or more")
    if any(not cut > 0 for cut in cut_offs_mm):
        raise ArgumentError("cut_offs_mm", cut_offs_mm, "above zero")
    runs = [(quantity, series(log, quantity)) for quantity in QUANTITIES]
    tested = [(q, rs, order_test([run.values for run in rs], q)) for q, rs in runs]
    packages, boundaries = find_packages(tested, level=level, minimum=minimum_beds)
    return Trends(
        log.name,
        tuple(grade_bed(bed) for bed in log.beds),
        packages,
        boundaries,
        tuple(test for _, _, test in tested),
        find_thickness(log, cut_offs_mm),
        find_transitions(log, states, level),
        find_currents(log, bedding),
        sum(size_is_assumed(bed) for bed in log.real_beds),
        level,
    )
