"""SPARQL 1.1 Protocol, query operation (sections 2.1.1 to 2.1.7 of the recommendation); update is refused."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from headrace.outputs.query import wire
from headrace.outputs.query.formats import BY_NAME, GRAPHS, SOLUTIONS, Format
from headrace.outputs.service.http import HttpError, Request, Response
from headrace.outputs.service.negotiate import HTML, choose
from headrace.outputs.service.site import Site, raise_reply

DIRECT = "application/sparql-query"
FORM = "application/x-www-form-urlencoded"
UPDATE = "application/sparql-update"
MEDIA = f"{FORM} with a query parameter, or {DIRECT}"
METHODS = "GET, HEAD, POST, OPTIONS"


class Asked(NamedTuple):
    """A query operation: the query, the dataset that the protocol gives it, and a format by name if the URL says one."""

    text: str
    default: tuple[str, ...] | None
    named: tuple[str, ...] | None
    format: str = ""


def asked(request: Request) -> Asked | None:
    """The operation that a request stands for; None for a GET without any. Raises HttpError for a wrong one."""
    if request.method in ("GET", "HEAD"):
        return _operation(request.query) if request.query else None
    if request.method != "POST":
        raise HttpError(405, "method", f"{request.method} is not part of the query operation", [("Allow", METHODS)])
    if request.media == FORM:
        return _operation((*request.form(), *((k, v) for k, v in request.query if k == "format")), required=True)
    if request.media == DIRECT:
        if any(key in ("query", "update") for key, _ in request.query):
            raise HttpError(400, "parameters", "a query both in the URL and in the body")
        return _operation((*request.query, ("query", request.text())), required=True)
    if request.media == UPDATE:
        raise _update()
    raise HttpError(415, "media-type", f"the body is {request.media or 'of no stated type'}; accepted: {MEDIA}")


def _update() -> HttpError:
    return HttpError(403, "update", "updates are refused: the data are read-only")


def _operation(pairs: Sequence[tuple[str, str]], required: bool = False) -> Asked | None:
    queries = [value for key, value in pairs if key == "query"]
    if any(key in ("update", "using-graph-uri", "using-named-graph-uri") for key, _ in pairs):
        raise _update()
    if len(queries) != 1:
        if not queries and not required and not any(key.endswith("-graph-uri") for key, _ in pairs):
            return None
        raise HttpError(400, "parameters", f"exactly one query parameter is needed, not {len(queries)}")
    default = tuple(value for key, value in pairs if key == "default-graph-uri")
    named = tuple(value for key, value in pairs if key == "named-graph-uri")
    said = bool(default or named)
    format = next((value for key, value in pairs if key == "format"), "")
    return Asked(queries[0], default if said else None, named if said else None, format)


def formats(operation: Asked, accept: str) -> tuple[Format | None, Format | None]:
    """The formats for solutions and for a graph. Raises HttpError when the client can take neither."""
    if operation.format:
        if operation.format not in BY_NAME and operation.format != HTML.name:
            raise HttpError(400, "format", f"no format of that name; known: {', '.join(BY_NAME)}")
        chosen = BY_NAME.get(operation.format, HTML)
        return (chosen if chosen in (*SOLUTIONS, HTML) else None, chosen if chosen in (*GRAPHS, HTML) else None)
    both = choose(accept, (*SOLUTIONS, HTML)), choose(accept, (*GRAPHS, HTML))
    if both == (None, None):
        raise not_acceptable((*SOLUTIONS, *GRAPHS))
    return both


def not_acceptable(offers: Sequence[Format]) -> HttpError:
    """The answer to an Accept header that none of the offers fits."""
    return HttpError(406, "not-acceptable", f"offered: {', '.join(each.media.partition(';')[0] for each in offers)}")


class Outcome(NamedTuple):
    """What became of an operation: the reply, and the format it is wanted in (HTML: the body is JSON or Turtle)."""

    reply: wire.Reply
    format: Format


def run(site: Site, operation: Asked, accept: str) -> Outcome:
    """Carry out an operation. Raises HttpError for one that has no answer in an acceptable format."""
    solutions, graph = formats(operation, accept)
    request = wire.Request(
        operation.text,
        solutions.name if solutions and solutions is not HTML else "json",
        graph.name if graph and graph is not HTML else "turtle",
        operation.default,
        operation.named,
    )
    reply = site.engine.ask(request)
    if reply.status != wire.OK:
        raise_reply(reply)
    chosen = solutions if reply.kind == "solutions" else graph
    if chosen is None:
        raise not_acceptable(SOLUTIONS if reply.kind == "solutions" else GRAPHS)
    return Outcome(reply, chosen)


def response(outcome: Outcome) -> Response:
    """The answer for a machine; with a name to save it under."""
    name = f'inline; filename="answer.{outcome.format.ending}"'
    return Response(200, outcome.reply.body, outcome.format.media, (("Content-Disposition", name),))
