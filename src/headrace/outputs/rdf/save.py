"""Saving answers: where runs go, and what is written."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

from msgspec import Struct

from headrace.outputs.rdf import folder, run
from headrace.values.answers import Result


class Saving(Struct, frozen=True):
    """Where and how runs are saved. results: folder; None = `.headrace/` beside the scenario. store: address of a SPARQL
    store that gets the runs instead. agent: who is responsible, as given."""

    results: Path | None = None
    store: str = ""
    agent: str = ""


def save(result: Result, saving: Saving, started: datetime, rates: bool = False) -> str:
    """Save one result and say where: the file, or the graph's address in a store."""
    made = run.make(result, started, rates, saving.agent)
    if saving.store:
        from headrace.outputs.stores.store import open_store  # files need no network client

        open_store(saving.store).put_graph(made.iri, made.trig)
        return made.iri
    scenario = Path(result.case.path) if result.case.path else Path.cwd() / "scenario"
    return str(folder.save(saving.results or folder.beside(scenario), made))
