"""The query editor, and the answer to a query as a page. Works as a plain form; the script only adds comfort."""

from __future__ import annotations

import msgspec

from headrace.errors import InputError
from headrace.outputs.query import named
from headrace.outputs.query.formats import GRAPHS, SOLUTIONS
from headrace.outputs.service.entity import Value, short
from headrace.outputs.service.http import HttpError, Response
from headrace.outputs.service.pages.entity import value
from headrace.outputs.service.pages.frame import page
from headrace.outputs.service.pages.markup import Html, table, tag
from headrace.outputs.service.protocol import Outcome
from headrace.pages.model import Cell
from headrace.pages.numbers import counted

MOST_ROWS = 1000
_BLANK = """PREFIX hr: <https://w3id.org/headrace/ns#>
PREFIX skos: <http://www.w3.org/2004/02/skos/core#>
SELECT ?host ?name WHERE { ?host a hr:Host ; skos:prefLabel ?name } ORDER BY ?name
"""
_NUMERIC = ("integer", "decimal", "double", "float")


def editor(example: str = "") -> Response:
    """The empty editor, or one with a shipped query. Raises HttpError for an unknown one."""
    text = _BLANK
    if example:
        try:
            text = named.find(example).text
        except InputError as error:
            raise HttpError(404, "example", error.message) from error
    return page("Query", _form(text), _examples(), here="/sparql")


def _form(text: str, graph: bool = False) -> Html:
    area = tag(
        "textarea",
        text,
        id="query",
        name="query",
        rows="14",
        spellcheck="false",
        maxlength="1000000",
        required=True,
        aria_describedby="hint",
    )
    formats = [
        tag("button", f"Get {each.name}", name="format", value=each.name, class_="quiet")
        for each in (GRAPHS if graph else SOLUTIONS)
    ]
    hint = tag(
        "p",
        "SPARQL 1.1, read-only; facts and saved answers are one default graph, and each saved answer is a named graph.",
        id="hint",
    )
    run = tag("button", "Run", name="format", value="html", id="run")
    return tag(
        "form",
        tag("label", "The query", for_="query"),
        area,
        hint,
        tag("p", run, " ", *formats, class_="actions"),
        action="/sparql",
        method="post",
    )


def _examples() -> Html:
    shipped = named.every().items()
    items = [
        tag("li", tag("a", query.summary, href=f"/sparql?example={name}"), " ", tag("code", name)) for name, query in shipped
    ]
    return tag("section", tag("h2", "Shipped queries"), tag("ul", *items, class_="questions"))


def answer(text: str, outcome: Outcome) -> Response:
    """The answer to a query below the query itself."""
    graph = outcome.reply.kind == "graph"
    shown = tag("pre", outcome.reply.body.decode()) if graph else _solutions(outcome.reply.body)
    body = tag("section", tag("h2", "Answer"), shown, id="answer")
    return page("Query", _form(text, graph), body, _examples(), here="/sparql")


def wrong(text: str, error: HttpError) -> Response:
    """The query with what was wrong about it."""
    said = tag("section", tag("h2", "No answer"), tag("pre", str(error), class_="wrong"), id="answer", role="alert")
    return page("Query", _form(text), said, status=error.status, here="/sparql", headers=error.headers)


def _solutions(body: bytes) -> Html:
    found = msgspec.json.decode(body)
    if "boolean" in found:
        return tag("p", "Yes." if found["boolean"] else "No.", class_="verdict")
    heads, rows = found["head"]["vars"], found["results"]["bindings"]
    numeric = [any(_number(row.get(name)) is not None for row in rows) for name in heads]
    cells = [[_cell(row.get(name)) for name in heads] for row in rows[:MOST_ROWS]]
    more = f" The first {MOST_ROWS} are shown; the buttons above give all." if len(rows) > MOST_ROWS else ""
    count = tag("p", f"{counted(len(rows), 'row')}.{more}")
    return tag("div", count, table("Answer", heads, cells, numeric) if rows else None)


def _number(term: dict[str, str] | None) -> float | None:
    if term is None or term.get("datatype", "").rpartition("#")[2] not in _NUMERIC:
        return None
    try:
        return float(term["value"].replace("INF", "inf"))
    except ValueError:
        return None


def _cell(term: dict[str, str] | None) -> Cell | Html:
    if term is None:
        return None
    if (number := _number(term)) is not None:
        return number
    if term["type"] == "uri":
        return value(Value(short(term["value"]), term["value"]))
    return term["value"]
