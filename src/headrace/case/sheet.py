"""A scenario at hand with the facts: where its keys stand, the indexes of names, and the findings so far."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from contextlib import contextmanager
from functools import cached_property

from headrace import names
from headrace.case.document import place
from headrace.case.model import Document
from headrace.errors import InputError
from headrace.names import NameIndex
from headrace.values.case import Finding, Scenario
from headrace.values.facts import Basis, Compound, Facts, Host


class Sheet:
    """What the steps of `resolve` share. findings grows in the order in which things are read."""

    def __init__(self, scenario: Scenario, document: Document, facts: Facts) -> None:
        self.scenario = scenario
        self.document = document
        self.facts = facts
        self.findings: list[Finding] = []
        with self.at("host"):
            self.host: Host = facts.hosts[names.hosts(facts).find(document.host).slug]

    @contextmanager
    def at(self, key: str) -> Iterator[None]:
        """Errors inside get the scenario's file, this key (where they have none) and its line."""
        try:
            yield
        except InputError as error:
            own = self.scenario
            raise place(error.at(key=key), own.path, own.places, own.inside) from None

    @cached_property
    def compounds(self) -> NameIndex:
        return names.compounds(self.facts)

    @cached_property
    def cytosol(self) -> str:
        return next(space.slug for space in self.host.compartments if space.role == "cytosol")

    @cached_property
    def medium(self) -> str:
        return next(space.slug for space in self.host.compartments if space.role == "medium")

    def compound(self, name: str) -> Compound:
        """The compound of this name. Raises InputError with the nearest known names."""
        return self.facts.compounds[self.compounds.find(name).slug]

    def say(self, level: str, check: str, about: str, message: str, basis: Basis | None = None) -> None:
        """Add a finding; its source is what the basis cites."""
        self.findings.append(Finding(level, check, about, message, self.cited(basis.sources if basis else ())))

    def cited(self, sources: Iterable[str]) -> str:
        """Citations of source slugs, in one line."""
        return "; ".join(self.facts.sources[slug].text for slug in sources if slug in self.facts.sources)
