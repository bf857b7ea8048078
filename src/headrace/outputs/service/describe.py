"""What the service and its data are, for machines: SPARQL 1.1 Service Description and VoID."""

from __future__ import annotations

from collections.abc import Sequence

from pyoxigraph import RdfFormat, Triple, parse, serialize

import headrace
from headrace.graph import terms
from headrace.outputs.query.formats import GRAPH_ENGINE, GRAPHS, Format
from headrace.outputs.service.http import Request, Response
from headrace.outputs.service.negotiate import choose
from headrace.outputs.service.protocol import not_acceptable
from headrace.outputs.service.site import Site

SD = "http://www.w3.org/ns/sparql-service-description#"
VOID = "http://rdfs.org/ns/void#"
FORMATS = "http://www.w3.org/ns/formats/"
_RESULTS = ("SPARQL_Results_JSON", "SPARQL_Results_XML", "SPARQL_Results_CSV", "SPARQL_Results_TSV")
_GRAPHS = ("Turtle", "N-Triples", "JSON-LD", "RDF_XML")
_COUNTS = "SELECT ?g (COUNT(*) AS ?n) { GRAPH ?g { ?s ?p ?o } } GROUP BY ?g ORDER BY ?g"
_VOCABULARIES = ("http://www.w3.org/ns/prov#", "http://qudt.org/schema/qudt/", terms.SKOS, terms.DCTERMS, terms.BIBO, terms.HR)
_PREFIXES = {"sd": SD, "void": VOID, "dcterms": terms.DCTERMS, "xsd": terms.XSD, "formats": FORMATS}

Counts = Sequence[tuple[str, int]]


def counts(site: Site) -> Counts:
    """The graphs that are here, with their numbers of statements."""
    return [(row["g"]["value"], int(row["n"]["value"])) for row in site.rows(_COUNTS)]


def service(endpoint: str, graphs: Counts) -> str:
    """The service description as Turtle. endpoint: its address."""
    results = " , ".join(f"<{FORMATS}{name}>" for name in (*_RESULTS, *_GRAPHS))
    named = " , ".join(
        f"[ a sd:NamedGraph ; sd:name <{name}> ; sd:graph [ a sd:Graph ; void:triples {count} ] ]" for name, count in graphs
    )
    total = sum(count for _, count in graphs)
    listed = f" ; sd:namedGraph {named}" if named else ""
    return f"""<{endpoint}> a sd:Service ; sd:endpoint <{endpoint}> ; sd:supportedLanguage sd:SPARQL11Query ;
      sd:feature sd:UnionDefaultGraph ; sd:resultFormat {results} ;
      sd:defaultDataset [ a sd:Dataset ; sd:defaultGraph [ a sd:Graph ; void:triples {total} ]{listed} ] ."""


def void(base: str, graphs: Counts, version: str) -> str:
    """The VoID description as Turtle. base: address of the service."""
    runs = [name for name, _ in graphs if name.startswith(f"{terms.ID}run/")]
    facts = sum(count for name, count in graphs if name not in runs)
    saved = sum(count for name, count in graphs if name in runs)
    vocabularies = " , ".join(f"<{name}>" for name in _VOCABULARIES)
    return f"""<{terms.ID}graph/all> a void:Dataset ; dcterms:title "Headrace: facts and saved answers"@en ;
      dcterms:publisher "headrace {headrace.__version__}" ; void:sparqlEndpoint <{base}/sparql> ; void:uriSpace "{terms.ID}" ;
      void:triples {facts + saved} ; void:vocabulary {vocabularies} ; void:feature <{FORMATS}Turtle> , <{FORMATS}JSON-LD> ;
      void:subset <{terms.FACTS_GRAPH}> , <{terms.ID}graph/runs> .
    <{terms.FACTS_GRAPH}> a void:Dataset ; dcterms:title "Facts, and what follows from them"@en ; void:triples {facts} ;
      dcterms:license <https://creativecommons.org/licenses/by/4.0/> ; dcterms:hasVersion "{version}" .
    <{terms.ID}graph/runs> a void:Dataset ; dcterms:title "Saved answers"@en ; void:triples {saved} ;
      void:documents {len(runs)} ."""


def facts_version(site: Site) -> str:
    """The version of the facts that are served."""
    derived = f"<{terms.DERIVED_GRAPH}> <{terms.DERIVED_FROM}>/<{terms.VERSION}> ?v"
    found = site.rows(f"SELECT ?v {{ {derived} }}")
    return found[0]["v"]["value"] if found else ""


def respond(request: Request, turtle: str) -> Response:
    """Turtle of ours (without prefixes) in the RDF format that the client asks for."""
    chosen: Format | None = choose(request.accept, GRAPHS)
    if chosen is None:
        raise not_acceptable(GRAPHS)
    text = "".join(f"@prefix {name}: <{base}> .\n" for name, base in _PREFIXES.items()) + turtle
    found = [Triple(quad.subject, quad.predicate, quad.object) for quad in parse(text.encode(), format=RdfFormat.TURTLE)]
    prefixes = _PREFIXES if chosen.name == "turtle" else None
    return Response(200, serialize(found, format=GRAPH_ENGINE[chosen.name], prefixes=prefixes) or b"", chosen.media)
