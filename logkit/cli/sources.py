"""`logkit sources`: every formula with source, validity, scatter and checks."""

from __future__ import annotations

from dataclasses import asdict
from typing import TYPE_CHECKING, Any

import click

from logkit.cli.console import print_json, print_table

if TYPE_CHECKING:
    from logkit.hydraulics.checks import CheckResult
    from logkit.hydraulics.sources import Description

CHECK_HEADINGS = ("inputs", "computed", "published", "unit", "within tolerance", "kind", "source")
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
            print_json([asdict(row) for row in rows])
        else:
            print_table(HEADINGS, ([getattr(row, key.replace(" ", "_")) for key in HEADINGS] for row in rows))
        return
    record = describe(formula)
    if as_json:
        print_json(asdict(record))
        return
    for line in _lines(record):
        click.echo(line)
    if record.checks:
        click.echo()
        print_table(CHECK_HEADINGS, (_check(result) for result in record.checks))
    else:
        click.echo("\nNo outside check is known for this formula.")


def _lines(record: Description) -> list[str]:
    row = record.row
    lines = [f"{row.id}: {row.gives} [{row.unit or 'no unit'}]", f"  {row.equation}", ""]
    for item in record.inputs:
        default = "" if item.default is None else f" ({item.default} unless given)"
        lines.append(f"  {item.name:<24} {item.unit:<8} {item.meaning}{default}")
    if record.in_place_of:
        lines.append(f"  or in place of the fluid's numbers: {', '.join(record.in_place_of)}")
    kind = (
        "keeps dimensions" if record.homogeneous else "coefficients carry dimensions or it takes no lengths"
    )
    entries = (
        ("source", record.reference + (f", {record.locator}" if record.locator else "")),
        ("valid", row.valid),
        ("scatter", row.scatter),
        ("status", row.status),
        ("units", kind),
        ("pitfalls", record.pitfalls),
    )
    return [*lines, "", *(f"  {key + ':':<10} {text}" for key, text in entries if text)]


def _check(result: CheckResult) -> tuple[Any, ...]:
    check = result.check
    inputs = ", ".join(f"{name} {value}" for name, value in check.inputs.items())
    verdict = "meets it" if result.met else "MISSES IT"
    return (
        inputs,
        f"{result.value:.6g}",
        f"{check.expected:.6g}",
        check.unit,
        verdict,
        check.kind,
        check.source,
    )
