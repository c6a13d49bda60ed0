"""`logkit tidy`: the normalised table."""

from __future__ import annotations

from typing import Any

import click

from logkit.cli.console import say
from logkit.cli.options import (
    check_ending,
    log_argument,
    output_option,
    quiet_option,
    reading_options,
    run_logs,
)
from logkit.words import counted


@click.command("tidy")
@log_argument
@output_option("Table to write: csv, tsv or xlsx by ending.")
@reading_options
@quiet_option
def command(source: str, output: str, quiet: bool, **options: Any) -> None:
    """Write the normalised table: canonical columns and units, the original wording in a column of its own.

    \b
    Example:
      logkit tidy notebook.xlsx -o notebook_tidy.csv
    """
    check_ending(output, ("csv", "tsv", "xlsx"))
    logs = run_logs([source], quiet=quiet, **options).logs
    from logkit.tables import write_logs

    write_logs(logs, output)
    sections = f" in {len(logs)} sections" if len(logs) > 1 else ""
    say(f"Wrote {output}: {counted(sum(len(log.real_beds) for log in logs), 'bed')}{sections}.", quiet)
