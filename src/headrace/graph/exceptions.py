"""The named list of what a check may find without it being a fault (graph_data/rules/exceptions.ttl)."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path

from headrace.graph import terms
from headrace.graph.convert import Reader
from headrace.graph.fault import Fault
from headrace.graph.files import FactFile, normalised
from headrace.graph.read import Graph, short

NAME = "rules/exceptions.ttl"


class Exceptions:
    """(rule, node) pairs with the exception that excuses them. Each needs a reason, and must excuse something."""

    def __init__(self, excused: dict[tuple[str, str], str], faults: Iterable[Fault]) -> None:
        self.excused = excused
        self.faults = list(faults)

    @staticmethod
    def read(folders: Sequence[Path]) -> Exceptions:
        """The lists of all folders together. Raises FactsError for a list that is no Turtle."""
        paths = [folder / NAME for folder in folders if (folder / NAME).is_file()]
        reader = Reader(Graph(FactFile(NAME, path, normalised(path)) for path in paths))
        excused: dict[tuple[str, str], str] = {}
        for entry in reader.entries(terms.EXCEPTION):
            entry.text(terms.REASON)
            name = entry.text(terms.EXCEPTION_RULE)
            nodes = entry.says.get(terms.EXCUSES, [])
            if not nodes:
                entry.fault("missing-part", "has no hr:excuses")
            excused.update({(name, short(node.value)): short(entry.node) for node in nodes})
        return Exceptions(excused, reader.faults)

    def apply(self, faults: Iterable[Fault]) -> Iterable[Fault]:
        """The faults that are not excused, and those of the list itself."""
        used: set[tuple[str, str]] = set()
        for fault in faults:
            if (fault.rule, fault.node) in self.excused:
                used.add((fault.rule, fault.node))
            else:
                yield fault
        yield from self.faults
        for key, exception in self.excused.items():
            if key not in used:
                yield Fault("exception-unused", exception, f"excuses {key[1]} from {key[0]}, which does not find it", NAME)
