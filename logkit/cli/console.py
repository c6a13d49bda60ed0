"""Where commands print: results to stdout, messages and progress to stderr; colour only for a terminal."""

from __future__ import annotations

import json
import os
import sys
import time
from collections.abc import Iterable, Iterator, Sequence
from typing import Any, TypeVar

import click

T = TypeVar("T")

LEVEL_COLOURS = {"error": "red", "question": "yellow", "note": "blue"}


def colour_wanted() -> bool:
    """True when stdout is a terminal and NO_COLOR is not set."""
    return sys.stdout.isatty() and not os.environ.get("NO_COLOR")


def print_table(headings: Sequence[str], rows: Iterable[Sequence[Any]], title: str = "") -> None:
    """A table: drawn for a terminal, tab-separated text for a pipe or a file."""
    rows = [[_text(cell) for cell in row] for row in rows]
    if not sys.stdout.isatty():
        click.echo("\t".join(headings))
        for row in rows:
            click.echo("\t".join(cell.replace("\t", " ").replace("\n", " ") for cell in row))
        return
    from rich.box import SIMPLE_HEAD
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    table = Table(
        box=SIMPLE_HEAD,
        title=Text(title, style="bold") if title else None,
        title_justify="left",
        pad_edge=False,
    )
    for heading in headings:
        table.add_column(heading, overflow="fold")
    for row in rows:
        table.add_row(
            *(Text(cell, style=LEVEL_COLOURS.get(cell, "") if colour_wanted() else "") for cell in row)
        )
    Console(color_system="auto" if colour_wanted() else None, highlight=False).print(table)


def print_frame(frame: Any, title: str = "") -> None:
    """A pandas frame as a table, four significant digits for numbers."""
    print_table([str(c) for c in frame.columns], frame.itertuples(index=False, name=None), title)


def print_json(value: Any) -> None:
    """JSON to stdout; numbers that are not finite become null."""
    click.echo(json.dumps(finite(value), ensure_ascii=False, indent=2))


def say(message: str, quiet: bool = False) -> None:
    """A message for the person, on stderr."""
    if not quiet:
        click.echo(message, err=True)


def progress(items: Sequence[T], label: str, quiet: bool = False) -> Iterator[T]:
    """Pass the items on; a bar on stderr when it is a terminal and the work lasts over a second."""
    if quiet or not sys.stderr.isatty() or len(items) < 2:
        yield from items
        return
    from rich.console import Console
    from rich.progress import Progress

    start = time.monotonic()
    bar = Progress(console=Console(stderr=True), transient=True)
    task = bar.add_task(label, total=len(items))
    shown = False
    try:
        for item in items:
            yield item
            bar.advance(task)
            if not shown and time.monotonic() - start > 1:
                bar.start()
                shown = True
    finally:
        if shown:
            bar.stop()


def _text(cell: Any) -> str:
    if cell is None:
        return ""
    if isinstance(cell, bool):
        return "yes" if cell else "no"
    if isinstance(cell, float):
        return "" if cell != cell else f"{cell:.4g}"
    return "".join(c if c.isprintable() or c in "\n\t\u00a0\u202f" else "�" for c in str(cell))


def finite(value: Any) -> Any:
    """A value as JSON can hold it: numbers that are not finite become None, arrays of one their number."""
    if isinstance(value, dict):
        return {str(k): finite(v) for k, v in value.items()}
    if isinstance(value, list | tuple):
        return [finite(v) for v in value]
    if hasattr(value, "item"):
        value = value.item()
    if isinstance(value, float) and (value != value or value in (float("inf"), float("-inf"))):
        return None
    return value
