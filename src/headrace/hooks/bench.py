"""The bench that a refill plugin works at: two pure calls, both without side effects on the run."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

import numpy as np

from headrace.network import aim
from headrace.network.build import build, programme
from headrace.solve.linear import INFINITY, Session
from headrace.values.answers import Answer
from headrace.values.case import Case
from headrace.values.changes import Change
from headrace.values.facts import Facts


class Bench:
    """Resolves the run's scenario with changes, and solves cases."""

    def __init__(self, facts: Facts, resolver: Callable[[Sequence[Change]], Case]) -> None:
        self._facts = facts
        self._resolver = resolver

    def resolve(self, changes: Sequence[Change] = ()) -> Case:
        """The run's case with these changes applied in order. Raises InputError for a change that does not fit."""
        return self._resolver(changes)

    def solve(self, case: Case, aim_: str = "least total rate",
              bounds: Mapping[str, tuple[float, float | None]] | None = None) -> Answer:
        """Rates of a case at an aim: "least total rate" (after least feed carbon) or "least feed carbon" alone.

        bounds: row slug -> (least, most) net forward rate in mmol/gDW/h, None for no upper bound; a row that runs in
        one direction only keeps it. Raises ValueError for another aim.
        """
        if aim_ not in ("least total rate", "least feed carbon"):
            raise ValueError(f"no aim is called {aim_!r}; accepted: least total rate, least feed carbon")
        net = build(self._facts, case)
        session = Session(programme(net))
        for row, (least, most) in (bounds or {}).items():
            weights = net.vector({j: float(net.columns[j].sign) for j in net.columns_of([row])})
            wide = np.concatenate([weights, np.zeros(session.columns - len(weights))])
            session.row(wide, least, INFINITY if most is None else most)
        cost = aim.carbon_cost(net, session.columns)
        found = session.minimise(cost)
        if found.optimal and aim_ == "least total rate":
            session.row(cost, -INFINITY, found.objective * (1 + aim.TIGHT) + 1e-9)
            found = session.minimise(aim.total_cost(net, session.columns))
        if not found.optimal:
            return Answer(found.status, aim_)
        rates: dict[str, float] = {}
        crossing: dict[str, dict[str, float]] = {"enter": {}, "leave": {}}
        for j, column in enumerate(net.columns):
            if column.kind in crossing:
                crossing[column.kind][column.name] = float(found.x[j])
            elif column.kind == "row":
                rates[column.name] = rates.get(column.name, 0.0) + column.sign * float(found.x[j])
        return Answer("optimal", aim_, float(cost @ found.x), rates, crossing["enter"], crossing["leave"])
