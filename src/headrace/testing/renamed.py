"""The same facts under other names: every compound, reaction, enzyme, outlet, route and host row gets a new slug.

New slugs are short digests, so that everything that is sorted by name comes in another order as well. Labels stay.
"""

from __future__ import annotations

import hashlib
import re
from collections.abc import Iterable, Mapping
from typing import Any, NamedTuple

import msgspec
from pyoxigraph import NamedNode, RdfFormat, Triple, parse, serialize

from headrace.graph import terms
from headrace.graph.files import FactFile
from headrace.values.case import Scenario

_BASES = (terms.COMPOUND_BASE, terms.REACTION_BASE, terms.ENZYME_BASE, terms.OUTLET_BASE, terms.ROUTE_BASE)
_NEW = re.compile(r"\bn[0-9a-f]{10}\b")


class Renaming(NamedTuple):
    """Renamed fact files, and old slug -> new slug."""

    files: tuple[FactFile, ...]
    names: dict[str, str]

    def scenario(self, scenario: Scenario) -> Scenario:
        """The scenario with every value and key that is an old slug under its new name."""
        return msgspec.structs.replace(scenario, raw=_mapped(scenario.raw, self.names))

    def undone(self, value: Any) -> Any:
        """Plain data with the old slugs back, wherever a new one stands in a text."""
        old = {new: name for name, new in self.names.items()}
        return _restored(value, old)


def renamed(files: Iterable[FactFile]) -> Renaming:
    """All files with new slugs, as N-Triples (which is Turtle)."""
    read = [(file, [quad.triple for quad in parse(file.data, RdfFormat.TURTLE)]) for file in files]
    rows = {
        triple.subject.value
        for _, triples in read
        for triple in triples
        if triple.predicate.value == terms.TYPE and triple.object == NamedNode(terms.HOST_REACTION)
    }
    names: dict[str, str] = {}

    def moved(node: Any) -> Any:
        if not isinstance(node, NamedNode):
            return node
        base, _, slug = node.value.rpartition("/")
        if not slug or f"{base}/" not in _BASES and node.value not in rows:
            return node
        names[slug] = f"n{hashlib.sha256(slug.encode()).hexdigest()[:10]}"
        return NamedNode(f"{base}/{names[slug]}")

    made = []
    for file, triples in read:
        new = [Triple(moved(item.subject), item.predicate, moved(item.object)) for item in triples]
        made.append(FactFile(file.name, file.path, serialize(new, format=RdfFormat.N_TRIPLES) or b""))
    return Renaming(tuple(made), names)


def _mapped(value: Any, names: Mapping[str, str]) -> Any:
    if isinstance(value, str):
        return names.get(value, value)
    if isinstance(value, Mapping):
        return {names.get(key, key): _mapped(item, names) for key, item in value.items()}
    return [_mapped(item, names) for item in value] if isinstance(value, list) else value


def _restored(value: Any, old: Mapping[str, str]) -> Any:
    if isinstance(value, str):
        return _NEW.sub(lambda match: old.get(match[0], match[0]), value)
    if isinstance(value, Mapping):
        return {_restored(key, old): _restored(item, old) for key, item in value.items()}
    return [_restored(item, old) for item in value] if isinstance(value, list) else value
