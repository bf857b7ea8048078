"""`headrace drains`"""

from __future__ import annotations

import typer

from headrace.outputs.cli.shared import Format, FormatOption, ScenarioFile, answer


def drains(scenario: ScenarioFile, format: FormatOption = Format.table) -> int:
    """What each outlet takes, per pool and in skeletons."""
    return answer(scenario, lambda desk, bar: desk.drains(scenario), format)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(drains)
