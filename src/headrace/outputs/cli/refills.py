"""`headrace refills`"""

from __future__ import annotations

from typing import Annotated

import typer

from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, ScenarioFile, answer

Rates = Annotated[bool, typer.Option("--rates", help="Add the rate of every reaction with its range over the optima.")]


def refills(
    scenario: ScenarioFile,
    format: FormatOption = Format.table,
    rates: Rates = False,
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """What must be put back, by which refill, at what cost.

    Ledger, requirement per refill and group, closed refills, cost, cover, findings.
    """
    wished = wish(save, results, store, agent)
    return answer(scenario, lambda desk, bar: desk.refills(scenario, bar.say, rates), format, rates, wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(refills)
