"""SPARQL 1.1 Protocol (W3C Recommendation, 21 March 2013), the clauses on the query operation, over real HTTP.

Each test is named by its clause.
"""

from __future__ import annotations

import csv
import io
import xml.etree.ElementTree as ElementTree
from urllib.parse import quote, urlencode

import pytest
from pyoxigraph import RdfFormat, parse

from .service import DIRECT, FORM, JSON, Client

pytestmark = pytest.mark.xdist_group("linked")  # one worker shares what is started for these tests

HOSTS = "SELECT ?h { ?h a <https://w3id.org/headrace/ns#Host> } ORDER BY ?h"
GRAPH = "https://w3id.org/headrace/id/graph/"
XML_RESULTS = "{http://www.w3.org/2005/sparql-results#}"


def test_2_1_1_query_via_get(client: Client) -> None:
    answer = client.query(HOSTS)
    assert (answer.status, answer.media) == (200, JSON)
    assert len(answer.rows()) == 4


def test_2_1_1_parameters_are_percent_encoded(client: Client) -> None:
    text = 'ASK { FILTER("a+b & é?" = "a+b & \u00e9?") }'
    assert client.get("/sparql?query=" + quote(text), JSON).json()["boolean"] is True
    assert client.get("/sparql?" + urlencode({"query": text}), JSON).json()["boolean"] is True


def test_2_1_2_query_via_url_encoded_post(client: Client) -> None:
    answer = client.post(urlencode({"query": HOSTS}), FORM)
    assert (answer.status, len(answer.rows())) == (200, 4)
    with_charset = client.post(urlencode({"query": HOSTS}), f"{FORM}; charset=UTF-8")
    assert with_charset.body == answer.body


def test_2_1_3_query_via_post_directly(client: Client) -> None:
    answer = client.post(HOSTS, DIRECT)
    assert (answer.status, len(answer.rows())) == (200, 4)
    assert client.post('ASK { FILTER("é" = "\u00e9") }', f"{DIRECT}; charset=utf-8").json()["boolean"] is True


@pytest.mark.parametrize("way", ["get", "form", "direct"])
def test_2_1_4_specifying_an_rdf_dataset(client: Client, way: str) -> None:
    """default-graph-uri and named-graph-uri make the dataset, in each of the three ways."""

    def ask(text: str, default: list[str], named: list[str]) -> int:
        parameters = {"default-graph-uri": default, "named-graph-uri": named}
        if way == "get":
            answer = client.query(text, JSON, **parameters)
        elif way == "form":
            answer = client.post(urlencode({"query": text, **parameters}, doseq=True), FORM)
        else:
            answer = client.post(text, DIRECT, path="/sparql?" + urlencode(parameters, doseq=True))
        assert answer.status == 200, answer.body
        return int(answer.rows()[0]["n"])

    default, named = "SELECT (COUNT(*) AS ?n) { ?s ?p ?o }", "SELECT (COUNT(*) AS ?n) { GRAPH ?g { ?s ?p ?o } }"
    facts, derived = ask(default, [GRAPH + "facts"], []), ask(default, [GRAPH + "derived"], [])
    assert facts > 10_000 and derived > 1000
    assert ask(default, [GRAPH + "facts", GRAPH + "derived"], []) == facts + derived
    assert ask(default, [], [GRAPH + "facts"]) == 0
    assert ask(named, [], [GRAPH + "facts"]) == facts
    assert ask(named, [GRAPH + "derived"], [GRAPH + "facts"]) == facts
    assert ask(named, [GRAPH + "derived"], []) == 0


def test_2_1_4_the_protocol_s_dataset_goes_before_the_query_s(client: Client) -> None:
    text = f"SELECT (COUNT(*) AS ?n) FROM <{GRAPH}facts> {{ ?s ?p ?o }}"
    own = int(client.query(text).rows()[0]["n"])
    given = int(client.query(text, **{"default-graph-uri": GRAPH + "derived"}).rows()[0]["n"])
    assert (
        own
        != given
        == int(client.query("SELECT (COUNT(*) AS ?n) { ?s ?p ?o }", **{"default-graph-uri": GRAPH + "derived"}).rows()[0]["n"])
    )


def test_2_1_4_without_a_dataset_the_service_chooses_one(client: Client) -> None:
    everything = int(client.query("SELECT (COUNT(*) AS ?n) { ?s ?p ?o }").rows()[0]["n"])
    graphs = client.query("SELECT ?g (COUNT(*) AS ?n) { GRAPH ?g { ?s ?p ?o } } GROUP BY ?g").rows()
    assert everything == sum(int(row["n"]) for row in graphs)
    assert len(graphs) == 7


def test_2_1_4_a_graph_that_is_not_here_is_refused(client: Client) -> None:
    answer = client.query(HOSTS, **{"default-graph-uri": GRAPH + "none"})
    assert (answer.status, answer.json()["error"]["kind"]) == (400, "query")


@pytest.mark.parametrize(
    ("accept", "media"),
    [
        ("", JSON),
        ("*/*", JSON),
        (JSON, JSON),
        ("application/json", JSON),
        ("application/sparql-results+xml", "application/sparql-results+xml"),
        ("application/xml", "application/sparql-results+xml"),
        ("text/csv", "text/csv"),
        ("text/tab-separated-values", "text/tab-separated-values"),
        ("text/csv;q=0.5, application/sparql-results+xml", "application/sparql-results+xml"),
        ("text/csv;q=0.9, application/sparql-results+xml;q=0.1", "text/csv"),
        ("application/sparql-results+xml;q=0, */*;q=0.1", JSON),
        ("text/*", "text/csv"),
        ("text/html,application/xhtml+xml,application/xml;q=0.9,*/*;q=0.8", "text/html"),
        ("application/pdf, text/csv;q=0.2", "text/csv"),
    ],
)
def test_2_1_5_accepted_response_formats_of_solutions(client: Client, accept: str, media: str) -> None:
    answer = client.query(HOSTS, accept)
    assert (answer.status, answer.media) == (200, media)
    assert "Accept" in answer.headers["vary"]


@pytest.mark.parametrize(
    ("accept", "media", "format"),
    [
        ("", "text/turtle", RdfFormat.TURTLE),
        ("*/*", "text/turtle", RdfFormat.TURTLE),
        ("text/turtle", "text/turtle", RdfFormat.TURTLE),
        ("application/n-triples", "application/n-triples", RdfFormat.N_TRIPLES),
        ("application/ld+json", "application/ld+json", RdfFormat.JSON_LD),
        ("application/rdf+xml", "application/rdf+xml", RdfFormat.RDF_XML),
        (f"{JSON}, text/turtle;q=0.5", "text/turtle", RdfFormat.TURTLE),
    ],
)
def test_2_1_5_accepted_response_formats_of_graphs(client: Client, accept: str, media: str, format: RdfFormat) -> None:
    for text in ("CONSTRUCT { ?h a hr:Host } WHERE { ?h a hr:Host }", "DESCRIBE <https://w3id.org/headrace/id/compound/malate>"):
        answer = client.query(text, accept)
        assert (answer.status, answer.media) == (200, media)
        assert len(list(parse(answer.body, format=format))) >= 4


def test_2_1_5_nothing_acceptable(client: Client) -> None:
    for text, accept in ((HOSTS, "image/png"), (HOSTS, "text/turtle"), ("DESCRIBE <http://x/>", "text/csv")):
        answer = client.query(text, accept)
        assert (answer.status, answer.json()["error"]["kind"]) == (406, "not-acceptable")


def test_2_1_6_success_and_the_four_result_formats_agree(client: Client) -> None:
    wanted = [row["h"] for row in client.query(HOSTS).rows()]
    tree = ElementTree.fromstring(client.query(HOSTS, "application/sparql-results+xml").body)
    assert [node.text for node in tree.iter(f"{XML_RESULTS}uri")] == wanted
    table = list(csv.reader(io.StringIO(client.query(HOSTS, "text/csv").body.decode())))
    assert table == [["h"], *([iri] for iri in wanted)]
    lines = client.query(HOSTS, "text/tab-separated-values").body.decode().splitlines()
    assert lines == ["?h", *(f"<{iri}>" for iri in wanted)]


def test_2_1_6_ask_gives_a_boolean(client: Client) -> None:
    assert client.query("ASK { ?h a hr:Host }").json() == {"head": {}, "boolean": True}
    tree = ElementTree.fromstring(client.query("ASK { ?h a hr:NoSuchThing }", "application/sparql-results+xml").body)
    assert tree.findtext(f"{XML_RESULTS}boolean") == "false"


@pytest.mark.parametrize(
    "text", ["", "SELECT", "SELECT * { ?s ?p", "SELECT ?x WHERE { FILTER( } ", "nonsense", "SELECT ?h { ?h a undeclared:x }"]
)
def test_2_1_7_a_malformed_query_gives_400(client: Client, text: str) -> None:
    answer = client.query(text)
    assert (answer.status, answer.json()["error"]["kind"]) == (400, "query")
    assert answer.json()["error"]["message"]


def test_2_1_7_a_refused_query_gives_500(client: Client) -> None:
    answer = client.query("SELECT (COUNT(*) AS ?n) { ?a ?b ?c . ?d ?e ?f }")
    assert (answer.status, answer.json()["error"]["kind"]) == (500, "time-limit")


def test_2_1_exactly_one_query(client: Client) -> None:
    twice = client.get("/sparql?" + urlencode([("query", HOSTS), ("query", HOSTS)]), JSON)
    none = client.post("default-graph-uri=x", FORM)
    both = client.post(HOSTS, DIRECT, path="/sparql?" + urlencode({"query": HOSTS}))
    empty = client.post("", FORM)
    assert [answer.status for answer in (twice, none, both, empty)] == [400] * 4


def test_2_1_bodies_of_other_types(client: Client) -> None:
    for media in ("text/plain", "application/json", "multipart/form-data; boundary=x", ""):
        answer = client.send("POST", "/sparql", HOSTS, {"Content-Type": media} if media else {})
        assert answer.status == 415


def test_2_1_methods(client: Client) -> None:
    for method in ("PUT", "DELETE", "PATCH", "TRACE"):
        answer = client.send(method, "/sparql", b"")
        assert answer.status == 405 and answer.headers["allow"] == "GET, HEAD, POST, OPTIONS"
    head = client.send("HEAD", "/sparql?" + urlencode({"query": HOSTS}))
    assert (head.status, head.body) == (200, b"") and int(head.headers["content-length"]) > 0


def test_2_1_not_utf8(client: Client) -> None:
    assert client.send("POST", "/sparql", b"ASK { ?s ?p '\xff' }", {"Content-Type": DIRECT}).status == 400
    assert client.send("POST", "/sparql", b"query=ASK%7B%FF%7D", {"Content-Type": FORM}).status == 400
    assert client.get("/sparql?query=ASK%7B%FF%7D").status == 400


def test_2_2_update_is_refused(client: Client) -> None:
    text = "INSERT DATA { <http://x/a> <http://x/b> <http://x/c> }"
    answers = [
        client.post(text, "application/sparql-update"),
        client.post(urlencode({"update": text}), FORM),
        client.post(urlencode({"update": text, "query": HOSTS}), FORM),
        client.get("/sparql?" + urlencode({"update": text})),
    ]
    assert [answer.status for answer in answers] == [403] * 4
    assert client.query(text).status == 400
    assert client.query("ASK { <http://x/a> ?p ?o }").json()["boolean"] is False


def test_4_1_cross_origin_requests(client: Client) -> None:
    answer = client.get("/sparql?" + urlencode({"query": HOSTS}), JSON, Origin="http://elsewhere.example")
    assert answer.headers["access-control-allow-origin"] == "*"
    before = client.send(
        "OPTIONS", "/sparql", headers={"Origin": "http://elsewhere.example", "Access-Control-Request-Method": "POST"}
    )
    assert before.status == 204
    assert "POST" in before.headers["access-control-allow-methods"]
    assert "Content-Type" in before.headers["access-control-allow-headers"]


def test_service_description(client: Client) -> None:
    """SPARQL 1.1 Service Description, section 2: a GET without a query gives RDF about the service."""
    for accept, format in (("text/turtle", RdfFormat.TURTLE), ("application/rdf+xml", RdfFormat.RDF_XML), ("", RdfFormat.TURTLE)):
        answer = client.get("/sparql", accept)
        assert answer.status == 200
        said = {
            (quad.predicate.value.rpartition("#")[2], getattr(quad.object, "value", ""))
            for quad in parse(answer.body, format=format)
        }
        assert ("endpoint", f"{client.url}/sparql") in said
        assert ("supportedLanguage", "http://www.w3.org/ns/sparql-service-description#SPARQL11Query") in said
        assert ("feature", "http://www.w3.org/ns/sparql-service-description#UnionDefaultGraph") in said
        assert ("name", GRAPH + "facts") in said


def test_void(client: Client) -> None:
    for path in ("/void", "/.well-known/void"):
        answer = client.get(path, "text/turtle")
        said = {
            (quad.predicate.value.rpartition("#")[2], getattr(quad.object, "value", ""))
            for quad in parse(answer.body, format=RdfFormat.TURTLE)
        }
        assert ("sparqlEndpoint", f"{client.url}/sparql") in said
        assert ("documents", "5") in said
