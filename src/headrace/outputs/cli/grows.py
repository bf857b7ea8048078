"""`headrace grows`"""

from __future__ import annotations

import typer

from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, ScenarioFile, answer


def grows(
    scenario: ScenarioFile,
    format: FormatOption = Format.table,
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """Whether the strain grows on the medium, or why not."""
    wished = wish(save, results, store, agent)
    return answer(scenario, lambda desk, bar: desk.grows(scenario), format, wish=wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(grows)
