"""The aim of a case: least feed carbon, then least total rate; and the range of any quantity over its optima.

Stage 1 (only where an uptake is left out): minimise the carbon that enters with feeds and supplements.
Stage 2: with that carbon fixed, minimise the sum of all rates, which removes idle cycles.
Ranges hold both optima within a relative slack (1e-7 for "over the optima").
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from headrace.network.build import Network, programme
from headrace.solve.linear import INFINITY, Floats, Session, Solution

TIGHT = 1e-7
AIM_FREE = "least feed carbon, then least total rate"
AIM_FIXED = "feed fixed as stated, then least total rate"


@dataclass
class Aimed:
    """A network solved for its aim. x: rates per column, then free scalars. carbon: feed carbon entering, mmol C/gDW/h.

    least_carbon: the feed carbon that the same demands need at least, when the stated uptake is larger (else carbon).
    """

    net: Network
    session: Session
    x: Floats
    carbon: float
    total: float
    words: str
    scalars: dict[str, float]
    duals: Floats

    def rate(self, column: int) -> float:
        return float(self.x[column])

    def range(self, weights: Mapping[int, float]) -> tuple[float, float]:
        """Least and most of sum weights[column] * rate over the optima of the aim (or within its slack)."""
        cost = np.zeros(self.session.columns)
        for column, weight in weights.items():
            cost[column] = weight
        low, high = self.session.minimise(cost), self.session.maximise(cost)
        if not low.optimal:
            raise RuntimeError(f"a range over a solved aim came back {low.status}")
        return low.objective, high.objective if high.optimal else INFINITY


def carbon_cost(net: Network, width: int) -> Floats:
    """Carbon atoms per column that brings a feed or supplement in; zero elsewhere."""
    cost = np.zeros(width)
    inorganic = set(net.facts.roles["inorganic-carbon"])
    for j, column in enumerate(net.columns):
        if column.kind == "enter" and column.name not in inorganic:
            cost[j] = net.facts.compounds[column.name].formula.get("C", 0)
    return cost


def total_cost(net: Network, width: int) -> Floats:
    """One per column that runs a row (crossings and free scalars cost nothing)."""
    cost = np.zeros(width)
    for j, column in enumerate(net.columns):
        cost[j] = 1.0 if column.kind in ("row", "spill") else 0.0
    return cost


def is_free(net: Network) -> bool:
    """Whether some feed's uptake is left to the aim."""
    return any(f.uptake is None for f in net.case.feeds)


def solve(net: Network, slack: float | None = None) -> Aimed | Solution:
    """Solve a case for its aim. Returns the failed Solution when no rates satisfy the case."""
    slack = net.case.slack if slack is None else slack
    session = Session(programme(net))
    carbon, total = carbon_cost(net, session.columns), total_cost(net, session.columns)
    words = AIM_FIXED
    if is_free(net) or any(s.rate is None for s in net.case.supplements):
        first = session.minimise(carbon)
        if not first.optimal:
            return first
        session.row(carbon, -INFINITY, first.objective * (1 + max(slack, TIGHT)) + 1e-9)
        words = AIM_FREE if is_free(net) else AIM_FIXED
    second = session.minimise(total)
    if not second.optimal:
        return second
    session.row(total, -INFINITY, second.objective * (1 + max(slack, TIGHT)) + 1e-9)
    names = list(net.coupled)
    scalars = {**net.rates, **{k: float(second.x[len(net.columns) + i]) for i, k in enumerate(names)}}
    return Aimed(net, session, second.x, float(carbon @ second.x), second.objective, words, scalars, second.duals)


def least_carbon(net: Network) -> float | None:
    """Feed carbon that the case's demands need at least if uptake were free (mmol C/gDW/h); None if impossible."""
    relaxed = programme(net)
    for j in feed_columns(net):
        relaxed.col_lower[j], relaxed.col_upper[j] = 0.0, INFINITY
    session = Session(relaxed)
    found = session.minimise(carbon_cost(net, session.columns))
    return found.objective if found.optimal else None


def feed_columns(net: Network) -> list[int]:
    """The columns by which the fed substrates enter."""
    feeds = {f.compound for f in net.case.feeds}
    return [j for j, c in enumerate(net.columns) if c.kind == "enter" and c.name in feeds]


def necessary(net: Network, columns: Iterable[int]) -> bool:
    """Whether the case is infeasible when these columns are shut."""
    shut = programme(net)
    for j in columns:
        shut.col_lower[j] = shut.col_upper[j] = 0.0
    return not Session(shut).feasible()
