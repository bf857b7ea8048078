"""A store's answer brought into the standard's form, whole or not at all.

Some servers write older forms of the JSON results ("typed-literal", ASK as a table, true as 1), and some cut what they
give at a number of rows or at a time limit and say so in a header only, or not at all. What is cut is an error here.
"""

from __future__ import annotations

import json
from typing import Any

from pyoxigraph import QueryBoolean, QueryResultsFormat, QuerySolutions, RdfFormat, parse, parse_query_results, serialize

from headrace.outputs.query.formats import GRAPH_ENGINE, SOLUTION_ENGINE
from headrace.outputs.query.work import used_prefixes
from headrace.outputs.stores.http import Answer, StoreError

SOLUTIONS = "application/sparql-results+json"
GRAPH = "text/turtle"
_ASK = "__ask_retval"
_BOOLEAN = "http://www.w3.org/2001/XMLSchema#boolean"


def solutions(answer: Answer, format: str, asked: bool) -> bytes:
    """SELECT or ASK (asked) in a format by name. Raises StoreError for an answer that is cut or is none."""
    document = document_of(answer)
    if asked:
        document = {"head": {}, "boolean": _boolean(document)}
    else:
        rows = [{name: _term(term) for name, term in row.items()} for row in document["results"]["bindings"]]
        _refuse_cut(answer, len(rows))
        document = {"head": {"vars": list(document["head"]["vars"])}, "results": {"bindings": rows}}
    text = json.dumps(document, ensure_ascii=False).encode()
    if format == "json":
        return text
    results = parse_query_results(text, QueryResultsFormat.JSON)
    assert isinstance(results, QuerySolutions | QueryBoolean)
    return results.serialize(format=SOLUTION_ENGINE[format]) or b""


def graph(answer: Answer, format: str) -> bytes:
    """CONSTRUCT or DESCRIBE in a format by name. Raises StoreError for an answer that is cut or is none."""
    try:
        found = [quad.triple for quad in parse(answer.body, format=RdfFormat.TURTLE, rename_blank_nodes=True)]
    except (SyntaxError, ValueError) as error:
        raise StoreError(f"the store's answer is no Turtle, or was cut: {error}") from error
    _refuse_cut(answer, len(found))
    distinct = dict.fromkeys(found)
    return (
        serialize(distinct, format=GRAPH_ENGINE[format], prefixes=used_prefixes(distinct) if format == "turtle" else None) or b""
    )


def document_of(answer: Answer) -> dict[str, Any]:
    """The JSON results as they came. Raises StoreError for what is none."""
    try:
        found = json.loads(answer.body)
        if not isinstance(found, dict) or not ("boolean" in found or "bindings" in found.get("results", {})):
            raise ValueError("not the JSON results format")
    except ValueError as error:
        raise StoreError(f"the store's answer is no SPARQL result, or was cut: {error}") from error
    return found


def _boolean(document: dict[str, Any]) -> bool:
    if "boolean" in document:
        return bool(document["boolean"])
    rows = document["results"]["bindings"]
    values = {name.lower(): term["value"] for row in rows for name, term in row.items()}
    return values.get(_ASK, "0") in ("1", "true")


def _term(term: dict[str, str]) -> dict[str, str]:
    if term.get("type") == "typed-literal":
        term = {**term, "type": "literal"}
    if term.get("datatype") == _BOOLEAN and term["value"] in ("0", "1"):
        return {**term, "value": "true" if term["value"] == "1" else "false"}
    return term


def _refuse_cut(answer: Answer, rows: int) -> None:
    most = answer.headers.get("x-sparql-maxrows", "")
    if most.isdigit() and rows >= int(most):
        raise StoreError(f"the store cuts answers at {most} rows, and this one was cut")
    if answer.headers.get("x-sql-state", "").upper() == "S1TAT":
        raise StoreError("the store stopped at its time limit and gave a part of the answer")
