"""Commands that are agreed but not built yet: refused by name, whatever follows."""

from __future__ import annotations

from collections.abc import Callable

import typer

from headrace.errors import InputError

NAMES = ("compare", "sweep")
REFUSED = {"allow_extra_args": True, "ignore_unknown_options": True, "help_option_names": []}


def _refusal(name: str) -> Callable[[typer.Context], None]:
    def refuse(context: typer.Context) -> None:
        """Not built yet."""
        raise InputError(f"headrace {name} is not built yet", hint="headrace --help lists what there is")

    return refuse


def register(app: typer.Typer) -> None:
    """Add a refusal for each, hidden from the help."""
    for name in NAMES:
        app.command(name, hidden=True, context_settings=REFUSED)(_refusal(name))
