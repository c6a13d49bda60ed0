"""`logkit flow`: the flow history as a table."""

from __future__ import annotations

from typing import Any

import click

from logkit.cli.console import print_table, say
from logkit.cli.options import (
    check_ending,
    flow_options,
    logs_argument,
    output_option,
    quiet_option,
    reading_options,
    run_logs,
)
from logkit.cli.output import write_rows
from logkit.model import CAUTION
from logkit.words import counted


@click.command("flow")
@logs_argument
@output_option("Table to write: csv, json or parquet by ending; `-` prints it.", required=False)
@reading_options
@flow_options
@quiet_option
def command(sources: tuple[str, ...], output: str | None, quiet: bool, **options: Any) -> None:
    """Write the flow history: for every phase the ranges (P10, P50, P90) of velocity, depth, shear velocity
    and Froude number, or why there is no estimate.

    \b
    Example:
      logkit flow examples/river/tarrow_bend.csv -o tarrow_bend_flow.csv
    """
    if output and output != "-":
        check_ending(output, ("csv", "json", "parquet"))
    outcome = run_logs(sources, ["flow"], quiet=quiet, **options)
    rows = [row for run in outcome.runs if run.history for row in run.history.to_rows()]
    if output and output != "-":
        write_rows(rows, output, CAUTION)
        say(f"Wrote {output}: {counted(len(rows), 'phase')}.", quiet)
    else:
        print_table(list(rows[0]) if rows else (), (list(row.values()) for row in rows))
    say(CAUTION, quiet)
