"""Every check of the facts, as one list of faults.

In order: Turtle syntax (alone, when it fails); canonical form; what the loader refuses (missing parts, unknown
references, datatypes, balance of every element and charge); SHACL shapes; the rules of graph_data/rules; the exceptions'
own sense; and proofs that a caller brings, such as "nothing from nothing".
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from pathlib import Path

from pyoxigraph import Quad

from headrace import paths
from headrace.errors import FactsError
from headrace.graph.build import collect, complete
from headrace.graph.exceptions import Exceptions
from headrace.graph.fault import Fault
from headrace.graph.files import FactFile, fact_files, normalised, turtle_paths, version
from headrace.graph.findings import completed
from headrace.graph.read import Graph, quads
from headrace.graph.rules import broken_rules, read_rules, store_of
from headrace.graph.ruletexts import rule_texts
from headrace.graph.shapes import broken_shapes
from headrace.graph.slugs import unlike_names
from headrace.graph.turtle import write
from headrace.values.facts import Facts

REMEDY = "python -m headrace.graph.turtle FILE writes it"
Proof = Callable[[Facts], Iterable[Fault]]


def check(
    folders: Sequence[Path] | None = None,
    extra: Sequence[tuple[str, Path]] = (),
    *,
    proofs: Sequence[Proof] = (),
    rules: Path | None = None,
    shapes: Path | None = None,
) -> list[Fault]:
    """All faults of the facts, by file and node; empty when there are none.

    folders, extra: as for `load`. rules, shapes: folders, by default the shipped ones. proofs: run when the facts
    could be built. Raises FactsError when there are no facts at all or a rule is no rule, MissingPartError without
    an engine for the shapes.
    """
    home = paths.facts_folder()
    homes = [home] if folders is None else list(folders)
    files = fact_files(homes, extra)
    statements, faults = _parsed(files)
    if faults:
        return faults
    graph = Graph.of(statements)
    facts, found = collect(graph, version(files))
    named = {fault.node for fault in found}
    found += (fault for file in files for fault in _form(file, statements[file.name]))
    found += (fault for file in _side_files(homes) for fault in _form(file, quads(file)))
    found += (fault for fault in broken_shapes(shapes or home / "shapes", files, graph) if fault.node not in named)
    found += broken_rules(read_rules(rules or home / "rules"), store_of(statements), graph)
    found += unlike_names(graph)
    if facts is not None:
        found += _proven(completed(facts, rule_texts(homes, extra), files), proofs)
    exceptions = Exceptions.read(homes)
    return sorted(exceptions.apply(found), key=lambda fault: (fault.file, fault.node, fault.rule, fault.message))


def _proven(facts: Facts, proofs: Sequence[Proof]) -> Iterable[Fault]:
    """What only whole facts can show: contents that fit every route, and the caller's proofs."""
    try:
        whole = complete(facts)
    except FactsError as error:
        yield Fault("contents", error.node, error.message, error.file)
        return
    for proof in proofs:
        yield from proof(whole)


def _parsed(files: Iterable[FactFile]) -> tuple[dict[str, list[Quad]], list[Fault]]:
    statements: dict[str, list[Quad]] = {}
    faults = []
    for file in files:
        try:
            statements[file.name] = quads(file)
        except FactsError as error:
            faults.append(Fault("syntax", "", error.message, file.name))
    return statements, faults


def _side_files(folders: Sequence[Path]) -> Iterable[FactFile]:
    """Turtle that is no fact but is kept in the same form: shapes and exceptions."""
    for folder in folders:
        for name, path in turtle_paths(folder, skipped=()):
            if name.split("/", 1)[0] in ("shapes", "rules"):
                yield FactFile(name, path, normalised(path))


def _form(file: FactFile, said: Sequence[Quad]) -> Iterable[Fault]:
    try:
        text = write(said)
    except ValueError as error:
        yield Fault("form", "", str(error), file.name)
        return
    if text.encode() != file.data:
        yield Fault("form", "", _first_difference(file.data.decode(), text), file.name)


def _first_difference(have: str, want: str) -> str:
    lines = zip(have.split("\n"), want.split("\n"), strict=False)
    for number, (old, new) in enumerate(lines, start=1):
        if old != new:
            return f"line {number} reads {old!r}, the canonical form {new!r}; {REMEDY}"
    return f"ends otherwise than the canonical form; {REMEDY}"
