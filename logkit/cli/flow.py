"""`logkit flow`: the flow history as a table."""

from __future__ import annotations

from typing import Any

import click

from logkit.cli.console import print_frame, say
from logkit.cli.options import (
    check_ending,
    flow_options,
    logs_argument,
    output_option,
    quiet_option,
    reading_options,
    run_logs,
)
from logkit.cli.output import write_frame
from logkit.model import CAUTION


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
    import pandas as pd

    if output and output != "-":
        check_ending(output, ("csv", "json", "parquet"))
    outcome = run_logs(sources, ["flow"], quiet=quiet, **options)
    frame = pd.concat([run.history.to_frame() for run in outcome.runs if run.history], ignore_index=True)
    if output and output != "-":
        write_frame(frame, output, CAUTION)
        say(f"Wrote {output}: {len(frame)} phases.", quiet)
    else:
        print_frame(frame)
    say(CAUTION, quiet)
