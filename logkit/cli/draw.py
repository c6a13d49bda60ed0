"""`logkit draw`: the annotated column."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import click

from logkit.cli.console import say
from logkit.cli.options import (
    check_ending,
    complete_styles,
    flow_options,
    log_argument,
    output_option,
    parse_scale,
    quiet_option,
    reading_options,
    run_logs,
)
from logkit.words import counted


@click.command("draw")
@log_argument
@output_option(
    "Drawing to write: svg, pdf or png by ending. Several sheets: one pdf, or NAME-1.svg, NAME-2.svg …"
)
@click.option(
    "--style",
    default="report",
    shell_complete=complete_styles,
    help="Style by name, or your own TOML file.",
)
@click.option("--scale", default=None, metavar="1:N", help="Scale on paper, 1:50 by default.")
@click.option("--page", default=None, metavar="SIZE", help="A5 … A0, Letter, Tabloid, roll; `A4 landscape`.")
@click.option("--from", "from_m", type=float, default=None, metavar="M", help="Lowest height to draw (m).")
@click.option("--to", "to_m", type=float, default=None, metavar="M", help="Highest height to draw (m).")
@click.option(
    "--fit",
    "fit_height_mm",
    type=float,
    default=None,
    metavar="MM",
    help="Fit the section into this height; prints the scale.",
)
@click.option("--cut-gaps", is_flag=True, help="Draw gaps over 1.5 m short, said in words with break marks.")
@click.option("--no-flow", is_flag=True, help="Leave out flow and depth.")
@reading_options
@flow_options
@quiet_option
def command(
    source: str,
    output: str,
    style: str,
    scale: str | None,
    page: str | None,
    from_m: float | None,
    to_m: float | None,
    fit_height_mm: float | None,
    cut_gaps: bool,
    no_flow: bool,
    quiet: bool,
    **options: Any,
) -> None:
    """Draw the column: grain-size profile, texture, structures, contacts, currents, flow ribbon, packages,
    notes.

    \b
    Examples:
      logkit draw examples/river/tarrow_bend.csv -o tarrow_bend.pdf
      logkit draw core.xlsx -o core.svg --scale 1:200 --page A3 --style journal-double
    """
    from logkit.drawing import draw_column

    ending = check_ending(output, ("svg", "pdf", "png"))
    outcome = run_logs([source], ["trends"] if no_flow else ["flow", "trends"], quiet=quiet, **options)
    for run in outcome.runs:
        drawing = draw_column(
            run.log,
            run.history,
            run.trends,
            style=style,
            page=page,
            from_m=from_m,
            to_m=to_m,
            fit_height_mm=fit_height_mm,
            cut_gaps=cut_gaps,
            scale=parse_scale(scale) if scale else None,
        )
        target = output
        if len(outcome.runs) > 1:
            part = "".join(c if c.isalnum() else "_" for c in run.log.name)
            target = str(Path(output).with_name(f"{Path(output).stem}-{part}.{ending}"))
        drawing.save(target)
        beds, sheets = counted(len(run.log.real_beds), "bed"), counted(len(drawing.sheets), "sheet")
        say(f"Wrote {target}: {beds} at 1:{drawing.scale:g}, {sheets}.", quiet)
        if questions := run.log.count("question"):
            say(f"{counted(questions, 'question')} about {run.log.name}: logkit check {source}", quiet)
