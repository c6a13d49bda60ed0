"""One way through the house: read, check, infer, find trends, draw. Every front calls `run(settings)`.

Only the order of the steps belongs here; each step lives in its own layer and is imported when wanted.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any, Literal

from logkit.errors import ArgumentError, LogErrors, LogkitError

if TYPE_CHECKING:
    from logkit.flow import FlowHistory
    from logkit.model import Finding, Log
    from logkit.trends import Trends

Step = Literal["flow", "trends"]
LOG_ENDINGS = (".csv", ".tsv", ".txt", ".xlsx", ".ods")


@dataclass(frozen=True, slots=True)
class Settings:
    """What a run shall do.

    Attributes
    ----------
    sources : files, folders of logs, or "-" for standard input
    steps : which results are wanted beside the logs
    reading : options of `read_log` (section, setting, unit, direction, codes, …)
    flow : options of `infer_flow` (temperature_c, salinity, prior, …)
    trends : options of `find_trends`
    section : the only section wanted, "" for all
    strict : questions stop as errors do
    keep_going : a source that fails is recorded and does not stop the others
    """

    sources: tuple[str, ...]
    steps: frozenset[Step] = frozenset()
    reading: dict[str, Any] = field(default_factory=dict)
    flow: dict[str, Any] = field(default_factory=dict)
    trends: dict[str, Any] = field(default_factory=dict)
    section: str = ""
    strict: bool = False
    keep_going: bool = False


@dataclass(frozen=True, slots=True)
class Run:
    """Everything one run found out about one log."""

    log: Log
    history: FlowHistory | None = None
    trends: Trends | None = None


@dataclass(frozen=True, slots=True)
class Outcome:
    """The runs of all logs, and the sources that failed with their errors."""

    runs: tuple[Run, ...]
    failures: tuple[tuple[str, LogkitError], ...] = ()

    @property
    def logs(self) -> list[Log]:
        """The logs alone."""
        return [run.log for run in self.runs]

    @property
    def findings(self) -> list[Finding]:
        """All findings, those of failed sources first; what concerns several logs of a file stands once."""
        failed = [f for _, e in self.failures if isinstance(e, LogErrors) for f in e.findings]
        return list(dict.fromkeys([*failed, *(finding for run in self.runs for finding in run.log.findings)]))


def find_sources(sources: Iterable[str]) -> tuple[str, ...]:
    """The files to read: a folder stands for the tables in it, in the order of their names.

    Companion files (`NAME.sizes.csv`) belong to their log and are left out.

    Raises
    ------
    LogkitError : a folder without a table
    """
    found: list[str] = []
    for source in sources:
        if source == "-" or not os.path.isdir(source):  # false as well where it may not be looked at
            found.append(source)
            continue
        tables = sorted(
            str(p)
            for p in Path(source).iterdir()
            if p.suffix.lower() in LOG_ENDINGS
            and p.with_suffix("").suffix.lower() not in {".sizes", ".survey", ".shifts"}
        )
        if not tables:
            raise LogkitError(f"{source} holds no table of beds.", f"Looked for {', '.join(LOG_ENDINGS)}.")
        found.extend(tables)
    if len(found) > 1 and found.count("-") > 0:
        raise ArgumentError("sources", "-", "the only source when it is standard input")
    return tuple(found)


def run(
    settings: Settings,
    *,
    each: Callable[[tuple[str, ...]], Iterable[str]] = iter,
) -> Outcome:
    """Read every source and take the wanted steps.

    Parameters
    ----------
    settings : what to do
    each : passes the sources on, one by one; a front can show progress there

    Raises
    ------
    LogErrors : a log has errors (or questions, when strict) and `keep_going` is off
    LogkitError : a source cannot be read
    """
    from logkit.tables import read_logs

    sources = find_sources(settings.sources)
    runs: list[Run] = []
    failures: list[tuple[str, LogkitError]] = []
    for source in each(sources):
        try:
            logs = read_logs(source, **settings.reading)
            chosen = [log for log in logs if not settings.section or log.header.section == settings.section]
            if not chosen:
                names = ", ".join(repr(log.header.section) for log in logs)
                raise ArgumentError("section", settings.section, f"one of the sections of {source}: {names}")
            for log in chosen:
                if settings.strict and log.count("question"):
                    raise LogErrors(_as_errors(log.findings), log)
                runs.append(take_steps(log, settings))
        except LogkitError as problem:
            if not settings.keep_going:
                raise
            failures.append((source, problem))
    return Outcome(tuple(runs), tuple(failures))


def take_steps(log: Log, settings: Settings) -> Run:
    """The wanted results for one log that has been read."""
    history = trends = None
    if "flow" in settings.steps:
        from logkit.flow import infer_flow

        history = infer_flow(log, **settings.flow)
    if "trends" in settings.steps:
        from logkit.trends import find_trends

        trends = find_trends(log, **settings.trends)
    return Run(log, history, trends)


def _as_errors(findings: Iterable[Finding]) -> list[Finding]:
    """Under strict reading a question counts as an error."""
    from dataclasses import replace

    return [replace(f, level="error") if f.level == "question" else f for f in findings]
