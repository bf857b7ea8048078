"""Who competes for what: shared pools, prices, the need of refill against yield, budgets, oxygen and heat per litre."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from typing import Any

from msgspec import Struct

from headrace.api import (
    AddedTable,
    Case,
    Document,
    DrainRow,
    Facts,
    Finding,
    RefillAnswer,
    Result,
    carbon_budget,
    curve,
    options,
    per_litre,
    pool_budgets,
    prices,
    quantity,
    settled,
    slugify,
)
from headrace_plugins.checks.competition import tables
from headrace_plugins.checks.competition.figure import figure
from headrace_plugins.refills.whole_network import EXAMPLE


class Options(Struct, frozen=True, forbid_unknown_fields=True, rename="kebab"):
    """prices: whether to work out prices, curves and budgets. density: dry cells per litre ("20 g/L"), for totals per litre."""

    prices: bool = False
    density: str = ""


class Competition:
    """Prices are exact slopes of the case's programme; the figure shows the need of refill against the yield of an outlet."""

    name = "competition"
    summary = "Shared pools, the price of one more mole, refill needed against yield, budgets, oxygen and heat per litre."
    options = Options
    example = EXAMPLE + '[plugin.competition]\nprices = true\ndensity = "20 g/L"\n'

    def checks(
        self, case: Case, answers: Sequence[RefillAnswer], rows: Sequence[DrainRow], facts: Facts
    ) -> Iterable[Finding | AddedTable]:
        chosen = options(self, case)
        density = float(quantity(chosen.density, "cell density", "plugin.competition.density")) if chosen.density else None
        if not answers or answers[0].answer != "feasible" or not (chosen.prices or density):
            return
        case_, net, solved = settled(facts, case)
        if chosen.prices:
            yield tables.shared(facts, rows)
            found = prices(net)
            yield tables.priced(facts, case_, found)
            yield tables.traded(case_, found)
            each = [curve(facts, case_, number) for number in range(len(case.demands))]
            curves = [one for one in each if one is not None]
            yield tables.bends(case_, curves)
            yield tables.lines(case_, curves)
            yield tables.budgets((*pool_budgets(net, solved.x, solved.scalars), *carbon_budget(net, solved.x, solved.scalars)))
        if density:
            yield tables.litre(facts, per_litre(net, solved, density))

    def report(self, result: Result, options: Any) -> Iterator[Document]:
        """One figure per outlet whose need was worked out."""
        held = {table.key: table for table in result.tables}
        if "breakpoints" in held:
            for outlet in dict.fromkeys(str(row[0]) for row in held["breakpoints"].rows):
                name = slugify(f"{result.case.title or result.case.host} refill against yield of {outlet}")
                text = figure(result, outlet, held["breakpoints"], held["capacity_lines"])
                yield Document(f"{name}.svg", "image/svg+xml", text)
