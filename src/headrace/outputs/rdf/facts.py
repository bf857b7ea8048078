"""The facts as statements in named graphs: what the files say, and apart from it what follows from them."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from pyoxigraph import NamedNode, Quad

from headrace import paths
from headrace.graph import terms
from headrace.graph.derive import derived
from headrace.graph.files import fact_files, version
from headrace.graph.load import load
from headrace.graph.read import quads as statements

FACTS = NamedNode(terms.FACTS_GRAPH)
Folders = Sequence[tuple[str, Path]]


def quads(extra: Folders = ()) -> list[Quad]:
    """All statements of the fact files and those derived from them. extra: folders of plugins (name, folder)."""
    files = fact_files([paths.facts_folder()], extra)
    said = [Quad(quad.subject, quad.predicate, quad.object, FACTS) for file in files for quad in statements(file)]
    return list(dict.fromkeys(said)) + derived(load(extra=extra))


def current_version(extra: Folders = ()) -> str:
    """The version of the fact files as they are now."""
    return version(fact_files([paths.facts_folder()], extra))
