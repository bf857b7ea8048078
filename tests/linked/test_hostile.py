"""Requests that mean harm: each gets an answer within the limits, and the service answers as before.

Traffic stays on 127.0.0.1, in loops of fixed length.
"""

from __future__ import annotations

import concurrent.futures
import json
import socket
import threading
import time
from collections.abc import Iterator
from pathlib import Path
from urllib.parse import quote, urlencode

import pytest

from headrace.outputs.query.guard import LONGEST
from headrace.outputs.service.serve import Plan
from headrace.outputs.service.site import Limits

from .service import DIRECT, FORM, JSON, Answer, Client, served

pytestmark = pytest.mark.xdist_group("linked")  # one worker shares what is started for these tests

COUNT = "SELECT (COUNT(*) AS ?n) { ?s ?p ?o }"
SECRET = "root:x:0:0"
LIMIT = 1.0


@pytest.fixture(scope="module")
def trap() -> Iterator[tuple[int, list[bytes]]]:
    """A listener that no request may reach: its port, and what came in."""
    seen: list[bytes] = []
    with socket.create_server(("127.0.0.1", 0)) as listener:

        def listen() -> None:
            while True:
                try:
                    link, _ = listener.accept()
                except OSError:
                    return
                with link:
                    seen.append(link.recv(1000))

        threading.Thread(target=listen, daemon=True).start()
        yield listener.getsockname()[1], seen


@pytest.fixture(autouse=True)
def still_answers(client: Client) -> Iterator[None]:
    """After each of them the service answers a plain query, and quickly."""
    yield
    started = time.monotonic()
    assert client.query(COUNT).status == 200
    assert time.monotonic() - started < 4


def kind(answer: Answer) -> str:
    said: str = answer.json()["error"]["kind"]
    return said


HEAVY = {
    "cross product": "SELECT (COUNT(*) AS ?n) { ?a ?b ?c . ?d ?e ?f }",
    "triple cross product": "SELECT * { ?a ?b ?c . ?d ?e ?f . ?g ?h ?i } ORDER BY ?a LIMIT 1",
    "cross product of values": "SELECT (COUNT(*) AS ?n) {" + " ".join(f"VALUES ?v{i} {{ {' '.join(map(str, range(100)))} }}" for i in range(6)) + "}",
    "deep paths": "SELECT (COUNT(*) AS ?n) { ?a (!<x:y>)* ?b . ?b (!<x:z>)* ?c . ?c (!<x:w>)* ?d }",
    "paths both ways": "SELECT (COUNT(*) AS ?n) { ?a (<x:y>|!<x:y>|^<x:y>|!^<x:y>)+ ?b . ?b (!^<x:y>)+ ?c }",
    "optional upon optional": "SELECT (COUNT(*) AS ?n) { ?a ?b ?c OPTIONAL { ?d ?e ?f } OPTIONAL { ?g ?h ?i } }",
    "regular expression bomb": 'SELECT (COUNT(*) AS ?n) { ?a ?b ?c . ?d ?e ?f FILTER(REGEX(STR(?c), "(a|a)*(b|b)*(c|c)*$")) }',
    "ever longer text": 'SELECT (STRLEN(?z) AS ?n) { ?s ?p ?o . BIND("' + "x" * 5000 + '" AS ?a) BIND(CONCAT(' + ",".join(["?a"] * 200) + ") AS ?z) }",
    "minus everything": "SELECT (COUNT(*) AS ?n) { ?a ?b ?c MINUS { ?a ?e ?f . ?g ?h ?i } }",
    "groups without number": "SELECT ?a ?d (COUNT(*) AS ?n) { ?a ?b ?c . ?d ?e ?f } GROUP BY ?a ?d ORDER BY ?n",
}  # fmt: skip


@pytest.mark.parametrize("what", HEAVY)
def test_heavy_queries_are_stopped(client: Client, what: str) -> None:
    started = time.monotonic()
    answer = client.query(HEAVY[what])
    took = time.monotonic() - started
    assert answer.status in (200, 400, 500), answer.body[:300]
    if answer.status == 500:
        assert kind(answer) in ("time-limit", "result-limit", "broken")
    assert took < LIMIT + 3


def test_most_of_them_need_stopping(client: Client) -> None:
    """The set is heavy indeed: without a limit these would run on."""
    for what in ("cross product", "triple cross product", "deep paths"):
        assert client.query(HEAVY[what]).status == 500


def test_a_large_answer_is_an_error_and_never_cut(client: Client) -> None:
    for accept in (JSON, "text/csv", "application/sparql-results+xml"):
        answer = client.query("SELECT * { ?s ?p ?o }", accept)
        assert (answer.status, kind(answer)) == (500, "result-limit")
        assert len(answer.body) < 500
    assert kind(client.query("CONSTRUCT { ?s ?p ?o } WHERE { ?s ?p ?o }", "application/n-triples")) == "result-limit"


def test_huge_lists(client: Client) -> None:
    addresses = ", ".join(f"<http://x/{number}>" for number in range(30_000))
    text = f"SELECT (COUNT(*) AS ?n) {{ ?s ?p ?o FILTER(?o IN ({addresses})) }}"
    assert client.post(text).status in (200, 500)
    values = " ".join(f"<http://x/{number}>" for number in range(30_000))
    assert client.post(f"SELECT (COUNT(*) AS ?n) {{ VALUES ?o {{ {values} }} ?s ?p ?o }}").status in (200, 500)


def test_ten_megabytes(client: Client) -> None:
    text = COUNT + "#" + "x" * 10_000_000
    for media, body in ((DIRECT, text), (FORM, "query=" + text)):
        link = socket.create_connection(("127.0.0.1", client.port), timeout=20)
        with link:
            head = f"POST /sparql HTTP/1.1\r\nHost: x\r\nContent-Type: {media}\r\nContent-Length: {len(body)}\r\n\r\n"
            try:
                link.sendall(head.encode() + body.encode())
            except (BrokenPipeError, ConnectionResetError):
                pass  # refused before all of it was sent
            try:
                status = link.recv(100)
            except ConnectionResetError:
                continue
        assert b" 413 " in status or status == b""


def test_a_query_longer_than_allowed(client: Client) -> None:
    assert client.post(COUNT + "#" + "x" * LONGEST).status == 400


@pytest.mark.parametrize("depth", [100, 100_000])
@pytest.mark.parametrize("shape", ["{%s}", "{FILTER(%s1%s)}", "{ ?s %s<x:y>%s ?o }", "{ ?s ?p %s%s }"])
def test_deep_nesting(client: Client, shape: str, depth: int) -> None:
    opens, closes = ("[ <x:y> ", " ]") if shape.startswith("{ ?s ?p") else ("{", "}") if shape == "{%s}" else ("(", ")")
    inner = (opens * depth + closes * depth,) if shape == "{%s}" else (opens * depth, closes * depth)
    answer = client.post("SELECT * " + shape % inner)
    assert (answer.status, kind(answer)) == (400, "query")


def test_long_chains_break_no_service(client: Client) -> None:
    chains = (
        "SELECT * { ?s " + "/".join(["<x:y>"] * 20_000) + " ?o }",
        "SELECT (" + "+".join(["1"] * 20_000) + " AS ?x) {}",
        "SELECT * { ?s ?p ?o FILTER(" + "!" * 20_000 + "true) }",
        "ASK { " + "?s ?p ?o . " * 5_000 + "}",
        "ASK { " + " UNION ".join(["{ ?s ?p ?o }"] * 5_000) + " }",
    )
    for text in chains:
        assert client.post(text).status in (200, 400, 500)


MALFORMED = {
    "no body": (DIRECT, b""),
    "zero bytes": (DIRECT, b"\x00" * 1000),
    "not UTF-8": (DIRECT, b"\xff\xfe" * 100),
    "a bomb's head": (DIRECT, b"\x1f\x8b\x08" + b"\x00" * 100),
    "form without equals": (FORM, b"&&&&"),
    "form with bad escapes": (FORM, b"query=%zz%"),
    "ten thousand fields": (FORM, b"&".join(b"a%d=1" % number for number in range(10_000))),
    "JSON": ("application/json", b'{"query": "ASK {}"}'),
    "multipart": ("multipart/form-data; boundary=b", b"--b\r\n\r\nASK {}\r\n--b--"),
    "a type that is none": ("\\\"';--", b"ASK {}"),
    "an update's type": ("application/sparql-update", b"DROP ALL"),
}


@pytest.mark.parametrize("what", MALFORMED)
def test_malformed_bodies(client: Client, what: str) -> None:
    media, body = MALFORMED[what]
    answer = client.send("POST", "/sparql", body, {"Content-Type": media})
    assert answer.status in (400, 403, 415), answer
    assert answer.json()["error"]["message"]


DOORS = {
    "service": "SELECT * { SERVICE <http://127.0.0.1:%d/> { ?s ?p ?o } }",
    "service silent": "SELECT * { SERVICE SILENT <http://127.0.0.1:%d/> { ?s ?p ?o } }",
    "service by variable": "SELECT * { BIND(IRI('http://127.0.0.1:%d/') AS ?u) SERVICE ?u { ?s ?p ?o } }",
    "service in codepoints": "SELECT * { S\\u0045RVICE <http://127.0.0.1:%d/> { ?s ?p ?o } }",
    "from": "SELECT * FROM <http://127.0.0.1:%d/x> { ?s ?p ?o }",
    "from named": "SELECT * FROM NAMED <http://127.0.0.1:%d/x> { GRAPH ?g { ?s ?p ?o } }",
    "load": "LOAD <http://127.0.0.1:%d/x>",
    "graph": "SELECT * { GRAPH <http://127.0.0.1:%d/x> { ?s ?p ?o } }",
    "describe": "DESCRIBE <http://127.0.0.1:%d/x>",
    "function": "SELECT (<http://127.0.0.1:%d/f>(1) AS ?x) {}",
}


@pytest.mark.parametrize("what", DOORS)
def test_no_request_leaves_the_machine_or_reaches_it(client: Client, trap: tuple[int, list[bytes]], what: str) -> None:
    port, seen = trap
    text = DOORS[what] % port
    for answer in (client.query(text), client.post(text), client.post(urlencode({"query": text}), FORM)):
        assert answer.status in (200, 400, 406)
    for key in ("default-graph-uri", "named-graph-uri"):
        assert client.query(COUNT, **{key: f"http://127.0.0.1:{port}/x"}).status == 400
    time.sleep(0.05)
    assert not seen


@pytest.mark.parametrize(
    "address", ["file:///etc/passwd", "/etc/passwd", "../../../../etc/passwd", "file:/etc/passwd", "FILE:///etc/passwd"]
)
def test_no_file_is_read(client: Client, address: str) -> None:
    texts = [
        f"SELECT * FROM <{address}> {{ ?s ?p ?o }}",
        f"SELECT * {{ GRAPH <{address}> {{ ?s ?p ?o }} }}",
        f"LOAD <{address}>",
        f"DESCRIBE <{address}>",
    ]
    answers = [client.query(text) for text in texts] + [client.query(COUNT, **{"default-graph-uri": address})]
    answers += [client.send("POST", "/ask/refills", address, {"Content-Type": "application/toml"})]
    assert all(SECRET.encode() not in answer.body for answer in answers)
    assert answers[-1].status == answers[-2].status == 400


CLIMBS = ("../../../etc/passwd", "..%2f..%2f..%2fetc/passwd", "%2e%2e/%2e%2e/etc/passwd", "compound/../../../etc/passwd", "compound/malate/..",
          "//etc/passwd", "compound/%00", "compound/malate%0d%0aX-Injected:1", "c\u00f6mpound/x".encode().decode("latin-1"), "x" * 5000,
          "compound/malate>%20?p%20?o%20}%20#", "run/%3C%3E", "compound/'%22", "host/escherichia-coli/%7Bx%7D")  # fmt: skip


@pytest.mark.parametrize("path", CLIMBS)
def test_paths_in_addresses(client: Client, path: str) -> None:
    for base in ("/id/", "/static/", "/browse/", "/"):
        answer = client.get(base + quote(path, safe="/%.?&=#'\"<>{}:"), "text/turtle")
        assert answer.status in (400, 404), (base, answer)
        assert SECRET.encode() not in answer.body
        assert "x-injected" not in answer.headers


def test_headers_cannot_be_injected(client: Client) -> None:
    for name in ("query", "format", "example", "q", "offset"):
        for path in ("/sparql", "/search", "/browse/hosts", "/id/compound/malate"):
            answer = client.get(f"{path}?{name}=x%0d%0aX-Injected:%201%0d%0a%0d%0a<html>", "text/html")
            assert "x-injected" not in answer.headers
            assert answer.status in (200, 400, 404)


def raw(client: Client, data: bytes, wait: float = 5.0) -> bytes:
    """What comes back for bytes that need be no HTTP."""
    with socket.create_connection(("127.0.0.1", client.port), timeout=wait) as link:
        parts = []
        try:
            link.sendall(data)
            link.shutdown(socket.SHUT_WR)
            while part := link.recv(65536):
                parts.append(part)
        except OSError:
            pass  # the service hung up on what is no request
        return b"".join(parts)


@pytest.mark.parametrize(
    "data",
    [
        b"\x16\x03\x01\x02\x00\x01\x00\x01\xfc\x03\x03" + b"\x00" * 200,  # a TLS greeting
        b"GET / HTTP/9.9\r\n\r\n",
        b"GET\r\n\r\n",
        b"G" * 100_000,
        b"GET / HTTP/1.1\r\nHost: x\r\n" + b"".join(b"X-%d: y\r\n" % number for number in range(20_000)) + b"\r\n",
        b"POST /sparql HTTP/1.1\r\nHost: x\r\nContent-Length: -5\r\n\r\n",
        b"POST /sparql HTTP/1.1\r\nHost: x\r\nContent-Length: 5\r\nContent-Length: 6\r\n\r\nASK{}",
        b"POST /sparql HTTP/1.1\r\nHost: x\r\nTransfer-Encoding: chunked\r\n\r\nzz\r\n",
        b"POST /sparql HTTP/1.1\r\nHost: x\r\nTransfer-Encoding: chunked\r\nContent-Length: 5\r\n\r\n0\r\n\r\nGET /x HTTP/1.1\r\n\r\n",
        b"GET / HTTP/1.1\r\nHost: x\r\nX: a\r\n\tb\x00c\r\n\r\n",
        b"GET /sparql HTTP/1.1\r\nHost: evil\r\n <script>\r\n\r\n",
    ],
)
def test_bytes_that_are_no_request(client: Client, data: bytes) -> None:
    answer = raw(client, data)
    assert b" 200 OK" not in answer.split(b"\r\n")[0] or b"evil" not in answer


def test_a_host_header_is_not_believed(client: Client) -> None:
    for host in ('x"><script>', "a b", "x\u00e9".encode().decode("latin-1"), "y" * 2000):
        answer = client.get("/sparql", "text/turtle", Host=host)
        assert b"script>" not in answer.body and b"yyyy" not in answer.body


def test_markup_in_names_stays_text(client: Client) -> None:
    text = "<script>alert(1)</script>"
    pages = [
        client.get("/search?" + urlencode({"q": text}), "text/html"),
        client.query(f'SELECT ("{text}" AS ?x) {{}}', "text/html"),
        client.query(f"SELECT {text}", "text/html"),
        client.get("/sparql?" + urlencode({"example": text}), "text/html"),
        client.get("/id/" + quote(text, safe=""), "text/html"),
        client.get("/", "text/html"),
        client.send("POST", "/ask", urlencode({"scenario": text}), {"Content-Type": FORM, "Accept": "text/html"}),
    ]
    for page in pages:
        assert b"<script>alert" not in page.body
        assert b"default-src 'none'" in page.headers["content-security-policy"].encode()


def test_quotes_in_a_search_stay_in_it(client: Client) -> None:
    for text in ('")) } #', "\\", '"', 'malate" || true', "a\nb", "\u2028", "?x", "x" * 5000):
        answer = client.get("/search?" + urlencode({"q": text}), "text/html")
        assert answer.status == 200 and b"not SPARQL" not in answer.body


def test_slow_clients_hold_nobody_up(client: Client) -> None:
    """60 clients that send their requests byte by byte, or never read: others are answered at once."""
    slow = [socket.create_connection(("127.0.0.1", client.port)) for _ in range(60)]
    try:
        for number, link in enumerate(slow):
            if number % 2:
                link.sendall(
                    b"POST /sparql HTTP/1.1\r\nHost: x\r\nContent-Type: application/sparql-query\r\nContent-Length: 500\r\n\r\nA"
                )
            else:
                link.sendall(b"GET /sparql?query=SELECT+*+%7B%3Fs+%3Fp+%3Fo%7D+LIMIT+20000 HTTP/1.1\r\nHo")
        for _ in range(3):
            for link in slow:
                link.sendall(b"s")
            started = time.monotonic()
            assert client.query(COUNT).status == 200
            assert time.monotonic() - started < 2
    finally:
        for link in slow:
            link.close()


def test_clients_that_leave(client: Client) -> None:
    for _ in range(20):
        with socket.create_connection(("127.0.0.1", client.port)) as link:
            link.sendall(b"GET /sparql?query=SELECT+*+%7B%3Fs+%3Fp+%3Fo%7D+LIMIT+5000 HTTP/1.1\r\nHost: x\r\n\r\n")


def test_pages_answer_while_all_workers_are_busy(client: Client) -> None:
    with concurrent.futures.ThreadPoolExecutor(8) as many:
        heavy = [many.submit(client.query, HEAVY["cross product"]) for _ in range(6)]
        time.sleep(0.2)
        started = time.monotonic()
        assert client.get("/id/compound/malate", "text/html").status == 200
        assert time.monotonic() - started < 2
        assert {answer.result().status for answer in heavy} == {500}


def test_two_hundred_clients_lose_no_answer(results: Path) -> None:
    """Each asks its own question at the same time and gets its own answer."""
    with served(Plan(port=0, results=results, limits=Limits(seconds=10), workers=2)) as client:
        client.query(COUNT)

        def ask(number: int) -> bool:
            answer = client.query(f"SELECT ?x (COUNT(*) AS ?n) {{ BIND({number} AS ?x) ?h a hr:Host }} GROUP BY ?x")
            return answer.status == 200 and answer.rows() == [{"x": str(number), "n": "4"}]

        started = time.monotonic()
        gate = threading.Barrier(200)

        def together(number: int) -> bool:
            gate.wait(30)
            return ask(number)

        with concurrent.futures.ThreadPoolExecutor(200) as many:
            answers = list(many.map(together, range(200)))
        assert answers == [True] * 200
        print(f"\n200 clients at once: {200 / (time.monotonic() - started):.0f} answers per second")


def test_a_crowd_that_is_too_large_is_told_so(results: Path) -> None:
    """When no worker comes free in time the answer is 503 with Retry-After, not a lost connection."""
    with served(Plan(port=0, results=results, limits=Limits(seconds=1.5), workers=1, patience=0.5)) as client:
        with concurrent.futures.ThreadPoolExecutor(6) as many:
            answers = list(many.map(client.query, [HEAVY["cross product"]] * 6))
        assert {answer.status for answer in answers} == {500, 503}
        busy = next(answer for answer in answers if answer.status == 503)
        assert (kind(busy), busy.headers["retry-after"]) == ("busy", "5")


def test_errors_say_what_happened(client: Client) -> None:
    body = client.query(HEAVY["cross product"]).json()
    assert body == {"error": {"kind": "time-limit", "status": 500, "message": "the query was stopped after 1 seconds"}}
    json.dumps(body)


def test_there_are_at_least_thirty_kinds_of_attack() -> None:
    assert len(HEAVY) + len(MALFORMED) + len(DOORS) + len(CLIMBS) + 15 >= 30
