"""From the slugs and texts of an answer to the IRIs of what they name."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import cached_property
from typing import Any

from headrace.graph import terms
from headrace.graph.derive import pool
from headrace.names import slugify
from headrace.pages.context import Context
from headrace.pages.numbers import show
from headrace.values.answers import Result


class Links:
    """Finds what the fields of one result name. Empty where nothing is known: a text is never forced onto an entity."""

    def __init__(self, result: Result, run: str) -> None:
        self.result = result
        self.facts = result.facts
        self.run = run
        self.host = result.facts.hosts[result.case.host]
        self.home = f"{terms.HOST_BASE}{self.host.slug}/"
        self.context = Context(result)
        self._finders: dict[str, Callable[[str], tuple[str, ...]]] = {
            "compound": self.compound,
            "place": self.place,
            "row": self.row,
            "route": lambda slug: self._in(self.facts.routes, slug, terms.ROUTE_BASE),
            "rule": self.rule,
            "reading": lambda slug: (terms.HR + slug,) if slug in terms.READINGS else (),
            "step": lambda slug: self.row(slug) or self._in(self.facts.reactions, slug, terms.REACTION_BASE),
            "refill node": lambda slug: (f"{self.run}/refill/{slugify(slug)}",),
            "group node": lambda slug: (f"{self.run}/group/{slugify(slug)}",),
            "outlet": self.outlet,
            "anything": self.anything,
            "ec": self.ec,
            "source": self.source,
        }

    def find(self, what: str, value: str) -> tuple[str, ...]:
        """The IRIs that a value names; empty when it names nothing known. what: as in `shape.Field.finds`."""
        return self._finders[what](value)

    @staticmethod
    def _in(table: Mapping[str, Any], slug: str, base: str) -> tuple[str, ...]:
        return (base + slug,) if slug in table else ()

    def compound(self, slug: str) -> tuple[str, ...]:
        """A compound by slug."""
        return self._in(self.facts.compounds, slug, terms.COMPOUND_BASE)

    def place(self, slug: str) -> tuple[str, ...]:
        """A compartment of the host by slug."""
        return (self.home + slug,) if any(place.slug == slug for place in self.host.compartments) else ()

    @cached_property
    def _rows(self) -> frozenset[str]:
        return frozenset(row.slug for row in self.host.reactions)

    @cached_property
    def _rules(self) -> frozenset[str]:
        return frozenset(rule.slug for rule in self.host.expressions)

    def row(self, slug: str) -> tuple[str, ...]:
        """A row of the host by slug. (Rows that a scenario adds have no IRI among the facts.)"""
        return (self.home + slug,) if slug in self._rows else ()

    def rule(self, slug: str) -> tuple[str, ...]:
        """An expression rule of the host by slug."""
        return (self.home + slug,) if slug in self._rules else ()

    @cached_property
    def _outlets(self) -> dict[str, str]:
        """Outlets by slug, and those of the case by the label that answers show."""
        stated = {demand.label: demand.outlet for demand in self.result.case.demands}
        return {slug: slug for slug in self.facts.outlets} | {k: v for k, v in stated.items() if v in self.facts.outlets}

    def outlet(self, text: str) -> tuple[str, ...]:
        """An outlet by slug or by the label of a demand."""
        return (terms.OUTLET_BASE + self._outlets[text],) if text in self._outlets else ()

    def anything(self, slug: str) -> tuple[str, ...]:
        """The first entity with this slug: a row, an enzyme, a reaction, a compound, an outlet, a host."""
        facts = self.facts
        tables = (
            (facts.enzymes, terms.ENZYME_BASE),
            (facts.reactions, terms.REACTION_BASE),
            (facts.compounds, terms.COMPOUND_BASE),
            (facts.hosts, terms.HOST_BASE),
        )
        found = (self._in(table, slug, base) for table, base in tables)
        return self.row(slug) or next((iris for iris in found if iris), ()) or self.outlet(slug)

    @staticmethod
    def ec(number: str) -> tuple[str, ...]:
        """The IRI of a full EC number."""
        return () if "-" in number else (terms.UNIPROT_ENZYME + number,)

    @cached_property
    def _sources(self) -> dict[str, str]:
        return {source.text: slug for slug, source in self.facts.sources.items()}

    def source(self, text: str) -> tuple[str, ...]:
        """The sources of a text of citations or slugs that are separated by "; "."""
        slugs = (self._sources.get(part, part) for part in self.context.split(text))
        return tuple(terms.SOURCE_BASE + slug for slug in dict.fromkeys(slugs) if slug in self.facts.sources)

    def pool(self, item: Mapping[str, Any]) -> tuple[str, ...]:
        """The pool of a part that has a compound and a compartment."""
        compound, place = item.get("compound"), item.get("compartment")
        if not compound or not place or not self.compound(compound) or not self.place(place):
            return ()
        return (pool(self.host, compound, place),)

    def words(self, name: str, item: Mapping[str, Any]) -> str:
        """A label for a part that has none: what it is, and what it is about."""
        about = [str(item[key]) for key in ("outlet", "pool", "what", "change", "message", "check") if item.get(key)][:2]
        if not about:
            slugs = [str(item[key]) for key in ("compound", "substrate", "reaction", "compartment") if item.get(key)][:2]
            about = [self.context.place(slug) if self.place(slug) else self.context.name(slug) for slug in slugs]
        return f"{name}: {', '.join(about)}" if about else f"{name} {show(item.get('index'))}"
