"""One entity as a page: what it is, where it occurs, and where that is known from."""

from __future__ import annotations

from collections.abc import Callable, Iterable

import msgspec

from headrace.names import Entity
from headrace.outputs.facts import depth, words
from headrace.outputs.facts import host as hosts
from headrace.outputs.facts.words import Book
from headrace.pages.model import Cell, Column, Page, Table
from headrace.pages.numbers import counted
from headrace.values.facts import Compound, Enzyme, Facts, HostReaction, Outlet, Reaction, Route, Source

Pairs = list[tuple[str, Cell]]
_FACT = (Column("fact"), Column("value"))
_ROW = tuple(Column(title) for title in ("host", "row", "in", "direction", "genes", "expressed when", "reading", "source"))


def page(facts: Facts, entity: Entity) -> Page:
    """The page of an entity of any kind, with its sources."""
    book = words.Book(facts)
    made = _PAGES[entity.kind](book, entity.slug)
    return msgspec.structs.replace(made, footnotes=book.footnotes(), sources=tuple(book.used), list_sources=True)


def _page(kind: str, slug: str, label: str, verdict: str, pairs: Pairs, *tables: Table) -> Page:
    rows = tuple((name, value) for name, value in pairs if value not in ("", None))
    filled = tuple(table for table in (Table(slug, "Facts", _FACT, rows), *tables) if table.rows)
    return Page(f"{label} ({kind})" if label == slug else f"{label} ({kind} {slug})", (), verdict, filled, filled[0])


def _basis(book: Book, item: Compound | Reaction | Route) -> Pairs:
    reading, cited = book.basis(item.basis)
    return [("reading", reading), ("source", cited), ("note", item.basis.note)]


def _compound(book: Book, slug: str) -> Page:
    item = book.facts.compounds[slug]
    content = book.facts.contents.get(slug)
    flags = {"anchor of a skeleton": item.anchor, "conserved carrier": item.carrier, "boundary pool of routes": item.precursor}
    pairs: Pairs = [
        ("formula at pH 7.3", words.formula(item.formula)),
        ("charge", item.charge),
        ("skeletons per mole", None if content is None else words.number(content)),
        ("is", ", ".join(name for name, holds in flags.items() if holds)),
        ("ChEBI", item.chebi),
        ("InChIKey", item.inchikey),
        ("other names", ", ".join(item.aliases)),
        *_basis(book, item),
    ]
    skeletons = "no skeleton content is known" if content is None else f"carries {words.number(content)} skeletons per mole"
    verdict = f"{item.label}: {words.formula(item.formula)}, charge {item.charge:+d}; {skeletons}."
    used = [each for each in book.facts.reactions.values() if any(term.compound == slug for term in each.terms)]
    return _page("compound", slug, item.label, verdict, pairs, _reactions(book, used), *depth.of_compound(book, slug))


def _reactions(book: Book, reactions: Iterable[Reaction]) -> Table:
    rows = tuple((each.label, ", ".join(each.ec), words.equation(book.facts, each)) for each in reactions)
    return Table("reactions", "Reactions", (Column("reaction"), Column("EC"), Column("equation")), rows)


def _reaction(book: Book, slug: str) -> Page:
    item = book.facts.reactions[slug]
    pairs: Pairs = [
        ("equation", words.equation(book.facts, item)),
        ("EC", ", ".join(item.ec)),
        ("Rhea", ", ".join(item.rhea)),
        ("enzyme", book.facts.enzymes[item.enzyme].label if item.enzyme in book.facts.enzymes else item.enzyme),
        ("cofactors", book.labels(item.cofactors)),
        ("lumped", "yes" if item.lumped else ""),
        ("other names", ", ".join(item.aliases)),
        *_basis(book, item),
    ]
    tables = (_rows(book, lambda row: row.reaction == slug), _lacking(book, slug))
    return _page("reaction", slug, item.label, f"{item.label}: {words.equation(book.facts, item)}.", pairs, *tables)


def _rows(book: Book, wanted: Callable[[HostReaction], bool]) -> Table:
    each = ((host, row) for host in book.facts.hosts.values() for row in host.reactions if wanted(row))
    rows = tuple((host.label, *hosts.row_cells(book, host, row)) for host, row in each)
    return Table("rows", "In the hosts", _ROW, rows, grouped=True)


def _lacking(book: Book, slug: str) -> Table:
    rows = tuple(
        (host.label, each.reason, *book.known(each.basis))
        for host in book.facts.hosts.values()
        for each in host.absences
        if each.reaction == slug
    )
    return Table("absences", "Known to lack it", tuple(Column(title) for title in ("host", "why", "reading", "source")), rows)


def _enzyme(book: Book, slug: str) -> Page:
    item: Enzyme = book.facts.enzymes[slug]
    catalysed = [each for each in book.facts.reactions.values() if each.enzyme == slug]
    pairs: Pairs = [
        ("EC", ", ".join(item.ec)),
        ("cofactors", book.labels(item.cofactors)),
        ("other names", ", ".join(item.aliases)),
    ]
    slugs = {each.slug for each in catalysed}
    rows = _rows(book, lambda row: row.reaction in slugs)
    verdict = f"{item.label} catalyses {counted(len(catalysed), 'reaction')}; {counted(len(rows.rows), 'row')} of hosts have it."
    return _page("enzyme", slug, item.label, verdict, pairs, _reactions(book, catalysed), rows, *depth.of_enzyme(book, slug))


def _outlet(book: Book, slug: str) -> Page:
    item: Outlet = book.facts.outlets[slug]
    drawn = ", ".join(f"{words.number(count)} {book.facts.compounds[each].label}" for each, count in item.draws.items())
    reading, cited = book.known(item.basis)
    pairs: Pairs = [
        ("family", item.family),
        ("draws per mole", drawn),
        ("forms", "; ".join(f"{form.label} {words.formula(form.formula)}" for form in item.forms)),
        ("other names", ", ".join(item.aliases)),
        ("reading", reading),
        ("source", cited),
    ]
    made = [route for route in book.facts.routes.values() if route.makes in item.draws]
    return _page("outlet", slug, item.label, f"{item.label} draws {drawn or 'by its options'}.", pairs, _routes(book, made))


def _routes(book: Book, routes: Iterable[Route]) -> Table:
    columns = tuple(Column(title) for title in ("route", "hosts", "reactions", "reading", "source"))
    rows = tuple(
        (each.label, ", ".join(each.hosts) or "any that has them all", ", ".join(each.uses), *book.known(each.basis))
        for each in routes
    )
    return Table("routes", "Routes", columns, rows)


def _route(book: Book, slug: str) -> Page:
    item = book.facts.routes[slug]
    used = [book.facts.reactions[each] for each in item.uses if each in book.facts.reactions]
    makes = book.facts.compounds[item.makes].label if item.makes in book.facts.compounds else item.makes
    pairs: Pairs = [("makes", makes), ("hosts", ", ".join(item.hosts) or "any that has them all"), *_basis(book, item)]
    verdict = f"{item.label}: {counted(len(used), 'reaction')} that make {makes}."
    return _page("route", slug, item.label, verdict, pairs, _reactions(book, used))


def _source(book: Book, slug: str) -> Page:
    item: Source = book.facts.sources[slug]
    pairs: Pairs = [("citation", item.text), ("DOI", item.doi)]
    return _page("source", slug, slug, item.text, pairs)


def _gene(book: Book, gene: str) -> Page:
    table = _rows(book, lambda row: any(gene in each.genes for each in row.isozymes))
    return _page("gene", gene, gene, f"{gene} belongs to {counted(len(table.rows), 'row')} of hosts.", [], table)


def _number(book: Book, number: str) -> Page:
    found = [each for each in book.facts.reactions.values() if number in each.ec]
    slugs = {each.slug for each in found}
    rows = _rows(book, lambda row: row.reaction in slugs)
    verdict = f"EC {number}: {counted(len(found), 'reaction')}."
    return _page("EC number", number, f"EC {number}", verdict, [], _reactions(book, found), rows)


_PAGES: dict[str, Callable[[Book, str], Page]] = {
    "compound": _compound,
    "reaction": _reaction,
    "enzyme": _enzyme,
    "outlet": _outlet,
    "route": _route,
    "source": _source,
    "host": hosts.page,
    "gene": _gene,
    "EC number": _number,
}
