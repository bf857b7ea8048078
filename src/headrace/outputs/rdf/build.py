"""An answer's JSON document as statements of one named graph."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable, Mapping
from fractions import Fraction
from typing import Any

from pyoxigraph import Literal, NamedNode, Quad

from headrace.graph import terms as facts_terms
from headrace.names import slugify
from headrace.outputs.rdf import terms
from headrace.outputs.rdf.links import Links
from headrace.outputs.rdf.shape import FIELDS, OTHER, PARTS, SAID_ELSEWHERE, Field, Part

_DOUBLE = NamedNode(facts_terms.DOUBLE)
_INTEGER = NamedNode(facts_terms.INTEGER)
_BOOLEAN = NamedNode(facts_terms.BOOLEAN)


class Graph:
    """The statements of one run, as they grow. run: the IRI of the run, which is also the graph's name."""

    def __init__(self, run: str) -> None:
        self.run = run
        self.name = NamedNode(run)
        self.quads: list[Quad] = []

    def add(self, subject: str, predicate: str, value: NamedNode | Literal | str) -> None:
        """One statement; text as an object is an IRI."""
        node = NamedNode(value) if isinstance(value, str) else value
        self.quads.append(Quad(NamedNode(subject), NamedNode(predicate), node, self.name))

    def node(self, path: str, kind: str, label: str = "") -> str:
        """A node of the run with its class and label; the run has it as a part."""
        node = f"{self.run}/{path}"
        self.add(node, facts_terms.TYPE, kind)
        if label:
            self.add(node, facts_terms.LABEL, Literal(label, language="en"))
        return node


def literal(value: Any) -> Literal:
    """A plain value as a literal with all its digits: text, yes or no, a whole number, a double.

    Raises TypeError for anything else and ValueError for NaN.
    """
    if isinstance(value, bool):
        return Literal("true" if value else "false", datatype=_BOOLEAN)
    if isinstance(value, int):
        return Literal(str(value), datatype=_INTEGER)
    if isinstance(value, float):
        if math.isnan(value):
            raise ValueError("a result holds a number that is not defined (NaN)")
        text = ("INF" if value > 0 else "-INF") if math.isinf(value) else repr(value + 0.0)
        return Literal(text, datatype=_DOUBLE)
    if isinstance(value, str):
        return Literal(value)
    raise TypeError(f"no literal for {type(value).__name__}")


def _labelled(field: Field, value: Any) -> Literal:
    return Literal(value, language="en") if field.property == facts_terms.LABEL else literal(value)


def property_of(name: str) -> Field:
    """The field's entry in the table, or `hr:` with its name in camel case.

    >>> property_of("carbon_net").property
    'https://w3id.org/headrace/ns#carbonNet'
    """
    if name in FIELDS:
        return FIELDS[name]
    first, *others = [word for word in re.split(r"[^A-Za-z0-9]+", name) if word]
    return Field(facts_terms.HR + first[:1].lower() + first[1:] + "".join(word[:1].upper() + word[1:] for word in others))


class Builder:
    """Walks a JSON document (before numbers became text: fractions and infinities as they are)."""

    def __init__(self, graph: Graph, links: Links) -> None:
        self.graph = graph
        self.links = links

    def document(self, document: Mapping[str, Any]) -> None:
        """All parts of the answer, below the run."""
        for key, value in document.items():
            if key not in SAID_ELSEWHERE:
                self.value(self.graph.run, "", key, value)

    def value(self, subject: str, path: str, key: str, value: Any) -> None:
        """One field of a node: nothing for null and empty text, parts for objects and lists of objects, else literals."""
        if value is None or value == "":
            return
        if isinstance(value, Mapping):
            self.mapping(subject, path, key, value)
        elif isinstance(value, list | tuple) and value and isinstance(value[0], Mapping):
            self.parts(subject, path, key, value)
        else:
            many = value if isinstance(value, list | tuple) else [value]
            self.plain(subject, property_of(key), many)

    def plain(self, subject: str, field: Field, values: Iterable[Any]) -> None:
        """Values as IRIs where they name an entity, else as literals, with links beside texts."""
        for value in values:
            found = self.links.find(field.finds, value) if field.finds and isinstance(value, str) else ()
            if found and not field.link:
                self.graph.add(subject, field.property, found[0])
                continue
            if isinstance(value, Fraction):  # per mole of outlet: a number to compute with, and the exact text beside it
                self.graph.add(subject, f"{field.property}PerMole", literal(float(value)))
                self.graph.add(subject, f"{field.property}Exact", Literal(str(value)))
                continue
            unknown = field.finds and not field.link  # a text where an IRI was expected: said under another property
            self.graph.add(subject, field.property + ("Name" if unknown else ""), _labelled(field, value))
            for iri in found:
                self.graph.add(subject, field.link, iri)

    def mapping(self, subject: str, path: str, key: str, value: Mapping[str, Any]) -> None:
        """An object: a part of its own, or (names to numbers) one part for each name."""
        part = PARTS.get(key, OTHER)
        if any(isinstance(item, str | Mapping | list | tuple) for item in value.values()) or key in ("ledger",):
            node = self.open(subject, part, f"{path}{self.segment(part, key)}", key)
            self.fields(node, value)
            return
        for number, (name, item) in enumerate(value.items(), start=1):
            if item is None:
                continue
            node = self.open(subject, part, f"{path}{self.segment(part, key)}/{slugify(str(name)) or number}", key)
            self.graph.add(node, terms.NAME, Literal(str(name)))
            self.plain(node, Field(terms.NUMBER), [item])

    def parts(self, subject: str, path: str, key: str, items: Iterable[Mapping[str, Any]]) -> None:
        """A list of objects: one part each, numbered from 1 in their order."""
        part = PARTS.get(key, OTHER)
        used: set[str] = set()
        for number, item in enumerate(items, start=1):
            name = slugify(str(item.get(part.key, ""))) if part.key else ""
            name = name if name and name not in used else str(number)
            used.add(name)
            node = self.open(subject, part, f"{path}{self.segment(part, key)}/{name}", key)
            self.graph.add(node, terms.INDEX, literal(number))
            if "label" not in item:
                self.graph.add(node, facts_terms.LABEL, Literal(self.links.words(part.name, item), language="en"))
            for iri in self.links.pool(item):
                self.graph.add(node, terms.POOL, iri)
            self.fields(node, item)

    @staticmethod
    def segment(part: Part, key: str) -> str:
        """The piece of the IRI that says what kind of part it is."""
        return slugify(key) if part is OTHER else part.name

    def open(self, subject: str, part: Part, path: str, key: str) -> str:
        """A new part below a node. key: the JSON key that it stands under, said where the class does not tell it."""
        node = self.graph.node(path, part.kind)
        self.graph.add(subject, terms.PART, node)
        if part is OTHER:
            self.graph.add(node, terms.TABLE, Literal(key))
        return node

    def fields(self, node: str, item: Mapping[str, Any]) -> None:
        """All fields of an object."""
        below = node.removeprefix(f"{self.graph.run}/") + "/"
        for name, value in item.items():
            self.value(node, below, name, value)
