"""`headrace ceiling`"""

from __future__ import annotations

from typing import Annotated

import typer

from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, PhaseOption, ScenarioFile, answer, stated

Product = Annotated[
    str, typer.Option("--outlet", metavar="PRODUCT", help="The outlet that is asked about; may be left out where there is one.")
]


def ceiling(
    scenario: ScenarioFile,
    outlet: Product = "",
    format: FormatOption = Format.table,
    phase: PhaseOption = "",
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """The largest yields of an outlet, and what binds."""
    wished = wish(save, results, store, agent)
    return answer(scenario, lambda desk, bar: desk.ceiling(scenario, outlet, **stated(phase=phase)), format, wish=wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(ceiling)
