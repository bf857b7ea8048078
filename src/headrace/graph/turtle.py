"""The canonical Turtle writer: the same triples always give the same text, one statement a line.

Prefix block of just the prefixes used, sorted; subjects sorted by IRI; `a` first, then predicates sorted
by IRI; several objects of one predicate on lines of their own; blank nodes inline, sorted by content;
RDF lists (shapes only) as `( a b )`; numbers keep their text (1.50 stays 1.50). Line breaks inside text are
escaped, so that a checkout with other line endings reads the same facts.

`python -m headrace.graph.turtle FILE ...` puts files into this form (comments with # are lost: use rdfs:comment).
"""

from __future__ import annotations

import re
import sys
from collections import defaultdict
from collections.abc import Iterable
from pathlib import Path

from pyoxigraph import BlankNode, DefaultGraph, Literal, NamedNode, Quad, RdfFormat, Triple, parse

from headrace.graph import terms

_LOCAL = re.compile(r"[A-Za-z0-9_](?:[A-Za-z0-9_.-]*[A-Za-z0-9_-])?")
_HOST_LOCAL = re.compile(re.escape(terms.HOST_BASE) + r"([a-z0-9-]+)/")
_BARE = {
    terms.INTEGER: re.compile(r"[+-]?[0-9]+"),
    terms.DECIMAL: re.compile(r"[+-]?[0-9]*\.[0-9]+"),
    terms.DOUBLE: re.compile(r"[+-]?(?:[0-9]+\.[0-9]*|\.?[0-9]+)[eE][+-]?[0-9]+"),
    terms.BOOLEAN: re.compile(r"true|false"),
}
_ESCAPES = {"\\": "\\\\", '"': '\\"', "\n": "\\n", "\r": "\\r", "\t": "\\t", "\b": "\\b", "\f": "\\f"}

Node = NamedNode | BlankNode | Literal
Key = tuple[int, str]


def write(quads: Iterable[Quad | Triple]) -> str:
    """Return the canonical Turtle text of triples of one graph; "" for none.

    Raises ValueError for what the form can't say: a named graph, a blank node that is not the object of
    exactly one triple (give it an IRI), or a quoted triple.
    """
    return _Writer(quads).text()


class _Writer:
    def __init__(self, quads: Iterable[Quad | Triple]) -> None:
        self.about: dict[NamedNode | BlankNode, dict[str, list[Node]]] = defaultdict(lambda: defaultdict(list))
        uses: dict[BlankNode, int] = defaultdict(int)
        for subject, predicate, value in _distinct(quads):
            self.about[subject][predicate.value].append(value)
            if isinstance(value, BlankNode):
                uses[value] += 1
        _refuse_shared_blanks(uses, self.about)
        self.names = _names(self.about)
        self.used: set[str] = set()
        self.written: set[BlankNode] = set()

    def text(self) -> str:
        subjects = sorted((node for node in self.about if isinstance(node, NamedNode)), key=lambda node: node.value)
        blocks = [self.block(node) for node in subjects]
        lost = [node for node in self.about if isinstance(node, BlankNode) and node not in self.written]
        if lost:
            raise ValueError(f"{len(lost)} blank nodes refer to one another in a circle: give them IRIs")
        if not blocks:
            return ""
        prefixes = "".join(f"@prefix {name}: <{self.names[name]}> .\n" for name in sorted(self.used))
        return prefixes + "\n" * bool(prefixes) + "\n".join(blocks)

    def block(self, subject: NamedNode) -> str:
        lines = [self.statement(predicate, values) for predicate, values in self.sorted_predicates(subject)]
        return f"{self.iri(subject.value)} " + " ;\n  ".join(lines) + " .\n"

    def statement(self, predicate: str, values: list[Node]) -> str:
        return self.verb(predicate) + " " + " ,\n    ".join(self.sorted_nodes(values))

    def sorted_predicates(self, subject: NamedNode | BlankNode) -> list[tuple[str, list[Node]]]:
        return sorted(self.about[subject].items(), key=lambda item: (item[0] != terms.TYPE, item[0]))

    def sorted_nodes(self, values: list[Node]) -> list[str]:
        pairs = [(self.key(value), self.node(value)) for value in values]
        return [text for _, text in sorted(pairs)]

    def key(self, value: Node) -> Key:
        """Sort key by content: IRIs, then literals, then blank nodes by what they say."""
        if isinstance(value, NamedNode):
            return 0, value.value
        if isinstance(value, Literal):
            return 1, str(value)
        inner = (f"{name} {sorted(map(self.key, objects))}" for name, objects in self.sorted_predicates(value))
        return 2, ";".join(inner)

    def node(self, value: Node) -> str:
        if isinstance(value, NamedNode):
            return self.iri(value.value)
        if isinstance(value, Literal):
            return self.literal(value)
        self.written.add(value)
        items = self.items(value)
        if items is not None:
            return "( " + " ".join(self.node(item) for item in items) + " )"
        statements = self.sorted_predicates(value)
        inner = (f"{self.verb(name)} {' , '.join(self.sorted_nodes(objects))}" for name, objects in statements)
        body = " ; ".join(inner)
        return f"[ {body} ]" if body else "[]"

    def items(self, head: BlankNode) -> list[Node] | None:
        """The members of a well-formed RDF list, or None when the node is no list."""
        members: list[Node] = []
        cells: list[BlankNode] = []
        cell: Node = head
        while isinstance(cell, BlankNode):
            says = self.about.get(cell, {})
            if cell in cells or set(says) != {terms.FIRST, terms.REST} or any(len(says[name]) != 1 for name in says):
                return None
            cells.append(cell)
            members.append(says[terms.FIRST][0])
            cell = says[terms.REST][0]
        if not isinstance(cell, NamedNode) or cell.value != terms.NIL:
            return None
        self.written.update(cells)
        return members

    def verb(self, predicate: str) -> str:
        return "a" if predicate == terms.TYPE else self.iri(predicate)

    def iri(self, iri: str) -> str:
        for prefix, base in self.names.items():
            if iri.startswith(base) and _LOCAL.fullmatch(iri, len(base)):
                self.used.add(prefix)
                return f"{prefix}:{iri[len(base) :]}"
        return f"<{_escaped_iri(iri)}>"

    def literal(self, value: Literal) -> str:
        kind = value.datatype.value
        bare = _BARE.get(kind)
        if bare is not None and bare.fullmatch(value.value):
            return value.value
        text = '"' + "".join(_escaped(char) for char in value.value) + '"'
        if value.language:
            direction = getattr(value, "direction", None)
            return f"{text}@{value.language}" + (f"--{direction}" if direction else "")
        return text if kind == terms.STRING else f"{text}^^{self.iri(kind)}"


def _distinct(quads: Iterable[Quad | Triple]) -> Iterable[tuple[NamedNode | BlankNode, NamedNode, Node]]:
    seen = set()
    for quad in quads:
        if isinstance(quad, Quad) and not isinstance(quad.graph_name, DefaultGraph):
            raise ValueError(f"Turtle has no named graphs: {quad.graph_name}")
        if isinstance(quad.subject, Triple) or isinstance(quad.object, Triple):
            raise ValueError(f"a statement about a statement can't be written: {quad}")
        triple = (quad.subject, quad.predicate, quad.object)
        if triple not in seen:
            seen.add(triple)
            yield triple


def _refuse_shared_blanks(uses: dict[BlankNode, int], about: dict[NamedNode | BlankNode, dict[str, list[Node]]]) -> None:
    for node in about:
        if isinstance(node, BlankNode) and uses.get(node, 0) == 0:
            raise ValueError(f"a blank node that nothing refers to: give it an IRI ({_gist(about[node])})")
    for node, count in uses.items():
        if count > 1:
            raise ValueError(f"a blank node is used {count} times: give it an IRI ({_gist(about.get(node, {}))})")


def _gist(says: dict[str, list[Node]]) -> str:
    return "; ".join(f"{predicate} {values[0]}" for predicate, values in sorted(says.items())[:3]) or "no statements"


def _names(about: dict[NamedNode | BlankNode, dict[str, list[Node]]]) -> dict[str, str]:
    """Prefixes to use: the table of terms, ":" for the host that the statements are about, a host's slug for others.

    Where several hosts are described (a whole dataset) all go by their slugs.
    """
    subjects = (node.value for node in about if isinstance(node, NamedNode))
    own = sorted({match[1] for iri in subjects if (match := _HOST_LOCAL.match(iri))})
    others: set[str] = set()
    for says in about.values():
        for predicate, values in says.items():
            for iri in [predicate, *(value.value for value in values if isinstance(value, NamedNode))]:
                if match := _HOST_LOCAL.match(iri):
                    others.add(match[1])
    hosts = own + sorted(others - set(own))
    local = {("" if own == [host] else host): f"{terms.HOST_BASE}{host}/" for host in hosts}
    return local | terms.PREFIXES


def _escaped(char: str) -> str:
    if char in _ESCAPES:
        return _ESCAPES[char]
    return f"\\u{ord(char):04X}" if ord(char) < 0x20 or ord(char) == 0x7F else char


def _escaped_iri(iri: str) -> str:
    return "".join(f"\\u{ord(char):04X}" if char in '<>"{}|^`\\' or ord(char) <= 0x20 else char for char in iri)


def main(names: Iterable[str]) -> None:
    """Rewrite files in the canonical form; one that is no Turtle stops with the parser's message and stays as it is."""
    for name in names:
        path = Path(name)
        path.write_bytes(write(parse(path.read_bytes(), format=RdfFormat.TURTLE)).encode())


if __name__ == "__main__":
    main(sys.argv[1:])
