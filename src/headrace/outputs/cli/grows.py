"""`headrace grows`"""

from __future__ import annotations

import typer

from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, PhaseOption, ScenarioFile, answer, stated


def grows(
    scenario: ScenarioFile,
    format: FormatOption = Format.table,
    phase: PhaseOption = "",
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """Whether the strain grows on the medium, or why not."""
    wished = wish(save, results, store, agent)
    return answer(scenario, lambda desk, bar: desk.grows(scenario, **stated(phase=phase)), format, wish=wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(grows)
