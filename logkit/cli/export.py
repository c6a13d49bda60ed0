"""`logkit export`: the hand-over set."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import click

from logkit.cli.console import say
from logkit.cli.options import (
    flow_options,
    logs_argument,
    output_option,
    quiet_option,
    reading_options,
    run_logs,
)
from logkit.errors import ArgumentError


@click.command("export")
@logs_argument
@output_option("A folder for the whole set, or one file: csv, las, json, parquet by ending.")
@click.option(
    "--step", type=float, default=None, metavar="M", help="Depth step of LAS curves, 0.1 m by default."
)
@click.option(
    "--marker",
    "datum",
    default=None,
    metavar="MARKER",
    help="Marker that heights refer to in the tops table.",
)
@reading_options
@flow_options
@quiet_option
def command(
    sources: tuple[str, ...], output: str, step: float | None, datum: str | None, quiet: bool, **options: Any
) -> int:
    """Write the hand-over set: intervals, tops, points, LAS 2.0, depth shifts, JSON, Parquet, code table,
    limits.

    \b
    Example:
      logkit export examples/wells -o handover
    """
    from logkit.compare import export

    ending = Path(output).suffix.lower()
    if ending and ending not in {".csv", ".las", ".json", ".parquet"}:
        raise ArgumentError("--output", output, "a folder, or a file ending in .csv, .las, .json, .parquet")
    outcome = run_logs(sources, ["flow", "trends"], quiet=quiet, keep_going=True, **options)
    for source, problem in outcome.failures:
        say(f"logkit: {source}: {problem}")
    if not outcome.runs:
        return 1
    written = export(
        outcome.logs,
        output,
        histories=[run.history for run in outcome.runs],
        trends=[run.trends for run in outcome.runs],
        **({"step_m": step} if step else {}),
        **({"datum": datum} if datum else {}),
    )
    for path in written:
        say(f"Wrote {path}", quiet)
    return 1 if outcome.failures else 0
