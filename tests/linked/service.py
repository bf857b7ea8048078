"""A service under test: started in this process on a free port of 127.0.0.1, and plain HTTP requests to it."""

from __future__ import annotations

import http.client
import json
import threading
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from typing import Any, NamedTuple
from urllib.parse import urlencode

from headrace.outputs.service.app import App
from headrace.outputs.service.serve import Plan, Server, site

JSON = "application/sparql-results+json"
FORM = "application/x-www-form-urlencoded"
DIRECT = "application/sparql-query"


class Answer(NamedTuple):
    """What came back. headers: lower-case names."""

    status: int
    headers: dict[str, str]
    body: bytes

    @property
    def media(self) -> str:
        return self.headers.get("content-type", "").partition(";")[0]

    def json(self) -> Any:
        return json.loads(self.body)

    def rows(self) -> list[dict[str, str]]:
        return [{name: term["value"] for name, term in row.items()} for row in self.json()["results"]["bindings"]]


class Client(NamedTuple):
    """Requests to one service."""

    port: int

    @property
    def url(self) -> str:
        return f"http://127.0.0.1:{self.port}"

    def send(
        self,
        method: str,
        path: str,
        body: bytes | str | None = None,
        headers: Mapping[str, str] | None = None,
        timeout: float = 40,
    ) -> Answer:
        link = http.client.HTTPConnection("127.0.0.1", self.port, timeout=timeout)
        try:
            link.request(method, path, body, dict(headers or {}))
            response = link.getresponse()
            return Answer(response.status, {k.lower(): v for k, v in response.getheaders()}, response.read())
        finally:
            link.close()

    def get(self, path: str, accept: str = "", **headers: str) -> Answer:
        return self.send("GET", path, headers={**({"Accept": accept} if accept else {}), **headers})

    def query(self, text: str, accept: str = JSON, **parameters: Any) -> Answer:
        return self.get("/sparql?" + urlencode({"query": text, **parameters}, doseq=True), accept)

    def post(self, text: str, media: str = DIRECT, accept: str = JSON, path: str = "/sparql") -> Answer:
        return self.send("POST", path, text.encode(), {"Content-Type": media, "Accept": accept})


@contextmanager
def served(plan: Plan) -> Iterator[Client]:
    """A service that runs as long as the block."""
    with site(plan) as here:
        server = Server(App(here), plan)
        thread = threading.Thread(target=server.run, daemon=True)
        thread.start()
        try:
            yield Client(server.port)
        finally:
            server.close()
            thread.join(10)
