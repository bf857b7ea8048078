"""The answer in RDF set against the answer in JSON: every field of every part, read by SPARQL."""

from __future__ import annotations

import math
import re
from collections import defaultdict
from collections.abc import Callable, Mapping
from typing import Any

from headrace.outputs.rdf.build import property_of
from headrace.outputs.rdf.shape import OTHER, PARTS, SAID_ELSEWHERE

PREFIX = "PREFIX hr: <https://w3id.org/headrace/ns#> PREFIX skos: <http://www.w3.org/2004/02/skos/core#> "
Row = dict[str, dict[str, str]]
Ask = Callable[[str], list[Row]]
NUMBERS = {"integer", "decimal", "double"}


def python(term: Mapping[str, str]) -> Any:
    """A term of the SPARQL JSON format as the value that Headrace's JSON has."""
    kind = term.get("datatype", "").rpartition("#")[2]
    if term["type"] == "uri":
        return term["value"].rpartition("#")[2].rpartition("/")[2]
    if kind in NUMBERS:
        number = float(term["value"].replace("INF", "inf"))
        return "unbounded" if math.isinf(number) else number
    return term["value"] == "true" if kind == "boolean" else term["value"]


EXACT = re.compile(r"-?\d+(/\d+)?")


class Comparison:
    """Collects differences between a document and a run. compared: how many values were set against one another."""

    def __init__(self, ask: Ask, run: str) -> None:
        self.ask, self.run = ask, run
        self.differences: list[str] = []
        self.compared = 0

    def document(self, document: Mapping[str, Any]) -> None:
        """The whole document against the run's graph."""
        plain = {key: value for key, value in document.items() if key not in SAID_ELSEWHERE}
        self.node(self.run, plain, "")

    def node(self, node: str, item: Mapping[str, Any], where: str) -> None:
        """The fields of one node, and the parts below it."""
        said = defaultdict(list)
        for row in self.ask(f"SELECT ?p ?o {{ GRAPH <{self.run}> {{ <{node}> ?p ?o }} }}"):
            said[row["p"]["value"]].append(python(row["o"]))
        for key, value in item.items():
            here = f"{where}{key}"
            if isinstance(value, Mapping):
                self.mapping(node, key, value, here)
            elif isinstance(value, list) and value and isinstance(value[0], Mapping):
                self.parts(node, key, value, here)
            else:
                self.plain(said, key, value, here)

    def plain(self, said: Mapping[str, list[Any]], key: str, value: Any, where: str) -> None:
        """One value or a list of values; null and empty text have no statement."""
        field = property_of(key)
        wanted = value if isinstance(value, list) else [] if value in (None, "") else [value]
        found = said.get(field.property, []) + said.get(f"{field.property}Name", [])
        if wanted and isinstance(wanted[0], str) and (exact := said.get(f"{field.property}Exact")):
            found = exact
        self.compared += max(len(wanted), 1)
        if sorted(map(str, map(plain_number, found))) != sorted({str(plain_number(each)) for each in wanted}):
            self.differences.append(f"{where}: JSON has {wanted}, RDF has {found}")

    def parts(self, node: str, key: str, items: list[Mapping[str, Any]], where: str) -> None:
        """A list of objects, in order."""
        kind = PARTS.get(key, OTHER).kind
        table = "" if key in PARTS else f'; hr:table "{key}"'
        asked = f"SELECT ?n {{ GRAPH <{self.run}> {{ <{node}> hr:part ?n . ?n a <{kind}> {table} ; hr:index ?i }} }} ORDER BY ?i"
        nodes = [row["n"]["value"] for row in self.ask(PREFIX + asked)]
        if len(nodes) != len(items):
            self.differences.append(f"{where}: JSON has {len(items)}, RDF has {len(nodes)}")
        for number, (below, item) in enumerate(zip(nodes, items, strict=False)):
            self.node(below, item, f"{where}[{number}].")

    def mapping(self, node: str, key: str, value: Mapping[str, Any], where: str) -> None:
        """An object: one with text or parts in it is a part with fields, as is a ledger; any other holds numbers by name."""
        kind = PARTS.get(key, OTHER).kind
        if key == "ledger" or any(_telling(each) for each in value.values()):
            table = "" if key in PARTS else f'; hr:table "{key}"'
            asked = f"SELECT ?n {{ GRAPH <{self.run}> {{ <{node}> hr:part ?n . ?n a <{kind}> {table} }} }}"
            (row,) = self.ask(PREFIX + asked)
            self.node(row["n"]["value"], value, f"{where}.")
            return
        asked = f"""SELECT ?name ?v {{ GRAPH <{self.run}> {{ <{node}> hr:part ?n . ?n a <{kind}> ; hr:name ?name
            OPTIONAL {{ ?n hr:numberExact ?e }} OPTIONAL {{ ?n hr:number ?d }} BIND(COALESCE(?e, ?d) AS ?v) }} }}"""
        found = {row["name"]["value"]: python(row["v"]) for row in self.ask(PREFIX + asked)}
        self.compared += len(value)
        if found != {name: plain_number(each) for name, each in value.items()}:
            self.differences.append(f"{where}: JSON has {value}, RDF has {found}")


def _telling(value: Any) -> bool:
    """Whether a value is a part or a text; an exact number ("3/2") is neither."""
    return isinstance(value, Mapping | list) or isinstance(value, str) and not EXACT.fullmatch(value)


def plain_number(value: Any) -> Any:
    """Whole numbers and doubles alike; yes and no stay what they are."""
    return float(value) if isinstance(value, int) and not isinstance(value, bool) else value
