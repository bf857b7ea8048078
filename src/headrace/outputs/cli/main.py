"""`headrace`: the commands put together, and the entry point."""

from __future__ import annotations

import sys
from typing import Annotated

import typer

import headrace
from headrace.outputs.cli import ceiling, drains, facts, grows, later, new, plugins, query, refills, review, seam, serve
from headrace.outputs.cli.terminal import emit

_GROUPS = (drains, refills, ceiling, grows, review, query, serve, facts, plugins, new, later)


def _version(asked: bool) -> None:
    if asked:
        from headrace.graph import load  # only this option needs the facts here

        emit(f"headrace {headrace.__version__}, facts {load().version}\n")
        raise typer.Exit


Version = Annotated[bool, typer.Option("--version", callback=_version, is_eager=True, help="Versions of program and facts.")]


def build() -> typer.Typer:
    """The command line with all its commands."""
    app = typer.Typer(
        name="headrace", no_args_is_help=True, add_completion=False, rich_markup_mode=None, pretty_exceptions_enable=False
    )
    app.callback()(about)
    for group in _GROUPS:
        group.register(app)
    return app


def about(version: Version = False) -> None:
    """Sizes what a strain design takes out of the citric acid cycle and what must be put back.

    Exit codes: 0 answered; 1 answered "no"; 2 bad input or faulty facts; 3 an optional part is not installed.
    """


def run() -> None:
    """Entry point of the command `headrace`."""
    sys.exit(seam.call(lambda: build()(prog_name="headrace", standalone_mode=False)))


if __name__ == "__main__":
    run()
