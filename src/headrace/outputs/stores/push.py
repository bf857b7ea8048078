"""The facts pushed to a store."""

from __future__ import annotations

from collections import defaultdict

from pyoxigraph import NamedNode, Quad

from headrace.outputs.rdf import facts
from headrace.outputs.stores.store import open_store


def push(url: str, extra: facts.Folders = ()) -> dict[str, int]:
    """Put the facts and what follows from them into a store, each as one graph in place of what was there.

    Gives the number of statements per graph. Raises StoreError, InputError, FactsError.
    """
    store = open_store(url)
    graphs: dict[str, list[Quad]] = defaultdict(list)
    for quad in facts.quads(extra):
        assert isinstance(quad.graph_name, NamedNode)
        graphs[quad.graph_name.value].append(quad)
    for iri, quads in graphs.items():
        store.put(iri, quads)
    return {iri: len(quads) for iri, quads in graphs.items()}
