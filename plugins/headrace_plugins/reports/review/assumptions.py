"""The assumptions of a case: value, unit, origin, reading and source of each."""

from __future__ import annotations

from headrace.pages.context import RATE, Context
from headrace.pages.model import Cell, Column, Table
from headrace.pages.numbers import counted, joined, show
from headrace.values.answers import RefillAnswer
from headrace.values.case import Case
from headrace.values.facts import Basis, Quantity

STATED = "stated in the scenario"
ASSUMED = "assumed, since the scenario leaves it out"
FACT = "fact of the host"
_READINGS = ("seen", "second-hand", "recalled")
Row = tuple[Cell, ...]


def assumptions(context: Context, answer: RefillAnswer) -> Table:
    """All assumptions, those of the scenario first."""
    columns = tuple(Column(title) for title in ("assumption", "value", "unit", "origin", "reading", "source"))
    rows = (
        *_conditions(context),
        *_strain(context),
        *_outlets(context),
        *_releases(context),
        *_quantities(context),
        *_composition(context),
        *_rules(context, answer),
    )
    return Table("assumptions", "Assumptions", columns, rows)


def _stated(what: str, value: str, unit: str = "", assumed: bool = False) -> Row:
    return (what, value, unit, ASSUMED if assumed else STATED, "", "")


def _conditions(context: Context) -> list[Row]:
    case = context.case
    growth = ("growth rate", show(case.growth), "1/h") if case.growth is not None else _biomass_yield(case)
    assumed = {finding.about for finding in case.findings if finding.check == "assumed"}
    rows = [_stated(*growth, assumed="growth" in assumed)]
    for feed in case.feeds:
        value = "left out: the least that serves" if feed.uptake is None else show(feed.uptake)
        rows.append(_stated(f"feed: {context.compound(feed.compound)}", value, "" if feed.uptake is None else RATE))
    rows.append(_stated("oxygen", case.oxygen, assumed="oxygen" in assumed))
    if case.oxygen_rate is not None:
        rows.append(_stated("oxygen uptake at most", show(case.oxygen_rate), RATE))
    for item in case.supplements:
        value = "as needed" if item.rate is None else f"at most {show(item.rate)}"
        rows.append(_stated(f"supplement: {context.compound(item.compound)}", value, "" if item.rate is None else RATE))
    rows += [_stated("circumstance", context.facts.circumstances.get(slug, slug)) for slug in case.circumstances]
    return rows


def _biomass_yield(case: Case) -> tuple[str, str, str]:
    return "biomass yield", show(case.growth_yield), "gDW/mmol of feed"


def _strain(context: Context) -> list[Row]:
    case = context.case
    rows = []
    if case.removed_genes or case.removed_rows:
        names = [*case.removed_genes, *(context.name(row) for row in case.removed_rows)]
        rows.append(_stated("removed", joined(list(dict.fromkeys(names)))))
    if case.added:
        rows.append(_stated("added", joined([context.name(item) for item in case.added])))
    rows += [(f"limit: {limit.label}", show(limit.rate), RATE, limit.origin, "", "") for limit in case.limits]
    if case.slack:
        rows.append(_stated("slack of the aim", show(case.slack)))
    return rows


def _outlets(context: Context) -> list[Row]:
    rows = []
    for demand in context.case.demands:
        form = f" as {context.form(demand)}" if context.form(demand) else ""
        if demand.rate is not None:
            rows.append(_stated(f"outlet: {demand.label}{form}", show(demand.rate), RATE))
        else:
            rows.append(_stated(f"outlet: {demand.label}{form}", show(demand.yield_per_feed), "mol per mol of feed"))
    return rows


def _releases(context: Context) -> list[Row]:
    case = context.case
    names = joined([context.compound(slug) for slug in case.releases]) or "nothing"
    if case.releases_stated:
        return [_stated("may leave besides outlets", names)]
    facts = [item.basis for item in context.host.releases if item.compound in case.releases]
    return [("may leave besides outlets (usual overflow)", names, "", FACT, *_bases(context, facts))]


def _quantities(context: Context) -> list[Row]:
    known = {quantity.slug: quantity for quantity in context.host.quantities}
    used = [known[slug] for slug in context.case.quantities if slug in known]
    rows = [_quantity(context, quantity) for quantity in used]
    covered = {quantity.kind for quantity in used}
    kinds = context.facts.kinds
    rows += [_stated(kinds.get(kind, kind), show(value)) for kind, value in context.case.energy.items() if kind not in covered]
    return rows


def _quantity(context: Context, quantity: Quantity) -> Row:
    about = "" if quantity.about == context.host.slug else f" of {context.name(quantity.about)}"
    value = quantity.text
    if quantity.low is not None and quantity.high is not None:
        value += f" ({show(quantity.low)} to {show(quantity.high)})"
    unit = context.facts.units.get(quantity.unit, quantity.unit)
    kind = context.facts.kinds.get(quantity.kind, quantity.kind)
    return (kind + about, value, unit, quantity.origin, *context.basis(quantity.basis))


def _composition(context: Context) -> list[Row]:
    case, host = context.case, context.host
    if case.growth == 0:
        return []
    borrowed = context.facts.hosts.get(host.composition_borrowed_from)
    origin = f"borrowed from {borrowed.label}" if borrowed else joined(sorted({part.origin for part in host.composition}))
    value = counted(len(host.composition), "building block")
    return [("biomass composition", value, "mmol/gDW", origin, *_bases(context, [part.basis for part in host.composition]))]


def _rules(context: Context, answer: RefillAnswer) -> list[Row]:
    """The expression rules that decide about the host's refills."""
    case = context.case
    levels = {row.refill: case.levels[row.refill] for row in answer.refills if row.refill in case.levels}
    rules = {rule.slug: rule for rule in context.host.expressions}
    rows: list[Row] = []
    for refill, level in levels.items():
        for slug in level.rules:
            if slug in rules:
                what = f"{context.name(refill)}: {rules[slug].label}"
                rows.append((what, level.level, "", "expression rule", *context.basis(rules[slug].basis)))
    return rows


def _bases(context: Context, bases: list[Basis]) -> tuple[str, str]:
    """The weakest reading of several facts, and all their sources."""
    if not bases:
        return "", ""
    worst = max((basis.reading for basis in bases), key=lambda reading: _READINGS.index(reading) if reading in _READINGS else 0)
    sources = tuple(dict.fromkeys(source for basis in bases for source in basis.sources))
    return context.mark(worst, worst == "recalled"), context.cite_all(sources)
