"""Options whose number may be left out: `--bands` alone stands for `--bands 1000`."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Any

from typer.core import TyperCommand

# Option -> what it stands for without a number.
NUMBERS = {"--alternatives": "20", "--bands": "1000"}


class OptionalNumbers(TyperCommand):
    """A command with such options."""

    def parse_args(self, ctx: Any, args: list[str]) -> list[str]:
        """Parse the arguments with the numbers filled in."""
        return list(super().parse_args(ctx, filled(args)))


def filled(arguments: Sequence[str]) -> list[str]:
    """The arguments with a number behind each option that has none.

    >>> filled(["a.toml", "--bands", "--seed", "3"]), filled(["--bands", "50", "a.toml"])
    (['a.toml', '--bands', '1000', '--seed', '3'], ['--bands', '50', 'a.toml'])
    """
    found: list[str] = []
    for place, argument in enumerate(arguments):
        found.append(argument)
        following = arguments[place + 1] if place + 1 < len(arguments) else ""
        if argument in NUMBERS and not re.fullmatch(r"[+-]?\d+", following):
            found.append(NUMBERS[argument])
    return found
