"""Queries per second through HTTP against the bare engine on the same data, and the time from start to first answer."""

from __future__ import annotations

import http.client
import subprocess
import sys
import threading
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import NamedTuple
from urllib.parse import urlsplit

from headrace.outputs.query import named, wire
from headrace.outputs.query.dataset import Dataset
from headrace.outputs.query.work import QueryWork

CLIENTS = 2
_LOOK_UP = "SELECT ?p ?o { ?s a hr:Host ; ?p ?o } LIMIT 20"
# What is typical: a look-up, lists of saved answers, joins of answers with facts, and sums over all facts.
QUERIES = ("designs", "what-drains", "requirements", "refills-of-hosts", "recalled-facts")


class Rate(NamedTuple):
    """Answers per second to one query."""

    name: str
    http: float
    engine: float

    @property
    def ratio(self) -> float:
        """HTTP over the bare engine."""
        return self.http / self.engine


class Report(NamedTuple):
    """first: seconds from the start of the process to its first answer."""

    first: float
    rates: tuple[Rate, ...]


def measure(results: Path, seconds: float = 0.6) -> Report:
    """Time six queries both ways over the facts and a results folder. seconds: per query and way."""
    queries = {"look-up": _LOOK_UP, **{name: named.find(name).text for name in QUERIES}}
    data = Dataset(results)
    data.sync()
    work = QueryWork(data)
    with _service(results) as (port, first):
        rates = []
        for name, text in queries.items():
            request = wire.Request(text, trusted=True)
            bare = _per_second(lambda request=request: work.answer(request), seconds)  # type: ignore[misc]
            rates.append(Rate(name, _over_http(port, text, seconds), bare))
    return Report(first, tuple(rates))


@contextmanager
def _service(results: Path) -> Iterator[tuple[int, float]]:
    """A service in a process of its own: its port, and the seconds to its first answer."""
    command = [sys.executable, "-m", "headrace", "serve", "--port", "0", "--results", str(results), "--workers", str(CLIENTS)]
    started = time.perf_counter()
    with subprocess.Popen(command, stderr=subprocess.PIPE, text=True) as process:
        try:
            assert process.stderr is not None
            line = process.stderr.readline()
            port = urlsplit(line.partition("serving ")[2].split(" ")[0]).port
            if port is None:
                raise RuntimeError(f"the service did not start: {line}{process.stderr.read()}")
            link = http.client.HTTPConnection("127.0.0.1", port)
            _ask(link, "ASK {}")
            link.close()
            yield port, time.perf_counter() - started
        finally:
            process.terminate()


def _per_second(call: Callable[[], object], seconds: float) -> float:
    call()
    done, started = 0, time.perf_counter()
    while time.perf_counter() - started < seconds:
        call()
        done += 1
    return done / (time.perf_counter() - started)


def _ask(link: http.client.HTTPConnection, text: str) -> None:
    headers = {"Content-Type": "application/sparql-query", "Accept": "application/sparql-results+json"}
    link.request("POST", "/sparql", text.encode(), headers)
    response = link.getresponse()
    body = response.read()
    if response.status != 200:
        raise RuntimeError(f"the service answered {response.status}: {body[:200]!r}")


def _over_http(port: int, text: str, seconds: float) -> float:
    """Answers per second to several clients at once."""
    rates: list[float] = []

    def client() -> None:
        link = http.client.HTTPConnection("127.0.0.1", port)
        rates.append(_per_second(lambda: _ask(link, text), seconds))
        link.close()

    threads = [threading.Thread(target=client) for _ in range(CLIENTS)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    if len(rates) != CLIENTS:
        raise RuntimeError("a client did not get its answers")
    return sum(rates)


def text(report: Report) -> str:
    """The report for people."""
    lines = [f"{report.first * 1000:8.0f} ms from start to first answer", "    http/s  engine/s  ratio"]
    lines += [f"{rate.http:10.0f}{rate.engine:10.0f}{rate.ratio:7.2f}  {rate.name}" for rate in report.rates]
    return "\n".join([*lines, f"({CLIENTS} clients at once against one engine in one thread)"]) + "\n"
