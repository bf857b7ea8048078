"""Facts as RDF: reading Turtle, building frozen values from it, checking and exporting it.

files -> read (Turtle to statements) -> convert (statements to Python) -> build (frozen `Facts`) -> cache.
`load` is the way in; `check` and `export` stand in modules of their own, which load RDF libraries.
The package itself can be called: `headrace.graph()` gives facts and saved answers as an rdflib dataset.
"""

import sys
from types import ModuleType
from typing import Any

from headrace.graph.fault import Fault
from headrace.graph.load import load

__all__ = ["Fault", "load"]


class _Callable(ModuleType):
    """A package that can be called."""

    def __call__(self, results: Any = None) -> Any:
        """Facts and the saved answers of a folder, as `headrace.outputs.python.graph` gives them."""
        import headrace  # the front page is there by now, and knows where that is

        return headrace._linked(results)


sys.modules[__name__].__class__ = _Callable
