"""A scenario file in, a `Case` out.

read, from_dict      a file, a text or plain data: limits, syntax, keys, types and units, with lines for messages
place                the file and line of an error that only knows its key
resolve              names, edits, expression levels and amounts against the facts
levels               the expression levels of rows under conditions
schema               the JSON Schema of a scenario
parent, phases, one  the scenarios within a scenario: the strain that exists, the phases of a plan, one of these
apply                sampled values put into a case
outlet_number        which of a case's outlets a name means
biomass              growth, as an outlet for drain plugins
"""

from headrace.case.document import from_dict, place, read
from headrace.case.levels import Conditions, holds, levels
from headrace.case.model import schema
from headrace.case.outlets import biomass, outlet_number
from headrace.case.parts import one, parent, phases
from headrace.case.resolve import resolve
from headrace.case.sampled import apply

__all__ = [
    "Conditions",
    "apply",
    "biomass",
    "from_dict",
    "holds",
    "levels",
    "one",
    "outlet_number",
    "parent",
    "phases",
    "place",
    "read",
    "resolve",
    "schema",
]
