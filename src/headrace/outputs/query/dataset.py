"""Facts and saved runs in one store that keeps up with the results folder.

Each run is a named graph, the facts are one and what follows from them is another. No statement stands in two graphs
(`folder.read` sees to it), so the union of all graphs is the default graph of a query that names none.
"""

from __future__ import annotations

import time
from pathlib import Path

from msgspec import Struct
from pyoxigraph import NamedNode, Store

from headrace.errors import InputError
from headrace.outputs.rdf import facts, folder, terms

_SETTLED = 50_000_000  # nanoseconds after which a folder's time stamp tells all changes apart


class Fault(Struct, frozen=True):
    """A file of the results folder that is no run, and why."""

    name: str
    message: str


class Dataset:
    """results: the folder of runs, or None for the facts alone. extra: fact folders of plugins (name, folder)."""

    def __init__(self, results: Path | None, extra: facts.Folders = ()) -> None:
        self.results = results
        self.store = Store()
        self.store.bulk_extend(facts.quads(extra))
        self.known: dict[str, folder.Stamp] = {}
        self.faults: dict[str, Fault] = {}
        self._seen = (-1, -1)

    def sync(self) -> None:
        """Take in runs that are new or changed, and forget those that are gone."""
        if self.results is None or not self._moved(self.results):
            return
        current = folder.stamps(self.results)
        for name in [name for name, stamp in self.known.items() if current.get(name) != stamp]:
            self.store.remove_graph(NamedNode(terms.RUN_BASE + name))
            del self.known[name]
            self.faults.pop(name, None)
        for name, stamp in current.items():
            if name not in self.known:
                self._read(self.results, name)
                self.known[name] = stamp

    def _read(self, results: Path, name: str) -> None:
        try:
            self.store.extend(folder.read(results, name))
        except FileNotFoundError:
            return
        except (InputError, OSError) as error:
            self.faults[name] = Fault(name, str(error))

    def _moved(self, results: Path) -> bool:
        """Whether the folder can have changed since it was last read (files come and go by renaming)."""
        try:
            facts_of = results.stat()
        except FileNotFoundError:
            changed = bool(self.known)
            self._seen = (-1, -1)
            return changed
        stamp, now = (facts_of.st_mtime_ns, facts_of.st_ino), time.time_ns()
        same = stamp == self._seen
        self._seen = stamp if now - facts_of.st_mtime_ns > _SETTLED else (-1, -1)
        return not same

    def graphs(self) -> frozenset[str]:
        """The names of all graphs."""
        return frozenset(name.value for name in self.store.named_graphs() if isinstance(name, NamedNode))
