"""`headrace drains`"""

from __future__ import annotations

import typer

from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, ScenarioFile, answer


def drains(
    scenario: ScenarioFile,
    format: FormatOption = Format.table,
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """What each outlet takes, per pool and in skeletons."""
    wished = wish(save, results, store, agent)
    return answer(scenario, lambda desk, bar: desk.drains(scenario), format, wish=wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(drains)
