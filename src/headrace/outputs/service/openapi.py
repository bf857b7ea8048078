"""The OpenAPI description of the service."""

from __future__ import annotations

from typing import Any

import msgspec

import headrace
from headrace import case as cases
from headrace.outputs.query.formats import GRAPHS, SOLUTIONS, Format
from headrace.outputs.service.ask import BODIES, FORM, JSON, TRIG
from headrace.outputs.service.asking_types import QUESTIONS
from headrace.outputs.service.protocol import DIRECT


def text(base: str) -> bytes:
    """The description as JSON. base: the service's address."""
    return msgspec.json.encode(document(base))


def document(base: str) -> dict[str, Any]:
    """The description."""
    return {
        "openapi": "3.1.0",
        "info": {
            "title": "Headrace",
            "version": headrace.__version__,
            "description": "Facts and saved answers on what strain designs drain from the citric acid cycle. Read-only but "
            "for answers that are saved when asked.",
            "license": {"name": "Apache-2.0", "identifier": "Apache-2.0"},
        },
        "servers": [{"url": base}],
        "paths": {
            "/sparql": {"get": _sparql_get(), "post": _sparql_post()},
            "/ask/{question}": {"post": _ask()},
            "/id/{path}": {"get": _entity()},
            "/search": {"get": _search()},
            "/void": {"get": _plain("VoID description of the data", GRAPHS)},
        },
        "components": {"schemas": {"Scenario": _scenario(), "Error": _error()}},
    }


def _scenario() -> dict[str, Any]:
    """The scenario's JSON Schema, with its own definitions inside."""
    schema = cases.schema()
    moved = msgspec.json.encode(schema).replace(b"#/$defs/", b"#/components/schemas/Scenario/$defs/")
    found: dict[str, Any] = msgspec.json.decode(moved)
    return found


def _error() -> dict[str, Any]:
    properties = {"kind": {"type": "string"}, "status": {"type": "integer"}, "message": {"type": "string"}}
    inner = {"type": "object", "required": ["kind", "message"], "properties": properties}
    return {"type": "object", "required": ["error"], "properties": {"error": inner}}


def _content(formats: tuple[Format, ...]) -> dict[str, Any]:
    return {each.media.partition(";")[0]: {"schema": {"type": "string"}} for each in formats}


def _responses(content: dict[str, Any], *statuses: str) -> dict[str, Any]:
    wrong = {"application/json": {"schema": {"$ref": "#/components/schemas/Error"}}}
    words = {
        "400": "The request is wrong.",
        "403": "Refused.",
        "404": "Nothing is known of it.",
        "406": "No format fits the Accept header.",
        "413": "The request is too large.",
        "415": "The body has a media type that is not read.",
        "500": "Stopped at a limit, or a bug; the body says which.",
        "503": "All workers are busy.",
    }
    return {"200": {"description": "The answer.", "content": content}} | {
        status: {"description": words[status], "content": wrong} for status in statuses
    }


def _parameter(
    name: str, where: str, description: str, schema: dict[str, Any] | None = None, required: bool = False
) -> dict[str, Any]:
    return {"name": name, "in": where, "description": description, "required": required, "schema": schema or {"type": "string"}}


_GRAPH_LIST: dict[str, Any] = {"type": "array", "items": {"type": "string", "format": "uri"}}
_SPARQL_ERRORS = ("400", "406", "413", "500", "503")


def _dataset() -> list[dict[str, Any]]:
    return [
        _parameter("default-graph-uri", "query", "Graphs that make the default graph.", _GRAPH_LIST),
        _parameter("named-graph-uri", "query", "Named graphs.", _GRAPH_LIST),
    ]


def _sparql_get() -> dict[str, Any]:
    query = _parameter("query", "query", "SPARQL 1.1; without it the service description is given.")
    return {
        "operationId": "query",
        "summary": "SPARQL 1.1 Protocol, query operation",
        "parameters": [query, *_dataset()],
        "responses": _responses(_content((*SOLUTIONS, *GRAPHS)), *_SPARQL_ERRORS),
    }


def _sparql_post() -> dict[str, Any]:
    form = {
        "type": "object",
        "required": ["query"],
        "properties": {"query": {"type": "string"}, "default-graph-uri": _GRAPH_LIST, "named-graph-uri": _GRAPH_LIST},
    }
    return {
        "operationId": "queryByPost",
        "summary": "SPARQL 1.1 Protocol, query operation",
        "parameters": _dataset(),
        "requestBody": {"required": True, "content": {FORM: {"schema": form}, DIRECT: {"schema": {"type": "string"}}}},
        "responses": _responses(_content((*SOLUTIONS, *GRAPHS)), *_SPARQL_ERRORS, "403", "415"),
    }


def _ask() -> dict[str, Any]:
    flag = {"type": "boolean", "default": False}
    scenario = {"$ref": "#/components/schemas/Scenario"}
    content = {
        media: {"schema": scenario if media == "application/json" else {"type": "string"}} for media in BODIES if media != FORM
    }
    return {
        "operationId": "ask",
        "summary": "Answer a scenario; the JSON is that of the command of the same name",
        "parameters": [
            _parameter("question", "path", "What is asked.", {"type": "string", "enum": list(QUESTIONS)}, required=True),
            _parameter("save", "query", "Save the answer as a graph; Location says where it is.", flag),
            _parameter("rates", "query", "With the rate of every reaction.", flag),
            _parameter("outlet", "query", "The outlet of a ceiling."),
            _parameter("agent", "query", "Who is responsible, said in what is saved."),
        ],
        "requestBody": {"required": True, "content": content},
        "responses": _responses({JSON.media: {"schema": {"type": "object"}}, **_content((*GRAPHS, TRIG))}, *_ASK_ERRORS),
    }


_ASK_ERRORS = ("400", "403", "404", "406", "413", "415", "500", "503")


def _entity() -> dict[str, Any]:
    return {
        "operationId": "dereference",
        "summary": "What is known of an address below https://w3id.org/headrace/id/",
        "parameters": [_parameter("path", "path", "The address without that base; may hold slashes.", required=True)],
        "responses": _responses({"text/html": {"schema": {"type": "string"}}, **_content(GRAPHS)}, "400", "404", "406"),
    }


def _search() -> dict[str, Any]:
    return {
        "operationId": "search",
        "summary": "Find facts and designs by name",
        "parameters": [_parameter("q", "query", "Part of a name, a gene, an EC number.")],
        "responses": _responses({"text/html": {"schema": {"type": "string"}}}, "400"),
    }


def _plain(summary: str, formats: tuple[Format, ...]) -> dict[str, Any]:
    return {"operationId": "void", "summary": summary, "responses": _responses(_content(formats), "406")}
