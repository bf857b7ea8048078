"""One query from the command line or from Python, with the same guard, limits and workers as the service."""

from __future__ import annotations

from pathlib import Path

from msgspec import Struct

from headrace.errors import HeadraceError, InputError
from headrace.outputs.query import wire
from headrace.outputs.query.formats import GRAPHS, SOLUTIONS
from headrace.outputs.query.pool import Pool, Queries
from headrace.outputs.rdf.facts import Folders

NOTHING_FITS = {
    "solutions": f"SELECT and ASK give {', '.join(each.name for each in SOLUTIONS)}",
    "graph": f"CONSTRUCT and DESCRIBE give {', '.join(each.name for each in GRAPHS)}",
}


class Limits(Struct, frozen=True):
    """seconds that a query may run; bytes that its result may have; memory that a worker may take beyond the data."""

    seconds: float = 60.0
    largest: int = 200_000_000
    memory: int = 2 << 30


class Answered(Struct, frozen=True):
    """body in a format; kind: solutions or graph; faults: files of the results folder that are no runs."""

    body: bytes
    kind: str
    format: str
    faults: tuple[str, ...] = ()


def local(text: str, format: str, results: Path | None, extra: Folders = (), limits: Limits | None = None) -> Answered:
    """The answer to a query over the facts and a results folder. Raises InputError for a query that may not run, and
    HeadraceError when it was stopped at a limit."""
    bounds = limits or Limits()
    settings = wire.Settings("query", str(results or ""), tuple((name, str(path)) for name, path in extra), bounds.memory)
    with Pool(settings, workers=1) as pool:
        reply = Queries(pool, bounds.seconds, bounds.largest).ask(request(text, format))
    return answered(reply, format)


def request(text: str, format: str) -> wire.Request:
    """A request for a format by name, which stands for solutions or for graphs."""
    solutions = format if format in {each.name for each in SOLUTIONS} else "json"
    graph = format if format in {each.name for each in GRAPHS} else "turtle"
    return wire.Request(text, solutions, graph)


def answered(reply: wire.Reply, format: str) -> Answered:
    """The reply as an answer. Raises what `local` raises."""
    if reply.status == wire.BAD:
        raise InputError(reply.message)
    if reply.status != wire.OK:
        raise HeadraceError(reply.message)
    if format not in ("", "table", reply.format):
        raise InputError(f"this query has no answer as {format}", accepted=NOTHING_FITS[reply.kind])
    return Answered(reply.body, reply.kind, reply.format, reply.faults)
