"""Equations, formulas and bases of facts in words."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from fractions import Fraction

from headrace.pages.citing import Citations
from headrace.values.facts import Basis, Compartment, Facts, Host, HostReaction, Isozyme, Reaction, Term

ARROWS = {"forward": "->", "reverse": "<-", "both": "<->"}


class Book(Citations):
    """The facts, and the citations of one page about them."""

    def __init__(self, facts: Facts) -> None:
        super().__init__(facts.sources)
        self.facts = facts

    def known(self, basis: Basis | None) -> tuple[str, str]:
        """Reading and citation numbers of a fact that may have no basis of its own."""
        return self.basis(basis) if basis is not None else ("", "")

    def labels(self, compounds: Iterable[str]) -> str:
        """Labels of compounds, in one line."""
        known = self.facts.compounds
        return ", ".join(known[slug].label if slug in known else slug for slug in compounds)


def formula(atoms: Mapping[str, int]) -> str:
    """A formula with carbon and hydrogen first, then by letter.

    >>> formula({"O": 5, "C": 4, "H": 2})
    'C4H2O5'
    """
    order = sorted(atoms, key=lambda element: (element != "C", element != "H", element))
    return "".join(element + (str(atoms[element]) if atoms[element] != 1 else "") for element in order)


def equation(facts: Facts, reaction: Reaction, direction: str = "forward") -> str:
    """A reaction as an equation of labels; carriers say which side each compound is on."""
    left = [_term(facts, term) for term in reaction.terms if term.count < 0]
    right = [_term(facts, term) for term in reaction.terms if term.count > 0]
    return f"{' + '.join(left)} {ARROWS[direction]} {' + '.join(right)}"


def _term(facts: Facts, term: Term) -> str:
    count = abs(term.count)
    label = facts.compounds[term.compound].label if term.compound in facts.compounds else term.compound
    side = f" ({term.side} side)" if term.side else ""
    return f"{label}{side}" if count == 1 else f"{count} {label}{side}"


def genes(isozymes: tuple[Isozyme, ...]) -> str:
    """Gene logic in words: "sdhA with sdhB; or frdA"."""
    return "; or ".join(" with ".join(each.genes) for each in isozymes)


def where(host: Host, row: HostReaction) -> str:
    """The compartment of a row, or the two that a carrier joins."""
    labels = {place.slug: place.label for place in host.compartments}
    if row.place:
        return labels.get(row.place, row.place)
    return f"{labels.get(row.outer, row.outer)} / {labels.get(row.inner, row.inner)}"


def expressed(host: Host, row: HostReaction) -> str:
    """When a row is expressed: the labels of its rules with their levels."""
    rules = {rule.slug: rule for rule in host.expressions}
    said = [f"{rules[slug].label} ({rules[slug].level})" for slug in row.expression if slug in rules]
    return "; or ".join(said) or "only when a scenario adds it"


def number(value: Fraction) -> str:
    """An exact number: whole, as a short decimal, or as a fraction."""
    plain = value.denominator
    while plain % 2 == 0:
        plain //= 2
    while plain % 5 == 0:
        plain //= 5
    return str(value) if plain != 1 else f"{float(value):g}"


def compartment(place: Compartment) -> str:
    """A compartment with its role, where the role is not its name."""
    return place.label if place.role == place.slug else f"{place.label} ({place.role})"
