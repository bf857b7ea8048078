"""What a name means among all facts: entities of any kind, genes and EC numbers, or a whole kind."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from headrace.names import Entity, Name, NameIndex
from headrace.values.facts import Facts

KINDS = ("compounds", "reactions", "enzymes", "hosts", "outlets", "routes", "sources")
PLURALS = (*KINDS, "families", "units", "circumstances", "refills")


def index(facts: Facts) -> NameIndex:
    """All names of all entities, kinds of entities included."""
    names = [*_entities(facts), *_genes(facts), *_numbers(facts)]
    return NameIndex("name", names, "headrace facts show followed by one of " + ", ".join(PLURALS))


def find(facts: Facts, name: str) -> tuple[Entity, ...]:
    """All entities that a name means. Raises InputError, with the nearest names, for an unknown one."""
    known = index(facts)
    found = known.find_all(name)
    return found if found else (known.find(name),)


def table_of(facts: Facts, kind: str) -> Mapping[str, Any]:
    """The entities of a kind ("compound") by slug."""
    table: Mapping[str, Any] = getattr(facts, f"{kind}s")
    return table


def _entities(facts: Facts) -> Iterator[Name]:
    for plural in KINDS:
        kind = plural.removesuffix("s")
        for slug, item in getattr(facts, plural).items():
            entity = Entity(kind, slug)
            texts = (getattr(item, "label", ""), slug, *getattr(item, "aliases", ()))
            yield from (Name(text, entity) for text in texts if text)


def _genes(facts: Facts) -> Iterator[Name]:
    genes = {gene for host in facts.hosts.values() for row in host.reactions for each in row.isozymes for gene in each.genes}
    return (Name(gene, Entity("gene", gene)) for gene in sorted(genes))


def _numbers(facts: Facts) -> Iterator[Name]:
    numbers = {number for reaction in facts.reactions.values() for number in reaction.ec}
    for number in sorted(numbers):
        yield Name(number, Entity("EC number", number))
        yield Name(f"EC {number}", Entity("EC number", number), listed=False)
