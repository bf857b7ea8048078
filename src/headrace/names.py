"""Names that people write, and the entities they mean: slugs, labels, other names, gene symbols, EC numbers.

A name is looked up in three rounds: slugs as they stand; labels, other names, gene symbols and EC numbers
as they stand; then all of them without regard to case, accents, spaces and hyphens. The first round that
knows the name decides. Two entities in one round are an error that names both, unless their kinds have an order
(an enzyme goes before its reaction of the same name, so that all its rows are meant).
"""

from __future__ import annotations

import re
import unicodedata
from collections import defaultdict
from collections.abc import Iterable, Sequence
from difflib import get_close_matches
from functools import cache, cached_property
from typing import NamedTuple

from headrace.errors import InputError
from headrace.values.facts import Compound, Facts, Host, Outlet

_GREEK = {"α": "alpha", "β": "beta", "γ": "gamma", "δ": "delta", "ε": "epsilon", "ω": "omega"}
_NOT_PLAIN = re.compile(r"[^a-z0-9]+")
_HYPHENS = re.compile(r"(?<![0-9])-|-(?![0-9])")


class Entity(NamedTuple):
    """What a name means. kind: compound | host | outlet | gene | enzyme | ec | reaction | row ..."""

    kind: str
    slug: str


class Name(NamedTuple):
    """One way to write an entity. listed: whether messages may offer it."""

    text: str
    entity: Entity
    listed: bool = True


def slugify(text: str) -> str:
    """Plain lower-case words joined by hyphens.

    >>> slugify("L-Lysine (free base)")
    'l-lysine-free-base'
    >>> slugify("β-Alanine")
    'beta-alanine'
    """
    if not text.isascii():
        for letter, word in _GREEK.items():
            text = text.replace(letter, word)
        text = unicodedata.normalize("NFKD", text).encode("ascii", "ignore").decode()
    return _NOT_PLAIN.sub("-", text.lower()).strip("-")


def nearest(name: str, known: Iterable[str], limit: int = 3) -> tuple[str, ...]:
    """The known names that look most like `name`, best first (Ratcliff/Obershelp ratio of at least 0.6).

    >>> nearest("glucse", ["glucose", "fructose", "glycerol"])
    ('glucose',)
    """
    by_slug: dict[str, str] = {}
    for text in sorted(set(known)):
        by_slug.setdefault(slugify(text), text)
    return tuple(by_slug[slug] for slug in get_close_matches(slugify(name), by_slug, n=limit, cutoff=0.6))


class NameIndex:
    """Finds entities by name. what: the noun for messages ("host"); command: what lists all names."""

    def __init__(self, what: str, names: Iterable[Name], command: str = "", order: Sequence[str] = ()) -> None:
        self.what = what
        self.command = command
        self.order = tuple(order)
        self.names = tuple(names)
        self._slugs: dict[str, set[Entity]] = defaultdict(set)
        self._texts: dict[str, set[Entity]] = defaultdict(set)
        for name in self.names:
            self._slugs[name.entity.slug].add(name.entity)
            self._texts[name.text].add(name.entity)

    @cached_property
    def _folds(self) -> dict[str, set[Entity]]:
        """Folded texts and slugs; most look-ups end before they are needed, and folding thousands of names takes time."""
        folds: dict[str, set[Entity]] = defaultdict(set)
        for name in self.names:
            folds[_folded(name.text)].add(name.entity)
            folds[_folded(name.entity.slug)].add(name.entity)
        return folds

    def find(self, name: str) -> Entity:
        """The one entity that `name` means. Raises InputError for an unknown or an ambiguous name."""
        found = self.find_all(name)
        if len(found) == 1:
            return found[0]
        hint = f"{self.command} lists all" if self.command else ""
        if found:
            choices = ", ".join(f"{entity.slug} ({entity.kind})" for entity in found)
            raise InputError(f"{self.what} {name!r} can mean {choices}", read=name, accepted=choices, hint=hint)
        near = nearest(name, (known.text for known in self.names if known.listed and slugify(known.text)))
        raise InputError(f"unknown {self.what} {name!r}", read=name, near=near, hint=hint)

    def find_all(self, name: str) -> tuple[Entity, ...]:
        """All entities that `name` can mean, of the first kind in order; empty when it is unknown."""
        name = name.strip()
        if name and (found := self._slugs.get(name) or self._texts.get(name)):
            return self._first_kind(found)
        folded = _folded(name)
        found = self._folds.get(folded) if folded else None
        return self._first_kind(found) if found else ()

    def _first_kind(self, found: set[Entity]) -> tuple[Entity, ...]:
        for kind in self.order:
            if chosen := {entity for entity in found if entity.kind == kind}:
                return tuple(sorted(chosen))
        return tuple(sorted(found))


def compounds(facts: Facts) -> NameIndex:
    """Compounds by slug, label and other names."""
    return NameIndex("compound", _all_written("compound", facts.compounds.values()), "headrace facts show compounds")


def hosts(facts: Facts) -> NameIndex:
    """Hosts by slug, label and other names."""
    return NameIndex("host", _all_written("host", facts.hosts.values()), "headrace facts show hosts")


def outlets(facts: Facts) -> NameIndex:
    """Outlets by slug, label and other names."""
    return NameIndex("outlet", _all_written("outlet", facts.outlets.values()), "headrace facts show outlets")


def catalysts(facts: Facts, host: Host) -> NameIndex:
    """What a strain edit may name in a host: a gene symbol, an enzyme, an EC number, a reaction or a single row.

    Only what the host's rows carry is known. Where one name means several kinds, the order is gene, enzyme, EC number,
    reaction, row.
    """
    order = ("gene", "enzyme", "ec", "reaction", "row")
    what, command = "gene, enzyme, EC number or reaction", f"headrace facts show {host.slug}"
    return NameIndex(what, _catalyst_names(facts, host), command, order)


def _catalyst_names(facts: Facts, host: Host) -> Iterable[Name]:
    for row in host.reactions:
        yield from _written("row", row.slug, row.label, ())
        for gene in {gene for isozyme in row.isozymes for gene in isozyme.genes}:
            yield Name(gene, Entity("gene", gene))
        reaction = facts.reactions[row.reaction]
        yield from _written("reaction", reaction.slug, reaction.label, reaction.aliases)
        enzyme = facts.enzymes.get(reaction.enzyme)
        if enzyme is not None:
            yield from _written("enzyme", enzyme.slug, enzyme.label, enzyme.aliases)
        for number in {*reaction.ec, *(enzyme.ec if enzyme else ())}:
            yield Name(number, Entity("ec", number))
            yield Name(f"EC {number}", Entity("ec", number), listed=False)


def _all_written(kind: str, items: Iterable[Compound | Host | Outlet]) -> Iterable[Name]:
    return (name for item in items for name in _written(kind, item.slug, item.label, item.aliases))


def _written(kind: str, slug: str, label: str, aliases: Sequence[str]) -> Iterable[Name]:
    entity = Entity(kind, slug)
    return (Name(text, entity) for text in (label, slug, *aliases) if text)


@cache
def _folded(text: str) -> str:
    """Slug without hyphens, but for those between digits (EC numbers must not run together)."""
    return _HYPHENS.sub("", slugify(text))
