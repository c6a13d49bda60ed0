"""`logkit trends`: grading, packages, transitions and palaeocurrents of logs."""

from __future__ import annotations

from typing import Any

import click

from logkit.cli.console import print_json, print_table, say
from logkit.cli.options import logs_argument, quiet_option, reading_options, run_logs

TABLES = (
    "grading", "packages", "boundaries", "order", "thickness", "net-to-gross", "distributions", "transitions",
    "currents", "current-readings", "current-trends",
)  # fmt: skip


@click.command("trends")
@logs_argument
@click.option(
    "--only",
    type=click.Choice(TABLES),
    multiple=True,
    metavar="TABLE",
    help="Only this table; may be repeated: " + ", ".join(TABLES) + ".",
)
@click.option("--json", "as_json", is_flag=True, help="Everything as JSON.")
@reading_options
@quiet_option
def command(
    sources: tuple[str, ...], only: tuple[str, ...], as_json: bool, quiet: bool, **options: Any
) -> None:
    """Statistics of a log: grading of each bed, packages, thickness, transitions (upward), palaeocurrents.

    \b
    Example:
      logkit trends examples/river/tarrow_bend.csv --only packages --only currents
    """
    outcome = run_logs(sources, ["trends"], quiet=quiet, **options)
    results = {run.log.name: run.trends for run in outcome.runs if run.trends is not None}
    if as_json:
        print_json({name: trends.to_dict() for name, trends in results.items()})
        return
    for name, trends in results.items():
        for title, frame in trends.tables().items():
            if only and title.replace(" ", "-") not in only:
                continue
            if len(frame):
                click.echo(f"\n{name}: {title}")
                print_table([str(c) for c in frame.columns], frame.itertuples(index=False, name=None))
        for sentence in trends.summary():
            say(f"{name}: {sentence}", quiet)
