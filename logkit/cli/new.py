"""`logkit new`: an empty table to type into."""

from __future__ import annotations

from pathlib import Path

import click

from logkit.cli.console import say
from logkit.cli.options import quiet_option
from logkit.errors import LogkitError


@click.command("new")
@click.argument("file", metavar="FILE")
@click.option("--force", is_flag=True, help="Replace FILE when it exists.")
@quiet_option
def command(file: str, force: bool, quiet: bool) -> None:
    """Write an empty table with the columns, their units and one filled-in row to copy.

    \b
    Example:
      logkit new my_section.xlsx
    """
    from logkit.tables import new_table

    if Path(file).exists() and not force:
        raise LogkitError(f"{file} exists already.", "Choose another name or pass --force.")
    new_table(file)
    say(f"Wrote {file}. Replace the example row by your beds, then: logkit check {file}", quiet)
