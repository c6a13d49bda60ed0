"""`logkit compare`: wells side by side."""

from __future__ import annotations

from pathlib import Path
from typing import Any, Literal

import click

from logkit.cli.console import print_frame, say
from logkit.cli.options import (
    check_ending,
    flow_options,
    logs_argument,
    output_option,
    parse_scale,
    quiet_option,
    reading_options,
    run_logs,
)
from logkit.errors import LogkitError
from logkit.words import counted


@click.command("compare")
@logs_argument
@output_option("Panel to write: svg, pdf or png by ending.", required=False)
@click.option(
    "--datum", default=None, metavar="MARKER|M", help="Hang on a marker, or `elevation`, `depth`, `base`."
)
@click.option(
    "--tables",
    "tables_to",
    default=None,
    metavar="FOLDER",
    help="Write the comparison tables as csv into this folder.",
)
@click.option(
    "--suggest", is_flag=True, help="Suggest ties between the markers; drawn as suggestions, never accepted."
)
@click.option("--style", default="report", help="Style by name, or your own TOML file.")
@click.option("--scale", default=None, metavar="1:N", help="One scale for all wells.")
@click.option(
    "--spacing",
    type=click.Choice(["even", "distance"]),
    default="even",
    help="Even, or by the distances in the headers.",
)
@click.option("--bands", is_flag=True, help="Tint every other interval between ties.")
@click.option(
    "--thickness",
    type=click.Choice(["true", "vertical", "measured"]),
    default="true",
    help="What a height difference between wells means.",
)
@reading_options
@flow_options
@quiet_option
def command(
    sources: tuple[str, ...],
    output: str | None,
    datum: str | None,
    tables_to: str | None,
    suggest: bool,
    style: str,
    scale: str | None,
    spacing: Literal["even", "distance"],
    bands: bool,
    thickness: Literal["true", "vertical", "measured"],
    quiet: bool,
    **options: Any,
) -> int:
    """Put wells side by side: hang them on a datum, tie the shared markers, compare what they hold.
    A folder stands for the tables in it.

    \b
    Example:
      logkit compare examples/wells -o panel.pdf --datum "ash 2"
    """
    from logkit.compare import compare_logs, draw_panel
    from logkit.files import write_atomic

    if output:
        check_ending(output, ("svg", "pdf", "png"))
    outcome = run_logs(sources, ["flow", "trends"], quiet=quiet, keep_going=True, **options)
    for source, problem in outcome.failures:
        say(f"logkit: {source}: {problem}")
    if len(outcome.runs) < 2:
        raise LogkitError(
            f"{counted(len(outcome.runs), 'log')} could be used, but a comparison takes two or more.",
            "Name more tables, or a folder of them.",
        )
    comparison = compare_logs(
        outcome.logs,
        datum=datum,
        histories=[run.history for run in outcome.runs],
        trends=[run.trends for run in outcome.runs],
        suggest_ties=suggest,
        thickness=thickness,
    )
    if output:
        denominator = parse_scale(scale) if scale else None
        panel = draw_panel(comparison, style=style, scale=denominator, spacing=spacing, bands=bands)
        panel.save(output)
        say(f"Wrote {output}: {len(outcome.runs)} wells.", quiet)
    for name, frame in comparison.tables().items():
        if tables_to:
            Path(tables_to).mkdir(parents=True, exist_ok=True)
            write_atomic(Path(tables_to) / f"{name}.csv", frame.to_csv(index=False))
        elif len(frame):
            click.echo(f"\n{name}")
            print_frame(frame)
    for sentence in comparison.summary():
        say(sentence, quiet)
    return 1 if outcome.failures else 0
