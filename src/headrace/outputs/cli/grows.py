"""`headrace grows`"""

from __future__ import annotations

import typer

from headrace.outputs.cli.shared import Format, FormatOption, ScenarioFile, answer


def grows(scenario: ScenarioFile, format: FormatOption = Format.table) -> int:
    """Whether the strain grows on the medium, or why not."""
    return answer(scenario, lambda desk, bar: desk.grows(scenario), format)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(grows)
