"""Statements about one organism to a frozen `Host`."""

from __future__ import annotations

import re
from collections.abc import Mapping
from fractions import Fraction

from headrace.graph import terms
from headrace.graph.convert import Entry
from headrace.graph.read import short
from headrace.values.facts import (
    Absence,
    Compartment,
    Expression,
    Host,
    HostReaction,
    Isozyme,
    Part,
    Quantity,
    Reaction,
    Release,
)

TAXON = re.compile(re.escape(terms.OBO) + r"NCBITaxon_([1-9][0-9]*)")

HOST_LOCAL = (
    terms.COMPARTMENT,
    terms.HOST_REACTION,
    terms.EXPRESSION,
    terms.BIOMASS_PART,
    terms.ABSENCE,
    terms.RELEASE,
)


def host(entry: Entry, slug: str, reactions: Mapping[str, Reaction]) -> Host:
    """An organism with everything below its address."""
    own = f"{terms.HOST_BASE}{slug}/"
    local = _Local(entry, own)
    compartments = tuple(compartment(part, own) for part in local.entries(terms.COMPARTMENT))
    _one_of_each(entry, compartments)
    taxon = entry.iris(terms.TAXON, TAXON, "obo:NCBITaxon_562")
    if not entry.says.get(terms.TAXON):
        entry.fault("missing-part", "has no hr:taxon")
    return Host(
        slug=slug,
        label=entry.text(terms.LABEL),
        taxon=taxon[0] if taxon else "",
        compartments=compartments,
        reactions=tuple(row(part, own, reactions) for part in local.entries(terms.HOST_REACTION)),
        expressions=tuple(expression(part, own) for part in local.entries(terms.EXPRESSION)),
        quantities=tuple(
            quantity(part, own) for part in local.entries(terms.QUANTITY) if not entry.reader.is_a(part.node, terms.BIOMASS_PART)
        ),
        composition=tuple(part_of_biomass(part, own) for part in local.entries(terms.BIOMASS_PART)),
        absences=tuple(absence(part, slug) for part in local.entries(terms.ABSENCE)),
        releases=tuple(release(part) for part in local.entries(terms.RELEASE)),
        proton_convention=entry.word(terms.PROTON_CONVENTION, terms.CONVENTIONS),
        basis=entry.basis(),
        aliases=entry.texts(terms.ALIAS),
        nutrients=_compounds(entry, terms.NUTRIENT),
        required_supplements=_compounds(entry, terms.REQUIRES),
        composition_borrowed_from=entry.ref(terms.COMPOSITION_FROM, terms.HOST_BASE, terms.HOST, required=False),
        composition_note=entry.text(terms.COMPOSITION_NOTE, required=False),
    )


def compartment(entry: Entry, own: str) -> Compartment:
    """A space with its role."""
    return Compartment(entry.slug(own), entry.text(terms.LABEL), entry.word(terms.ROLE, terms.ROLES))


def row(entry: Entry, own: str, reactions: Mapping[str, Reaction]) -> HostReaction:
    """A reaction as the host has it: either in a place, or between an outer and an inner one."""
    reaction = entry.ref(terms.HAS_REACTION, terms.REACTION_BASE, terms.REACTION)
    between = reactions[reaction].transport if reaction in reactions else None
    place, outer, inner = _where(entry, own, between)
    isozymes = [Isozyme(part.texts(terms.GENE)) for part in entry.parts(terms.ISOZYME)]
    if any(not isozyme.genes for isozyme in isozymes):
        entry.fault("missing-part", "has an hr:isozyme without hr:gene")
    return HostReaction(
        slug=entry.slug(own),
        label=entry.text(terms.LABEL),
        reaction=reaction,
        direction=entry.word(terms.DIRECTION, terms.DIRECTIONS),
        basis=entry.basis(),
        place=place,
        outer=outer,
        inner=inner,
        isozymes=tuple(sorted(isozymes, key=lambda isozyme: isozyme.genes)),
        expression=entry.refs(terms.HAS_EXPRESSION, own, terms.EXPRESSION),
    )


def _where(entry: Entry, own: str, between: bool | None) -> tuple[str, str, str]:
    """(place, outer, inner). between: whether the reaction moves between two places; None when it is unknown."""
    given = {name: bool(entry.says.get(name)) for name in (terms.PLACE, terms.OUTER, terms.INNER)}
    misplaced = [name for name, there in given.items() if there and between == (name == terms.PLACE)]
    if between is not None and misplaced:
        wants = "moves between hr:outer and hr:inner" if between else "stands in one hr:place: it is no hr:Transport"
        entry.fault("place-of-transport", f"states {', '.join(map(short, misplaced))}, but its reaction {wants}")
    place, outer, inner = (
        entry.ref(name, own, terms.COMPARTMENT, required=not misplaced and between == (name != terms.PLACE)) for name in given
    )
    if outer and outer == inner:
        entry.fault("place-of-transport", f"both sides are {outer}")
    return place, outer, inner


def expression(entry: Entry, own: str) -> Expression:
    """A set of conditions that suffices for a level."""
    return Expression(
        slug=entry.slug(own),
        label=entry.text(terms.LABEL),
        level=entry.word(terms.LEVEL, terms.LEVELS),
        basis=entry.basis(),
        oxygen=_oxygen(entry),
        feed_any=_compounds(entry, terms.FEED_ANY),
        feed_only=_compounds(entry, terms.FEED_ONLY),
        feed_without=_compounds(entry, terms.FEED_WITHOUT),
        feed_outside=_compounds(entry, terms.FEED_OUTSIDE),
        supplied_any=_compounds(entry, terms.SUPPLIED_ANY),
        supplied_without=_compounds(entry, terms.SUPPLIED_WITHOUT),
        removed_regulators=entry.texts(terms.REMOVED_REGULATOR),
        removed_enzymes=entry.texts(terms.REMOVED_ENZYME),
        circumstances=_circumstances(entry),
    )


def quantity(entry: Entry, own: str) -> Quantity:
    """A number with unit, range, origin, reading and source. It is about the host, one of its nodes, or any entity."""
    value = entry.number(terms.VALUE)
    low, high = entry.number(terms.LOW, required=False), entry.number(terms.HIGH, required=False)
    number = Fraction(0) if value is None else value
    if value is not None and not (number if low is None else low) <= number <= (number if high is None else high):
        texts = [entry.number_text(predicate) or "open" for predicate in (terms.VALUE, terms.LOW, terms.HIGH)]
        entry.fault("outside-range", f"is {texts[0]}, outside its own range {texts[1]} to {texts[2]}")
    return Quantity(
        slug=entry.slug(own),
        about=_about(entry, own),
        kind=entry.ref(terms.QUANTITY_KIND, terms.KIND_BASE, terms.CONCEPT),
        value=number,
        text=entry.number_text(terms.VALUE),
        unit=entry.ref(terms.HAS_UNIT, terms.UNIT_BASE, terms.UNIT),
        origin=entry.word(terms.ORIGIN, terms.ORIGINS),
        basis=entry.basis(),
        low=low,
        high=high,
        condition=_oxygen(entry) or entry.text(terms.CONDITION, required=False),
    )


def part_of_biomass(entry: Entry, own: str) -> Part:
    """A building block; its unit must be mmol per gDW, which is what the values hold."""
    unit = entry.ref(terms.HAS_UNIT, terms.UNIT_BASE, terms.UNIT)
    if unit not in ("", "mmol-per-gdw"):
        entry.fault("wrong-unit", f"is in {unit}; building blocks are in mmol-per-gdw")
    return Part(
        slug=entry.slug(own),
        compound=entry.ref(terms.HAS_COMPOUND, terms.COMPOUND_BASE, terms.COMPOUND),
        place=entry.ref(terms.PLACE, own, terms.COMPARTMENT),
        amount=entry.number(terms.VALUE) or Fraction(0),
        fraction=entry.text(terms.FRACTION),
        origin=entry.word(terms.ORIGIN, terms.ORIGINS),
        basis=entry.basis(),
        oxygen=_oxygen(entry),
    )


def absence(entry: Entry, slug: str) -> Absence:
    """A reaction that the host lacks."""
    if (named := entry.ref(terms.HAS_HOST, terms.HOST_BASE, terms.HOST, required=False)) not in ("", slug):
        entry.fault("wrong-address", f"stands below {slug}, but hr:host says {named}")
    reaction = entry.ref(terms.HAS_REACTION, terms.REACTION_BASE, terms.REACTION)
    return Absence(reaction, entry.text(terms.REASON), entry.basis())


def release(entry: Entry) -> Release:
    """A compound that leaves by itself under a condition."""
    compound = entry.ref(terms.HAS_COMPOUND, terms.COMPOUND_BASE, terms.COMPOUND)
    return Release(compound, entry.basis(), _oxygen(entry), _circumstances(entry))


class _Local:
    """The nodes below one host's address."""

    def __init__(self, entry: Entry, own: str) -> None:
        self.reader = entry.reader
        self.own = own

    def entries(self, kind: str) -> list[Entry]:
        return [entry for entry in self.reader.entries(kind) if entry.node.startswith(self.own)]


def _compounds(entry: Entry, predicate: str) -> tuple[str, ...]:
    return entry.refs(predicate, terms.COMPOUND_BASE, terms.COMPOUND)


def _circumstances(entry: Entry) -> tuple[str, ...]:
    return entry.refs(terms.HAS_CIRCUMSTANCE, terms.CIRCUMSTANCE_BASE, terms.CIRCUMSTANCE)


def _oxygen(entry: Entry) -> str:
    return entry.word(terms.OXYGEN, terms.OXYGEN_STATES, required=False)


def _about(entry: Entry, own: str) -> str:
    """The slug of what a quantity is about: below the host's address the local slug, else the last part."""
    nodes = entry.says.get(terms.ABOUT, [])
    if len(nodes) != 1:
        entry.fault("missing-part", f"needs one hr:about, has {len(nodes)}")
        return ""
    iri = nodes[0].value
    if not entry.reader.graph.file_of(iri):
        entry.fault("unknown-reference", f"hr:about names {short(iri)}: nothing is known of it")
    return iri[len(own) :] if iri.startswith(own) else iri.rsplit("/", 1)[-1]


def _one_of_each(entry: Entry, compartments: tuple[Compartment, ...]) -> None:
    for role in ("medium", "membrane", "cytosol"):
        found = [item.slug for item in compartments if item.role == role]
        if len(found) != 1:
            entry.fault("compartments", f"needs one compartment with role hr:{role}, has {len(found)} {found}")
