"""Headrace sizes what a strain design takes out of the citric acid cycle and what must be put back.

Facts flow one way: Turtle files become frozen facts, a scenario becomes a case, a case becomes numbers, numbers become
answers, answers become text. Each layer may import the layers above it in this list, and the leaves; a test holds to it.

    errors, names, units,   leaves: the error tree, the lookup of names, units at the edges, settings, where files
    settings, paths         are; they import only leaves
    values                  frozen types that pass between the layers; imports nothing of Headrace
    pages                   results as pages of plain tables, and pages as Markdown, CSV or text; imports only values
    solve                   arrays in, arrays out: the only importer of the LP solver and of exact algebra
    graph                   fact files in, `Facts` out: reading, building, caching, checking, exporting RDF
    case                    a scenario file in, a `Case` out: keys, units, names, expression levels, changes
    network                 a case as numbers: pools, columns, exact routes, the LP, the skeleton ledger
    hooks                   the five hooks, the manager that loads plugins, the one place that applies proposals
    plugins                 `headrace_plugins` and strangers' packages: drains, refills, checks, reports
    run                     the phases in order, on one page
    outputs                 the command line, tables, JSON, review documents

`headrace.api` holds all that a plugin imports, `headrace.testing` checks a plugin, `headrace.benchmark` times a command.
The core knows no compound, host or product by name: those are facts.

In Python, the names below are the same calls that the commands make:

    import headrace
    result = headrace.refills(headrace.read("scenario.toml"))
    result.answer.ledger.refilled        # mmol skeletons/gDW/h
    result.to_frame("groups")            # a pandas table; to_rdf() gives its graph, save() keeps it
    headrace.graph()                     # facts and saved answers as an rdflib dataset
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from headrace import graph
    from headrace.case import from_dict, read
    from headrace.graph.load import load
    from headrace.outputs.python import ceiling, drains, grows, refills

__version__ = "0.1.0"
__all__ = ["__version__", "ceiling", "drains", "from_dict", "graph", "grows", "load", "read", "refills"]


def __getattr__(name: str) -> Any:
    """The public calls, imported when first asked for, so that `import headrace` itself costs nothing."""
    if name not in __all__:
        raise AttributeError(f"module 'headrace' has no attribute {name!r}")
    import headrace.graph as graph  # not "from headrace", which would ask this very function for it

    if name == "graph":
        return graph
    from headrace import case  # a command that needs none of them should not pay for them
    from headrace.outputs import python  # as above

    home = {"from_dict": case, "load": graph, "read": case}.get(name, python)
    return getattr(home, name)


def _linked(results: Any = None) -> Any:
    """What `headrace.graph()` gives; the package `headrace.graph` asks for it here, since it stands far above."""
    from headrace.outputs.python import graph as linked  # as above

    return linked(results)


def __dir__() -> list[str]:
    return __all__
