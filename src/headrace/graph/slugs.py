"""Whether slugs are words that a reader knows from the entity's names, and no shorthand.

A slug must share a word with a label or other name: whole, or for words of five letters or more by their
first five ("aconitase" and "aconitate hydratase"). In a compound's slug each shorter word must itself be a word of a name.
"""

from __future__ import annotations

import re
from collections.abc import Iterable

from headrace.graph import terms
from headrace.graph.convert import Entry, Reader
from headrace.graph.fault import Fault
from headrace.graph.read import Graph, short

RULE = "slug-unlike-name"
_STEM = 5


def unlike_names(graph: Graph) -> Iterable[Fault]:
    """A fault for each compound, enzyme, reaction, outlet or host with a slug that its names don't explain."""
    reader = Reader(graph)
    for kind in (terms.COMPOUND, terms.ENZYME, terms.REACTION, terms.OUTLET, terms.HOST):
        for entry in reader.entries(kind):
            slug = entry.node.rsplit("/", 1)[-1]
            if complaint := _complaint(slug, _names(entry), kind == terms.COMPOUND):
                yield Fault(RULE, short(entry.node), complaint, graph.file_of(entry.node))


def _complaint(slug: str, names: str, strict: bool) -> str:
    words = [word for word in slug.split("-") if re.search(r"[a-z]", word)]
    written = set(re.split(r"[^a-z0-9]+", names))
    known = {word for word in words if word in written or (len(word) >= _STEM and word[:_STEM] in names)}
    if words and not known:
        return f"has a slug that shares no word with its names: {names}"
    odd = [word for word in words if strict and len(word) < _STEM and word not in known]
    return f'has "{odd[0]}" in its slug, which is no word of its names: {names}' if odd else ""


def _names(entry: Entry) -> str:
    return ", ".join(text for predicate in (terms.LABEL, terms.ALIAS) for text in entry.texts(predicate)).lower()
