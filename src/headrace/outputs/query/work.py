"""One query, in a worker process."""

from __future__ import annotations

import io
import re
from collections.abc import Iterable, Iterator
from contextlib import contextmanager
from typing import IO, Any, cast

import msgspec
from pyoxigraph import NamedNode, QueryBoolean, QuerySolutions, QueryTriples, Triple, serialize

from headrace.errors import InputError
from headrace.outputs.query import guard, wire
from headrace.outputs.query.dataset import Dataset
from headrace.outputs.query.formats import GRAPH_ENGINE, SOLUTION_ENGINE

try:
    import resource
except ImportError:  # a system without limits per process; the guard alone stands there
    resource = None  # type: ignore[assignment]

_PLACE = re.compile(r"error at (\d+):(\d+): (.*)", re.DOTALL)
_LONGEST_MESSAGE = 160


class TooLargeError(Exception):
    """The result is larger than allowed."""


class Bounded(io.RawIOBase):
    """A buffer that refuses to grow beyond a size."""

    def __init__(self, largest: int) -> None:
        self.largest, self.size = largest, 0
        self.parts: list[bytes] = []

    def writable(self) -> bool:
        """It can be written to."""
        return True

    def write(self, data: Any) -> int:
        """Take in bytes. Raises TooLargeError beyond the size."""
        piece = bytes(data)
        self.size += len(piece)
        if self.size > self.largest:
            raise TooLargeError
        self.parts.append(piece)
        return len(piece)

    def value(self) -> bytes:
        """All bytes so far."""
        return b"".join(self.parts)


@contextmanager
def closed_doors() -> Iterator[None]:
    """While this holds, the process can open no file and no connection, whatever a query makes the engine try."""
    if resource is None:
        yield
        return
    soft, hard = resource.getrlimit(resource.RLIMIT_NOFILE)
    resource.setrlimit(resource.RLIMIT_NOFILE, (0, hard))
    try:
        yield
    finally:
        resource.setrlimit(resource.RLIMIT_NOFILE, (soft, hard))


class QueryWork:
    """Answers queries over one dataset."""

    def __init__(self, dataset: Dataset) -> None:
        self.dataset = dataset

    def refresh(self) -> None:
        """Take in what is new."""
        self.dataset.sync()

    def handle(self, data: bytes) -> bytes:
        """A request's bytes to a reply's bytes."""
        self.refresh()
        request = msgspec.msgpack.decode(data, type=wire.Request)
        with closed_doors():
            reply = self.answer(request)
        if self.dataset.faults:
            reply = msgspec.structs.replace(reply, faults=tuple(fault.message for fault in self.dataset.faults.values()))
        return wire.encode(reply)

    def answer(self, request: wire.Request) -> wire.Reply:
        """The reply to one request; never raises for what the query does."""
        try:
            return self._run(request)
        except InputError as error:
            return wire.Reply(wire.BAD, message=str(error))
        except SyntaxError as error:
            return wire.Reply(wire.BAD, message=syntax(error.msg))
        except TooLargeError:
            return wire.Reply(wire.LARGE, message=f"the result is larger than {request.largest} bytes")
        except MemoryError:
            return wire.Reply(wire.BROKEN, message="the query needs more memory than a worker has")
        except (ValueError, OSError, RuntimeError) as error:
            return wire.Reply(wire.BAD, message=f"can't be answered: {error}")

    def _run(self, request: wire.Request) -> wire.Reply:
        query = guard.Query(request.text, "") if request.trusted else guard.check(request.text)
        results = self.dataset.store.query(query.text, prefixes=guard.PREFIXES, **self._graphs(query, request))
        buffer = Bounded(request.largest)
        if isinstance(results, QueryTriples):
            found = dict.fromkeys(results)  # a graph is a set
            prefixes = used_prefixes(found) if request.graph == "turtle" else None
            serialize(found, cast(IO[bytes], buffer), format=GRAPH_ENGINE[request.graph], prefixes=prefixes)
            return wire.Reply(wire.OK, buffer.value(), "graph", request.graph)
        assert isinstance(results, QuerySolutions | QueryBoolean)
        results.serialize(cast(IO[bytes], buffer), format=SOLUTION_ENGINE[request.solutions])
        return wire.Reply(wire.OK, buffer.value(), "solutions", request.solutions)

    def _graphs(self, query: guard.Query, request: wire.Request) -> dict[str, Any]:
        """The dataset of a query: the protocol's, else the query's own, else everything."""
        said = request.default is not None or request.named is not None
        default, named = (request.default, request.named) if said else (query.default, query.named)
        if default is None and named is None:
            return {"use_default_graph_as_union": True}
        asked = [guard.local_graph(iri) for iri in (*(default or ()), *(named or ()))]
        if missing := sorted(set(asked) - self.dataset.graphs()):
            hint = "SELECT DISTINCT ?g { GRAPH ?g {} } lists the graphs that are here"
            raise InputError("no such graph", read=missing[0], hint=hint)
        return {
            "default_graph": [NamedNode(iri) for iri in default or ()],
            "named_graphs": [NamedNode(iri) for iri in named or ()],
        }


def used_prefixes(triples: Iterable[Triple]) -> dict[str, str]:
    """The usual prefixes that the triples' addresses begin with."""
    bases = set()
    for triple in triples:
        for term in (triple.subject, triple.predicate, triple.object):
            iri = term.value if isinstance(term, NamedNode) else getattr(getattr(term, "datatype", None), "value", "")
            bases.add(iri[: max(iri.rfind("#"), iri.rfind("/")) + 1])
    return {name: base for name, base in guard.PREFIXES.items() if base in bases}


def syntax(message: str) -> str:
    """The engine's message on a query that is none, in one short line.

    >>> syntax("error at 1:16: expected one of X, Y")
    'line 1, column 16: not SPARQL 1.1; expected one of X, Y'
    """
    found = _PLACE.fullmatch(message)
    if found is None:
        return f"not SPARQL 1.1: {message[:_LONGEST_MESSAGE]}"
    expected = found[3] if len(found[3]) <= _LONGEST_MESSAGE else found[3][:_LONGEST_MESSAGE].rsplit(",", 1)[0] + " ..."
    return f"line {found[1]}, column {found[2]}: not SPARQL 1.1; {expected}"
