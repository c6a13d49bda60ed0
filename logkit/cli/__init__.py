"""The command line: one verb a job. Commands are imported when they are called, so that help is quick."""

from __future__ import annotations

import os
import sys
from importlib import import_module
from typing import Any, NoReturn

import click

from logkit import __version__
from logkit.errors import ArgumentError, LogErrors, LogkitError, UnknownNameError

VERBS = {
    "new": "Write an empty table with the columns, units and a filled-in row to copy.",
    "check": "List everything the reader has to say about a log.",
    "tidy": "Write the normalised table, the original wording kept.",
    "draw": "Draw the column: svg, pdf or png.",
    "flow": "Write the flow history: velocity and depth ranges a phase.",
    "why": "Explain the numbers of one bed: its criteria and sources.",
    "trends": "Grading, packages, transitions, palaeocurrents.",
    "compare": "Put wells side by side: panel and comparison tables.",
    "report": "Write the report: one pdf, html or docx.",
    "export": "Write the hand-over set: csv, LAS 2.0, json, parquet.",
    "styles": "List, show and dump drawing styles; the symbol sheet.",
    "sources": "List every formula with source, validity and checks.",
}

EPILOG = """\b
Example:
  logkit new my_section.csv
  logkit check my_section.csv
  logkit draw my_section.csv -o my_section.pdf --scale 1:50

\b
Exit status: 0 done, 1 the log has errors, 2 wrong usage.
Shell completion: eval "$(_LOGKIT_COMPLETE=bash_source logkit)"  (also zsh_source, fish_source).
"""


class VerbGroup(click.Group):
    """A command group that imports a verb's module only when the verb is used."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return list(VERBS)

    def get_command(self, ctx: click.Context, name: str) -> click.Command | None:
        if name not in VERBS:
            return None
        return import_module(f"logkit.cli.{name}").command

    def resolve_command(self, ctx: click.Context, args: list[str]) -> Any:
        if args and args[0] not in VERBS:
            problem = UnknownNameError("verb", args[0], VERBS)
            raise click.UsageError(str(problem), ctx)
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        with formatter.section("Verbs"):
            formatter.write_dl(list(VERBS.items()))


@click.group(
    cls=VerbGroup,
    epilog=EPILOG,
    subcommand_metavar="VERB …",
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 110},
)
@click.version_option(__version__, prog_name="logkit")
def group() -> None:
    """Check, draw and read sedimentary logs: from a typed table of beds to an annotated column with
    ranges of flow velocity and depth, each with its published source."""


def main(arguments: list[str] | None = None) -> NoReturn:
    """Run the command line and exit with its status; errors go to stderr as sentences."""
    try:
        status = group.main(args=arguments, prog_name="logkit", standalone_mode=False)
    except click.exceptions.Abort:
        _say("Stopped.")
        sys.exit(1)
    except click.ClickException as problem:
        problem.show()
        sys.exit(problem.exit_code)
    except LogErrors as problem:
        _say(str(problem))
        sys.exit(1)
    except (UnknownNameError, ArgumentError) as problem:
        _say(str(problem))
        sys.exit(2)
    except LogkitError as problem:
        _say(str(problem))
        sys.exit(1)
    except BrokenPipeError:
        # the reader of our output went away; nothing is lost, but Python must not complain at exit
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(1)
    except OSError as problem:
        _say(
            f"{problem.strerror or problem}: {problem.filename or 'output'}. "
            "Free some space or choose another place."
        )
        sys.exit(1)
    sys.exit(status if isinstance(status, int) else 0)


def _say(message: str) -> None:
    click.echo(f"logkit: {message}", err=True)
