"""Scenarios over HTTP, the OpenAPI description, and clients that other people wrote."""

from __future__ import annotations

import json
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any
from urllib.parse import urlencode

import jsonschema
import pytest
from pyoxigraph import RdfFormat, parse

from headrace.outputs.rdf import folder
from headrace.outputs.service import openapi

from .needs import program
from .service import FORM, Client

pytestmark = pytest.mark.xdist_group("linked")  # one worker shares what is started for these tests

SCENARIO = """title = "asked over HTTP"
host = "corynebacterium-glutamicum"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
uptake = "6.0 mmol/gDW/h"
[conditions]
supplements = ["biotin"]
[[outlet]]
product = "L-lysine"
rate = "0.5 mmol/gDW/h"
"""
TOML = {"Content-Type": "application/toml"}


def ask(
    client: Client,
    what: str,
    text: str = SCENARIO,
    media: str = "application/toml",
    accept: str = "application/json",
    query: str = "",
) -> Any:
    return client.send("POST", f"/ask/{what}{query}", text.encode(), {"Content-Type": media, "Accept": accept})


@pytest.mark.parametrize("what", ["refills", "drains", "ceiling", "grows"])
def test_the_answer_is_that_of_the_command(client: Client, what: str, tmp_path: Path) -> None:
    (tmp_path / "s.toml").write_text(SCENARIO)
    done = subprocess.run(
        [sys.executable, "-m", "headrace", what, "s.toml", "--format", "json"], cwd=tmp_path, capture_output=True
    )
    answer = ask(client, what)
    assert (answer.status, answer.media) == (200, "application/json")
    assert json.loads(done.stdout) == answer.json()


def test_toml_json_and_form_are_alike(client: Client) -> None:
    import tomllib

    as_json = ask(client, "grows", json.dumps(tomllib.loads(SCENARIO)), "application/json")
    as_text = ask(client, "grows", media="text/plain")
    as_form = client.send("POST", "/ask", urlencode({"scenario": SCENARIO, "question": "grows"}), {"Content-Type": FORM})
    assert as_json.json() == as_text.json() == as_form.json() == ask(client, "grows").json()


@pytest.mark.parametrize(
    ("accept", "format"),
    [("text/turtle", RdfFormat.TURTLE), ("application/ld+json", RdfFormat.JSON_LD), ("application/trig", RdfFormat.TRIG), ("application/n-triples", RdfFormat.N_TRIPLES)],
)  # fmt: skip
def test_answers_as_rdf(client: Client, accept: str, format: RdfFormat) -> None:
    answer = ask(client, "refills", accept=accept)
    assert (answer.status, answer.media) == (200, accept)
    said = list(parse(answer.body, format=format))
    assert any(quad.predicate.value.endswith("#answer") and quad.object.value == "feasible" for quad in said)  # type: ignore[union-attr]


def test_an_answer_is_saved_only_when_asked(client: Client, results: Path) -> None:
    before = set(folder.stamps(results))
    assert "location" not in ask(client, "refills").headers
    assert set(folder.stamps(results)) == before
    answer = ask(client, "refills", query="?save=true&agent=the+group")
    (name,) = set(folder.stamps(results)) - before
    try:
        assert answer.headers["location"] == f"/id/run/{name}"
        saved = client.query(f"SELECT ?cover {{ <https://w3id.org/headrace/id/run/{name}> hr:answer ?cover }}")
        assert saved.rows() == [{"cover": answer.json()["answer"]}]  # there at once, without a restart
        assert b"asked over HTTP" in client.get("/", "text/html").body
        assert b"the group" in client.get(answer.headers["location"], "text/turtle").body
    finally:
        (results / (name + folder.ENDING)).unlink()
    assert client.get(answer.headers["location"], "text/turtle").status == 404


def test_a_browser_s_form(client: Client, results: Path) -> None:
    page = {"Content-Type": FORM, "Accept": "text/html"}
    shown = client.send("POST", "/ask", urlencode({"scenario": SCENARIO, "question": "refills"}), page)
    assert shown.status == 200 and b"<table>" in shown.body
    before = set(folder.stamps(results))
    saved = client.send("POST", "/ask", urlencode({"scenario": SCENARIO, "question": "grows", "save": "true"}), page)
    assert saved.status == 303
    assert client.get(saved.headers["location"], "text/html").status == 200
    wrong = client.send("POST", "/ask", urlencode({"scenario": SCENARIO.replace("glucose", "glucse")}), page)
    assert wrong.status == 400 and b"nearest" in wrong.body and b"glucse" in wrong.body
    for name in set(folder.stamps(results)) - before:
        (results / (name + folder.ENDING)).unlink()


def test_pages_of_other_sites_cannot_save(client: Client, results: Path) -> None:
    before = set(folder.stamps(results))
    headers = {**TOML, "Origin": "http://elsewhere.example"}
    answer = client.send("POST", "/ask/grows?save=true", SCENARIO, headers)
    assert (answer.status, answer.json()["error"]["kind"]) == (403, "origin")
    assert set(folder.stamps(results)) == before
    same = {**TOML, "Origin": client.url}
    assert client.send("POST", "/ask/grows?save=no", SCENARIO, same).status == 200


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "empty"),
        ("host = 1", "host"),
        (SCENARIO.replace("glucose", "glucse"), "glucose"),
        (SCENARIO.replace('"0.5 mmol/gDW/h"', '"0.5"'), "mmol/gDW/h"),
        ("{", "JSON"),
        ("../../etc/passwd", "TOML"),
        ("[" * 5000, "scenario"),
    ],
)
def test_wrong_scenarios_are_explained(client: Client, text: str, says: str) -> None:
    answer = ask(client, "refills", text)
    assert (answer.status, answer.json()["error"]["kind"]) == (400, "scenario")
    assert says in answer.body.decode()


def test_wrong_requests(client: Client) -> None:
    assert ask(client, "nonsense").status == 404
    assert ask(client, "refills", media="application/xml").status == 415
    assert ask(client, "refills", accept="image/png").status == 406
    assert ask(client, "refills", "#" * 300_000).status == 413
    assert ask(client, "refills", "[]", "application/json").status == 400
    assert client.send("PUT", "/ask/refills", SCENARIO, TOML).status == 405
    assert client.get("/ask/refills").status == 405


def test_openapi_describes_what_there_is(client: Client) -> None:
    document = client.get("/openapi.json").json()
    assert document == openapi.document(client.url)
    assert document["openapi"].startswith("3.1")
    jsonschema.Draft202012Validator.check_schema(document["components"]["schemas"]["Scenario"])
    names = [operation["operationId"] for path in document["paths"].values() for operation in path.values()]
    assert len(names) == len(set(names)) == 6
    validator = jsonschema.Draft202012Validator({**document, "$ref": "#/components/schemas/Scenario"})
    import tomllib

    assert not list(validator.iter_errors(tomllib.loads(SCENARIO)))
    assert list(validator.iter_errors({"feed": []}))


def test_each_described_answer_is_given(client: Client) -> None:
    """Every media type that the description promises for a success is really served."""
    document = client.get("/openapi.json").json()
    for media in document["paths"]["/sparql"]["get"]["responses"]["200"]["content"]:
        text = (
            "ASK {}"
            if media.startswith(("application/sparql", "text/csv", "text/tab"))
            else "DESCRIBE <https://w3id.org/headrace/id/compound/malate>"
        )
        assert client.query(text, media).media == media
    for media in document["paths"]["/ask/{question}"]["post"]["responses"]["200"]["content"]:
        assert ask(client, "grows", accept=media).media == media
    for media in document["paths"]["/id/{path}"]["get"]["responses"]["200"]["content"]:
        assert client.get("/id/compound/malate", media).media == media
    for media in document["paths"]["/void"]["get"]["responses"]["200"]["content"]:
        assert client.get("/void", media).media == media


def test_sparqlwrapper(client: Client) -> None:
    """An independent client: SPARQLWrapper, by GET and by POST, in three formats."""
    import SPARQLWrapper

    endpoint = SPARQLWrapper.SPARQLWrapper(f"{client.url}/sparql")
    endpoint.setQuery("SELECT ?h { ?h a <https://w3id.org/headrace/ns#Host> }")
    for method in (SPARQLWrapper.GET, SPARQLWrapper.POST):
        endpoint.setMethod(method)
        endpoint.setReturnFormat(SPARQLWrapper.JSON)
        assert len(endpoint.query().convert()["results"]["bindings"]) == 4
    endpoint.setReturnFormat(SPARQLWrapper.XML)
    assert len(endpoint.query().convert().getElementsByTagName("result")) == 4
    endpoint.setMethod(SPARQLWrapper.GET)
    endpoint.setQuery("CONSTRUCT WHERE { ?h a <https://w3id.org/headrace/ns#Host> }")
    endpoint.setReturnFormat(SPARQLWrapper.TURTLE)
    assert b"Host" in endpoint.query().convert()
    endpoint.setReturnFormat(SPARQLWrapper.JSON)
    endpoint.setQuery("SELECT")
    with pytest.raises(SPARQLWrapper.SPARQLExceptions.QueryBadFormed):
        endpoint.query()


def test_rdflib_s_store(client: Client) -> None:
    from rdflib import Graph, URIRef
    from rdflib.plugins.stores.sparqlstore import SPARQLStore

    graph = Graph(SPARQLStore(f"{client.url}/sparql", returnFormat="json"))
    hosts = list(graph.query("SELECT ?h { ?h a <https://w3id.org/headrace/ns#Host> }"))
    assert len(hosts) == 4
    labels = list(
        graph.objects(
            URIRef("https://w3id.org/headrace/id/compound/malate"), URIRef("http://www.w3.org/2004/02/skos/core#prefLabel")
        )
    )
    assert [str(label) for label in labels] == ["L-malate"]


def test_plain_curl(client: Client) -> None:
    curl = program("curl", "the Debian package curl")

    def run(*words: str) -> str:
        done = subprocess.run([curl, "-sS", "--max-time", "20", *words], capture_output=True, text=True, check=True)
        return done.stdout

    text = "SELECT ?h { ?h a <https://w3id.org/headrace/ns#Host> } ORDER BY ?h"
    got = run("-G", "--data-urlencode", f"query={text}", "-H", "Accept: text/csv", f"{client.url}/sparql")
    posted = run("--data-urlencode", f"query={text}", "-H", "Accept: text/csv", f"{client.url}/sparql")
    direct = run(
        "--data-binary", text, "-H", "Content-Type: application/sparql-query", "-H", "Accept: text/csv", f"{client.url}/sparql"
    )
    assert got == posted == direct and got.count("\n") == 5
    assert "a hr:Compound" in run("-H", "Accept: text/turtle", f"{client.url}/id/compound/malate")
    assert '"@id"' in run("-L", "-H", "Accept: application/ld+json", f"{client.url}/id/compound/malate")
    assert shutil.which("curl")
