"""`logkit report`: the report."""

from __future__ import annotations

from typing import Any

import click

from logkit.cli.console import say
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


@click.command("report")
@logs_argument
@output_option("Report to write: pdf, html or docx by ending.")
@click.option(
    "--settings",
    "settings_file",
    default=None,
    metavar="FILE",
    help="Sections, units, logo and organisation line as TOML.",
)
@click.option("--sections", default=None, metavar="A,B,…", help="Only these sections, in this order.")
@click.option(
    "--units", type=click.Choice(["si", "feet"]), default=None, help="Language of units in tables and text."
)
@click.option("--organisation", default=None, metavar="LINE", help="Line at the foot of the title page.")
@click.option("--logo", default=None, metavar="FILE", help="Picture for the title page: svg or png.")
@click.option("--style", default=None, help="Style of the columns.")
@click.option("--scale", default=None, metavar="1:N", help="Scale of the columns.")
@click.option(
    "--datum", default=None, metavar="MARKER|M", help="Datum of the panel when several wells are reported."
)
@click.option("--archive", is_flag=True, help="PDF/A for archives.")
@reading_options
@flow_options
@quiet_option
def command(
    sources: tuple[str, ...],
    output: str,
    settings_file: str | None,
    sections: str | None,
    units: str | None,
    organisation: str | None,
    logo: str | None,
    style: str | None,
    scale: str | None,
    datum: str | None,
    archive: bool,
    quiet: bool,
    **options: Any,
) -> None:
    """Write the report: summary, columns, flow history, tables, ledgers, methods with sources, limits.

    \b
    Examples:
      logkit report examples/river/tarrow_bend.csv -o report.pdf
      logkit report examples/wells -o wells.html --datum "ash 2"
    """
    from logkit.report import write_report

    check_ending(output, ("pdf", "html", "docx"))
    outcome = run_logs(sources, ["flow", "trends"], quiet=quiet, **options)
    chosen: dict[str, Any] = {
        "settings": settings_file,
        "sections": [s.strip() for s in sections.split(",")] if sections else None,
        "units": units,
        "organisation": organisation,
        "logo": logo,
        "style": style,
        "scale": parse_scale(scale) if scale else None,
        "datum": datum,
        "archive": archive or None,
    }
    path = write_report(
        outcome.logs,
        output,
        histories=[run.history for run in outcome.runs],
        trends=[run.trends for run in outcome.runs],
        **{key: value for key, value in chosen.items() if value is not None},
    )
    say(f"Wrote {path}.", quiet)
