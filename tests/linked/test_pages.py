"""Pages as a browser without scripts gets them: links lead somewhere, every address has a page and RDF, forms work."""

from __future__ import annotations

import re
from html.parser import HTMLParser
from urllib.parse import urlencode

import pytest
from pyoxigraph import RdfFormat, parse

from headrace.outputs.service.negotiate import choose
from headrace.outputs.service.pages.markup import Html, link, table, tag

from .service import FORM, Client

pytestmark = pytest.mark.xdist_group("linked")  # one worker shares what is started for these tests

HTML = "text/html"
BROWSER = "text/html,application/xhtml+xml,application/xml;q=0.9,*/*;q=0.8"
ADDRESSES = [
    "/id/compound/malate", "/id/reaction/pyruvate-carboxylase", "/id/enzyme/pyruvate-carboxylase", "/id/outlet/l-lysine",
    "/id/host/escherichia-coli", "/id/host/corynebacterium-glutamicum/growth-associated-atp", "/id/source/chebi",
    "/id/host/escherichia-coli/malate-in-cytosol", "/id/unit/mmol-per-gdw-h", "/id/kind/maintenance", "/ns",
]  # fmt: skip


class Reader(HTMLParser):
    """Collects what a page has, and that its elements are closed in order."""

    def __init__(self, text: str) -> None:
        super().__init__(convert_charrefs=True)
        self.links: list[str] = []
        self.ids: list[str] = []
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.open: list[str] = []
        self.text = ""
        self.feed(text)
        assert not self.open

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = dict(attrs)
        self.tags.append((tag, given))
        if given.get("id"):
            self.ids.append(str(given["id"]))
        if tag == "a" and given.get("href"):
            self.links.append(str(given["href"]))
        if tag not in ("meta", "link", "input", "br"):
            self.open.append(tag)

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        self.text += data


def read(client: Client, path: str, status: int = 200) -> Reader:
    answer = client.get(path, HTML)
    assert (answer.status, answer.media) == (status, HTML), path
    return Reader(answer.body.decode())


@pytest.fixture(scope="module")
def runs(client: Client) -> list[str]:
    rows = client.query("SELECT ?r { ?r a hr:Run } ORDER BY ?r").rows()
    return [row["r"].removeprefix("https://w3id.org/headrace") for row in rows]


PAGES = [
    "/",
    "/browse",
    "/browse/hosts",
    "/browse/compounds",
    "/browse/sources",
    "/search?q=malate",
    "/sparql",
    "/sparql?example=designs",
    "/ask",
    *ADDRESSES,
]


@pytest.mark.parametrize("path", PAGES)
def test_each_page_is_sound(client: Client, path: str) -> None:
    """One h1, a language, a main part that the skip link leads to, labels on fields, headings on columns, no script inside."""
    page = read(client, path)
    names = [name for name, _ in page.tags]
    assert names.count("h1") == names.count("main") == names.count("nav") == 1
    assert ("html", {"lang": "en"}) in page.tags
    assert page.links[0] == "#main" and "main" in page.ids
    assert len(page.ids) == len(set(page.ids))
    assert any(name == "meta" and given.get("name") == "viewport" for name, given in page.tags)
    labels = {given.get("for") for name, given in page.tags if name == "label"}
    fields = {given.get("id") for name, given in page.tags if name in ("input", "textarea", "select")}
    assert fields <= labels
    assert all(given.get("scope") == "col" for name, given in page.tags if name == "th")
    assert not [given for _, given in page.tags if "style" in given or any(key.startswith("on") for key in given)]
    assert all(given.get("src") == "/static/headrace.js" for name, given in page.tags if name == "script")


def test_links_of_pages_lead_somewhere(client: Client, runs: list[str]) -> None:
    """Every local link of the main pages, and a sample of deeper ones, is answered."""
    seen: set[str] = set()
    for path in ["/", "/browse", "/browse/hosts", "/sparql", "/id/reaction/pyruvate-carboxylase", runs[0]]:
        seen |= {target.partition("#")[0] for target in read(client, path).links if target.startswith("/")}
    assert len(seen) > 40
    for target in sorted(seen):
        assert client.get(target, BROWSER).status == 200, target


@pytest.mark.parametrize("path", ADDRESSES)
def test_each_address_gives_rdf(client: Client, path: str) -> None:
    formats = {
        "text/turtle": RdfFormat.TURTLE,
        "application/ld+json": RdfFormat.JSON_LD,
        "application/n-triples": RdfFormat.N_TRIPLES,
    }
    found = []
    for media, format in formats.items():
        answer = client.get(path, media)
        assert (answer.status, answer.media) == (200, media)
        found.append(
            {
                str(quad.predicate) + str(quad.object)
                for quad in parse(answer.body, format=format)
                if not str(quad.object).startswith("_:")
            }
        )
    assert found[0] == found[1] == found[2] and found[0]


def test_every_address_in_the_data_dereferences(client: Client) -> None:
    """A sample of all subjects below our base: page and RDF."""
    rows = client.query(
        'SELECT DISTINCT ?s { ?s ?p ?o FILTER(isIRI(?s) && STRSTARTS(STR(?s), "https://w3id.org/headrace/id/")) }'
    ).rows()
    paths = [row["s"].removeprefix("https://w3id.org/headrace") for row in rows]
    assert len(paths) > 3000
    for path in paths[:: len(paths) // 60]:
        assert client.get(path, HTML).status == 200, path
        assert client.get(path, "text/turtle").status == 200, path


def test_an_entity_page_says_what_is_known(client: Client) -> None:
    page = read(client, "/id/host/corynebacterium-glutamicum/growth-associated-atp")
    for words in ("growth-associated ATP", "40", "mmol/gDW", "25 to 55", "calculated", "recalled"):
        assert words in page.text
    page = read(client, "/id/compound/malate")
    assert "What points here" in page.text and "/id/source/chebi" in page.links
    assert "http://purl.obolibrary.org/obo/CHEBI_15589" in page.links


def test_run_pages(client: Client, runs: list[str]) -> None:
    pages = {path: read(client, path) for path in runs}
    feasible = next(page for path, page in pages.items() if "refills-hr-12" in path)
    for words in (
        "Feasible.",
        "Ledger of skeletons",
        "Requirement by refill",
        "pyruvate carboxylase",
        "no limit",
        "caution",
        "1.577",
    ):
        assert words in feasible.text
    stuck = next(page for path, page in pages.items() if "refills-hr-13" in path)
    for words in ("Infeasible.", "What is short", "reopen PEP carboxylase", "<script>alert(1)</script>"):
        assert words in stuck.text
    assert "Does not grow." in next(page for path, page in pages.items() if "-grows-" in path).text
    for path in runs:
        graph = client.get(path + "?format=ntriples", HTML)
        assert graph.media == "application/n-triples" and graph.body.count(b"\n") > 50


def test_search(client: Client) -> None:
    assert "L-malate" in read(client, "/search?q=malate").text
    assert "/id/compound/malate" in read(client, "/search?q=MALIC+acid").links
    assert "pyruvate carboxylase" in read(client, "/search?q=6.4.1.1").text
    assert any("malate-synthase" in target for target in read(client, "/search?q=aceB").links)
    assert "Nothing is called" in read(client, "/search?q=zzzzzz").text
    assert "Type a name" in read(client, "/search").text
    assert any("/id/run/" in target for target in read(client, "/search?q=HR-12").links)


def test_the_editor_without_a_script(client: Client) -> None:
    text = "SELECT ?h ?n { ?h a hr:Host ; skos:prefLabel ?n } ORDER BY ?n"
    answer = client.send("POST", "/sparql", urlencode({"query": text, "format": "html"}), {"Content-Type": FORM, "Accept": HTML})
    page = Reader(answer.body.decode())
    assert "4 rows." in page.text and "Escherichia coli" in page.text and "/id/host/escherichia-coli" in page.links
    assert text in page.text
    for name, media in (
        ("csv", "text/csv"),
        ("json", "application/sparql-results+json"),
        ("xml", "application/sparql-results+xml"),
    ):
        body = urlencode({"query": text, "format": name})
        answer = client.send("POST", "/sparql", body, {"Content-Type": FORM, "Accept": HTML})
        assert answer.media == media and answer.headers["content-disposition"].startswith("inline; filename=")
    wrong = client.send(
        "POST", "/sparql", urlencode({"query": "SELECT", "format": "html"}), {"Content-Type": FORM, "Accept": HTML}
    )
    assert wrong.status == 400 and "No answer" in Reader(wrong.body.decode()).text
    graph = client.send(
        "POST",
        "/sparql",
        urlencode({"query": "DESCRIBE <https://w3id.org/headrace/id/compound/malate>"}),
        {"Content-Type": FORM, "Accept": HTML},
    )
    assert "a hr:Compound" in Reader(graph.body.decode()).text


def test_a_long_answer_says_that_more_there_is(client: Client) -> None:
    text = "SELECT ?s ?p { ?s ?p ?o } LIMIT 1500"
    page = Reader(client.query(text, HTML).body.decode())
    assert "1500 rows. The first 1000 are shown; the buttons above give all." in page.text


@pytest.mark.parametrize(
    "path",
    ["/id/compound/nothing-of-that-name", "/nothing", "/browse/nothing", "/id/", "/sparql?example=nothing", "/static/../app.py"],
)
def test_what_is_not_there(client: Client, path: str) -> None:
    assert client.get(path, HTML).status == 404
    if "?" not in path:
        assert client.get(path, "application/json").json()["error"]["status"] == 404


def test_negotiation_for_addresses(client: Client) -> None:
    path = "/id/compound/malate"
    assert client.get(path, BROWSER).media == HTML
    assert client.get(path).media == HTML
    assert client.get(path, "application/ld+json;q=0.9, text/turtle;q=0.5").media == "application/ld+json"
    assert client.get(path, "image/png").status == 406
    assert client.get(path + "?format=nonsense", HTML).status == 400
    assert client.send("HEAD", path).status == 200
    assert client.send("POST", path, b"").status == 405


def test_choosing_nothing_of_nothing() -> None:
    from headrace.outputs.query.formats import GRAPHS

    assert choose(";;;q=,,/", GRAPHS) is None
    assert choose("text/turtle;q=x", GRAPHS) is None


def test_markup_escapes_everything() -> None:
    assert tag("p", '<b>"x"</b>', title='"<') == '<p title="&quot;&lt;">&lt;b&gt;&quot;x&quot;&lt;/b&gt;</p>'
    assert link("javascript:alert(1)", "x") == "x"
    assert link("https://w3id.org/headrace/id/compound/malate", "m") == '<a href="/id/compound/malate">m</a>'
    assert "&lt;i&gt;" in table("<i>", ("a",), [("<i>",)]) and Html("<i>") in table("t", ("a",), [(Html("<i>"),)])
    assert not re.search("<i>", table("t", ("<i>",), [("x",)]))
