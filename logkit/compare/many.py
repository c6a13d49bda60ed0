"""Many wells in one go: read, infer, write, count, one after another on several processes.

An error in one file is recorded and does not stop the others. Only a short digest of each well is kept, so that
memory does not grow with their number; progress is yielded, a front may show it.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from concurrent.futures import Future, ProcessPoolExecutor
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from logkit.compare import measures
from logkit.compare.companions import find_companions
from logkit.compare.differences import Difference, compare_values, differences_frame, gather
from logkit.compare.handover import HandoverWriter, WellFiles, well_files
from logkit.compare.placing import place_logs
from logkit.errors import ArgumentError, LogkitError
from logkit.files import write_atomic
from logkit.words import counted

if TYPE_CHECKING:
    import pandas as pd
    from numpy.typing import NDArray

    from logkit.model import Grading, Log, Package

AHEAD = 3
"""Wells a process may be ahead of the writer; more would only fill memory."""


@dataclass(frozen=True, slots=True)
class WellDone:
    """Progress: one source is through.

    Attributes
    ----------
    source : file
    done, of : how many sources are through, of how many
    sections : names of the logs it held; empty when it failed
    problem : what went wrong, "" when nothing did
    """

    source: str
    done: int
    of: int
    sections: tuple[str, ...] = ()
    problem: str = ""


@dataclass
class ManyWells:
    """What is kept of many wells while they go by.

    Attributes
    ----------
    columns : names of the columns of each table of single wells
    rows : its rows, of all wells
    values : short series of each well for the tests between wells
    failures : (source, what went wrong)
    """

    columns: dict[str, tuple[str, ...]] = field(default_factory=dict)
    rows: dict[str, list[tuple[Any, ...]]] = field(default_factory=dict)
    values: dict[str, dict[str, NDArray[np.float32]]] = field(default_factory=dict)
    failures: list[tuple[str, str]] = field(default_factory=list)

    def tables(self) -> dict[str, pd.DataFrame]:
        """The tables of all wells."""
        import pandas as pd

        found = {
            name: pd.DataFrame(rows, columns=list(self.columns[name])) for name, rows in self.rows.items()
        }
        found["differences"] = differences_frame(self.differences())
        return found

    def differences(self) -> tuple[Difference, ...]:
        """Tests between the wells: each against all others when there are many."""
        wide = {
            name: {quantity: np.asarray(v, dtype=float) for quantity, v in values.items()}
            for name, values in self.values.items()
        }
        return compare_values(wide) if len(wide) > 1 else ()

    def summary(self) -> list[str]:
        """What happened, in sentences."""
        said = [
            f"{counted(len(self.values), 'well')} written, {counted(len(self.failures), 'file')} could not be used."
        ]
        said += [f"{source}: {problem}" for source, problem in self.failures]
        return said


@dataclass(frozen=True, slots=True)
class _BedTrends:
    """Grading and palaeocurrents of a log: what can be said bed by bed."""

    gradings: tuple[Grading, ...]
    current_results: Any
    packages: tuple[Package, ...] = ()


@dataclass(frozen=True, slots=True)
class _Digest:
    files: WellFiles
    rows: dict[str, tuple[tuple[str, ...], list[tuple[Any, ...]]]]
    values: dict[str, NDArray[np.float32]]


def process_wells(
    sources: Sequence[str | Path],
    folder: str | Path,
    kept: ManyWells | None = None,
    *,
    processes: int = 2,
    step_m: float | None = None,
    flow: bool = True,
    trends: bool = True,
    packages: bool = False,
    reading: dict[str, Any] | None = None,
) -> Iterator[WellDone]:
    """Write the hand-over set and the tables of many wells, one source after another.

    Parameters
    ----------
    sources : files of logs
    folder : where the set goes; tables of all wells go into its folder `tables`
    kept : receives tables and failures; pass one to look at them afterwards
    processes : how many work side by side
    step_m : step of LAS curves, m
    flow, trends : whether flow, and grading and palaeocurrents, are taken
    packages : whether packages of beds are looked for as well; their test against random order takes longer
        than everything else together
    reading : options of `read_log`

    Yields
    ------
    WellDone after each source, in the order given. The files take their names when the last one is through.

    Raises
    ------
    ArgumentError : no source, or fewer than one process
    LogkitError : the folder cannot be written
    """
    if not sources:
        raise ArgumentError("sources", "an empty list", "one file or more")
    if processes < 1:
        raise ArgumentError("processes", processes, "one or more")
    kept = ManyWells() if kept is None else kept
    target = Path(folder)
    jobs = [(str(source), step_m, flow, trends, packages, reading or {}) for source in sources]
    with HandoverWriter(target) as writer:
        for number, (job, answer) in enumerate(_answers(jobs, processes), start=1):
            if isinstance(answer, str):
                kept.failures.append((job[0], answer))
                yield WellDone(job[0], number, len(jobs), problem=answer)
                continue
            for digest in answer:
                writer.add(digest.files)
                for name, (columns, rows) in digest.rows.items():
                    kept.columns.setdefault(name, columns)
                    kept.rows.setdefault(name, []).extend(rows)
                kept.values[_free(digest.files.name, kept.values)] = digest.values
            yield WellDone(job[0], number, len(jobs), tuple(d.files.name for d in answer))
    (target / "tables").mkdir(exist_ok=True)
    for name, table in kept.tables().items():
        write_atomic(target / "tables" / f"{name}.csv", table.to_csv(index=False))


def _answers(
    jobs: Sequence[tuple[Any, ...]], processes: int
) -> Iterator[tuple[tuple[Any, ...], list[_Digest] | str]]:
    """Answers in the order of the jobs, with only a few under way at a time."""
    if processes == 1 or len(jobs) == 1:
        for job in jobs:
            yield job, _one(*job)
        return
    with ProcessPoolExecutor(processes) as pool:
        waiting: list[tuple[tuple[Any, ...], Future[list[_Digest] | str]]] = []
        left = iter(jobs)
        for job in left:
            waiting.append((job, pool.submit(_one, *job)))
            if len(waiting) >= AHEAD * processes:
                first, future = waiting.pop(0)
                yield first, future.result()
        for job, future in waiting:
            yield job, future.result()


def _one(
    source: str, step_m: float | None, flow: bool, trends: bool, packages: bool, reading: dict[str, Any]
) -> list[_Digest] | str:
    """Everything about the logs of one source, or what went wrong with it."""
    from logkit.flow import infer_flow
    from logkit.tables import read_logs

    try:
        digests = []
        for log in read_logs(source, **reading):
            history = infer_flow(log) if flow else None
            found = _trends(log, packages) if trends else None
            placed, _ = place_logs([log], "base", "true", [find_companions(log)])
            tables = {
                "wells": measures.wells_table(placed),
                "net_to_gross": measures.net_to_gross_table(placed),
                "beds": measures.beds_table(placed),
                "facies": measures.facies_table(placed),
                "flow": measures.flow_table(placed, [history]),
                "grading": measures.grading_table(placed, [found]),
                "packages": measures.packages_table(placed, [found]),
            }
            values = {k: v.astype(np.float32) for k, v in gather(placed[0], history).items()}
            rows = {
                name: (tuple(table.columns), list(table.itertuples(index=False, name=None)))
                for name, table in tables.items()
                if len(table)
            }
            digests.append(_Digest(well_files(placed[0], history, found, step_m), rows, values))
        return digests
    except LogkitError as problem:
        return str(problem)
    except Exception as problem:  # a fault of ours in one well must not cost the others
        return f"Unexpected {type(problem).__name__}: {problem}. This is a fault of logkit; please report it."


def _trends(log: Log, packages: bool) -> Any:
    """All trends, or only those of single beds."""
    from logkit.trends import find_trends, grade_bed
    from logkit.trends.currents import find_currents

    if packages:
        return find_trends(log)
    return _BedTrends(tuple(grade_bed(bed) for bed in log.beds), find_currents(log))


def _free(name: str, taken: dict[str, Any]) -> str:
    number, free = 2, name
    while free in taken:
        free, number = f"{name} ({number})", number + 1
    return free
