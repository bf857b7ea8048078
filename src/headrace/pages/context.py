"""What the page builders share: labels for slugs, citations, and the line that says what was asked."""

from __future__ import annotations

from headrace.pages.citing import Citations
from headrace.pages.numbers import joined, show
from headrace.values.answers import Result
from headrace.values.case import Demand
from headrace.values.facts import Host

LOWER_BOUND = "A stoichiometric requirement is a lower bound from a model, not a measurement."
RECALLED_CAUTION = "Recalled facts are marked, and are to be confirmed before a decision rests on them."
RATE = "mmol/gDW/h"
CARBON = "mmol C/gDW/h"


class Context(Citations):
    """Labels and citations of one page about a result."""

    def __init__(self, result: Result) -> None:
        super().__init__(result.facts.sources)
        self.result = result
        self.case = result.case
        self.facts = result.facts
        self.host: Host = result.facts.hosts[result.case.host]
        self._places = {place.slug: place.label for place in self.host.compartments}
        self._rows = {row.slug: row.label for row in self.host.reactions} | {
            slug: row.label for slug, row in self.case.rows.items()
        }

    def compound(self, slug: str) -> str:
        """A compound's label."""
        known = self.facts.compounds.get(slug)
        return known.label if known else slug

    def place(self, slug: str) -> str:
        """A compartment's label; "cell" where none is given."""
        return self._places.get(slug, slug) or "cell"

    def name(self, slug: str) -> str:
        """The label of whatever a slug means: a row of the host, an enzyme, a reaction, a compound, an outlet, a host."""
        facts = self.facts
        if slug in self._rows:
            return self._rows[slug]
        for kind in (facts.enzymes, facts.reactions, facts.compounds, facts.outlets, facts.hosts):
            if slug in kind:
                return str(kind[slug].label)
        return facts.kinds.get(slug, slug)

    def cautions(self) -> tuple[str, ...]:
        """The sentences that every answer carries."""
        return (LOWER_BOUND, RECALLED_CAUTION) if self.recalled else (LOWER_BOUND,)

    def subject(self) -> tuple[str, ...]:
        """Who, on what, for what: host, edits, oxygen, growth, feeds, outlets, in one or two lines."""
        case = self.case
        parts = [self.host.label, *self._edits(), case.oxygen, self._growth()]
        feeds = joined([self._feed(feed.compound, feed.uptake) for feed in case.feeds])
        lines = [", ".join(part for part in parts if part) + (f"; feed: {feeds}" if feeds else "")]
        if case.demands:
            lines.append(f"Outlets: {'; '.join(self.demand(demand) for demand in case.demands)}")
        return tuple(lines)

    def _growth(self) -> str:
        if self.case.growth is None:
            return f"{show(self.case.growth_yield)} gDW/mmol of feed"
        return f"growth {show(self.case.growth)} /h" if self.case.growth else "no growth"

    def _feed(self, compound: str, uptake: float | None) -> str:
        return f"{self.compound(compound)} " + ("as little as needed" if uptake is None else f"{show(uptake)} {RATE}")

    def _edits(self) -> list[str]:
        removed, added = self.removed(), [self.name(item) for item in self.case.added]
        edits = [f"without {joined(removed)}"] if removed else []
        return edits + ([f"with {joined(added)} added"] if added else [])

    def removed(self) -> list[str]:
        """What was taken out of the strain: genes as written, else the rows that are gone."""
        return list(self.case.removed_genes) or [self.name(row) for row in self.case.removed_rows]

    def demand(self, demand: Demand) -> str:
        """An outlet as asked for: "L-lysine (hydrochloride) 1.4 mmol/gDW/h"."""
        form = f" ({self.form(demand)})" if self.form(demand) else ""
        if demand.rate is not None:
            return f"{demand.label}{form} {show(demand.rate)} {RATE}"
        return f"{demand.label}{form} {show(demand.yield_per_feed)} mol per mol of feed"

    def form(self, demand: Demand) -> str:
        """The form in which an outlet is weighed, where it has more than one."""
        known = self.facts.outlets.get(demand.outlet)
        only = known is not None and len(known.forms) < 2
        return "" if only or demand.form == demand.label else demand.form


def versions(result: Result, headrace: str) -> str:
    """The line that says what made the answer."""
    plugins = f"; plugins {', '.join(result.plugins)}" if result.plugins else ""
    return f"headrace {headrace}; facts {result.facts_version[:16]}{plugins}"
