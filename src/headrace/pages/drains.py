"""What each outlet takes: per mole as the route has it, and at the stated rates."""

from __future__ import annotations

from fractions import Fraction

from headrace.pages.context import CARBON, RATE, Context, versions
from headrace.pages.model import Block, Column, Page, Row, Table
from headrace.pages.notes import findings
from headrace.pages.numbers import counted, joined, show
from headrace.values.answers import DrainRow, Draw, PoolTerm, Result

_PER_MOLE = "mol/mol"
_NEEDS = {"co2": "CO2", "quinol": "quinols", "one-carbon": "one-carbon units"}
_BIOMASS = "Per mole of outlet; per gDW (in mmol) where the outlet is the cell itself."


def page(result: Result, headrace: str) -> Page:
    """The page of `headrace drains`."""
    context = Context(result)
    blocks: tuple[Block, ...] = (outlets(context), pools(context), rates(context), needs(context), *findings(context))
    return Page(
        title=f"{result.case.title or context.host.label}: what the outlets take",
        subject=context.subject(),
        verdict=verdict(context),
        blocks=blocks,
        main=main(context),
        footnotes=context.footnotes(),
        cautions=context.cautions(),
        sources=tuple(context.used),
        versions=versions(result, headrace),
    )


def verdict(context: Context) -> str:
    """The net drain in one sentence."""
    shares = skeletons_by_outlet(context.result.drains)
    total = sum(shares.values())
    if not shares:
        return "Nothing is drained: the scenario has no outlet and no growth."
    taken = f"{show(total)} {RATE} of skeletons net out of the citric acid cycle"
    if len(shares) == 1:
        return f"{context.name(next(iter(shares)))} takes {taken}."
    parts = [f"{context.name(outlet)} {show(share)}" for outlet, share in shares.items()]
    return f"{counted(len(shares), 'outlet')} take {taken} ({joined(parts)})."


def skeletons_by_outlet(rows: tuple[DrainRow, ...]) -> dict[str, float]:
    """Net skeletons of each outlet in mmol/gDW/h, in the order of the rows."""
    shares: dict[str, float] = {}
    for row in rows:
        shares[row.outlet] = shares.get(row.outlet, 0.0) + row.skeletons
    return shares


def outlets(context: Context) -> Table:
    """Each outlet with its skeletons per mole and at rate."""
    shares = skeletons_by_outlet(context.result.drains)
    columns = (
        Column("outlet"),
        Column("skeletons per mole", "mol/mol", number=True),
        Column("skeletons", RATE, number=True),
        Column("routes", number=True),
    )
    rows = tuple(
        (context.mark(draw.label, draw.recalled), draw.skeletons, shares.get(draw.label), len(draw.routes))
        for draw in context.result.draws
    )
    return Table("outlets", "Skeletons by outlet", columns, rows, empty="No outlet.", note=_BIOMASS)


def routes(context: Context) -> Table:
    """The routes that each outlet's draw is made of, with reading and source."""
    columns = tuple(Column(title) for title in ("outlet", "route", "makes", "reading", "source"))
    known = context.facts.routes
    rows = tuple(
        (draw.label, known[slug].label, context.compound(known[slug].makes), *context.basis(known[slug].basis))
        for draw in context.result.draws
        for slug in draw.routes
        if slug in known
    )
    return Table("routes", "Routes of the outlets", columns, rows, grouped=True, empty="No route is used.")


def pools(context: Context) -> Table:
    """The route vector of each outlet by pool, per mole."""
    columns = (
        Column("outlet"),
        Column("pool"),
        Column("in", alike=True),
        *(Column(title, _PER_MOLE, number=True) for title in ("taken", "returned", "shuttled", "net")),
    )
    rows = tuple(
        (draw.label, context.compound(term.compound), context.place(term.place), *_term(term))
        for draw in context.result.draws
        for term in sorted(draw.pools, key=lambda term: _weight(context, term))
    )
    return Table("per-mole", "Per mole of outlet, by pool", columns, rows, grouped=True, empty="No pool is drawn on.")


def _weight(context: Context, term: PoolTerm) -> tuple[Fraction, Fraction]:
    """Pools with most skeletons come first, then those with most moles."""
    net = abs(term.taken - term.returned)
    return -net * context.facts.contents.get(term.compound, Fraction(0)), -net


def _term(term: PoolTerm) -> Row:
    return term.taken, term.returned, term.shuttled, term.taken - term.returned


def rates(context: Context) -> Table:
    """The drains at the stated rates, by pool."""
    columns = (
        Column("outlet"),
        Column("pool"),
        Column("in", alike=True),
        Column("taken", RATE, number=True),
        Column("returned", RATE, number=True),
        Column("shuttled", RATE, number=True, detail=True),
        Column("net", RATE, number=True),
        Column("carbon", CARBON, number=True),
        Column("skeletons", RATE, number=True),
    )
    rows = tuple(
        (
            context.name(row.outlet),
            context.compound(row.compound),
            context.place(row.compartment),
            row.taken,
            row.returned,
            row.shuttled,
            row.net,
            row.carbon_net,
            row.skeletons,
        )
        for row in _in_order(context)
    )
    return Table("drains", "Drains at the stated rates, by pool", columns, rows, grouped=True, empty="Nothing is drained.")


def _in_order(context: Context) -> list[DrainRow]:
    """The rows of the outlets in the order in which they are asked for."""
    order = [draw.label for draw in context.result.draws]
    return sorted(context.result.drains, key=lambda row: order.index(row.outlet) if row.outlet in order else len(order))


def needs(context: Context) -> Table:
    """What each outlet needs besides carbon, per mole (positive = used, negative = made)."""
    draws = context.result.draws
    kinds = tuple(dict.fromkeys(kind for draw in draws for kind in draw.needs))
    columns = (Column("need"), *(Column(draw.label, _PER_MOLE, number=True) for draw in draws))
    rows = tuple((_NEEDS.get(kind, context.compound(kind)), *(draw.needs.get(kind) for draw in draws)) for kind in kinds)
    note = "Positive is used, negative is made on the way."
    return Table("needs", "Needs per mole of outlet", columns, rows, empty="No needs are known.", note=note)


def main(context: Context) -> Table:
    """One row per outlet and pool with all columns: the table that csv gives."""
    terms = per_mole(context.result.draws)
    titles = ("taken", "returned", "shuttled", "net")
    columns = (
        *(Column(title) for title in ("outlet", "pool", "compound", "compartment")),
        *(Column(f"{title} per mole", _PER_MOLE, number=True) for title in titles),
        *(Column(title, RATE, number=True) for title in titles),
        Column("carbon net", CARBON, number=True),
        Column("skeletons", RATE, number=True),
    )
    rows: list[Row] = []
    for row in _in_order(context):
        term = terms.get((row.outlet, row.compound, row.compartment))
        exact: Row = _term(term) if term else (None,) * 4
        at_rate = (row.taken, row.returned, row.shuttled, row.net, row.carbon_net, row.skeletons)
        rows.append((row.outlet, row.pool, row.compound, row.compartment, *exact, *at_rate))
    return Table("drains", "Drains", columns, tuple(rows), empty="Nothing is drained.")


def per_mole(draws: tuple[Draw, ...]) -> dict[tuple[str, str, str], PoolTerm]:
    """The exact terms by outlet label, compound and compartment; several draws of one outlet are summed."""
    terms: dict[tuple[str, str, str], PoolTerm] = {}
    for draw in draws:
        for term in draw.pools:
            key = (draw.label, term.compound, term.place)
            old = terms.get(key, PoolTerm(term.compound, term.place))
            sums = (old.taken + term.taken, old.returned + term.returned, old.shuttled + term.shuttled)
            terms[key] = PoolTerm(term.compound, term.place, *sums)
    return terms
