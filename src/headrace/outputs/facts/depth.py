"""What the facts say of an enzyme's kinetics and effectors, and of a compound's concentrations and energies, as tables."""

from __future__ import annotations

from headrace.outputs.facts.words import Book
from headrace.pages.model import Column, Row, Table
from headrace.values.facts import Facts

_BASIS = (Column("reading"), Column("source"))


def of_enzyme(book: Book, slug: str) -> tuple[Table, Table]:
    """Kinetic constants and effectors of an enzyme, in all hosts."""
    facts = book.facts
    numbers: tuple[Row, ...] = tuple(
        (_host(facts, each.host), facts.kinds.get(each.kind, each.kind), book.labels([each.compound] if each.compound else []),
         each.value, facts.units.get(each.unit, each.unit), each.condition, *book.basis(each.basis))
        for each in facts.kinetics if each.enzyme == slug
    )
    effects: tuple[Row, ...] = tuple(
        (_host(facts, each.host), book.labels([each.effector]), each.sense, each.basis.note, *book.basis(each.basis))
        for each in facts.effects if each.enzyme == slug
    )
    value = Column("value", number=True)
    columns = (Column("host"), Column("constant"), Column("of"), value, Column("unit"), Column("condition"), *_BASIS)
    acting = (Column("host"), Column("effector"), Column("is an"), Column("note"), *_BASIS)
    return Table("kinetics", "Kinetics", columns, numbers), Table("effectors", "Effectors", acting, effects)


def of_compound(book: Book, slug: str) -> tuple[Table, Table]:
    """Concentrations and formation energies of a compound."""
    facts = book.facts
    levels: tuple[Row, ...] = tuple(
        (_host(facts, each.host), each.place or "whole cell", each.value, each.low, each.high, each.condition,
         *book.basis(each.basis))
        for each in facts.concentrations if each.compound == slug
    )
    energies: tuple[Row, ...] = tuple(
        (each.value, each.hydrogens, each.charge, each.ph, each.ionic_strength, *book.basis(each.basis))
        for each in facts.formation if each.compound == slug
    )
    numbers = (Column(title, "mmol/L", number=True) for title in ("value", "low", "high"))
    held = (Column("host"), Column("in"), *numbers, Column("condition"))
    formed = (
        Column("dG", "kJ/mol", number=True), Column("hydrogens", number=True), Column("charge", number=True),
        Column("pH", number=True), Column("ionic strength", "mol/L", number=True),
    )
    return (
        Table("concentrations", "Concentrations", (*held, *_BASIS), levels),
        Table("formation", "Formation energies at 25 C, of species or at a pH", (*formed, *_BASIS), energies),
    )


def _host(facts: Facts, slug: str) -> str:
    return facts.hosts[slug].label if slug in facts.hosts else "most organisms"
