"""`logkit why`: the ledger of one bed, in words and as a table."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from logkit.cli.console import print_json, print_table, say
from logkit.cli.options import flow_options, log_argument, quiet_option, reading_options, run_logs
from logkit.errors import LogkitError
from logkit.model import CAUTION

if TYPE_CHECKING:
    from logkit.flow import FlowHistory


@click.command("why")
@log_argument
@click.option("--bed", "bed", required=True, metavar="NAME", help="Name of the bed as written.")
@click.option("--phase", type=int, default=None, help="Only this phase, counted from 1 at the base.")
@click.option("--json", "as_json", is_flag=True, help="The ledger as JSON.")
@reading_options
@flow_options
@quiet_option
def command(source: str, bed: str, phase: int | None, as_json: bool, quiet: bool, **options: Any) -> None:
    """Explain the numbers of one bed: every criterion, the bound it sets alone, how much it narrows the
    answer, its source and validity, and which criteria disagree.

    \b
    Example:
      logkit why examples/river/tarrow_bend.csv --bed 14
    """
    outcome = run_logs([source], ["flow"], quiet=quiet, **options)
    runs = [run for run in outcome.runs if any(b.name == bed for b in run.log.beds)]
    if not runs:
        outcome.logs[0].bed(bed)  # raises, naming the nearest bed
    if len(runs) > 1:
        names = ", ".join(run.log.name for run in runs)
        raise LogkitError(f"Bed {bed!r} is in several sections: {names}.", "Choose one with --section.")
    history = runs[0].history
    if history is None:
        raise LogkitError("There is no flow history for this log.")
    ledger = history.ledger(bed, phase)
    if as_json:
        print_json(
            {
                "words": list(history.explain(bed)),
                "ledger": ledger.to_dict(orient="records"),
                "caution": CAUTION,
            }
        )
        return
    for line in history.explain(bed):
        click.echo(line)
    _print_ledgers(history, bed, phase)
    say("\n" + CAUTION, quiet)


def _print_ledgers(history: FlowHistory, bed: str, phase: int | None) -> None:
    """One table a phase and the tested range of each criterion; the numbers of the report, all digits in --json."""
    from logkit.report.ledger_view import ledger_headings, ledger_lines
    from logkit.report.wording import Units

    units = Units()
    headings = [f"{name} ({unit})" if unit else name for name, unit in ledger_headings(units)]
    validity: dict[str, str] = {}
    for number, place in enumerate(history.places_of(bed), 1):
        lines = ledger_lines(history.ledger_at(place), units)
        if not lines or phase not in (None, number):
            continue
        click.echo()
        print_table(headings, [line.cells for line in lines], f"Ledger of bed {bed}, phase {number}")
        validity.update((line.criterion, line.validity) for line in lines)
    if validity:
        click.echo("\nTested ranges:")
        for criterion, words in validity.items():
            click.echo(f"  {criterion}: {words}")
