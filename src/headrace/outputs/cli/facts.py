"""`headrace facts check | show NAME | export | sources`"""

from __future__ import annotations

from enum import StrEnum
from typing import TYPE_CHECKING, Annotated

import msgspec
import typer

from headrace.outputs.cli import seam
from headrace.outputs.cli.progress import working
from headrace.outputs.cli.push import push
from headrace.outputs.cli.shared import Format, FormatOption, desk, printed
from headrace.outputs.cli.terminal import emit

if TYPE_CHECKING:
    from headrace.pages.model import Page
    from headrace.values.facts import Facts

class Rdf(StrEnum):
    """RDF formats that any triple store reads."""

    turtle = "turtle"
    nquads = "nquads"
    jsonld = "jsonld"


RdfFormat = Annotated[Rdf, typer.Option("--format", help="Turtle, N-Quads or JSON-LD.")]
Derived = Annotated[bool, typer.Option("--derived", help="With the statements that follow from the facts.")]
Wanted = Annotated[
    str,
    typer.Argument(
        metavar="NAME",
        help="A compound, reaction, enzyme, gene, EC number, host, outlet, route or source; or a kind, such as compounds.",
        show_default=False,
    ),
]


def check(format: FormatOption = Format.table) -> int:
    """Prove that the facts hold.

    Shapes, balance of every element and charge, bases, rules, canonical form, nothing from nothing, one solution per route.
    """
    from headrace.graph.check import check  # this command alone pays for the shapes and rules
    from headrace.hooks.manager import Manager  # as above
    from headrace.outputs.facts import listing, proofs  # as above

    with working("facts"):
        faults = check(extra=Manager.load().fact_folders(), proofs=(proofs.nothing_from_nothing, proofs.one_solution_each))
    if format is Format.json:
        _json({"faults": [msgspec.structs.asdict(fault) for fault in faults]})
    else:
        _print([listing.faults(faults)], format)
    return seam.NO if faults else 0


def show(name: Wanted, format: FormatOption = Format.table) -> int:
    """What the facts say about a name, with reading and source."""
    from headrace.outputs.facts import entity, find, listing  # the other commands need none of them

    facts = desk().facts
    if name in find.PLURALS:
        pages, plain = [listing.page(facts, name)], _plain_list(facts, name)
    else:
        found = find.find(facts, name)
        pages = [entity.page(facts, each) for each in found]
        plain = [_plain_entity(facts, each.kind, each.slug) for each in found]
    if format is Format.json:
        return _json({"facts": plain, "version": facts.version})
    return _print(pages, format)


def export(format: RdfFormat = Rdf.turtle, derived: Derived = False) -> int:
    """All facts in a standard RDF format."""
    from headrace.graph import export as graphs  # RDF libraries, for this command alone
    from headrace.hooks.manager import Manager  # as above

    with working("facts"):
        text = graphs.export(format, extra=Manager.load().fact_folders(), derived=derived)
    emit(text, exact=True)
    return 0


def sources(format: FormatOption = Format.table) -> int:
    """All sources, with how many facts rest on each."""
    from headrace.outputs.facts import listing  # as above

    facts = desk().facts
    page = listing.sources(facts)
    if format is Format.json:
        names = ("slug", "citation", "doi", "seen", "second_hand", "recalled")
        rows = [dict(zip(names, row, strict=True)) for row in page.main.rows]
        return _json({"sources": rows, "version": facts.version})
    return _print([page], format)


def _plain_list(facts: Facts, plural: str) -> list[object]:
    from headrace.outputs.facts import listing  # as above

    table = listing.page(facts, plural).main
    return [dict(zip((column.title for column in table.columns), row, strict=True)) for row in table.rows]


def _plain_entity(facts: Facts, kind: str, slug: str) -> object:
    from headrace.outputs.facts import find  # as above
    from headrace.values.codec import encode_hook  # as above

    if f"{kind}s" not in find.KINDS:
        return {"kind": kind, "name": slug}
    fields = msgspec.to_builtins(find.table_of(facts, kind)[slug], enc_hook=encode_hook)
    return {"kind": kind, **fields}


def _json(document: dict[str, object]) -> int:
    from headrace.outputs import jsonout  # each format loads only what it needs

    emit(jsonout.text(document), exact=True)
    return 0


def _print(pages: list[Page], format: Format) -> int:
    chosen = pages[:1] if format is Format.csv else pages
    emit("\n".join(printed(page, format) for page in chosen), exact=format is not Format.table)
    return 0


def register(app: typer.Typer) -> None:
    """Add the group."""
    group = typer.Typer(help="What the facts say, and whether they hold.", no_args_is_help=True, rich_markup_mode=None)
    for command in (check, show, export, sources, push):
        group.command()(command)
    app.add_typer(group, name="facts")
