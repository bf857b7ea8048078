"""Whether the facts hold to the SHACL shapes.

The engine is the Rust package `shacl`: it passes the W3C core suite and answers in hundredths of a second
where pySHACL takes seconds; pySHACL is the reference in the tests. It is an optional part.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import Any

from headrace.errors import FactsError, MissingPartError
from headrace.graph.fault import Fault
from headrace.graph.files import FactFile, normalised, turtle_paths
from headrace.graph.read import Graph, short
from headrace.graph.rules import plain

try:
    import shacl
except ImportError:  # the optional part; `broken_shapes` says so when it is needed
    shacl = None  # type: ignore[assignment]


def broken_shapes(shapes: Path, files: Sequence[FactFile], graph: Graph) -> Iterable[Fault]:
    """The faults that the shapes of a folder find in the facts.

    Raises MissingPartError without the package `shacl`, FactsError for shapes that can't be read.
    """
    if shacl is None:
        raise MissingPartError("the package shacl", "checking shapes", 'pip install "headrace[check]"')
    text = "\n".join(normalised(path).decode() for _, path in turtle_paths(shapes, skipped=()))
    data = "\n".join(file.data.decode() for file in files)
    try:
        report = shacl.Shapes.from_turtle(text).validate_turtle(data)
    except Exception as error:  # the package raises its own errors and panics; this is the seam
        raise FactsError(f"the shapes can't be run: {error}", file=shapes.name) from error
    return sorted({_fault(result, graph) for result in report.results})


def _fault(result: Any, graph: Graph) -> Fault:
    node = result.focus_node.removeprefix("<").removesuffix(">")
    path = plain((result.path or "").replace("<", "").replace(">", ""))
    read = result.value_plain if result.value_plain and not (result.value or "").startswith("_:") else ""
    said = result.message or f"breaks sh:{result.component.removesuffix('ConstraintComponent')}"
    message = f"{path}: {said}" if path else said
    return Fault("shape", short(node), f"{message}, reads {short(read)}" if read else message, graph.file_of(node))
