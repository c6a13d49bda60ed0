"""`logkit sources`: every formula with source, validity, scatter and checks."""

from __future__ import annotations

from typing import Any

import click

from logkit.cli.console import print_json, print_table

HEADINGS = ("id", "gives", "source", "valid", "scatter", "status", "outside checks")


@click.command("sources")
@click.argument("formula", metavar="[ID]", required=False)
@click.option("--json", "as_json", is_flag=True, help="As JSON.")
def command(formula: str | None, as_json: bool) -> None:
    """List every formula: what it gives, source with equation, valid range, scatter, status, outside checks.
    With an ID print the formula, its inputs with units, and its checks: computed against published.

    \b
    Examples:
      logkit sources
      logkit sources settling.ferguson_church
    """
    from logkit.hydraulics import describe, sources_table

    if formula is None:
        rows = sources_table()
        if as_json:
            print_json(rows)
        else:
            print_table(HEADINGS, ([row[key.replace(" ", "_")] for key in HEADINGS] for row in rows))
        return
    record = describe(formula)
    if as_json:
        print_json(record)
        return
    for line in _lines(record):
        click.echo(line)
    if record["checks"]:
        click.echo()
        keys = list(record["checks"][0])
        print_table(
            [k.replace("_", " ") for k in keys], ([check[k] for k in keys] for check in record["checks"])
        )
    else:
        click.echo("\nNo outside check is known for this formula.")


def _lines(record: dict[str, Any]) -> list[str]:
    lines = [f"{record['id']}: {record['gives']} [{record['unit']}]", f"  {record['equation']}", ""]
    lines += [f"  {name:<24} {unit:<8} {meaning}" for name, unit, meaning in record["inputs"]]
    for key in ("source", "valid", "domain", "scatter", "status", "pitfalls"):
        if record.get(key):
            lines.append(f"  {key + ':':<10} {record[key]}")
    return lines
