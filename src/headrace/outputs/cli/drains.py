"""`headrace drains`"""

from __future__ import annotations

import typer

from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, PhaseOption, ScenarioFile, answer, stated


def drains(
    scenario: ScenarioFile,
    format: FormatOption = Format.table,
    phase: PhaseOption = "",
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """What each outlet takes, per pool and in skeletons."""
    wished = wish(save, results, store, agent)
    return answer(scenario, lambda desk, bar: desk.drains(scenario, **stated(phase=phase)), format, wish=wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(drains)
