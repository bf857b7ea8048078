"""The whole dataset in a standard format, and as an rdflib dataset for other tools.

Facts stand in the default graph, derived statements in a named graph that says which facts they come from. Turtle
has no named graphs: there the derived statements, when asked for, stand among the facts. The same facts give the same
text on every run.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from pyoxigraph import BlankNode, CanonicalizationAlgorithm, Dataset, Literal, NamedNode, Quad, RdfFormat, serialize

from headrace import paths
from headrace.errors import InputError
from headrace.graph import terms
from headrace.graph.build import build
from headrace.graph.derive import derived as derived_from
from headrace.graph.derive import merged
from headrace.graph.files import fact_files, version
from headrace.graph.read import quads
from headrace.graph.turtle import write

if TYPE_CHECKING:
    import rdflib

FORMATS = ("turtle", "nquads", "jsonld")


def dataset(
    folders: Sequence[Path] | None = None, extra: Sequence[tuple[str, Path]] = (), *, derived: bool = False
) -> list[Quad]:
    """All statements of the facts, and those derived from them when asked for. Raises FactsError for faulty facts."""
    files = fact_files([paths.facts_folder()] if folders is None else folders, extra)
    said = [quad for file in files for quad in quads(file)]
    return said + derived_from(build(files, version(files))) if derived else said


def export(
    format: str,
    folders: Sequence[Path] | None = None,
    extra: Sequence[tuple[str, Path]] = (),
    *,
    derived: bool = False,
) -> str:
    """The dataset as text in one of FORMATS. Raises InputError for another format, FactsError for faulty facts."""
    if format not in FORMATS:
        raise InputError(f"unknown format {format!r}", read=format, accepted=", ".join(FORMATS))
    said = dataset(folders, extra, derived=derived)
    if format == "turtle":
        return write(merged(said))
    ordered = _canonical(said)
    if format == "nquads":
        return "".join(f"{quad} .\n" for quad in ordered)
    return (serialize(ordered, format=RdfFormat.JSON_LD) or b"").decode()


def to_rdflib(
    folders: Sequence[Path] | None = None, extra: Sequence[tuple[str, Path]] = (), *, derived: bool = True
) -> rdflib.Dataset:
    """The dataset as rdflib terms, with number text as written. Query it with SPARQL of your own making only."""
    return as_rdflib(dataset(folders, extra, derived=derived))


def as_rdflib(quads: Iterable[Quad], *, union: bool = False) -> rdflib.Dataset:
    """Statements as an rdflib dataset with bound prefixes. union: its default graph is the union of all graphs."""
    import rdflib  # takes longer to load than most commands take in all
    from rdflib.graph import DATASET_DEFAULT_GRAPH_ID  # as above

    target = rdflib.Dataset(default_union=union)
    for prefix, base in terms.PREFIXES.items():
        target.bind(prefix, base, override=True, replace=True)
    for quad in quads:
        name = quad.graph_name
        graph = rdflib.URIRef(name.value) if isinstance(name, NamedNode) else DATASET_DEFAULT_GRAPH_ID
        target.graph(graph).add(tuple(_rdflib_term(rdflib, term) for term in (quad.subject, quad.predicate, quad.object)))
    return target


def _canonical(said: Sequence[Quad]) -> list[Quad]:
    """Statements in one order, with blank nodes named by content (RDF Dataset Canonicalization 1.0)."""
    whole = Dataset(said)
    whole.canonicalize(CanonicalizationAlgorithm.RDFC_1_0)
    return sorted(whole, key=str)


def _rdflib_term(rdflib: Any, term: object) -> Any:
    if isinstance(term, NamedNode):
        return rdflib.URIRef(term.value)
    if isinstance(term, BlankNode):
        return rdflib.BNode(term.value)
    if isinstance(term, Literal):
        kind = None if term.language else rdflib.URIRef(term.datatype.value)
        return rdflib.Literal(term.value, lang=term.language, datatype=kind, normalize=False)
    raise TypeError(f"no rdflib term for {term!r}")
