"""What was asked: the scenario as written, the case it became, and the facts that the answer rests on."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable
from pathlib import Path

from pyoxigraph import Literal

from headrace.graph import terms as facts_terms
from headrace.outputs.rdf import terms
from headrace.outputs.rdf.build import Graph, literal
from headrace.outputs.rdf.links import Links
from headrace.values.answers import RefillAnswer, Result
from headrace.values.case import Case

_SMALL = 1e-9
# Units of the quantities in force that a case carries as plain numbers, by what the kind's quantities are in.
_KIND_UNITS = {"maintenance": "mmol-per-gdw-h", "growth-associated-atp": "mmol-per-gdw", "basal-level": "mmol-per-gdw"}
_RATIO = "mol-per-mol"


def scenario(graph: Graph, result: Result) -> str:
    """The scenario's node: its title, file name and text. (The folder it lies in is nobody's business.)"""
    case = result.case
    node = graph.node("scenario", terms.SCENARIO, case.title or "scenario without a title")
    graph.add(node, facts_terms.TYPE, facts_terms.ENTITY)
    if case.title:
        graph.add(node, terms.TITLE, Literal(case.title))
    if case.path:
        graph.add(node, terms.SCENARIO_NAME, Literal(Path(case.path).name))
    if case.source_text:
        graph.add(node, terms.SCENARIO_TEXT, Literal(case.source_text))
        digest = hashlib.sha256(case.source_text.encode()).hexdigest()
        graph.add(node, facts_terms.HR + "sha256", Literal(digest))
    return node


def case(graph: Graph, links: Links) -> str:
    """The case's node: host, feeds, demands, conditions, edits and the energetics in force."""
    asked = links.result.case
    node = graph.node("case", terms.CASE, f"{asked.title or links.host.label}, resolved")
    graph.add(node, terms.HOST, facts_terms.HOST_BASE + asked.host)
    graph.add(node, terms.BREATHES, Literal(asked.oxygen))
    graph.add(node, terms.OPENED, literal(asked.opened))
    graph.add(node, terms.SLACK, literal(float(asked.slack)))
    aeration = facts_terms.HR + "aerationRate"
    numbers = {terms.GROWTH: asked.growth, terms.GROWTH_YIELD: asked.growth_yield, aeration: asked.oxygen_rate}
    for property_, value in numbers.items():
        if value is not None:
            graph.add(node, property_, literal(float(value)))
    _medium(graph, links, node)
    _edits(graph, links, node)
    _demands(graph, links, node)
    _energy(graph, asked, node)
    return node


def _medium(graph: Graph, links: Links, node: str) -> None:
    asked = links.result.case
    for number, feed in enumerate(asked.feeds, start=1):
        part = graph.node(f"case/feed/{number}", facts_terms.HR + "Feed", links.context.compound(feed.compound))
        graph.add(node, facts_terms.HR + "feeds", part)
        graph.add(part, facts_terms.HR + "substrate", facts_terms.COMPOUND_BASE + feed.compound)
        if feed.uptake is not None:
            graph.add(part, terms.UPTAKE, literal(float(feed.uptake)))
    for supplement in asked.supplements:
        graph.add(node, terms.SUPPLEMENT, facts_terms.COMPOUND_BASE + supplement.compound)
    for compound in asked.releases:
        graph.add(node, terms.RELEASES, facts_terms.COMPOUND_BASE + compound)
    for circumstance in asked.circumstances:
        graph.add(node, facts_terms.HAS_CIRCUMSTANCE, facts_terms.CIRCUMSTANCE_BASE + circumstance)


def _edits(graph: Graph, links: Links, node: str) -> None:
    asked = links.result.case
    for gene in asked.removed_genes:
        graph.add(node, terms.REMOVED_GENE, Literal(gene))
    for row in asked.removed_rows:
        for iri in links.row(row):
            graph.add(node, terms.REMOVED_ROW, iri)
    for name in asked.added:
        graph.add(node, terms.ADDED, Literal(name))
    for number, limit in enumerate(asked.limits, start=1):
        part = graph.node(f"case/limit/{number}", terms.LIMIT, limit.label)
        graph.add(node, facts_terms.HR + "limit", part)
        graph.add(part, terms.RATE, literal(float(limit.rate)))
        graph.add(part, facts_terms.HR + "originNote", Literal(limit.origin))
        for iri in _all(links, limit.rows):
            graph.add(part, terms.LIMITED_ROW, iri)


def _all(links: Links, rows: Iterable[str]) -> Iterable[str]:
    return (iri for row in rows for iri in links.row(row))


def _demands(graph: Graph, links: Links, node: str) -> None:
    for number, demand in enumerate(links.result.case.demands, start=1):
        part = graph.node(f"case/demand/{number}", terms.DEMAND, demand.label)
        graph.add(node, facts_terms.HR + "demand", part)
        for iri in links.outlet(demand.outlet):
            graph.add(part, facts_terms.HR + "outlet", iri)
        for compound, count in demand.draws.items():
            label = links.context.compound(compound)
            draw = graph.node(f"case/demand/{number}/{compound}", facts_terms.HR + "DrawnCompound", label)
            graph.add(part, facts_terms.DRAWS, draw)
            graph.add(draw, facts_terms.HAS_COMPOUND, facts_terms.COMPOUND_BASE + compound)
            graph.add(draw, facts_terms.COUNT, literal(float(count)))
        stated = {terms.RATE: demand.rate, terms.YIELD: demand.yield_per_feed, terms.MOLAR_MASS: demand.molar_mass or None}
        for property_, value in stated.items():
            if value is not None:
                graph.add(part, property_, literal(float(value)))
        if demand.form:
            graph.add(part, terms.FORM_NAME, Literal(demand.form))


def _energy(graph: Graph, asked: Case, node: str) -> None:
    """The energetics in force as QUDT quantities: value, unit, kind."""
    for kind, value in asked.energy.items():
        part = graph.node(f"case/energy/{kind}", facts_terms.QUANTITY, kind.replace("-", " "))
        graph.add(node, terms.HAS_QUANTITY, part)
        graph.add(part, facts_terms.QUANTITY_KIND, facts_terms.KIND_BASE + kind)
        graph.add(part, facts_terms.VALUE, literal(float(value)))
        graph.add(part, facts_terms.HAS_UNIT, facts_terms.UNIT_BASE + _KIND_UNITS.get(kind, _RATIO))


def rests_on(links: Links) -> tuple[str, ...]:
    """IRIs of the facts that the answer used: quantities, rows that carry a rate, refills, routes, rules, composition."""
    result = links.result
    asked, answer = result.case, result.answer
    rows: list[str] = []
    if isinstance(answer, RefillAnswer):
        rows += [rate.reaction for rate in answer.rates if abs(rate.rate) > _SMALL]
        rows += [row.refill for row in answer.refills]
    found = [*_all(links, rows), *(links.home + slug for slug in asked.quantities)]
    reactions = {row.slug: row.reaction for row in links.host.reactions}
    found += [facts_terms.REACTION_BASE + reactions[row] for row in rows if row in reactions]
    for draw in result.draws:
        found += [iri for route in draw.routes for iri in links.find("route", route)]
        found += [iri for step in draw.steps for iri in links.find("step", step)]
    found += [iri for rule in getattr(answer, "rules", ()) for iri in links.rule(rule)]
    if any(draw.scale == ("growth",) for draw in result.draws):
        found += [links.home + part.slug for part in links.host.composition]
    return tuple(dict.fromkeys(found))
