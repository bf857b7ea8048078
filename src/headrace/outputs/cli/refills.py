"""`headrace refills`"""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

import typer

from headrace.outputs.cli.depth import (
    AlternativesOption,
    CertifyOption,
    ChangesOption,
    DensityOption,
    FiguresOption,
    PricesOption,
    asked,
    draw,
    wishes,
)
from headrace.outputs.cli.optional import OptionalNumbers
from headrace.outputs.cli.progress import Bar
from headrace.outputs.cli.saving import AgentOption, ResultsOption, SaveOption, StoreOption, wish
from headrace.outputs.cli.shared import Format, FormatOption, PhaseOption, ScenarioFile, answer, stated

if TYPE_CHECKING:
    from headrace.run import Desk
    from headrace.values.answers import Result

Rates = Annotated[bool, typer.Option("--rates", help="Add the rate of every reaction with its range over the optima.")]


Bands = Annotated[
    int, typer.Option("--bands", metavar="[N]", help="Bands over N samples of what is uncertain (1000).", show_default=False)
]
Seed = Annotated[int, typer.Option("--seed", min=0, help="Of the samples: the same seed gives the same bands.")]


def refills(
    scenario: ScenarioFile,
    format: FormatOption = Format.table,
    rates: Rates = False,
    bands: Bands = 0,
    seed: Seed = 0,
    phase: PhaseOption = "",
    alternatives: AlternativesOption = 0,
    changes: ChangesOption = False,
    prices: PricesOption = False,
    density: DensityOption = "",
    figures: FiguresOption = None,
    certify: CertifyOption = False,
    save: SaveOption = False,
    results: ResultsOption = None,
    store: StoreOption = "",
    agent: AgentOption = "",
) -> int:
    """What must be put back, by which refill, at what cost.

    Ledger, requirement per refill and group, closed refills, cost, cover, findings.
    """
    wished = wish(save, results, store, agent)
    extra = stated(phase=phase, bands=bands, seed=seed)
    options = wishes(alternatives, changes, prices, density, figures, certify)

    def ask(desk: Desk, bar: Bar) -> Result:
        result = desk.refills(asked(desk, scenario, **options), bar.say, rates, **extra)
        draw(desk, result, figures)
        return result

    return answer(scenario, ask, format, rates, wished)


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command(cls=OptionalNumbers)(refills)
