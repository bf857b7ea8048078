"""RDF terms to Python values: the only place that knows both.

An `Entry` is one node's statements. Its readers return what the values need and note a `Fault` for what is missing,
doubled, of another datatype or unknown; they then return an empty value, so that one run finds all faults.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from fractions import Fraction
from typing import TypeVar

from pyoxigraph import BlankNode, Literal, NamedNode

from headrace.graph import terms
from headrace.graph.fault import Fault
from headrace.graph.read import Graph, Node, Statements, short
from headrace.values.facts import Basis

Item = TypeVar("Item")
_NUMBER = re.compile(r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)")
_FORMULA = re.compile(r"(?:[A-Z][a-z]?[0-9]*)+")
_ELEMENT = re.compile(r"([A-Z][a-z]?)([0-9]*)")


def formula(text: str) -> dict[str, int] | None:
    """Element -> atoms of a plain molecular formula, or None when it is none.

    >>> formula("C4H2O5")
    {'C': 4, 'H': 2, 'O': 5}
    >>> formula("(CH2O)n") is None
    True
    """
    if not _FORMULA.fullmatch(text):
        return None
    atoms: dict[str, int] = {}
    for element, count in _ELEMENT.findall(text):
        if element in atoms or count.startswith("0"):
            return None
        atoms[element] = int(count or 1)
    return atoms


class Reader:
    """Gives entries out and gathers their faults."""

    def __init__(self, graph: Graph) -> None:
        self.graph = graph
        self.faults: list[Fault] = []
        self._members = {kind: frozenset(nodes) for kind, nodes in graph.classes.items()}

    def entries(self, kind: str) -> list[Entry]:
        """All nodes of a class, by IRI."""
        return [Entry(self, iri, self.graph.about[NamedNode(iri)]) for iri in self.graph.members(kind)]

    def is_a(self, iri: str, kind: str) -> bool:
        return iri in self._members.get(kind, ())

    def fault(self, rule: str, node: str, message: str) -> None:
        self.faults.append(Fault(rule, short(node), message, self.graph.file_of(node)))


class Entry:
    """One node's statements. node: the IRI that faults name (of the owner, for a blank node)."""

    def __init__(self, reader: Reader, node: str, says: Statements) -> None:
        self.reader = reader
        self.node = node
        self.says = says

    def fault(self, rule: str, message: str) -> None:
        self.reader.fault(rule, self.node, message)

    def slug(self, base: str) -> str:
        """The part of the node's IRI after `base`, which must be one plain segment."""
        rest = self.node.removeprefix(base)
        if not self.node.startswith(base) or "/" in rest or not rest:
            self.fault("wrong-address", f"stands outside {base}")
        return rest

    def texts(self, predicate: str) -> tuple[str, ...]:
        """All texts of a predicate, sorted."""
        return tuple(sorted(self._literal(predicate, node) for node in self.says.get(predicate, ())))

    def text(self, predicate: str, required: bool = True) -> str:
        found = self._one(predicate, self.texts(predicate), required)
        return found or ""

    def parts(self, predicate: str) -> list[Entry]:
        """The blank nodes of a predicate as entries that speak for this node."""
        found = []
        for node in self.says.get(predicate, ()):
            if isinstance(node, BlankNode):
                found.append(Entry(self.reader, self.node, self.reader.graph.about[node]))
            else:
                self.fault("wrong-datatype", f"{short(predicate)} wants [ … ], reads {_shown(node)}")
        return found

    def refs(self, predicate: str, base: str, kind: str) -> tuple[str, ...]:
        """Slugs of the nodes that a predicate points to, sorted; each must be a `kind` below `base`."""
        found = []
        for node in self.says.get(predicate, ()):
            if not isinstance(node, NamedNode):
                self.fault("wrong-datatype", f"{short(predicate)} wants the address of a {short(kind)}, reads {_shown(node)}")
            elif not node.value.startswith(base) or not self.reader.is_a(node.value, kind):
                self.fault("unknown-reference", f"{short(predicate)} names {short(node.value)}: no such {short(kind)}")
            else:
                found.append(node.value[len(base) :])
        return tuple(sorted(found))

    def ref(self, predicate: str, base: str, kind: str, required: bool = True) -> str:
        before = len(self.reader.faults)
        found = self.refs(predicate, base, kind)
        return self._one(predicate, found, required and len(self.reader.faults) == before) or ""

    def iris(self, predicate: str, pattern: re.Pattern[str], example: str) -> tuple[str, ...]:
        """The first group of `pattern` for each outside address (ChEBI, EC, Rhea ...), sorted."""
        found = []
        for node in self.says.get(predicate, ()):
            match = pattern.fullmatch(node.value) if isinstance(node, NamedNode) else None
            if match is None:
                self.fault("wrong-identifier", f"{short(predicate)} reads {_shown(node)}; accepted: such as {example}")
            else:
                found.append(match[1])
        return tuple(sorted(found))

    def number(self, predicate: str, required: bool = True) -> Fraction | None:
        """An exact number from its text; integers and decimals only."""
        node = self._literal_node(predicate, required)
        if node is None:
            return None
        if node.datatype.value not in (terms.INTEGER, terms.DECIMAL) or not _NUMBER.fullmatch(node.value):
            self.fault("wrong-datatype", f"{short(predicate)} wants a number such as 1.5, reads {_shown(node)}")
            return None
        return Fraction(node.value)

    def number_text(self, predicate: str) -> str:
        """The number as it was written ("1.50"), for showing."""
        nodes = self.says.get(predicate, ())
        return nodes[0].value if len(nodes) == 1 and isinstance(nodes[0], Literal) else ""

    def whole(self, predicate: str) -> int:
        value = self.number(predicate)
        if value is not None and value.denominator != 1:
            self.fault("wrong-datatype", f"{short(predicate)} wants a whole number, reads {value}")
        return int(value or 0)

    def flag(self, predicate: str) -> bool:
        """True when stated so; false when not stated (facts state a flag only when it is true)."""
        node = self._literal_node(predicate, required=False)
        if node is not None and (node.datatype.value != terms.BOOLEAN or node.value not in ("true", "false")):
            self.fault("wrong-datatype", f"{short(predicate)} wants true, reads {_shown(node)}")
        return node is not None and node.value == "true"

    def word(self, predicate: str, allowed: Sequence[str], required: bool = True) -> str:
        """A term of a closed vocabulary, by local name."""
        words = []
        for node in self.says.get(predicate, ()):
            word = node.value.removeprefix(terms.HR) if isinstance(node, NamedNode) else ""
            if word in allowed:
                words.append(word)
            else:
                choice = ", ".join(f"hr:{name}" for name in allowed)
                self.fault("unknown-word", f"{short(predicate)} reads {_shown(node)}; accepted: {choice}")
                required = False
        return self._one(predicate, tuple(sorted(words)), required) or ""

    def atoms(self, required: bool = True) -> dict[str, int]:
        text = self.text(terms.FORMULA, required)
        atoms = formula(text) if text else {}
        if atoms is None:
            self.fault("bad-formula", f"hr:formula reads {text!r}; accepted: a plain formula such as C4H2O5")
        return atoms or {}

    def basis(self) -> Basis:
        """Reading, sources and note; every fact needs the first two."""
        reading = self.word(terms.READING, terms.READINGS)
        sources = self.refs(terms.SOURCE, terms.SOURCE_BASE, terms.DOCUMENT)
        if not self.says.get(terms.SOURCE):
            self.fault("without-source", "has no dcterms:source")
        return Basis(reading, sources, " ".join(self.texts(terms.COMMENT)))

    def _literal_node(self, predicate: str, required: bool) -> Literal | None:
        nodes = self.says.get(predicate, ())
        node = self._one(predicate, tuple(nodes), required)
        if node is None or isinstance(node, Literal):
            return node
        self.fault("wrong-datatype", f"{short(predicate)} wants a plain value, reads {_shown(node)}")
        return None

    def _literal(self, predicate: str, node: Node) -> str:
        if isinstance(node, Literal) and (node.language or node.datatype.value == terms.STRING):
            return node.value
        self.fault("wrong-datatype", f"{short(predicate)} wants text, reads {_shown(node)}")
        return ""

    def _one(self, predicate: str, found: Sequence[Item], required: bool) -> Item | None:
        if len(found) > 1:
            self.fault("stated-twice", f"{short(predicate)} has {len(found)} values: {', '.join(map(_shown, found))}")
        elif required and not found:
            self.fault("missing-part", f"has no {short(predicate)}")
        return found[0] if found else None


def _shown(node: object) -> str:
    """A node as a message shows it: short address, bare number, text in quotes."""
    if isinstance(node, NamedNode):
        return short(node.value)
    if isinstance(node, Literal) and node.datatype.value in (terms.INTEGER, terms.DECIMAL, terms.BOOLEAN):
        return node.value
    return str(node)
