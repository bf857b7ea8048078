"""Exact pivots: from a basis that the solver thinks is optimal to one that is, in fractions.

Variables are the columns, then one per row (s = A x). At a basis, a nonbasic variable v at its lower bound may rise, at
its upper bound fall; its reduced costs d_v (of a row: its dual) must not be negative for that step, in the order of the
costs. Primal pivots remove a wrong reduced cost, dual pivots a basic variable out of its bounds; a basis with both faults
is first made feasible with all costs at zero. Method: bounded primal and dual simplex with Bland's rule, as in textbooks.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from headrace.solve.linear import BASIC, LOWER, UPPER, ZERO, Basis
from headrace.solve.vertex import NOTHING, Corner, Costs, Rational, Vertex, gap, leading

MOST = 60


@dataclass(frozen=True)
class Settled:
    """status: optimal | infeasible | unbounded | open (too many pivots) | no basis. pivots: how many it took."""

    status: str
    basis: Basis
    vertex: Vertex | None = None
    pivots: int = 0
    reason: str = ""


def settle(programme: Rational, costs: Costs, basis: Basis, most: int = MOST) -> Settled:
    """Start from `basis` and pivot until it is optimal for the costs in order, or it is clear that none is."""
    for pivots in range(most + 1):
        try:
            corner = Corner(programme, basis)
            vertex = corner.vertex(costs)
        except ValueError as error:
            return Settled("no basis", basis, None, pivots, str(error))
        at = _Corner(corner, vertex)
        outside, wrong = next(at.outside(), None), next(at.wrong(), None)
        if outside is None and wrong is None:
            return Settled("optimal", basis, vertex, pivots)
        if outside is not None:
            pivot = at.dual(outside, priced=wrong is None)
            if pivot is None:
                return Settled("infeasible", basis, vertex, pivots)
        else:
            assert wrong is not None
            pivot = at.primal(wrong)
            if pivot is None:
                return Settled("unbounded", basis, vertex, pivots)
        basis = pivot
    return Settled("open", basis, None, most, f"not settled after {most} pivots")


class _Corner:
    """One basis with its vertex: what is wrong with it, and the pivot that mends it."""

    def __init__(self, corner: Corner, vertex: Vertex) -> None:
        self.corner, self.vertex, self.lp = corner, vertex, corner.programme
        self.n = len(self.lp.columns)
        self.places = [*(int(p) for p in corner.basis.columns), *(int(p) for p in corner.basis.rows)]
        self.values = [*vertex.x, *vertex.ax]
        self.lower = [*self.lp.col_lower, *self.lp.row_lower]
        self.upper = [*self.lp.col_upper, *self.lp.row_upper]
        self.prices = [[*reduced, *duals] for reduced, duals in zip(vertex.reduced, vertex.duals, strict=True)]

    def outside(self) -> Iterator[int]:
        """Basic variables out of their bounds."""
        return (v for v, p in enumerate(self.places) if p == BASIC and gap(self.values[v], self.lower[v], self.upper[v]))

    def wrong(self) -> Iterator[int]:
        """Nonbasic variables that would better an objective by leaving their bound."""
        return (v for v in range(len(self.places)) if self._movable(v) and self._better(v))

    def _movable(self, v: int) -> bool:
        return self.places[v] != BASIC and (self.lower[v] is None or self.lower[v] != self.upper[v])

    def _better(self, v: int) -> bool:
        price = leading(self.prices, v)
        return price != 0 if self.places[v] == ZERO else price < 0 if self.places[v] == LOWER else price > 0

    def primal(self, enters: int) -> Basis | None:
        """The pivot that lets a variable enter; None when nothing stops it."""
        price = leading(self.prices, enters)
        rises = price < 0
        slopes = self._slopes(enters)
        step, leaves, at_upper = None, enters, rises
        if self.lower[enters] is not None and self.upper[enters] is not None:
            step = self.upper[enters] - self.lower[enters]  # type: ignore[operator]
        for v, slope in slopes:
            slope = slope if rises else -slope
            bound = self.upper[v] if slope > 0 else self.lower[v]
            if slope == 0 or bound is None:
                continue
            reach = (bound - self.values[v]) / slope
            if step is None or reach < step or (reach == step and v < leaves):
                step, leaves, at_upper = reach, v, slope > 0
        return None if step is None else self._exchanged(enters, leaves, at_upper)

    def _slopes(self, enters: int) -> list[tuple[int, Fraction]]:
        """(basic variable, its change per unit that the entering one rises)."""
        if enters < self.n:
            change = {i: -v for i, v in self.lp.columns[enters].items()}
            dx, dax = self.corner.direction(change)
            for i, value in self.lp.columns[enters].items():
                dax[i] += value
        else:
            dx, dax = self.corner.direction({enters - self.n: Fraction(1)})
        return [(v, s) for v, s in enumerate((*dx, *dax)) if s and self.places[v] == BASIC]

    def dual(self, leaves: int, priced: bool) -> Basis | None:
        """The pivot that puts a variable back to the bound it broke; None when nothing can move it there (infeasible)."""
        below = gap(self.values[leaves], self.lower[leaves], self.upper[leaves]) < 0
        best: tuple[list[Fraction], int] | None = None
        for v, slope in self._pulls(leaves):
            helps = slope if below else -slope
            if not self._movable(v) or not (self.places[v] == ZERO or (helps > 0) == (self.places[v] == LOWER)):
                continue
            ratios = [abs(prices[v] / slope) if k == 0 else _signed(prices[v], self.places[v]) / abs(slope)
                      for k, prices in enumerate(self.prices)] if priced else []
            if best is None or (ratios, v) < best:
                best = (ratios, v)
        return None if best is None else self._exchanged(best[1], leaves, not below)

    def _pulls(self, leaves: int) -> Iterator[tuple[int, Fraction]]:
        """(nonbasic variable, change of the leaving one per unit that it rises), zero ones left out."""
        corner = self.corner
        row = {j: column[leaves - self.n] for j, column in enumerate(self.lp.columns) if leaves - self.n in column} \
            if leaves >= self.n else {leaves: Fraction(1)}
        weights = corner.solve_turned([[row.get(j, NOTHING) for j in corner.basic]])[0]
        rho = dict(zip(corner.active, weights, strict=True))
        for j, column in enumerate(self.lp.columns):
            if self.places[j] != BASIC:
                own = row.get(j, NOTHING) if leaves >= self.n else NOTHING
                slope = own - sum((rho[i] * v for i, v in column.items() if i in rho and rho[i]), NOTHING)
                if slope:
                    yield j, slope
        for i, weight in rho.items():
            if weight:
                yield self.n + i, weight

    def _exchanged(self, enters: int, leaves: int, at_upper: bool) -> Basis:
        places = list(self.places)
        places[enters] = BASIC
        places[leaves] = UPPER if at_upper else LOWER
        return Basis(np.array(places[: self.n], dtype=np.int32), np.array(places[self.n :], dtype=np.int32))


def _signed(price: Fraction, place: int) -> Fraction:
    return -price if place == UPPER else price
