"""Options that several verbs share, and how they become settings of a run."""

from __future__ import annotations

import contextlib
import os
import re
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any, TypeVar

import click

from logkit.cli.console import progress
from logkit.errors import ArgumentError
from logkit.model import SETTINGS
from logkit.pipeline import Outcome, Settings, Step, find_sources, run

C = TypeVar("C", bound=Callable[..., Any])

_PATH = click.Path(allow_dash=True)
"""A path that the reader checks itself; the shell completes it."""

logs_argument = click.argument("sources", metavar="LOG…", nargs=-1, required=True, type=_PATH)
log_argument = click.argument("source", metavar="LOG", type=_PATH)
quiet_option = click.option("--quiet", "-q", is_flag=True, help="No messages and no progress bar.")
section_option = click.option("--section", default="", help="Only this section of a file that holds several.")


def output_option(help_text: str, required: bool = True) -> Callable[[C], C]:
    """The `-o` option; `-` stands for standard output where the verb allows it."""
    return click.option("--output", "-o", metavar="FILE", required=required, help=help_text, type=_PATH)


def _complete_codes(ctx: click.Context, param: click.Parameter, typed: str) -> list[str]:
    from logkit.vocabulary import code_tables

    return [name for name in code_tables() if name.startswith(typed)]


def complete_styles(ctx: click.Context, param: click.Parameter, typed: str) -> list[str]:
    """Names of styles for the shell."""
    from logkit.drawing.style import list_styles

    return [name for name in list_styles() if name.startswith(typed)]


def reading_options(command: C) -> C:
    """Options that say how a table is to be read."""
    for option in (
        click.option(
            "--codes",
            default=None,
            metavar="TABLE",
            shell_complete=_complete_codes,
            help="Table of facies codes the log was written with.",
        ),
        click.option(
            "--direction",
            type=click.Choice(["up", "down"]),
            default=None,
            help="Order of the rows: outcrop up, core down.",
        ),
        click.option(
            "--unit",
            default=None,
            metavar="UNIT",
            help="Length unit of cells that do not name one: m, cm, mm, ft.",
        ),
        click.option(
            "--setting",
            default=None,
            metavar="WORD",
            shell_complete=lambda ctx, param, typed: [w for w in SETTINGS if w.startswith(typed)],
            help="What moved the grains: river, tidal, turbidity, waves, combined, wind.",
        ),
        section_option,
    ):
        command = option(command)
    return command


def flow_options(command: C) -> C:
    """Options of the flow engine."""
    for option in (
        click.option(
            "--read-tb",
            is_flag=True,
            help="Read Bouma Tb as dilute upper plane bed (a choice that is disputed).",
        ),
        click.option(
            "--prior",
            type=click.Choice(["off", "broad", "river"]),
            default=None,
            help="What is believed before the bed is read.",
        ),
        click.option("--slope", default=None, metavar="S or LOW-HIGH", help="Known slope, m/m."),
        click.option("--flow-depth", default=None, metavar="M or LOW-HIGH", help="Known flow depth, m."),
        click.option("--salinity", type=float, default=None, help="Practical salinity; 0 fresh, 35 sea."),
        click.option("--temperature", type=float, default=None, metavar="°C", help="Water temperature."),
    ):
        command = option(command)
    return command


def take_reading(options: dict[str, Any]) -> dict[str, Any]:
    """The options of `read_log` out of a command's options."""
    return {key: options[key] for key in ("setting", "unit", "direction", "codes") if options.get(key)}


def take_flow(options: dict[str, Any]) -> dict[str, Any]:
    """The options of `infer_flow` out of a command's options."""
    chosen: dict[str, Any] = {}
    if options.get("temperature") is not None:
        chosen["temperature_c"] = options["temperature"]
    if options.get("salinity") is not None:
        chosen["salinity"] = options["salinity"]
    for name, target in (("flow_depth", "flow_depth_m"), ("slope", "slope")):
        if options.get(name):
            chosen[target] = parse_range(options[name], "--" + name.replace("_", "-"))
    if options.get("prior"):
        chosen["prior"] = options["prior"]
    if options.get("read_tb"):
        chosen["read_tb"] = True
    return chosen


def run_logs(
    sources: Sequence[str],
    steps: Sequence[Step] = (),
    *,
    quiet: bool = False,
    keep_going: bool = False,
    strict: bool = False,
    on_errors: str | None = None,
    **options: Any,
) -> Outcome:
    """Run the pipeline for a command's options, with a progress bar for many logs.

    Raises
    ------
    ArgumentError : the command would write over one of its own inputs
    """
    spare_sources(sources, click.get_current_context().params.get("output"))
    reading = take_reading(options)
    if on_errors:
        reading["on_errors"] = on_errors
    settings = Settings(
        sources=tuple(sources),
        steps=frozenset(steps),
        reading=reading,
        flow=take_flow(options),
        section=options.get("section") or "",
        strict=strict,
        keep_going=keep_going,
    )
    return run(settings, each=lambda found: progress(found, "reading", quiet))


def spare_sources(sources: Sequence[str], output: str | None) -> None:
    """Refuse an output that is one of the inputs: a field table is not replaced by what was made of it.

    Raises
    ------
    ArgumentError : the output is an input, by this or by another name
    """
    if not output or not os.path.isfile(output):
        return
    for source in find_sources(sources):
        with contextlib.suppress(OSError):
            if os.path.samefile(source, output):
                raise ArgumentError("--output", output, f"another file than the log {source}")


def parse_scale(text: str) -> float:
    """The denominator of a scale: `1:50`, `50`.

    Raises
    ------
    ArgumentError : not a scale
    """
    match = re.fullmatch(r"\s*(?:1\s*[:/]\s*)?(\d+(?:[.,]\d+)?)\s*", text)
    if not match or float(match[1].replace(",", ".")) <= 0:
        raise ArgumentError("--scale", text, "a scale such as 1:50")
    return float(match[1].replace(",", "."))


def parse_range(text: str, name: str) -> tuple[float, float]:
    """A number or a range `LOW-HIGH` as (low, high).

    Raises
    ------
    ArgumentError : not a number or not rising
    """
    number = r"\d*[.,]?\d+(?:[eE][-+]?\d+)?"
    match = re.fullmatch(rf"\s*({number})\s*(?:(?:-|–|to)\s*({number}))?\s*", text)
    values = [float(part.replace(",", ".")) for part in match.groups() if part] if match else []
    if not values or min(values) <= 0 or values != sorted(values):
        raise ArgumentError(name, text, "a number above zero or a range such as 2-3")
    return values[0], values[-1]


def check_ending(output: str, allowed: Sequence[str], name: str = "--output") -> str:
    """The ending of the output file in lower case.

    Raises
    ------
    ArgumentError : the ending is none of the allowed ones
    """
    ending = Path(output).suffix.lower().lstrip(".")
    if ending not in allowed:
        raise ArgumentError(name, output, "a file ending in " + ", ".join("." + a for a in allowed))
    return ending
