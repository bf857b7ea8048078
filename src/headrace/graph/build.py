"""Fact files to frozen `Facts`, with every fault found on the way."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Mapping, Sequence
from fractions import Fraction
from typing import TypeVar

import msgspec
from pyoxigraph import NamedNode

from headrace.errors import FactsError
from headrace.graph import balance, terms
from headrace.graph.contents import contents
from headrace.graph.convert import Entry, Reader
from headrace.graph.depth import depth
from headrace.graph.fault import Fault
from headrace.graph.files import FactFile
from headrace.graph.hosts import HOST_LOCAL, host
from headrace.graph.read import Graph, short
from headrace.values.facts import Compound, Enzyme, Facts, Form, Outlet, Reaction, Route, Source, Term

Value = TypeVar("Value")
CHEBI = re.compile(re.escape(terms.OBO) + r"CHEBI_([1-9][0-9]*)")
EC = re.compile(re.escape(terms.UNIPROT_ENZYME) + r"([1-7](?:\.[1-9][0-9]*){2}\.n?[1-9][0-9]*)")
EC_CLASS = re.compile(r"[1-7](?:\.(?:[1-9][0-9]*|-)){3}")
RHEA = re.compile(re.escape(terms.RHEA) + r"([1-9][0-9]{4,})")


def build(files: Sequence[FactFile], version: str) -> Facts:
    """The facts of some files. Raises FactsError for the first fault, in order of file, with the number of others."""
    facts, faults = collect(Graph(files), version)
    if facts is None:
        first, *others = sorted(faults, key=lambda fault: (fault.file, fault.node, fault.rule))
        raise FactsError(first.message, file=first.file, node=first.node, others=len(others))
    return complete(facts)


def complete(facts: Facts) -> Facts:
    """The facts with what is derived from them. Raises FactsError where routes contradict one another."""
    return msgspec.structs.replace(facts, contents=contents(facts))


def collect(graph: Graph, version: str) -> tuple[Facts | None, list[Fault]]:
    """The facts, or None with the faults that forbid to use them."""
    reader = Reader(graph)
    compounds = _table(reader, terms.COMPOUND, terms.COMPOUND_BASE, compound)
    enzymes = _table(reader, terms.ENZYME, terms.ENZYME_BASE, enzyme)
    reactions = _table(reader, terms.REACTION, terms.REACTION_BASE, lambda entry, slug: reaction(entry, slug, enzymes))
    roles = _table(reader, terms.ROLE_CLASS, terms.ROLE_BASE, role)
    _balanced(reader, reactions, compounds)
    _below_a_host(reader)
    facts = Facts(
        version=version,
        compounds=compounds,
        reactions=reactions,
        enzymes=enzymes,
        hosts=_table(reader, terms.HOST, terms.HOST_BASE, lambda entry, slug: host(entry, slug, reactions)),
        outlets=_table(reader, terms.OUTLET, terms.OUTLET_BASE, outlet),
        routes=_table(reader, terms.ROUTE, terms.ROUTE_BASE, route),
        sources=_table(reader, terms.DOCUMENT, terms.SOURCE_BASE, source),
        circumstances=_table(reader, terms.CIRCUMSTANCE, terms.CIRCUMSTANCE_BASE, _label),
        implied=_implied(reader),
        units=_table(reader, terms.UNIT, terms.UNIT_BASE, _label),
        kinds=_kinds(reader),
        roles={slug: found for slug, found in roles.items() if found},
        electron_pairs=dict(pair for entry in reader.entries(terms.ROLE_CLASS) for pair in pairs(entry)),
        **depth(reader),
    )
    return (None if reader.faults else facts), reader.faults


def compound(entry: Entry, slug: str) -> Compound:
    """A chemical species with formula and charge."""
    chebi = entry.iris(terms.CHEBI, CHEBI, "obo:CHEBI_16452")
    return Compound(
        slug=slug,
        label=entry.text(terms.LABEL),
        formula=entry.atoms(),
        charge=entry.whole(terms.CHARGE),
        basis=entry.basis(),
        aliases=entry.texts(terms.ALIAS),
        chebi=f"CHEBI:{chebi[0]}" if chebi else "",
        inchikey=entry.text(terms.INCHIKEY, required=False),
        anchor=entry.flag(terms.ANCHOR),
        carrier=entry.flag(terms.CONSERVED),
        precursor=entry.flag(terms.PRECURSOR),
        membrane=entry.flag(terms.MEMBRANE_BOUND),
    )


def enzyme(entry: Entry, slug: str) -> Enzyme:
    """A catalyst with its cofactors."""
    return Enzyme(
        slug=slug,
        label=entry.text(terms.LABEL),
        ec=_ec(entry),
        cofactors=entry.refs(terms.COFACTOR, terms.COMPOUND_BASE, terms.COMPOUND),
        aliases=entry.texts(terms.ALIAS),
    )


def reaction(entry: Entry, slug: str, enzymes: Mapping[str, Enzyme]) -> Reaction:
    """A conversion; its cofactors are its own and those of its enzyme."""
    transport = entry.reader.is_a(entry.node, terms.TRANSPORT)
    catalyst = entry.ref(terms.HAS_ENZYME, terms.ENZYME_BASE, terms.ENZYME, required=False)
    own = entry.refs(terms.COFACTOR, terms.COMPOUND_BASE, terms.COMPOUND)
    shared = enzymes[catalyst].cofactors if catalyst else ()
    return Reaction(
        slug=slug,
        label=entry.text(terms.LABEL),
        terms=(*participants(entry, terms.TAKES, -1, transport), *participants(entry, terms.MAKES, 1, transport)),
        basis=entry.basis(),
        ec=_ec(entry),
        rhea=entry.iris(terms.RHEA_ID, RHEA, "rh:20844"),
        enzyme=catalyst,
        cofactors=tuple(sorted({*own, *shared})),
        lumped=entry.flag(terms.LUMPED),
        transport=transport,
        aliases=entry.texts(terms.ALIAS),
    )


def participants(entry: Entry, predicate: str, sign: int, transport: bool = False) -> tuple[Term, ...]:
    """Terms of one side of an equation, sorted; counts are positive in the files."""
    found = []
    for part in entry.parts(predicate):
        slug = part.ref(terms.HAS_COMPOUND, terms.COMPOUND_BASE, terms.COMPOUND)
        number = part.number(terms.COUNT)
        count = Fraction(1) if number is None else number
        if count <= 0:
            entry.fault("bad-count", f"counts {slug} with {count}; accepted: a number above 0")
        found.append(Term(slug, sign * count, part.word(terms.SIDE, terms.SIDES, required=transport)))
    if not found:
        entry.fault("missing-part", f"has no {'hr:takes' if sign < 0 else 'hr:makes'}")
    for term in found:
        if term.side and not transport:
            entry.fault("side-without-transport", f"{term.compound} has a side, but this is no hr:Transport")
    if len({(term.compound, term.side) for term in found}) < len(found):
        entry.fault("named-twice", "names one compound twice on one side: add the counts up")
    return tuple(sorted(found, key=lambda term: (term.compound, term.side)))


def outlet(entry: Entry, slug: str) -> Outlet:
    """Where carbon leaves for a product; what it draws may be the plugin's business."""
    draws = participants(entry, terms.DRAWS, 1) if entry.says.get(terms.DRAWS) else ()
    forms = (Form(part.text(terms.LABEL), part.atoms(), part.flag(terms.DEFAULT)) for part in entry.parts(terms.FORM))
    return Outlet(
        slug=slug,
        label=entry.text(terms.LABEL),
        family=entry.text(terms.FAMILY),
        draws={term.compound: term.count for term in draws},
        aliases=entry.texts(terms.ALIAS),
        forms=tuple(sorted(forms, key=lambda form: form.label)),
        basis=entry.basis() if entry.says.get(terms.READING) or entry.says.get(terms.SOURCE) else None,
    )


def route(entry: Entry, slug: str) -> Route:
    """The reactions that make a compound. Without a label it is called by the words of its slug."""
    return Route(
        slug=slug,
        label=entry.text(terms.LABEL, required=False) or slug.replace("-", " "),
        makes=entry.ref(terms.MAKES, terms.COMPOUND_BASE, terms.COMPOUND),
        uses=entry.refs(terms.USES, terms.REACTION_BASE, terms.REACTION),
        basis=entry.basis(),
        hosts=entry.refs(terms.HAS_HOST, terms.HOST_BASE, terms.HOST),
        rows=entry.refs(terms.USES_ROW, terms.HOST_BASE, terms.HOST_REACTION),
        preferred=entry.flag(terms.PREFERRED),
    )


def source(entry: Entry, slug: str) -> Source:
    """A citation."""
    return Source(slug, entry.text(terms.CITATION), entry.text(terms.DOI, required=False))


def role(entry: Entry, slug: str) -> tuple[str, ...]:
    """What fills a role: compounds or reactions, by slug."""
    first = entry.says.get(terms.MEMBER, [None])[0]
    if isinstance(first, NamedNode) and first.value.startswith(terms.REACTION_BASE):
        return entry.refs(terms.MEMBER, terms.REACTION_BASE, terms.REACTION)
    return entry.refs(terms.MEMBER, terms.COMPOUND_BASE, terms.COMPOUND)


def pairs(entry: Entry) -> Iterable[tuple[str, str]]:
    """(reduced, oxidised) carriers of a role."""
    for part in entry.parts(terms.PAIR):
        reduced, oxidised = (part.ref(name, terms.COMPOUND_BASE, terms.COMPOUND) for name in (terms.REDUCED, terms.OXIDISED))
        yield reduced, oxidised


def _table(reader: Reader, kind: str, base: str, make: Callable[[Entry, str], Value]) -> dict[str, Value]:
    table = {}
    for entry in reader.entries(kind):
        slug = entry.slug(base)
        table[slug] = make(entry, slug)
    return table


def _kinds(reader: Reader) -> dict[str, str]:
    """The labels of the kinds of quantities; the vocabulary's other concepts are none."""
    concepts = (entry for entry in reader.entries(terms.CONCEPT) if entry.node.startswith(terms.KIND_BASE))
    return {entry.slug(terms.KIND_BASE): entry.text(terms.LABEL) for entry in concepts}


def _implied(reader: Reader) -> dict[str, str]:
    """Circumstance -> the enzyme whose loss brings it about."""
    told = {
        entry.slug(terms.CIRCUMSTANCE_BASE): entry.ref(terms.IMPLIED_BY, terms.ENZYME_BASE, terms.ENZYME, required=False)
        for entry in reader.entries(terms.CIRCUMSTANCE)
    }
    return {circumstance: enzyme for circumstance, enzyme in told.items() if enzyme}


def _label(entry: Entry, slug: str) -> str:
    return entry.text(terms.LABEL)


def _ec(entry: Entry) -> tuple[str, ...]:
    partial = entry.texts(terms.EC_CLASS)
    for number in partial:
        if not EC_CLASS.fullmatch(number):
            entry.fault("wrong-identifier", f"hr:ecClass reads {number!r}; accepted: such as 1.1.1.-")
    return (*entry.iris(terms.EC, EC, "ec:6.4.1.1"), *partial)


def _below_a_host(reader: Reader) -> None:
    bases = tuple(f"{iri}/" for iri in reader.graph.members(terms.HOST))
    for kind in HOST_LOCAL:
        for iri in reader.graph.members(kind):
            if not iri.startswith(bases):
                reader.fault("wrong-address", iri, f"is a {short(kind)}, but stands below no hr:Host")


def _balanced(reader: Reader, reactions: Mapping[str, Reaction], compounds: Mapping[str, Compound]) -> None:
    for item in reactions.values():
        if all(term.compound in compounds for term in item.terms):
            if differences := balance.imbalance(item.terms, compounds):
                reader.fault("unbalanced", terms.REACTION_BASE + item.slug, balance.described(differences))
