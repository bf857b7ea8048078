"""The guard, token by token: what is refused in every disguise, and what only looks like it."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace.errors import InputError
from headrace.outputs.query import guard
from headrace.outputs.query.tokens import tokens

REFUSED = {
    "service": "SELECT * { SERVICE <http://127.0.0.1:1/> { ?s ?p ?o } }",
    "service, small": "select*{service<http://127.0.0.1:1/>{?s ?p ?o}}",
    "service silent": "SELECT * { SERVICE SILENT <http://127.0.0.1:1/> { ?s ?p ?o } }",
    "service variable": "SELECT * { BIND(<http://127.0.0.1:1/> AS ?g) SERVICE ?g { ?s ?p ?o } }",
    "service in a subquery": "ASK { { SELECT * { { SERVICE <http://127.0.0.1:1/> { ?s ?p ?o } } } } }",
    "service after a comment": "SELECT * { # SERVICE is here\n SERVICE <http://127.0.0.1:1/> { } }",
    "service after a carriage return": "SELECT * { # hidden\rSERVICE <http://127.0.0.1:1/> { } }",
    "service behind a string": "SELECT * { ?s ?p '#' . SERVICE <http://127.0.0.1:1/> { } }",
    "service behind an address": "SELECT * { ?s ?p <http://x/#> . SERVICE <http://127.0.0.1:1/> { } }",
    "service behind a long string": "SELECT * { ?s ?p '''a''b'''. SERVICE <http://127.0.0.1:1/> { } }",
    "service in codepoints": "SELECT * { \\u0053ERVICE <http://127.0.0.1:1/> { } }",
    "service in long codepoints": "SELECT * { \\U00000053ERVICE <http://127.0.0.1:1/> { } }",
    "service in doubled codepoints": "SELECT * { \\u005Cu0053ERVICE <http://127.0.0.1:1/> { } }",
    "string ended by a codepoint": "SELECT * { ?s ?p \"a\\u0022 . SERVICE <http://127.0.0.1:1/> { } # \" }",
    "from http": "SELECT * FROM <http://127.0.0.1:1/data> { ?s ?p ?o }",
    "from file": "SELECT * FROM <file:///etc/passwd> { ?s ?p ?o }",
    "from named file": "SELECT * FROM NAMED <file:///etc/passwd> { GRAPH ?g { ?s ?p ?o } }",
    "from by prefix": "PREFIX x: <http://127.0.0.1:1/> SELECT * FROM x:data { ?s ?p ?o }",
    "from by base": "BASE <http://127.0.0.1:1/> SELECT * FROM <data> { ?s ?p ?o }",
    "from relative": "SELECT * FROM <data> { ?s ?p ?o }",
    "from named by base": "base <file:///etc/> select * from named <passwd> { graph ?g { ?s ?p ?o } }",
    "from with a second base": "BASE <https://w3id.org/headrace/id/> BASE <http://127.0.0.1:1/> SELECT * FROM <graph/facts> {}",
    "from that climbs": "BASE <https://w3id.org/headrace/id/x/> SELECT * FROM <../../../../evil> { ?s ?p ?o }",
    "file as a graph": "SELECT * { GRAPH <file:///etc/passwd> { ?s ?p ?o } }",
    "insert": "INSERT DATA { <a:a> <a:b> <a:c> }",
    "delete": "delete where { ?s ?p ?o }",
    "load": "LOAD <http://127.0.0.1:1/data>",
    "load silent after prologue": "PREFIX a: <b:> LOAD SILENT <file:///etc/passwd>",
    "load after a query": "SELECT * { ?s ?p ?o } ; LOAD <http://127.0.0.1:1/data>",
    "clear": "CLEAR ALL",
    "drop": "DROP SILENT DEFAULT",
    "with": "WITH <a:b> DELETE { ?s ?p ?o } WHERE { ?s ?p ?o }",
    "pragma": "DEFINE get:soft \"replace\" SELECT * { ?s ?p ?o }",
    "engine function": "SELECT (bif:http_get('http://127.0.0.1:1/') AS ?x) {}",
    "engine function by address": "SELECT (<bif:http_get>('http://127.0.0.1:1/') AS ?x) {}",
    "explain": "EXPLAIN SELECT * { ?s ?p ?o }",
    "nothing": "",
    "a comment": "# SELECT * {}",
    "open string": "SELECT * { ?s ?p 'abc }",
    "deep": "SELECT * { " + "{" * 100 + "}" * 100 + " }",
    "long": "SELECT * { ?s ?p ?o } #" + "x" * 1_000_001,
    "control character": "SELECT * { ?s ?p \x00 }",
    "half a surrogate": "SELECT * { ?s ?p '\\uD800' }",
}  # fmt: skip

ALLOWED = {
    "words in strings": "SELECT * { ?s ?p 'SERVICE', \"LOAD <file:///x>\", '''FROM''' }",
    "words in variables": "SELECT ?service ?load { ?service ?from ?load }",
    "words in names": "PREFIX load: <http://x/> SELECT * { ?s load:service load:from }",
    "words in addresses": "SELECT * { ?s <http://x/SERVICE> <http://x/LOAD> }",
    "words in comments": "# SERVICE LOAD INSERT\nSELECT * { ?s ?p ?o } # FROM <http://x/>",
    "words in tags": "SELECT * { ?s ?p 'x'@load-service }",
    "a codepoint in a string": "SELECT * { ?s ?p '\\u00e9' }",
    "less than": "SELECT * { ?s ?p ?o FILTER(?o<5&&?o>1) }",
    "escaped local": "PREFIX x: <http://x/> SELECT * { ?s ?p x:a\\,b }",
    "paths": "SELECT * { ?s (<a:a>|^<b:b>)*/<c:c>+ ?o }",
    "values": "SELECT * { VALUES (?a ?b) { (1 'x') (UNDEF 2.5e3) } }",
    "base and prefix": "BASE <http://x/> PREFIX a: <b#> ASK { <c> a:d [] }",
    "describe": "DESCRIBE <http://x/>",
    "construct": "CONSTRUCT WHERE { ?s ?p ?o }",
}


@pytest.mark.parametrize("what", REFUSED)
def test_refused(what: str) -> None:
    with pytest.raises(InputError) as caught:
        guard.check(REFUSED[what])
    assert len(str(caught.value)) < 600


@pytest.mark.parametrize("what", ALLOWED)
def test_allowed(what: str) -> None:
    assert guard.check(ALLOWED[what]).form in guard.FORMS


def test_graphs_that_are_asked_for() -> None:
    query = guard.check(
        "PREFIX g: <https://w3id.org/headrace/id/graph/> "
        "SELECT * FROM g:facts FROM <https://w3id.org/headrace/id/graph/derived> FROM NAMED g:facts { ?s ?p ?o }"
    )
    base = "https://w3id.org/headrace/id/graph/"
    assert (query.default, query.named) == ((f"{base}facts", f"{base}derived"), (f"{base}facts",))
    assert guard.check("SELECT * { ?s ?p ?o }").default is None


def test_usual_prefixes_are_declared_for_engines_that_know_none() -> None:
    query = guard.check("SELECT * { ?s a hr:Host ; skos:prefLabel ?l }")
    assert query.standalone() == (
        "PREFIX hr: <https://w3id.org/headrace/ns#> PREFIX skos: <http://www.w3.org/2004/02/skos/core#> " + query.text
    )
    own = guard.check("PREFIX hr: <http://x/> SELECT * { ?s a hr:Host }")
    assert own.standalone() == own.text


@given(st.text(max_size=60))
def test_tokens_cover_the_text_or_refuse_it(text: str) -> None:
    """Between tokens there is nothing but space and comments."""
    try:
        found = list(tokens(text))
    except InputError:
        return
    end = 0
    for token in found:
        between = text[end : token.at]
        assert all(not part.strip(" \t\r\n") or "#" in part for part in between.splitlines())
        end = token.at + len(token.text)


@given(st.text(alphabet="SERVICEservice \\u0053\"'<>#{}?:.\n\r@_a1", max_size=40))
def test_no_service_gets_through(noise: str) -> None:
    """However a text begins, a query that an engine reads as one with SERVICE is refused."""
    from pyoxigraph import Store

    text = f"SELECT * {{ {noise} SERVICE <http://127.0.0.1:1/> {{ ?s ?p ?o }} }}"
    try:
        guard.check(text)
    except InputError:
        return
    try:
        Store().query(text)
    except SyntaxError:
        return
    assert "SERVICE" not in [token.text for token in tokens(text) if token.kind == "word"]
