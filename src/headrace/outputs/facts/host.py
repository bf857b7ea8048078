"""A host as a page: compartments, quantities, reactions, composition, absences, usual overflow."""

from __future__ import annotations

from headrace.outputs.facts import words
from headrace.outputs.facts.words import Book
from headrace.pages.model import Cell, Column, Page, Table
from headrace.pages.numbers import counted, show
from headrace.values.facts import Host, HostReaction, Quantity


def page(book: Book, slug: str) -> Page:
    """The page of a host; its main table is that of its reactions."""
    host = book.facts.hosts[slug]
    reactions = _reactions(book, host)
    parts = (counted(len(host.reactions), "reaction row"), counted(len(host.composition), "biomass building block"))
    lacks = counted(len(host.absences), "reaction")
    verdict = f"{host.label} has {parts[0]} and {parts[1]}; {lacks} it is known to lack."
    places = ", ".join(words.compartment(place) for place in host.compartments)
    borrowed = book.facts.hosts.get(host.composition_borrowed_from)
    subject = (f"Compartments: {places}.", f"Composition borrowed from {borrowed.label}." if borrowed else "")
    blocks = (_quantities(book, host), reactions, _composition(book, host), _absences(book, host), _releases(book, host))
    return Page(f"{host.label} (host {slug})", tuple(line for line in subject if line), verdict, blocks, reactions)


def row_cells(book: Book, host: Host, row: HostReaction) -> tuple[Cell, ...]:
    """A row of a host: label, place, direction, genes, when expressed, reading, source."""
    place, genes = words.where(host, row), words.genes(row.isozymes)
    return (row.label, place, row.direction, genes, words.expressed(host, row), *book.basis(row.basis))


def _reactions(book: Book, host: Host) -> Table:
    titles = ("reaction", "in", "direction", "genes", "expressed when", "reading")
    columns = (*(Column(title) for title in titles), Column("source"), Column("slug", detail=True))
    rows = tuple((*row_cells(book, host, row), row.slug) for row in host.reactions)
    return Table("reactions", "Reactions", columns, rows)


def _quantities(book: Book, host: Host) -> Table:
    titles = ("about", "quantity", "value", "unit", "origin", "reading", "source")
    labels = {row.slug: row.label for row in host.reactions} | {host.slug: "the host"}
    ordered = sorted(host.quantities, key=lambda each: (each.about != host.slug, labels.get(each.about, "")))
    rows = tuple(
        (
            labels.get(each.about, each.about),
            kind(book, each),
            spread(each),
            book.facts.units.get(each.unit, each.unit),
            each.origin,
            *book.basis(each.basis),
        )
        for each in ordered
    )
    return Table("quantities", "Quantities", tuple(Column(title) for title in titles), rows, grouped=True)


def kind(book: Book, quantity: Quantity) -> str:
    """What a quantity is, with the oxygen that it holds for."""
    oxygen = {"present": ", with oxygen", "absent": ", without oxygen"}.get(quantity.condition, "")
    return book.facts.kinds.get(quantity.kind, quantity.kind) + oxygen


def spread(quantity: Quantity) -> str:
    """Value as written, with its range where one is known."""
    if quantity.low is None or quantity.high is None:
        return quantity.text
    return f"{quantity.text} ({show(quantity.low)} to {show(quantity.high)})"


def _composition(book: Book, host: Host) -> Table:
    columns = (
        Column("building block"),
        Column("in"),
        Column("amount", "mmol/gDW", number=True),
        Column("fraction"),
        Column("reading"),
        Column("source"),
    )
    labels = {place.slug: place.label for place in host.compartments}
    rows = tuple(
        (
            book.facts.compounds[each.compound].label,
            labels.get(each.place, each.place),
            each.amount,
            each.fraction,
            *book.basis(each.basis),
        )
        for each in host.composition
    )
    return Table("composition", "Biomass composition", columns, rows, empty="No composition is known.")


def _absences(book: Book, host: Host) -> Table:
    columns = (Column("reaction"), Column("why"), Column("reading"), Column("source"))
    rows = tuple((_label(book, each.reaction), each.reason, *book.basis(each.basis)) for each in host.absences)
    return Table("absences", "Known to lack", columns, rows, empty="Nothing is noted as absent.")


def _releases(book: Book, host: Host) -> Table:
    columns = (Column("compound"), Column("oxygen"), Column("reading"), Column("source"))
    rows = tuple(
        (book.facts.compounds[each.compound].label, each.oxygen or "either", *book.basis(each.basis)) for each in host.releases
    )
    return Table("releases", "Usual overflow", columns, rows, empty="None is known.")


def _label(book: Book, slug: str) -> str:
    known = book.facts.reactions.get(slug)
    return known.label if known else slug
