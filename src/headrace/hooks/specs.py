"""The hooks, all of them. A plugin answers with a method of the same name; it may leave out arguments."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pluggy

if TYPE_CHECKING:
    from headrace.hooks.bench import Bench
    from headrace.network.build import Network
    from headrace.network.routes import RouteBook
    from headrace.values.answers import AddedTable, Document, DrainRow, Draw, RefillAnswer, Result
    from headrace.values.case import Case, Demand, Finding
    from headrace.values.facts import Facts

PROJECT = "headrace"
spec = pluggy.HookspecMarker(PROJECT)


class Hooks:
    """One method per hook, in the order in which a run calls them."""

    @spec
    def facts(self) -> Path | None:
        """The folder of Turtle files that the plugin brings; they are checked and hashed like the shipped ones."""

    @spec
    def drains(self, case: Case, outlet: Demand, routes: RouteBook) -> tuple[Draw, ...]:  # type: ignore[empty-body]
        """What one mole of an outlet of the plugin's families takes from the host's pools, exactly."""

    @spec
    def refills(self, case: Case, network: Network, draws: tuple[Draw, ...], bench: Bench) -> RefillAnswer:  # type: ignore[empty-body]
        """What must be put back: the ledger, the requirement of each refill, and why closed ones are closed."""

    @spec
    def checks(  # type: ignore[empty-body]
        self, case: Case, draws: tuple[Draw, ...], answers: Sequence[RefillAnswer], rows: Sequence[DrainRow], facts: Facts
    ) -> Iterable[Finding | AddedTable]:
        """Notes, cautions, stops and tables about a case that is answered; nothing in the answer may change."""

    @spec
    def report(self, result: Result, options: Any) -> Iterable[Document]:  # type: ignore[empty-body]
        """Documents about a result, as text; the core writes them."""
