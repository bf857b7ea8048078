"""`--store`: facts, runs, queries and the service on two different engines, for real, on 127.0.0.1."""

from __future__ import annotations

import json
import math
import os
import re
import subprocess
import sys
import threading
from collections.abc import Iterator
from datetime import UTC, datetime
from http.server import BaseHTTPRequestHandler, HTTPServer
from pathlib import Path
from typing import Any, NamedTuple

import pytest
from pyoxigraph import Literal, NamedNode, Quad, Store

import headrace
from headrace.errors import InputError
from headrace.outputs import jsonout
from headrace.outputs.query import named, wire
from headrace.outputs.query.pool import Pool, Queries
from headrace.outputs.rdf import folder, run
from headrace.outputs.rdf.terms import RUN_BASE
from headrace.outputs.service.serve import Plan
from headrace.outputs.service.site import Limits
from headrace.outputs.stores import address, push
from headrace.outputs.stores.http import StoreError
from headrace.outputs.stores.remote import RemoteQueries
from headrace.outputs.stores.store import open_store
from headrace.values.facts import Facts

from . import engines, sample
from .equal import Comparison
from .service import served
from .test_runs import asker

pytestmark = pytest.mark.xdist_group("linked-stores")  # one worker shares what is started for these tests

ENGINES = ("oxigraph", "virtuoso")
# Without statistics of the data one engine plans some queries so that they take minutes; it is asked these.
QUICK = ("closed-refills", "designs", "ledgers", "no-growth", "requirements-that-need", "skeletons", "sources", "warnings")
# Left out: two that pick any one of several equals.
ASKED = {"oxigraph": tuple(name for name in named.every() if name not in ("made-from", "recalled-and-used")), "virtuoso": QUICK}


class Filled(NamedTuple):
    """An engine with facts and samples in it."""

    engine: str
    url: str


@pytest.fixture(scope="module", params=ENGINES)
def filled(request: pytest.FixtureRequest, results: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Filled]:
    with pytest.MonkeyPatch.context() as patch:
        if request.param == "virtuoso":
            patch.setenv("HEADRACE_STORE_USER", "dba")
            patch.setenv("HEADRACE_STORE_PASSWORD", "dba")
        with getattr(engines, request.param)(tmp_path_factory.mktemp(request.param)) as url:
            assert sum(push.push(url).values()) > 10_000
            store = open_store(url)
            for name in folder.stamps(results):
                store.put_graph(RUN_BASE + name, (results / (name + folder.ENDING)).read_bytes())
            yield Filled(request.param, url)


def bindings(reply: wire.Reply) -> list[dict[str, Any]]:
    assert reply.status == wire.OK, reply.message
    return json.loads(reply.body)["results"]["bindings"]  # type: ignore[no-any-return]


def rough(row: dict[str, dict[str, str]]) -> tuple[Any, ...]:
    """A solution with numbers to 5 digits: one of the engines keeps all digits but prints only 6 of them in solutions."""
    found = []
    for name, term in sorted(row.items()):
        kind = term.get("datatype", "").rpartition("#")[2]
        if kind in ("double", "decimal", "integer"):
            number = float(term["value"].replace("INF", "inf"))
            found.append((name, number if math.isinf(number) else float(f"{number:.5g}")))
        else:
            found.append((name, re.sub(r"\.?0*Z$", "Z", term["value"]) if kind == "dateTime" else term["value"]))
    return tuple(found)


@pytest.mark.parametrize(
    ("filled", "name"), [(engine, name) for engine in ENGINES for name in ASKED[engine]], indirect=["filled"]
)
def test_named_queries_give_what_files_give(filled: Filled, name: str, pool: Pool) -> None:
    """The same rows from a store as from files."""
    text = named.every()[name].text
    ours = Queries(pool, seconds=20).ask(wire.Request(text))
    theirs = RemoteQueries(filled.url, Limits(seconds=60)).ask(wire.Request(text))
    if "GROUP_CONCAT" in text:  # its order is anyone's choice
        assert len(bindings(ours)) == len(bindings(theirs))
    else:
        assert sorted(map(rough, bindings(theirs)), key=repr) == sorted(map(rough, bindings(ours)), key=repr)


def test_a_run_put_into_a_store_says_what_json_says(filled: Filled, facts: Facts) -> None:
    """Value for value: by the graph store protocol on both, by queries on the one that prints all digits."""
    result = sample.refills(facts)
    document = json.loads(jsonout.text(jsonout.document(result, headrace.__version__, rates=True)))
    made = run.make(result, datetime.now(UTC), rates=True)
    store = open_store(filled.url)
    store.put_graph(made.iri, made.trig)
    copy = Store()
    name = NamedNode(made.iri)
    copy.extend(Quad(triple.subject, triple.predicate, triple.object, name) for triple in store.fetch(made.iri))
    fetched = Comparison(asker(copy), made.iri)
    fetched.document(document)
    assert not fetched.differences
    if filled.engine == "oxigraph":
        remote = RemoteQueries(filled.url, Limits(seconds=60))
        asked = Comparison(lambda text: bindings(remote.ask(wire.Request(text))), made.iri)
        asked.document(document)
        assert not asked.differences
    assert made.iri in store.graphs()
    store.delete(made.iri)
    assert made.iri not in store.graphs()


@pytest.mark.parametrize("format", ["json", "xml", "csv", "tsv"])
def test_formats(format: str, filled: Filled) -> None:
    remote = RemoteQueries(filled.url, Limits(seconds=60))
    text = "SELECT ?h { ?h a hr:Host } ORDER BY ?h"
    reply = remote.ask(wire.Request(text, solutions=format))
    assert reply.status == wire.OK and reply.body.count(b"id/host/") == 4


def test_ask_construct_and_refusals(filled: Filled) -> None:
    remote = RemoteQueries(filled.url, Limits(seconds=60))
    assert json.loads(remote.ask(wire.Request("ASK { ?h a hr:Host }")).body)["boolean"] is True
    assert json.loads(remote.ask(wire.Request("ASK { ?h a hr:None }")).body)["boolean"] is False
    assert remote.ask(wire.Request("CONSTRUCT { ?h a hr:Host } WHERE { ?h a hr:Host }", graph="ntriples")).body.count(b"\n") == 4
    for text in (
        "ASK { SERVICE <http://127.0.0.1:1/> {} }",
        "DROP ALL",
        "SELECT * FROM <http://x/> {}",
        "SELECT (bif:now() AS ?x) {}",
        "SELECT",
    ):
        assert remote.ask(wire.Request(text)).status == wire.BAD


def test_other_people_s_graphs_are_left_alone(filled: Filled) -> None:
    with pytest.raises(InputError, match="not here"):
        open_store(filled.url).put("http://x/graph", [])
    with pytest.raises(InputError, match="not here"):
        open_store(filled.url).delete("http://x/graph")


def test_limits(filled: Filled) -> None:
    endless = "SELECT (COUNT(*) AS ?n) { ?a ?b ?c . ?d ?e ?f . FILTER(STR(?c) < STR(?f)) }"
    if filled.engine == "oxigraph":  # the other one goes on with a query whose client has left, and holds up the next test
        assert RemoteQueries(filled.url, Limits(seconds=1)).ask(wire.Request(endless)).status in (wire.SLOW, wire.BROKEN)
    reply = RemoteQueries(filled.url, Limits(seconds=60, result=10_000)).ask(wire.Request("SELECT * { ?s ?p ?o } LIMIT 5000"))
    assert (reply.status, reply.body) == (wire.LARGE, b"")


def test_the_service_over_a_store(filled: Filled) -> None:
    with served(Plan(port=0, store=filled.url, limits=Limits(seconds=60))) as client:
        assert len(client.query("SELECT ?h { ?h a hr:Host }").rows()) == 4
        assert client.get("/id/compound/malate", "text/turtle").status == 200
        page = client.get("/", "text/html")
        assert page.status == 200 and b"HR-12, lysine on glucose" in page.body
        answer = client.send(
            "POST", "/ask/grows?save=true", '{"host": "escherichia-coli", "feed": [{"substrate": "glucose", "uptake": "5 mmol/gDW/h"}]}',
            {"Content-Type": "application/json"},
        )  # fmt: skip
        assert answer.status == 200, answer.body
        assert client.get(answer.headers["location"], "text/turtle").status == 200
        open_store(filled.url).delete("https://w3id.org/headrace" + answer.headers["location"])


def test_commands_over_a_store(filled: Filled, tmp_path: Path) -> None:
    def command(*words: str) -> subprocess.CompletedProcess[str]:
        done = subprocess.run(
            [sys.executable, "-m", "headrace", *words], cwd=tmp_path, capture_output=True, text=True, env=dict(os.environ)
        )
        assert done.returncode == 0, done.stderr
        return done

    (tmp_path / "d.toml").write_text(
        'title="in a store"\nhost="escherichia-coli"\n[[feed]]\nsubstrate="glucose"\nuptake="5 mmol/gDW/h"\n'
    )
    saved = command("grows", "d.toml", "--store", filled.url).stderr
    assert saved.startswith(f"saved: {RUN_BASE}")
    assert "in a store" in command("query", "designs", "--store", filled.url, "--format", "csv", "--time-limit", "60").stdout
    open_store(filled.url).delete(saved.removeprefix("saved: ").strip())


def test_a_store_that_cuts_answers_is_found_out(tmp_path: Path) -> None:
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("HEADRACE_STORE_USER", "dba")
        patch.setenv("HEADRACE_STORE_PASSWORD", "dba")
        with engines.virtuoso(tmp_path, rows=20) as url:
            store = open_store(url)
            iri = RUN_BASE + "many"
            store.put(
                iri, [Quad(NamedNode(f"{iri}/{n}"), NamedNode("http://x/p"), Literal(str(n)), NamedNode(iri)) for n in range(50)]
            )
            reply = RemoteQueries(url, Limits(seconds=30)).ask(wire.Request("SELECT * { ?s ?p ?o }"))
            assert (reply.status, reply.body) == (wire.BROKEN, b"") and "cut" in reply.message


def test_addresses() -> None:
    assert address.parse("http://h:7878/query", {}).graphs == "http://h:7878/store"
    assert address.parse("http://h/sparql", {}).graphs == "http://h/sparql-graph-crud"
    assert address.parse("http://h/sparql", {"HEADRACE_STORE_USER": "u"}).graphs == "http://h/sparql-graph-crud-auth"
    assert address.parse("http://h/ds", {"HEADRACE_STORE_GRAPHS": "http://h/data"}).graphs == "http://h/data"
    for wrong in (
        "h:7878",
        "file:///etc/passwd",
        "ftp://h/",
        "http://",
        "http://u:p@h/query",
        "http://h/a b",
        "http://h:99999/query",
    ):
        with pytest.raises(InputError):
            address.parse(wrong, {})
    with pytest.raises(InputError, match="takes graphs"):
        open_store("http://127.0.0.1:1/ds").put(RUN_BASE + "x", [])


class _Crooked(BaseHTTPRequestHandler):
    """A store that sends elsewhere, breaks off, or answers with something else."""

    answers: dict[str, tuple[int, dict[str, str], bytes]] = {
        "/redirect": (302, {"Location": "http://127.0.0.1:1/"}, b""),
        "/half": (200, {"Content-Type": "application/sparql-results+json", "Content-Length": "500"}, b'{"head": {"vars": ["g"'),
        "/html": (200, {"Content-Type": "text/html"}, b"<html>hello</html>"),
        "/angry": (503, {}, b"too many queries"),
    }

    def do_POST(self) -> None:
        self.rfile.read(int(self.headers["Content-Length"]))
        status, headers, body = self.answers[self.path]
        self.send_response(status)
        for name, value in headers.items():
            self.send_header(name, value)
        self.end_headers()
        self.wfile.write(body)

    def log_message(self, *_: Any) -> None:
        """Nobody reads it."""


def test_crooked_stores() -> None:
    server = HTTPServer(("127.0.0.1", 0), _Crooked)
    threading.Thread(target=server.serve_forever, daemon=True).start()
    try:
        said = {}
        for path in _Crooked.answers:
            with pytest.raises(StoreError) as caught:
                open_store(f"http://127.0.0.1:{server.server_port}{path}").graphs()
            said[path] = str(caught.value)
        assert "not followed" in said["/redirect"]
        assert "broke off" in said["/half"]
        assert "no SPARQL result" in said["/html"]
        assert "503" in said["/angry"]
    finally:
        server.shutdown()
        server.server_close()
    with pytest.raises(StoreError, match="can't be reached"):
        open_store("http://127.0.0.1:1/query").graphs()
