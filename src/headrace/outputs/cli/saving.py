"""The options that save an answer, and what a command says about it."""

from __future__ import annotations

import sys
from collections.abc import Iterable
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer
from msgspec import Struct

if TYPE_CHECKING:
    from headrace.values.answers import Result

SaveOption = Annotated[bool, typer.Option("--save", help="Save the answer for queries, in .headrace/ beside the scenario.")]
ResultsOption = Annotated[
    Path | None, typer.Option("--results", metavar="DIR", help="Save the answer in this results folder.", show_default=False)
]
StoreOption = Annotated[
    str, typer.Option("--store", metavar="URL", help="Save the answer in this SPARQL store.", show_default=False)
]
AgentOption = Annotated[
    str, typer.Option("--agent", metavar="NAME", help="Who is responsible, said in what is saved.", show_default=False)
]


class Wish(Struct, frozen=True):
    """What the options ask for. started: when the command began to work."""

    save: bool = False
    results: Path | None = None
    store: str = ""
    agent: str = ""
    started: datetime = datetime.fromtimestamp(0, UTC)

    @property
    def wanted(self) -> bool:
        """Whether anything is to be saved; a place to save to says so by itself."""
        return self.save or self.results is not None or bool(self.store)


def wish(save: bool, results: Path | None, store: str, agent: str) -> Wish:
    """The options of a command that begins now."""
    return Wish(save, results, store, agent, datetime.now(UTC))


def keep(results: Iterable[Result], wish: Wish, rates: bool = False) -> None:
    """Save the results, if that is asked for, and say on standard error where."""
    if not wish.wanted:
        return
    from headrace.outputs.rdf.save import Saving, save  # commands that save nothing load no RDF

    saving = Saving(wish.results, wish.store, wish.agent)
    for result in results:
        sys.stderr.write(f"saved: {save(result, saving, wish.started, rates)}\n")
