"""What a strain edit names: "pyruvate carboxylase in the mitochondrion", "feedback-free aspartokinase running in reverse".

A phrase is a name, after words that only describe, with an optional compartment and direction behind it. The name is
looked up in the host first (genes, regulators, enzymes, EC numbers, reactions, rows), then in all facts.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import cached_property

import msgspec
from msgspec import Struct

from headrace import names
from headrace.errors import InputError
from headrace.names import Entity, Name, NameIndex, nearest, slugify
from headrace.values.facts import Facts, Host, HostReaction

ORDER = ("gene", "regulator", "enzyme", "ec", "reaction", "row")
NEGATIONS = frozenset(
    {"no", "not", "non", "without", "less", "removed", "deleted", "inactive", "inactivated", "lacking"}
)

_REVERSE = re.compile(r"[\s,]+(?:running )?(?:in reverse|reversed|backwards)$", re.IGNORECASE)
_BOTH = re.compile(r"[\s,]+(?:running )?(?:both ways|in both directions)$", re.IGNORECASE)
_PLACE = re.compile(r"^(.+?)[\s,]+in the ([a-z -]+)$", re.IGNORECASE)


class Phrase(Struct, frozen=True):
    """An edit taken apart. place: a compartment's slug or ""; direction: "" | reverse | both; words: what only describes.

    entity: None when nothing has this name; an enzyme's slug may be several, joined by commas, where the name is the
    stem of their names. own: whether the host knows it.
    """

    text: str
    entity: Entity | None
    own: bool = False
    place: str = ""
    direction: str = ""
    words: str = ""


class Catalysts:
    """Finds what edits name among a host's rows and all facts."""

    def __init__(self, facts: Facts, host: Host) -> None:
        self.facts = facts
        self.host = host

    @cached_property
    def own(self) -> NameIndex:
        """The names that the host's rows and expression rules carry."""
        index = names.catalysts(self.facts, self.host)
        listed = (*index.names, *(Name(gene, Entity("regulator", gene)) for gene in sorted(self.regulators)))
        return NameIndex(index.what, listed, index.command, ORDER)

    @cached_property
    def regulators(self) -> frozenset[str]:
        """Genes that expression rules name and no row carries."""
        carried = {gene for row in self.host.reactions for isozyme in row.isozymes for gene in isozyme.genes}
        named = {g for rule in self.host.expressions for g in (*rule.removed_regulators, *rule.removed_enzymes)}
        return frozenset(named - carried)

    @cached_property
    def foreign(self) -> NameIndex:
        """Enzymes, EC numbers and reactions of all facts."""
        return NameIndex("enzyme, EC number or reaction", _foreign(self.facts), "headrace facts show enzymes", ORDER)

    def over(self, rows: Iterable[HostReaction]) -> Catalysts:
        """The same for a host with these rows."""
        return Catalysts(self.facts, msgspec.structs.replace(self.host, reactions=tuple(rows)))

    def genes(self, text: str) -> tuple[str, ...]:
        """Genes that a genotype names together, such as sdhABCD: all must be the host's own. Empty when it is none."""
        match = re.fullmatch(r"([A-Za-z]{3})([A-Z]{2,})", text.strip())
        if match is None or self.own.find_all(text):
            return ()
        genes = [match[1] + letter for letter in match[2]]
        return tuple(genes) if all(self._is_gene(gene) for gene in genes) else ()

    def phrase(self, text: str, describing: bool) -> Phrase:
        """Take an edit apart. describing: whether words before the name may only describe it."""
        if entity := self._one(self.own, text):
            return Phrase(text, entity, own=True)
        name, direction = text.strip(), ""
        for pattern, word in ((_REVERSE, "reverse"), (_BOTH, "both")):
            if match := pattern.search(name):
                name, direction = name[: match.start()], word
        name, place = self._place(name)
        words = name.split()
        for start in range(len(words) if describing else 1):
            rest, before = " ".join(words[start:]), " ".join(words[:start])
            if found := self._named(rest, describing):
                return Phrase(text, *found, place, direction, _affirmed(text, before))
        return Phrase(text, None, False, place, direction)

    def unknown(self, text: str) -> InputError:
        """The error for a name that nothing has, with the nearest of the host's and all names."""
        listed = {name.text for index in (self.own, self.foreign) for name in index.names if name.listed}
        known = [name for name in listed if slugify(name)]
        words = text.split()
        parts = (" ".join(words[start:]) for start in range(len(words)))
        near = next((found for part in parts if (found := nearest(part, known))), ())
        hint = f"{self.own.command} lists the host's"
        return InputError(f"unknown gene, enzyme, EC number or reaction {text!r}", read=text, near=near, hint=hint)

    def rows(self, entity: Entity, place: str = "") -> list[HostReaction]:
        """The host's rows that an entity means, in one compartment or all."""
        return [row for row in self.host.reactions if self._means(entity, row) and _stands_in(row, place)]

    def reactions(self, entity: Entity) -> list[str]:
        """Slugs of the reactions that an entity means, host or not."""
        if entity.kind in ("gene", "row"):
            return sorted({row.reaction for row in self.rows(entity)})
        return sorted(slug for slug in self.facts.reactions if self._is_of(entity, slug))

    def label(self, entity: Entity) -> str:
        """The entity's name for people."""
        if entity.kind == "enzyme":
            return " and ".join(self.facts.enzymes[slug].label for slug in entity.slug.split(","))
        if entity.kind == "reaction":
            return self.facts.reactions[entity.slug].label
        if entity.kind == "row":
            return next(row.label for row in self.host.reactions if row.slug == entity.slug)
        return f"EC {entity.slug}" if entity.kind == "ec" else entity.slug

    def _means(self, entity: Entity, row: HostReaction) -> bool:
        if entity.kind == "gene":
            return any(entity.slug in isozyme.genes for isozyme in row.isozymes)
        return row.slug == entity.slug if entity.kind == "row" else self._is_of(entity, row.reaction)

    def _is_of(self, entity: Entity, slug: str) -> bool:
        reaction = self.facts.reactions[slug]
        if entity.kind == "enzyme":
            return reaction.enzyme in entity.slug.split(",")
        if entity.kind == "reaction":
            return slug == entity.slug
        enzyme = self.facts.enzymes.get(reaction.enzyme)
        return entity.kind == "ec" and entity.slug in {*reaction.ec, *(enzyme.ec if enzyme else ())}

    def _named(self, text: str, foreign_first: bool) -> tuple[Entity, bool] | None:
        """The entity of a name, and whether it is the host's own.

        The host's names go first, then, by choice, a whole name among all facts or a stem among the host's enzymes.
        """
        if entity := self._one(self.own, text):
            return entity, True
        mine = {self.facts.reactions[row.reaction].enzyme for row in self.host.reactions}
        variants = self._variants(text)
        chosen = [slug for slug in variants if slug in mine]
        whole = self._one(self.foreign, text) if foreign_first or not chosen else None
        if whole is not None:
            return whole, False
        if chosen:
            return Entity("enzyme", ",".join(chosen)), True
        if len(variants) > 1:
            words = f"{text!r} can mean several enzymes"
            raise InputError(words, read=text, accepted=", ".join(variants))
        return (Entity("enzyme", variants[0]), False) if variants else None

    def _variants(self, text: str) -> list[str]:
        """Enzymes whose name is a stem and more: "malic enzyme" means its NAD and its NADP variant."""
        stem = slugify(text)
        if not stem.endswith(("ase", "-enzyme")):
            return []
        enzymes = self.facts.enzymes.values()
        return sorted(
            e.slug for e in enzymes if f"{stem}-" in (e.slug[: len(stem) + 1], slugify(e.label)[: len(stem) + 1])
        )

    def _one(self, index: NameIndex, text: str) -> Entity | None:
        return index.find(text) if index.find_all(text) else None

    def _is_gene(self, gene: str) -> bool:
        return any(entity.kind in ("gene", "regulator") for entity in self.own.find_all(gene))

    def _place(self, text: str) -> tuple[str, str]:
        match = _PLACE.match(text)
        if match is None:
            return text, ""
        spaces = {slugify(name): space.slug for space in self.host.compartments for name in (space.slug, space.label)}
        asked = slugify(match[2])
        if asked not in spaces:
            labels = [space.label for space in self.host.compartments]
            words = f"{self.host.label} has no compartment {match[2]!r}"
            raise InputError(words, read=text, accepted=", ".join(labels), near=nearest(match[2], labels))
        return match[1], spaces[asked]


def _foreign(facts: Facts) -> Iterable[Name]:
    for enzyme in facts.enzymes.values():
        entity = Entity("enzyme", enzyme.slug)
        yield from (Name(text, entity) for text in (enzyme.label, *enzyme.aliases) if text)
    for reaction in facts.reactions.values():
        entity = Entity("reaction", reaction.slug)
        yield from (Name(text, entity) for text in (reaction.label, *reaction.aliases) if text)
    numbers = {number for enzyme in facts.enzymes.values() for number in enzyme.ec}
    numbers |= {number for reaction in facts.reactions.values() for number in reaction.ec}
    for number in sorted(numbers):
        yield Name(number, Entity("ec", number))
        yield Name(f"EC {number}", Entity("ec", number), listed=False)


def _stands_in(row: HostReaction, place: str) -> bool:
    return not place or place in (row.place, row.outer, row.inner)


def _affirmed(text: str, words: str) -> str:
    if not NEGATIONS.isdisjoint(word.lower() for word in words.split()):
        raise InputError("an addition can't take something away", read=text, accepted="a name in remove instead")
    return words
