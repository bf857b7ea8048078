"""`headrace new scenario`"""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from headrace.errors import InputError
from headrace.outputs import files
from headrace.outputs.cli.later import REFUSED
from headrace.outputs.cli.shared import desk
from headrace.outputs.cli.terminal import emit

HostName = Annotated[str, typer.Option("--host", metavar="HOST", help="The organism.", show_default=False)]
Substrate = Annotated[str, typer.Option("--feed", metavar="SUBSTRATE", help="The carbon source.", show_default=False)]
Product = Annotated[str, typer.Option("--outlet", metavar="PRODUCT", help="The product.", show_default=False)]
Output = Annotated[Path | None, typer.Option("-o", "--output", metavar="FILE", help="Where to write it; default: printed.")]


def scenario(host: HostName = "", feed: Substrate = "", outlet: Product = "", output: Output = None) -> int:
    """A scenario file to start from, with all keys and what they accept."""
    from headrace.outputs.template import checked  # only this command writes one

    text = checked(desk(), host, feed, outlet)
    if output is None:
        emit(text, exact=True)
    else:
        files.write_new(output, text)
        emit(f"{output}\n")
    return 0


def plugin(context: typer.Context) -> None:
    """Not built yet."""
    raise InputError("headrace new plugin is not built yet", hint="examples/plugin is a whole one to start from")


def register(app: typer.Typer) -> None:
    """Add the group."""
    group = typer.Typer(help="Files to start from.", no_args_is_help=True, rich_markup_mode=None)
    group.command()(scenario)
    group.command(hidden=True, context_settings=REFUSED)(plugin)
    app.add_typer(group, name="new")
    group.callback()(about)


def about() -> None:
    """Files to start from."""
