"""What follows from the facts, as statements: pools, what rows consume and produce, contents, refill classes.

A pool is a compound in a compartment of a host; membrane-bound compounds have their pool in the energy-coupling
membrane. A row consumes and produces in the direction it runs (in either for "both"). Skeletons per turn are
sum of content x count over a reaction's terms, in the direction the row runs; a row whose reaction is on no route is a
refill when they are positive and a removal when negative. These statements live in a graph of their own.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from fractions import Fraction

from pyoxigraph import Literal, NamedNode, Quad

from headrace.graph import terms
from headrace.values.facts import Facts, Host, HostReaction, Reaction, Term

GRAPH = NamedNode(terms.DERIVED_GRAPH)
SIGNS = {"forward": (1,), "reverse": (-1,), "both": (1, -1)}


def derived(facts: Facts) -> list[Quad]:
    """All derived statements, in the graph `terms.DERIVED_GRAPH`, with what they were derived from."""
    return [*_provenance(facts), *_contents(facts), *_hosts(facts)]


def pool(host: Host, compound: str, place: str) -> str:
    """The address of a pool."""
    return f"{terms.HOST_BASE}{host.slug}/{compound}-in-{place}"


def places(facts: Facts, host: Host, row: HostReaction, term: Term) -> str:
    """The compartment where a row meets a compound."""
    if facts.compounds[term.compound].membrane:
        return next(item.slug for item in host.compartments if item.role == "membrane")
    return {"": row.place, "outer": row.outer, "inner": row.inner}[term.side]


def skeletons(facts: Facts, reaction: Reaction) -> Fraction | None:
    """Skeletons made per turn as written; None when a compound's content is not known."""
    if any(term.compound not in facts.contents for term in reaction.terms):
        return None
    return sum((facts.contents[term.compound] * term.count for term in reaction.terms), Fraction(0))


def _provenance(facts: Facts) -> Iterator[Quad]:
    version, build = NamedNode(f"{terms.ID}facts/{facts.version}"), NamedNode(f"{terms.ID}build/{facts.version}")
    yield _say(terms.DERIVED_GRAPH, terms.TYPE, NamedNode(terms.ENTITY))
    yield _say(terms.DERIVED_GRAPH, terms.DERIVED_FROM, version)
    yield _say(terms.DERIVED_GRAPH, terms.GENERATED_BY, build)
    yield _say(version.value, terms.TYPE, NamedNode(terms.ENTITY))
    yield _say(version.value, terms.VERSION, Literal(facts.version))
    yield _say(build.value, terms.TYPE, NamedNode(terms.ACTIVITY))
    yield _say(build.value, terms.USED, version)


def _contents(facts: Facts) -> Iterator[Quad]:
    for slug, content in sorted(facts.contents.items()):
        yield _say(terms.COMPOUND_BASE + slug, terms.CONTENT, number(content))


def _hosts(facts: Facts) -> Iterator[Quad]:
    on_route = {reaction for route in facts.routes.values() for reaction in route.uses}
    for host in facts.hosts.values():
        met: dict[str, tuple[str, str]] = {}
        for row in host.reactions:
            reaction = facts.reactions[row.reaction]
            where = {term: places(facts, host, row, term) for term in reaction.terms}
            met.update({pool(host, term.compound, place): (term.compound, place) for term, place in where.items()})
            yield from _turns(host, row, where)
            if row.reaction not in on_route:
                yield from _classes(host, row, skeletons(facts, reaction))
        for address, (compound, place) in sorted(met.items()):
            yield _say(address, terms.TYPE, NamedNode(terms.POOL))
            yield _say(address, terms.HAS_COMPOUND, NamedNode(terms.COMPOUND_BASE + compound))
            yield _say(address, terms.IN_COMPARTMENT, NamedNode(f"{terms.HOST_BASE}{host.slug}/{place}"))


def _turns(host: Host, row: HostReaction, where: dict[Term, str]) -> Iterator[Quad]:
    said = set()
    for sign in SIGNS[row.direction]:
        for term, place in where.items():
            predicate = terms.PRODUCES if sign * term.count > 0 else terms.CONSUMES
            said.add((predicate, pool(host, term.compound, place)))
    for predicate, address in sorted(said):
        yield _say(_row(host, row), predicate, NamedNode(address))


def _classes(host: Host, row: HostReaction, made: Fraction | None) -> Iterator[Quad]:
    if not made:
        return
    for sign in SIGNS[row.direction]:
        yield _say(_row(host, row), terms.TYPE, NamedNode(terms.REFILL if sign * made > 0 else terms.REMOVAL))
    yield _say(_row(host, row), terms.SKELETONS_PER_TURN, number(SIGNS[row.direction][0] * made))


def number(value: Fraction) -> Literal:
    """An exact number as an integer or a decimal. Raises ValueError for one that has no finite decimal form."""
    if value.denominator == 1:
        return Literal(str(value.numerator), datatype=NamedNode(terms.INTEGER))
    rest = value.denominator
    places = 0
    while 10**places % rest:
        places += 1
        if places > 30:
            raise ValueError(f"{value} has no finite decimal form")
    digits = f"{abs(value.numerator) * 10**places // rest:0{places + 1}d}"
    sign = "-" if value < 0 else ""
    return Literal(f"{sign}{digits[:-places]}.{digits[-places:]}", datatype=NamedNode(terms.DECIMAL))


def _row(host: Host, row: HostReaction) -> str:
    return f"{terms.HOST_BASE}{host.slug}/{row.slug}"


def _say(subject: str, predicate: str, value: NamedNode | Literal) -> Quad:
    return Quad(NamedNode(subject), NamedNode(predicate), value, GRAPH)


def merged(quads: Iterable[Quad]) -> list[Quad]:
    """The same statements without their graph, for formats that have none."""
    return [Quad(quad.subject, quad.predicate, quad.object) for quad in quads]
