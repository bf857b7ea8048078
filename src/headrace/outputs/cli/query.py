"""`headrace query`"""

from __future__ import annotations

import sys
from enum import StrEnum
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from headrace.errors import InputError
from headrace.outputs.cli.progress import working
from headrace.outputs.cli.terminal import emit, width

if TYPE_CHECKING:
    from headrace.outputs.query.named import NamedQuery
    from headrace.outputs.query.run import Answered

_FOLDER = ".headrace"


class Output(StrEnum):
    """How an answer is printed."""

    table = "table"
    csv = "csv"
    tsv = "tsv"
    json = "json"
    xml = "xml"
    turtle = "turtle"
    ntriples = "ntriples"
    jsonld = "jsonld"
    rdfxml = "rdfxml"


What = Annotated[
    str, typer.Argument(metavar="[QUERY]", help="A shipped query by name (--list shows all), or a .rq file.", show_default=False)
]
Text = Annotated[str, typer.Option("--text", metavar="SPARQL", help="The query itself.", show_default=False)]
List = Annotated[bool, typer.Option("--list", help="List the shipped queries.")]
Set = Annotated[
    list[str], typer.Option("--set", metavar="NAME=VALUE", help="A shipped query's parameter, such as compound=malate.")
]
Results = Annotated[
    Path | None,
    typer.Option("--results", metavar="DIR", help="Folder of saved answers (default: .headrace here).", show_default=False),
]
Store = Annotated[str, typer.Option("--store", metavar="URL", help="Ask this SPARQL store instead.", show_default=False)]
_FORMATS = "table, csv, tsv, json or xml; for CONSTRUCT and DESCRIBE turtle, ntriples, jsonld or rdfxml."
Format = Annotated[Output, typer.Option("--format", help=_FORMATS)]
Seconds = Annotated[float, typer.Option("--time-limit", metavar="SECONDS", min=0.1, help="When to stop the query.")]


def query(
    what: What = "",
    text: Text = "",
    list_: List = False,
    set_: Set = [],  # noqa: B006
    results: Results = None,
    store: Store = "",
    format: Format = Output.table,
    seconds: Seconds = 60.0,
) -> int:
    """Ask facts and saved answers with SPARQL.

    Nothing is fetched, and nothing is changed.
    """
    if list_:
        return _listing()
    title, asked = _chosen(what, text, set_)
    with working("query"):
        answer = _asked(asked, format, results, store, seconds)
    for fault in answer.faults:
        sys.stderr.write(f"headrace: {fault}\n")
    if format is Output.table and answer.kind == "solutions":
        from headrace.outputs.query import tables  # machines' formats need no tables
        from headrace.pages import plain  # as above

        emit(plain.page(tables.page(title, answer.body), width()))
    else:
        emit(answer.body.decode(), exact=True)
    return 0


def _chosen(what: str, text: str, given: list[str]) -> tuple[str, str]:
    """Title and text of the query that is meant. Raises InputError unless exactly one is given."""
    from headrace.outputs.query import named  # `--help` needs no queries

    if bool(what) == bool(text):
        hint = "headrace query --list shows all names"
        raise InputError("one query is asked", accepted="a name, a .rq file, or --text", hint=hint)
    if text:
        return "Query", text
    if what.endswith(".rq"):
        path = Path(what)
        chosen = named.parsed(path.stem, path.read_text(encoding="utf-8"))
    else:
        chosen = named.find(what)
    return chosen.summary or chosen.name, _with_values(chosen, given)


def _with_values(chosen: NamedQuery, given: list[str]) -> str:
    if not given:
        return chosen.text
    from headrace.outputs.cli.shared import desk  # only parameters need the names of the facts

    pairs = {}
    for item in given:
        name, equals, value = item.partition("=")
        if not equals:
            raise InputError("no value", read=item, accepted="--set NAME=VALUE")
        pairs[name.strip()] = value.strip()
    return chosen.with_values(pairs, desk().facts)


def _asked(text: str, format: Output, results: Path | None, store: str, seconds: float) -> Answered:
    from headrace.outputs.query import run  # as above

    if store:
        from headrace.outputs.stores.remote import ask  # files need no network client

        return ask(store, text, format.value, seconds)
    from headrace.hooks.manager import Manager  # plugins may bring facts

    if results is not None and not results.is_dir():
        raise InputError("no such folder of saved answers", file=results, hint="headrace refills SCENARIO --save makes one")
    folder = results or Path.cwd() / _FOLDER
    return run.local(text, format.value, folder, Manager.load().fact_folders(), run.Limits(seconds=seconds))


def _listing() -> int:
    from headrace.outputs.query import named  # as above
    from headrace.pages import plain  # as above
    from headrace.pages.model import Column, Page, Table  # as above
    from headrace.pages.numbers import counted  # as above

    shipped = named.every().values()
    columns = (Column("query"), Column("parameter"), Column("what it answers"))
    rows = tuple((each.name, ", ".join(each.parameters), each.summary) for each in shipped)
    table = Table("queries", "", columns, rows)
    emit(plain.page(Page("Shipped queries", (), f"{counted(len(rows), 'query', 'queries')}.", (table,), table), width()))
    return 0


def register(app: typer.Typer) -> None:
    """Add the command."""
    app.command()(query)
