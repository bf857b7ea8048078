"""Facts as RDF: reading Turtle, building frozen values from it, checking and exporting it.

files -> read (Turtle to statements) -> convert (statements to Python) -> build (frozen `Facts`) -> cache.
`load` is the way in; `check` and `export` stand in modules of their own, which load RDF libraries.
"""

from headrace.graph.fault import Fault
from headrace.graph.load import load

__all__ = ["Fault", "load"]
