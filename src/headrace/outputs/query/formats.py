"""Result formats: short names, media types and engine formats."""

from __future__ import annotations

from typing import NamedTuple

from pyoxigraph import QueryResultsFormat, RdfFormat


class Format(NamedTuple):
    """name: as on the command line. media: the type that answers carry. accepts: other types that ask for it."""

    name: str
    media: str
    ending: str
    accepts: tuple[str, ...] = ()


SOLUTIONS = (
    Format("json", "application/sparql-results+json", "srj", ("application/json", "text/json")),
    Format("xml", "application/sparql-results+xml", "srx", ("application/xml", "text/xml")),
    Format("csv", "text/csv; charset=utf-8", "csv"),
    Format("tsv", "text/tab-separated-values; charset=utf-8", "tsv"),
)
GRAPHS = (
    Format("turtle", "text/turtle; charset=utf-8", "ttl", ("application/x-turtle",)),
    Format("ntriples", "application/n-triples; charset=utf-8", "nt", ("text/plain",)),
    Format("jsonld", "application/ld+json", "jsonld", ("application/json",)),
    Format("rdfxml", "application/rdf+xml", "rdf", ("application/xml", "text/xml")),
)
SOLUTION_ENGINE = {
    "json": QueryResultsFormat.JSON,
    "xml": QueryResultsFormat.XML,
    "csv": QueryResultsFormat.CSV,
    "tsv": QueryResultsFormat.TSV,
}
GRAPH_ENGINE = {
    "turtle": RdfFormat.TURTLE,
    "ntriples": RdfFormat.N_TRIPLES,
    "jsonld": RdfFormat.JSON_LD,
    "rdfxml": RdfFormat.RDF_XML,
}
BY_NAME = {each.name: each for each in (*SOLUTIONS, *GRAPHS)}
