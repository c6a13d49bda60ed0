"""`logkit styles`: list, show and dump drawing styles; draw the symbol sheet."""

from __future__ import annotations

import click

from logkit.cli.console import print_table, say
from logkit.cli.options import check_ending, output_option, quiet_option
from logkit.errors import ArgumentError


@click.command("styles")
@click.argument("name", required=False)
@click.option("--symbols", is_flag=True, help="Draw the symbol sheet of the style.")
@output_option("File to write: toml for a dump, svg, pdf or png for the symbol sheet.", required=False)
@quiet_option
def command(name: str | None, symbols: bool, output: str | None, quiet: bool) -> None:
    """List the styles; with a NAME print that style in full, ready to be changed and used as your own.

    \b
    Examples:
      logkit styles
      logkit styles report -o mine.toml
      logkit styles --symbols -o sheet.pdf
    """
    from logkit.drawing.style import dump, list_styles, load_style

    if symbols:
        from logkit.drawing.symbols import symbol_sheet

        if not output:
            raise ArgumentError("--output", None, "given with --symbols, for example -o sheet.pdf")
        check_ending(output, ("svg", "pdf", "png"))
        symbol_sheet(load_style(name or "report")).save(output)
        say(f"Wrote {output}.", quiet)
    elif name:
        text = dump(load_style(name))
        if output and output != "-":
            from logkit.files import write_atomic

            check_ending(output, ("toml",))
            write_atomic(output, text)
            say(f"Wrote {output}. Use it with: logkit draw LOG -o FILE --style {output}", quiet)
        else:
            click.echo(text, nl=False)
    else:
        print_table(("style", "for"), list_styles().items())
