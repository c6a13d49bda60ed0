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
from logkit.errors import LogkitError


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
    if len(logs) > 1:
        names = ", ".join(log.name for log in logs)
        raise LogkitError(f"{source} holds {len(logs)} sections: {names}.", "Choose one with --section.")
    logs[0].write(output)
    say(f"Wrote {output}: {len(logs[0].real_beds)} beds.", quiet)
