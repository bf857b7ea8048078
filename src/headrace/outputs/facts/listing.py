"""Lists: all facts of a kind, all sources with what rests on them, all faults."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator, Sequence
from fractions import Fraction

from headrace.graph import Fault
from headrace.outputs.facts import words
from headrace.outputs.facts.find import PLURALS
from headrace.pages.model import Column, Page, Row, Table
from headrace.pages.numbers import counted
from headrace.values.facts import Basis, Facts

Rows = Iterator[Row]


def page(facts: Facts, plural: str) -> Page:
    """All facts of a kind ("compounds"), one row each."""
    titles, rows = _LISTS[plural]
    columns = tuple(Column(title, detail=plural == "refills" and title == "slug") for title in titles)
    table = Table(plural, plural.capitalize(), columns, tuple(rows(facts)), empty="None.")
    one = "family" if plural == "families" else plural.removesuffix("s")
    return Page(plural.capitalize(), (), f"{counted(len(table.rows), one, plural)}.", (table,), table)


def sources(facts: Facts) -> Page:
    """All sources with how many facts rest on each, by reading."""
    counts: dict[str, Counter[str]] = {slug: Counter() for slug in facts.sources}
    for basis in bases(facts):
        for source in basis.sources:
            counts.setdefault(source, Counter())[basis.reading] += 1
    columns = (
        Column("source"),
        Column("citation"),
        Column("DOI"),
        *(Column(reading, number=True) for reading in ("seen", "second-hand", "recalled")),
    )
    rows: tuple[Row, ...] = tuple(
        (slug, *_citation(facts, slug), *(count[reading] for reading in ("seen", "second-hand", "recalled")))
        for slug, count in sorted(counts.items())
    )
    table = Table("sources", "Sources", columns, rows, note="The last columns count the facts that rest on a source.")
    total = sum(counts.values(), Counter[str]())
    said = ", ".join(f"{total[reading]} {reading}" for reading in ("seen", "second-hand", "recalled"))
    verdict = f"{counted(len(rows), 'source')}; citations by reading: {said}."
    return Page("Sources of the facts", (), verdict, (table,), table, versions=f"facts {facts.version}")


def faults(found: Sequence[Fault]) -> Page:
    """What is wrong with the facts, or that nothing is."""
    columns = (Column("rule"), Column("node"), Column("what disagrees"), Column("file"))
    rows: tuple[Row, ...] = tuple((fault.rule, fault.node, fault.message, fault.file) for fault in found)
    table = Table("faults", "Faults", columns, rows, empty="None.")
    proved = (
        "Shapes, balance of every element and charge, bases, rules, canonical form, nothing from nothing, "
        "one solution per route"
    )
    verdict = f"The facts have {counted(len(rows), 'fault')}." if rows else f"The facts hold. Proved: {proved.lower()}."
    return Page("Check of the facts", (), verdict, (table,) if rows else (), table)


def bases(facts: Facts) -> Iterator[Basis]:
    """The basis of every fact that has one."""
    for table in (facts.compounds, facts.reactions, facts.routes):
        yield from (item.basis for item in table.values())
    yield from (outlet.basis for outlet in facts.outlets.values() if outlet.basis is not None)
    for host in facts.hosts.values():
        yield host.basis
        for items in (host.reactions, host.expressions, host.quantities, host.composition, host.absences, host.releases):
            yield from (item.basis for item in items)
    for numbers in (facts.kinetics, facts.formation, facts.concentrations, facts.effects, facts.vitamins):
        yield from (item.basis for item in numbers)
    yield from (basis for vitamin in facts.vitamins for basis in vitamin.supplied_basis.values())


def _citation(facts: Facts, slug: str) -> tuple[str, str]:
    known = facts.sources.get(slug)
    return (known.text, known.doi) if known else ("", "")


def _compounds(facts: Facts) -> Rows:
    for item in facts.compounds.values():
        content = facts.contents.get(item.slug)
        skeletons = "" if content is None else words.number(content)
        yield item.slug, item.label, words.formula(item.formula), item.charge, item.chebi, skeletons, item.basis.reading


def _reactions(facts: Facts) -> Rows:
    for item in facts.reactions.values():
        yield item.slug, item.label, ", ".join(item.ec), words.equation(facts, item), item.basis.reading


def _enzymes(facts: Facts) -> Rows:
    for item in facts.enzymes.values():
        cofactors = ", ".join(facts.compounds[each].label for each in item.cofactors if each in facts.compounds)
        yield item.slug, item.label, ", ".join(item.ec), cofactors


def _hosts(facts: Facts) -> Rows:
    for item in facts.hosts.values():
        compartments = ", ".join(place.label for place in item.compartments)
        yield item.slug, item.label, compartments, len(item.reactions), len(item.composition)


def _outlets(facts: Facts) -> Rows:
    for item in facts.outlets.values():
        yield item.slug, item.label, item.family, ", ".join(form.label for form in item.forms)


def _families(facts: Facts) -> Rows:
    for family in sorted({item.family for item in facts.outlets.values()}):
        yield family, ", ".join(item.label for item in facts.outlets.values() if item.family == family)


def _routes(facts: Facts) -> Rows:
    for item in facts.routes.values():
        yield item.slug, item.makes, ", ".join(item.hosts) or "any", len(item.uses), item.basis.reading


def _sources(facts: Facts) -> Rows:
    for item in facts.sources.values():
        yield item.slug, item.text, item.doi


def _units(facts: Facts) -> Rows:
    yield from facts.units.items()


def _circumstances(facts: Facts) -> Rows:
    yield from facts.circumstances.items()


def _refills(facts: Facts) -> Rows:
    """Reactions outside all routes that make skeletons in one direction; what they do says so, no tag."""
    routed = {reaction for route in facts.routes.values() for reaction in route.uses}
    for item in facts.reactions.values():
        made = sum((facts.contents.get(term.compound, Fraction(0)) * term.count for term in item.terms), start=Fraction(0))
        if item.slug in routed or item.transport or made == 0:
            continue
        owners = [host.label for host in facts.hosts.values() if any(row.reaction == item.slug for row in host.reactions)]
        way = "forward" if made > 0 else "in reverse"
        yield item.slug, item.label, ", ".join(item.ec), way, words.number(abs(made)), ", ".join(owners) or "none"


_LISTS: dict[str, tuple[tuple[str, ...], Callable[[Facts], Rows]]] = {
    "compounds": (("slug", "compound", "formula", "charge", "ChEBI", "skeletons per mole", "reading"), _compounds),
    "reactions": (("slug", "reaction", "EC", "equation", "reading"), _reactions),
    "enzymes": (("slug", "enzyme", "EC", "cofactors"), _enzymes),
    "hosts": (("slug", "host", "compartments", "reactions", "building blocks"), _hosts),
    "outlets": (("slug", "outlet", "family", "forms"), _outlets),
    "families": (("family", "outlets"), _families),
    "routes": (("slug", "makes", "hosts", "reactions", "reading"), _routes),
    "sources": (("slug", "citation", "DOI"), _sources),
    "units": (("slug", "unit"), _units),
    "circumstances": (("slug", "circumstance"), _circumstances),
    "refills": (("slug", "reaction", "EC", "makes skeletons", "skeletons per turn (mol/mol)", "hosts"), _refills),
}
assert set(_LISTS) == set(PLURALS)
