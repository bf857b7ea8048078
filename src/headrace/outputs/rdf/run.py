"""A result as one named graph, and its text."""

from __future__ import annotations

import secrets
from datetime import UTC, datetime

from msgspec import Struct
from pyoxigraph import Literal, NamedNode, Quad, RdfFormat, serialize

import headrace
from headrace.graph import terms as facts_terms
from headrace.names import slugify
from headrace.outputs import jsonout
from headrace.outputs.rdf import case, provenance, terms
from headrace.outputs.rdf.build import Builder, Graph
from headrace.outputs.rdf.links import Links
from headrace.values.answers import Result

_PREFIXES = ("c", "dcterms", "e", "ec", "h", "hr", "k", "o", "prov", "qudt", "r", "rt", "s", "skos", "unit", "xsd")
_LONGEST_TITLE = 40


class Run(Struct, frozen=True):
    """A run as saved. name: unique, the last part of the graph's IRI and of the file's name. trig: the text of the file."""

    name: str
    iri: str
    trig: bytes


def name_of(result: Result, moment: datetime) -> str:
    """A name that sorts by time, says what it is, and that no two runs share: time, question, title, eight random digits."""
    title = slugify(result.case.title)[:_LONGEST_TITLE].strip("-")
    parts = (moment.astimezone(UTC).strftime("%Y%m%d-%H%M%S"), result.kind, title, secrets.token_hex(4))
    return "-".join(part for part in parts if part)


def quads(result: Result, name: str, occasion: provenance.Occasion, rates: bool = False) -> list[Quad]:
    """All statements of a run. rates: with the rate of every reaction (refills)."""
    graph = Graph(terms.RUN_BASE + name)
    links = Links(result, graph.run)
    graph.add(graph.run, facts_terms.TYPE, terms.RUN)
    label = f"{result.case.title or links.host.label}: {result.kind}"
    graph.add(graph.run, facts_terms.LABEL, Literal(label, language="en"))
    graph.add(graph.run, terms.QUESTION, Literal(result.kind))
    graph.add(graph.run, terms.HOST, facts_terms.HOST_BASE + result.case.host)
    scenario = case.scenario(graph, result)
    graph.add(graph.run, terms.OF_SCENARIO, scenario)
    graph.add(graph.run, terms.OF_CASE, case.case(graph, links))
    provenance.describe(graph, result, occasion, scenario, case.rests_on(links))
    Builder(graph, links).document(jsonout.document(result, occasion.software, rates))
    return list(dict.fromkeys(graph.quads))


def make(result: Result, started: datetime, rates: bool = False, agent: str = "") -> Run:
    """A run of a result that was worked on since `started` and is done now."""
    ended = datetime.now(UTC)
    name = name_of(result, ended)
    occasion = provenance.Occasion(started, ended, headrace.__version__, agent)
    return Run(name, terms.RUN_BASE + name, trig(quads(result, name, occasion, rates)))


def trig(statements: list[Quad]) -> bytes:
    """The statements of one run as TriG text, by subject, with short names."""
    prefixes = {name: facts_terms.PREFIXES[name] for name in _PREFIXES}
    graphs = {quad.graph_name.value for quad in statements if isinstance(quad.graph_name, NamedNode)}
    if len(graphs) == 1:
        prefixes[""] = f"{graphs.pop()}/"
    place: dict[str, int] = {}
    for quad in statements:
        place.setdefault(str(quad.subject), len(place))
    by_subject = sorted(statements, key=lambda quad: place[str(quad.subject)])
    return serialize(by_subject, format=RdfFormat.TRIG, prefixes=prefixes) or b""
