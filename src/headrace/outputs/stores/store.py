"""Graphs put, fetched and deleted (Graph Store HTTP Protocol), and queries asked (SPARQL Protocol)."""

from __future__ import annotations

import time
from collections.abc import Iterable, Sequence
from urllib.parse import quote, urlencode

from pyoxigraph import NamedNode, Quad, RdfFormat, Triple, parse, serialize

from headrace.errors import InputError
from headrace.graph import terms
from headrace.outputs.query import guard
from headrace.outputs.rdf.terms import RUN_BASE
from headrace.outputs.stores import results
from headrace.outputs.stores.address import Address
from headrace.outputs.stores.address import parse as parse_address
from headrace.outputs.stores.http import Answer, StoreError, send

_FORM = "application/x-www-form-urlencoded"
_FRESH = 1.0  # seconds for which the list of graphs is taken as it was
_OURS = (f"{terms.ID}graph/", RUN_BASE)


class Store:
    """A store elsewhere. Only graphs below our own address are read, written or deleted."""

    def __init__(self, address: Address) -> None:
        self.address = address
        self._graphs: tuple[float, tuple[str, ...]] = (float("-inf"), ())

    # -- graphs --------------------------------------------------------------------------------------------------

    def put_graph(self, iri: str, trig: bytes) -> None:
        """Make a named graph what the TriG says of it. Raises StoreError, InputError."""
        quads = [quad for quad in parse(trig, format=RdfFormat.TRIG) if quad.graph_name == NamedNode(iri)]
        self.put(iri, quads)

    def put(self, iri: str, statements: Iterable[Quad]) -> None:
        """Make a named graph these statements, and no others. Raises StoreError, InputError."""
        triples = [Triple(quad.subject, quad.predicate, quad.object) for quad in statements]
        body = serialize(triples, format=RdfFormat.N_TRIPLES) or b""  # N-Triples is Turtle, which all stores read
        self._graph("PUT", iri, {"Content-Type": "text/turtle"}, body)

    def delete(self, iri: str) -> None:
        """Delete a named graph. Raises StoreError, InputError."""
        self._graph("DELETE", iri, {})

    def fetch(self, iri: str) -> list[Triple]:
        """The statements of a named graph. Raises StoreError, InputError."""
        answer = self._graph("GET", iri, {"Accept": "text/turtle"})
        return [quad.triple for quad in parse(answer.body, format=RdfFormat.TURTLE)]

    def _graph(self, method: str, iri: str, headers: dict[str, str], body: bytes | None = None) -> Answer:
        if not self.address.graphs:
            hint = "set HEADRACE_STORE_GRAPHS to the address of its graph store protocol"
            raise InputError("where the store takes graphs is not known", read=self.address.query, hint=hint)
        guard.local_graph(iri)
        self._graphs = (float("-inf"), ())
        url = f"{self.address.graphs}?graph={quote(iri, safe='')}"
        return send(self.address, method, url, headers, body, seconds=300.0)

    # -- queries -------------------------------------------------------------------------------------------------

    def graphs(self) -> tuple[str, ...]:
        """The graphs of ours that the store has now."""
        when, known = self._graphs
        if time.monotonic() - when < _FRESH:
            return known
        answer = self._post("SELECT DISTINCT ?g { GRAPH ?g { ?s ?p ?o } }", results.SOLUTIONS, (), (), 30.0, 100_000_000)
        document = results.document_of(answer)
        found = sorted(row["g"]["value"] for row in document["results"]["bindings"])
        known = tuple(iri for iri in found if iri.startswith(_OURS))
        self._graphs = (time.monotonic(), known)
        return known

    def query(
        self,
        query: guard.Query,
        default: Sequence[str] | None,
        named: Sequence[str] | None,
        seconds: float,
        largest: int,
    ) -> Answer:
        """The store's own answer to a guarded query. default, named: graphs; both None = all of ours. Raises StoreError."""
        if default is None and named is None:
            default, named = query.default, query.named
        if default is None and named is None:
            default = self.graphs()
            named = default if query.names_graphs else ()  # a list that is not needed costs some engines seconds
        for iri in (*(default or ()), *(named or ())):
            guard.local_graph(iri)
        accept = results.SOLUTIONS if query.form in ("select", "ask") else results.GRAPH
        return self._post(query.standalone(), accept, default or (), named or (), seconds, largest)

    def _post(self, text: str, accept: str, default: Sequence[str], named: Sequence[str], seconds: float, largest: int) -> Answer:
        pairs = [("query", text), *(("default-graph-uri", iri) for iri in default), *(("named-graph-uri", iri) for iri in named)]
        headers = {"Accept": accept, "Content-Type": _FORM}
        return send(self.address, "POST", self.address.query, headers, urlencode(pairs).encode(), seconds, largest)


def open_store(url: str) -> Store:
    """The store at an address. Raises InputError for what is no address."""
    return Store(parse_address(url))


__all__ = ["Store", "StoreError", "open_store"]
