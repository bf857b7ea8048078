"""What is known of an address: statements for machines, values for a page."""

from __future__ import annotations

import re
from collections import defaultdict
from typing import NamedTuple

from headrace.graph import terms
from headrace.graph.read import short as known_short
from headrace.outputs.rdf.terms import RUN_BASE
from headrace.outputs.service.site import Site

_PATH = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9._~-]*)(?:/[A-Za-z0-9][A-Za-z0-9._~-]*)*")
_LONGEST_PATH = 300
MOST_LINKS = 100
VOCABULARY = "https://w3id.org/headrace/ns"


class Value(NamedTuple):
    """A value on a page. iri: address, "" for text. text: label or literal. kind: datatype's last part, or language."""

    text: str
    iri: str = ""
    kind: str = ""


class Property(NamedTuple):
    """A predicate with its values; nested: for values without an address, what is said of them."""

    iri: str
    label: str
    values: list[Value]
    nested: list[list[tuple[str, Value]]]


class Incoming(NamedTuple):
    """Entities that point here by a predicate: those shown, and how many there are."""

    iri: str
    label: str
    values: list[Value]
    total: int


class Entity(NamedTuple):
    """All that a page shows of an address."""

    iri: str
    label: str
    kinds: list[Value]
    says: list[Property]
    numbers: list[dict[str, Value]]
    incoming: list[Incoming]


def iri_of(path: str) -> str | None:
    """The address that a path below /id/ stands for; None when no address of ours can look like it."""
    if len(path) > _LONGEST_PATH or not _PATH.fullmatch(path) or any(part in (".", "..") for part in path.split("/")):
        return None
    return terms.ID + path


def run_of(iri: str) -> str | None:
    """The run that an address belongs to (the run itself or a part of it); None for facts."""
    if not iri.startswith(RUN_BASE):
        return None
    return RUN_BASE + iri.removeprefix(RUN_BASE).split("/")[0]


def statements(site: Site, iri: str, format: str) -> bytes:
    """What is said of an address, with its nameless parts, in an RDF format; of a run, its whole graph."""
    if iri == run_of(iri):
        return site.statements(f"CONSTRUCT {{ ?s ?p ?o }} WHERE {{ GRAPH <{iri}> {{ ?s ?p ?o }} }}", format)
    if iri == VOCABULARY:
        defined = f"?s <{terms.RDFS}isDefinedBy> <{iri}> ; ?p ?o"
        return site.statements(
            f"CONSTRUCT {{ ?s ?p ?o }} WHERE {{ {{ {defined} }} UNION {{ <{iri}> ?p ?o BIND(<{iri}> AS ?s) }} }}", format
        )
    text = f"""CONSTRUCT {{ <{iri}> ?p ?o . ?o ?q ?v . ?v ?r ?w }} WHERE {{
      <{iri}> ?p ?o OPTIONAL {{ FILTER(isBlank(?o)) ?o ?q ?v OPTIONAL {{ FILTER(isBlank(?v)) ?v ?r ?w }} }} }}"""
    return site.statements(text, format)


def exists(site: Site, iri: str) -> bool:
    """Whether anything is said of an address."""
    return bool(site.rows(f"SELECT ?p {{ <{iri}> ?p ?o }} LIMIT 1"))


def describe(site: Site, iri: str) -> Entity | None:
    """The values for a page; None when nothing is said of the address."""
    says = _outgoing(site, iri)
    if not says:
        return None
    by_iri = {each.iri: each for each in says}
    label = by_iri.get(terms.LABEL) or by_iri.get(f"{terms.RDFS}label") or by_iri.get(terms.CITATION)
    kinds = by_iri[terms.TYPE].values if terms.TYPE in by_iri else []
    text = label.values[0].text if label else iri.removeprefix(terms.ID).rpartition("/")[2]
    return Entity(iri, text, kinds, says, _numbers(site, iri), _incoming(site, iri))


_LABELS = f"<{terms.LABEL}>|<{terms.RDFS}label>|<{terms.CITATION}>"


def labelled(node: str, name: str) -> str:
    """SPARQL that binds ?name to a node's label, where it has one."""
    return f"OPTIONAL {{ {node} {_LABELS} ?{name} }}"


def value_of(row: dict[str, dict[str, str]], name: str, label: str = "") -> Value:
    """A solution's term as a value for a page."""
    term = row[name]
    if term["type"] == "uri":
        said = row.get(label, {}).get("value", "")
        return Value(said or short(term["value"]), term["value"])
    return Value(term["value"], "", term.get("xml:lang") or term.get("datatype", "").rpartition("#")[2])


def short(iri: str) -> str:
    """An address without its base, or with a usual prefix in place of it."""
    return iri.removeprefix(terms.HR) if iri.startswith(terms.HR) else known_short(iri)


def _outgoing(site: Site, iri: str) -> list[Property]:
    own = f"<{iri}> ?p ?o FILTER(!isBlank(?o)) {labelled('?p', 'plabel')} {labelled('?o', 'olabel')}"
    inner = f"<{iri}> ?p ?o . ?o ?q ?v FILTER(isBlank(?o))"
    names = f"{labelled('?p', 'plabel')} {labelled('?q', 'qlabel')} {labelled('?v', 'vlabel')}"
    values: dict[str, dict[str, Value]] = defaultdict(dict)
    nested: dict[str, dict[str, dict[str, tuple[str, Value]]]] = defaultdict(lambda: defaultdict(dict))
    labels: dict[str, str] = {}
    for row in site.rows(f"SELECT ?p ?plabel ?o ?olabel {{ {own} }} ORDER BY ?p ?o"):
        values[_named(row, "p", labels)].setdefault(f"{row['o']}", value_of(row, "o", "olabel"))
    for row in site.rows(f"SELECT * {{ {inner} {names} }} ORDER BY ?p ?o ?q ?v"):
        parts = nested[_named(row, "p", labels)][row["o"]["value"]]
        name = row.get("qlabel", {}).get("value") or _words(row["q"]["value"])
        parts.setdefault(f"{row['q']} {row['v']}", (name, value_of(row, "v", "vlabel")))
    lists = {p: [list(parts.values()) for parts in nested[p].values()] for p in labels}
    return [Property(p, labels[p], list(values[p].values()), lists[p]) for p in sorted(labels)]


def _named(row: dict[str, dict[str, str]], name: str, labels: dict[str, str]) -> str:
    """The row's predicate, whose label is noted."""
    predicate = row[name]["value"]
    labels.setdefault(predicate, row.get(f"{name}label", {}).get("value") or _words(predicate))
    return predicate


def _words(predicate: str) -> str:
    name = re.split(r"[#/]", predicate)[-1]
    return re.sub(r"(?<=[a-z])([A-Z])", lambda found: " " + found[1].lower(), name)


def _numbers(site: Site, iri: str) -> list[dict[str, Value]]:
    """Quantities about the address, and the address itself when it is one."""
    quantity = f"""{{ ?n <{terms.ABOUT}> <{iri}> }} UNION {{ BIND(<{iri}> AS ?n) }}
      ?n <{terms.VALUE}> ?value ; <{terms.HAS_UNIT}> ?unit {labelled("?unit", "unitlabel")}
      OPTIONAL {{ ?n <{terms.QUANTITY_KIND}> ?kind {labelled("?kind", "kindlabel")} }}
      OPTIONAL {{ ?n <{terms.LOW}> ?low }} OPTIONAL {{ ?n <{terms.HIGH}> ?high }}
      OPTIONAL {{ ?n <{terms.ORIGIN}> ?origin }} OPTIONAL {{ ?n <{terms.READING}> ?reading }}
      OPTIONAL {{ ?n <{terms.SOURCE}> ?source {labelled("?source", "sourcelabel")} }}"""
    rows = site.rows(f"SELECT * {{ {quantity} }} ORDER BY ?kindlabel ?value ?n ?source LIMIT 200")
    names = {"unit": "unitlabel", "kind": "kindlabel", "source": "sourcelabel"}
    return [{name: value_of(row, name, names.get(name, "")) for name in row if name not in names.values()} for row in rows]


def _incoming(site: Site, iri: str) -> list[Incoming]:
    """Links to the address, through nameless parts as well."""
    link = (
        f"{{ ?s ?p <{iri}> FILTER(isIRI(?s)) }} UNION {{ ?part ?q <{iri}> FILTER(isBlank(?part)) ?s ?p ?part FILTER(isIRI(?s)) }}"
    )
    asked = f"{{ {link} {labelled('?p', 'l')} }} GROUP BY ?p ORDER BY ?p"
    totals = site.rows(f"SELECT ?p (SAMPLE(?l) AS ?plabel) (COUNT(DISTINCT ?s) AS ?n) {asked}")
    found = []
    for each in totals:
        predicate = each["p"]["value"]
        some = f"{{ ?s <{predicate}> <{iri}> }} UNION {{ ?part ?q <{iri}> FILTER(isBlank(?part)) ?s <{predicate}> ?part }}"
        wanted = f"{{ {some} FILTER(isIRI(?s)) {labelled('?s', 'slabel')} }}"
        rows = site.rows(f"SELECT DISTINCT ?s ?slabel {wanted} ORDER BY ?slabel ?s LIMIT {MOST_LINKS}")
        label = each.get("plabel", {}).get("value") or _words(predicate)
        found.append(Incoming(predicate, label, [value_of(row, "s", "slabel") for row in rows], int(each["n"]["value"])))
    return found
