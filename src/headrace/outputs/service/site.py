"""What the service works with."""

from __future__ import annotations

from pathlib import Path
from typing import NoReturn, Protocol

import msgspec
from msgspec import Struct

from headrace.outputs.query import wire
from headrace.outputs.service.asking_types import Question, Reply
from headrace.outputs.service.http import HttpError


class Graphs(Protocol):
    """Where a run can be put as a graph."""

    def put_graph(self, iri: str, trig: bytes) -> None:
        """Make a named graph what the TriG says of it."""


class Engine(Protocol):
    """Whoever answers queries: workers here, or a store elsewhere, which takes graphs as well."""

    @property
    def store(self) -> Graphs | None:
        """The store elsewhere; None for workers here."""

    def ask(self, request: wire.Request) -> wire.Reply:
        """The reply, whatever became of the query."""


class Scenarios(Protocol):
    """Whoever answers scenarios."""

    def ask(self, question: Question) -> Reply:
        """The answer, or what was wrong with the question. Raises HttpError when there was none."""


class Limits(Struct, frozen=True):
    """seconds: that a query or a scenario may take; result, request: bytes; text: bytes of a scenario."""

    seconds: float = 10.0
    result: int = 50_000_000
    request: int = 2_000_000
    text: int = 200_000


class Site:
    """engine, scenarios: who answers. results: where answers to scenarios are saved (None = in the engine's store, or
    nowhere). cors: the Origin that may read, "*" for any, "" for none."""

    def __init__(
        self,
        engine: Engine,
        scenarios: Scenarios | None = None,
        results: Path | None = None,
        limits: Limits | None = None,
        cors: str = "*",
    ) -> None:
        self.engine, self.scenarios = engine, scenarios
        self.results = results
        self.limits = limits or Limits()
        self.cors = cors

    def rows(self, text: str) -> list[dict[str, dict[str, str]]]:
        """The solutions of one of our own queries. Raises HttpError when it failed."""
        reply = self.engine.ask(wire.Request(text, trusted=True))
        if reply.status != wire.OK:
            raise_reply(reply)
        return msgspec.json.decode(reply.body)["results"]["bindings"]  # type: ignore[no-any-return]

    def statements(self, text: str, format: str) -> bytes:
        """The graph of one of our own CONSTRUCT queries in a format. Raises HttpError when it failed."""
        reply = self.engine.ask(wire.Request(text, graph=format, trusted=True))
        if reply.status != wire.OK:
            raise_reply(reply)
        return reply.body


def raise_reply(reply: wire.Reply) -> NoReturn:
    """Raise the HttpError that a reply without an answer stands for."""
    status = {wire.BAD: 400, wire.BUSY: 503}.get(reply.status, 500)
    headers = (("Retry-After", "5"),) if reply.status == wire.BUSY else ()
    kind = {wire.BAD: "query", wire.SLOW: "time-limit", wire.LARGE: "result-limit", wire.BUSY: "busy"}.get(reply.status, "broken")
    raise HttpError(status, kind, reply.message, headers)
