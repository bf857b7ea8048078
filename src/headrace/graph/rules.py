"""Check rules: small SPARQL files whose rows are faults.

A rule is NAME.rq with one comment line that says what it finds, selecting ?node and ?message. The facts stand in
one named graph per file (`file:NAME`), queried as one; addresses in messages are shown without the base.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path
from typing import NamedTuple
from urllib.parse import quote

from pyoxigraph import NamedNode, Quad, QuerySolutions, Store

from headrace.errors import FactsError
from headrace.graph.fault import Fault
from headrace.graph.files import normalised
from headrace.graph.read import Graph, short

_ADDRESS = re.compile(r"https?://[^\s,;()]+")


class Rule(NamedTuple):
    """name: of the file; summary: what it finds; query: SPARQL text."""

    name: str
    summary: str
    query: str


def read_rules(folder: Path) -> tuple[Rule, ...]:
    """All rules of a folder, by name. Raises FactsError for a rule without a summary line."""
    rules = []
    for path in sorted(folder.glob("*.rq")):
        text = normalised(path).decode()
        first = text.split("\n", 1)[0]
        if not first.startswith("# ") or not first.endswith("."):
            raise FactsError('a rule starts with one sentence ("# What it finds.")', file=path.name)
        rules.append(Rule(path.stem, first[2:], text))
    return tuple(rules)


def store_of(statements: Mapping[str, Sequence[Quad]]) -> Store:
    """The facts (file name -> statements) with one named graph per file."""
    store = Store()
    for name, said in statements.items():
        graph = NamedNode("file:" + quote(name))
        store.bulk_extend(Quad(quad.subject, quad.predicate, quad.object, graph) for quad in said)
    return store


def broken_rules(rules: Sequence[Rule], store: Store, graph: Graph) -> Iterable[Fault]:
    """The faults that the rules find. Raises FactsError for a rule that is no SELECT of ?node and ?message."""
    for rule in rules:
        for node, message in _rows(rule, store):
            yield Fault(rule.name, short(node), plain(message), graph.file_of(node))


def plain(message: str) -> str:
    """A message with short names instead of addresses."""
    return _ADDRESS.sub(lambda match: short(match[0]), message)


def _rows(rule: Rule, store: Store) -> Iterable[tuple[str, str]]:
    try:
        found = store.query(rule.query, use_default_graph_as_union=True)
    except SyntaxError as error:
        raise FactsError(f"not valid SPARQL: {error}", file=f"rules/{rule.name}.rq") from error
    if not isinstance(found, QuerySolutions) or {variable.value for variable in found.variables} != {"node", "message"}:
        raise FactsError("a rule selects ?node and ?message", file=f"rules/{rule.name}.rq")
    rows = [(row["node"], row["message"]) for row in found]
    if any(node is None or message is None for node, message in rows):
        raise FactsError("a row leaves ?node or ?message open", file=f"rules/{rule.name}.rq")
    return sorted({(node.value, message.value) for node, message in rows})
