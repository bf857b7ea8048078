"""Turtle files to an index of statements that knows which file says what."""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence

from pyoxigraph import BlankNode, Literal, NamedNode, Quad, RdfFormat, Triple, parse

from headrace.errors import FactsError
from headrace.graph import terms
from headrace.graph.files import FactFile

Node = NamedNode | BlankNode | Literal
Statements = dict[str, list[Node]]


class Graph:
    """All statements of some files by subject.

    about: subject -> predicate IRI -> objects. files: subject IRI -> names of the files that describe it.
    classes: class IRI -> subject IRIs, sorted.
    """

    def __init__(self, files: Iterable[FactFile]) -> None:
        """Read the files. Raises FactsError for the first one that is no Turtle."""
        self._start()
        for file in files:
            self._read(file.name, quads(file))
        self._finish()

    @classmethod
    def of(cls, statements: Mapping[str, Sequence[Quad]]) -> Graph:
        """The same from statements that have been read: file name -> statements."""
        graph = cls.__new__(cls)
        graph._start()
        for name, said in statements.items():
            graph._read(name, said)
        graph._finish()
        return graph

    def _start(self) -> None:
        self.about: dict[NamedNode | BlankNode, Statements] = defaultdict(lambda: defaultdict(list))
        self.files: dict[str, list[str]] = defaultdict(list)
        self.classes: dict[str, list[str]] = {}
        self._members: dict[str, set[str]] = defaultdict(set)

    def _finish(self) -> None:
        self.classes = {name: sorted(nodes) for name, nodes in self._members.items()}

    def _read(self, file: str, said: Iterable[Quad]) -> None:
        for quad in said:
            if isinstance(quad.subject, Triple) or isinstance(quad.object, Triple):
                raise FactsError(f"statements about statements are not read: {quad}", file=file)
            values = self.about[quad.subject][quad.predicate.value]
            if quad.object not in values:  # the same statement in two files is one
                values.append(quad.object)
            if isinstance(quad.subject, NamedNode):
                self._note(quad.subject.value, quad, file)

    def _note(self, subject: str, quad: Quad, file: str) -> None:
        known = self.files[subject]
        if not known or known[-1] != file:
            known.append(file)
        if quad.predicate.value == terms.TYPE and isinstance(quad.object, NamedNode):
            self._members[quad.object.value].add(subject)

    def file_of(self, node: str) -> str:
        """The file (the first by name) that describes a node; "" when none does."""
        return self.files[node][0] if node in self.files else ""

    def members(self, kind: str) -> list[str]:
        """Subject IRIs of a class, sorted."""
        return self.classes.get(kind, [])


def quads(file: FactFile) -> list[Quad]:
    """The statements of a Turtle file, with number text as written.

    Raises FactsError with the line for a syntax error, or for text that is not UTF-8.
    """
    try:
        return list(parse(file.data, format=RdfFormat.TURTLE, rename_blank_nodes=True))
    except SyntaxError as error:
        line = f", line {error.lineno}" if error.lineno else ""
        raise FactsError(f"not valid Turtle{line}: {_plain(error.msg)}", file=file.name) from error


def short(iri: str) -> str:
    """An IRI below the base address without it ("compound/malate"), a term as hr:name, any other as it is.

    >>> short("https://w3id.org/headrace/id/compound/malate")
    'compound/malate'
    """
    if iri.startswith(terms.ID):
        return iri[len(terms.ID) :]
    for prefix, base in terms.PREFIXES.items():
        if iri.startswith(base):
            return f"{prefix}:{iri[len(base) :]}"
    return iri


def _plain(message: str) -> str:
    return re.sub(r"^Parser error (at|between) .*?: ", "", message)
