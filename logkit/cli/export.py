"""`logkit export`: the hand-over set."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

import click

from logkit.cli.console import progress, say
from logkit.cli.options import (
    flow_options,
    logs_argument,
    output_option,
    quiet_option,
    reading_options,
    run_logs,
    take_flow,
    take_reading,
)
from logkit.errors import ArgumentError
from logkit.pipeline import find_sources

MANY = 8
"""From more sources than these a folder is written well by well, without keeping them all in memory."""


@click.command("export")
@logs_argument
@output_option("A folder for the whole set, or one file: csv, las, json, parquet by ending.")
@click.option(
    "--step", type=float, default=None, metavar="M", help="Depth step of LAS curves, 0.1 m by default."
)
@click.option(
    "--marker", "datum", default=None, metavar="MARKER", help="Marker that heights in the tops refer to."
)
@reading_options
@flow_options
@quiet_option
def command(
    sources: tuple[str, ...], output: str, step: float | None, datum: str | None, quiet: bool, **options: Any
) -> int:
    """Write the hand-over set: intervals, tops, points, LAS 2.0, depth shifts, JSON, Parquet, code table,
    limits. Many wells are written one after another; one that fails does not stop the others.

    \b
    Example:
      logkit export examples/wells -o handover
    """
    from logkit.compare import export

    ending = Path(output).suffix.lower()
    if ending and ending not in {".csv", ".las", ".json", ".parquet"}:
        raise ArgumentError("--output", output, "a folder, or a file ending in .csv, .las, .json, .parquet")
    found = find_sources(sources)
    if not ending and len(found) > MANY and not datum and not take_flow(options):
        return _many(found, output, step, take_reading(options), quiet)
    outcome = run_logs(found, ["flow", "trends"], quiet=quiet, keep_going=True, **options)
    for source, problem in outcome.failures:
        say(f"logkit: {source}: {problem}")
    if not outcome.runs:
        return 1
    written = export(
        outcome.logs,
        output,
        histories=[run.history for run in outcome.runs],
        trends=[run.trends for run in outcome.runs],
        step_m=step,
        datum=datum,
    )
    for path in written:
        say(f"Wrote {path}", quiet)
    return 1 if outcome.failures else 0


def _many(
    found: tuple[str, ...], output: str, step: float | None, reading: dict[str, Any], quiet: bool
) -> int:
    """Write well by well on several processes, then say what happened."""
    from logkit.compare import ManyWells, process_wells

    kept = ManyWells()
    steps = process_wells(found, output, kept, processes=os.cpu_count() or 1, step_m=step, reading=reading)
    for source in progress(found, "wells", quiet):
        done = next(steps)
        if done.problem:
            say(f"logkit: {source}: {done.problem}")
    for _ in steps:  # lets the writer give the files their names
        pass
    say(f"Wrote {output}. {kept.summary()[0]}", quiet)
    return 1 if kept.failures else 0
