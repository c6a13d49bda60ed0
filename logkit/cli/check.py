"""`logkit check`: every finding of a log, all at once."""

from __future__ import annotations

import dataclasses
import sys
from collections import Counter
from itertools import groupby
from pathlib import Path
from typing import Any

import click

from logkit.cli.console import print_json, print_table, say
from logkit.cli.options import logs_argument, quiet_option, reading_options, run_logs
from logkit.errors import LogErrors
from logkit.model import LEVELS, Finding
from logkit.words import counted

HEADINGS = ("level", "file", "row", "column", "cell", "finding", "what to do")
SHORT_HEADINGS = ("level", "row", "column", "cell", "finding → what to do")
LONGEST_SHOWN = 20
"""Characters of a cell in the table for a terminal."""


@click.command("check")
@logs_argument
@click.option("--strict", is_flag=True, help="Questions fail as well as errors.")
@click.option("--json", "as_json", is_flag=True, help="Findings as JSON.")
@reading_options
@quiet_option
def command(sources: tuple[str, ...], strict: bool, as_json: bool, quiet: bool, **options: Any) -> int:
    """List everything the reader has to say about a log: errors, questions, notes.

    \b
    Example:
      logkit check examples/river/tarrow_bend.csv
    """
    outcome = run_logs(sources, quiet=quiet, keep_going=True, on_errors="keep", **options)
    findings = sorted(outcome.findings, key=lambda f: (f.file, f.sheet, LEVELS.index(f.level), f.row or 0))
    unread = [(source, e) for source, e in outcome.failures if not isinstance(e, LogErrors)]
    if as_json:
        print_json(
            {
                "findings": [dataclasses.asdict(f) for f in findings],
                "unread": [{"source": s, "error": str(e)} for s, e in unread],
            }
        )
    elif findings:
        _print(findings)
    for source, problem in unread:
        named = Path(source).name in str(problem)
        say(f"logkit: {problem}" if named else f"logkit: {source}: {problem}")
    counts = Counter(f.level for f in findings)
    beds = sum(len(log.real_beds) for log in outcome.logs)
    words = ", ".join(counted(counts[level], level) for level in LEVELS)
    say(f"{counted(len(outcome.logs), 'log')}, {counted(beds, 'bed')}: {words}.", quiet)
    failed = counts["error"] or unread or (strict and counts["question"])
    return 1 if failed else 0


def _print(findings: list[Finding]) -> None:
    """Findings as plain rows for a pipe; for a terminal a table a file, wide enough to read."""
    if not sys.stdout.isatty():
        print_table(
            HEADINGS, ((f.level, _place(f), f.row, f.column, f.cell, _says(f), f.remedy) for f in findings)
        )
        return
    for place, group in groupby(findings, key=_place):
        print_table(
            SHORT_HEADINGS,
            ((f.level, f.row, f.column.replace("_", " "), _shortened(f.cell), _full(f)) for f in group),
            title=place,
        )


def _place(finding: Finding) -> str:
    return f"{finding.file} [{finding.sheet}]" if finding.sheet else finding.file


def _says(finding: Finding) -> str:
    message = finding.message
    if finding.choices:
        message += "; could be: " + " | ".join(finding.choices)
    if finding.nearest:
        message += f"; nearest known: {finding.nearest}"
    return message


def _full(finding: Finding) -> str:
    return f"{_says(finding)}\n→ {finding.remedy}" if finding.remedy else _says(finding)


def _shortened(cell: str) -> str:
    plain = " ".join(cell.split())
    return plain if len(plain) <= LONGEST_SHOWN else plain[: LONGEST_SHOWN - 1] + "…"
