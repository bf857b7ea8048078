"""The vertex of a basis in exact fractions, and the few pivots that make a nearly optimal basis optimal.

    minimise  c x   subject to   row_lower <= A x <= row_upper,   col_lower <= x <= col_upper

Nonbasic columns stand at a bound, rows whose own variable is nonbasic are active; the basic columns follow from
A_RB x_B = r - A_RN x_N over the active rows R, and the duals from y_R A_RB = c_B, y = 0 elsewhere. With several costs
c1, c2 ... a basis is optimal for all of them in order (lexicographically) when the first reduced cost that is not zero
has the right sign. Method: the bounded simplex method (Dantzig; Bland's rule against circling), one solve per pivot.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from headrace.solve.exact import square
from headrace.solve.linear import BASIC, LOWER, UPPER, ZERO, Basis

Sparse = Mapping[int, Fraction]
Costs = Sequence[Sequence[Fraction]]
NOTHING, ONE = Fraction(0), Fraction(1)


@dataclass(frozen=True)
class Rational:
    """A linear programme without its cost, in fractions. columns[j] holds {row: coefficient}; None = no bound."""

    columns: tuple[Sparse, ...]
    row_lower: tuple[Fraction | None, ...]
    row_upper: tuple[Fraction | None, ...]
    col_lower: tuple[Fraction | None, ...]
    col_upper: tuple[Fraction | None, ...]

    def times(self, x: Sequence[Fraction]) -> list[Fraction]:
        """A x, one value per row."""
        total = [NOTHING] * len(self.row_lower)
        for column, value in zip(self.columns, x, strict=True):
            if value:
                for row, entry in column.items():
                    total[row] += entry * value
        return total

    def shifted(self, change: Sparse, step: Fraction) -> Rational:
        """The programme with change[row] * step added to both bounds of each row."""
        lower, upper = list(self.row_lower), list(self.row_upper)
        for row, amount in change.items():
            low, high = lower[row], upper[row]
            lower[row] = None if low is None else low + amount * step
            upper[row] = None if high is None else high + amount * step
        return replace(self, row_lower=tuple(lower), row_upper=tuple(upper))


@dataclass(frozen=True)
class Vertex:
    """A basis solved exactly. x: columns. ax: A x. duals, reduced: per cost, in order."""

    x: tuple[Fraction, ...]
    ax: tuple[Fraction, ...]
    duals: tuple[tuple[Fraction, ...], ...]
    reduced: tuple[tuple[Fraction, ...], ...]


class Corner:
    """A basis of a programme: its solves. Raises ValueError when the basis is no basis of this programme."""

    def __init__(self, programme: Rational, basis: Basis) -> None:
        self.programme, self.basis = programme, basis
        if len(basis.columns) != len(programme.columns) or len(basis.rows) != len(programme.row_lower):
            raise ValueError("the basis has another size than the programme")
        self.basic = [j for j, place in enumerate(basis.columns) if place == BASIC]
        self.active = [i for i, place in enumerate(basis.rows) if place != BASIC]
        if len(self.basic) != len(self.active):
            raise ValueError(f"{len(self.basic)} basic columns for {len(self.active)} active rows")
        at = {row: k for k, row in enumerate(self.active)}
        self._kernel = [{at[i]: v for i, v in programme.columns[j].items() if i in at} for j in self.basic]
        turned: list[dict[int, Fraction]] = [{} for _ in self.active]
        for k, column in enumerate(self._kernel):
            for row, value in column.items():
                turned[row][k] = value
        self._turned = turned

    def solve(self, rights: Sequence[Sequence[Fraction]]) -> tuple[tuple[Fraction, ...], ...]:
        """x_B with A_RB x_B = right, for each right-hand side over the active rows."""
        found = square(self._kernel, rights)
        if found is None:
            raise ValueError("the basis is singular")
        return found

    def solve_turned(self, rights: Sequence[Sequence[Fraction]]) -> tuple[tuple[Fraction, ...], ...]:
        """y_R with y_R A_RB = right, for each right-hand side over the basic columns."""
        found = square(self._turned, rights)
        if found is None:
            raise ValueError("the basis is singular")
        return found

    def vertex(self, costs: Costs) -> Vertex:
        """The vertex with its duals for each cost. Raises ValueError for a singular basis or one at a missing bound."""
        lp, basis = self.programme, self.basis
        x = [NOTHING if p in (BASIC, ZERO) else _bound(lp.col_lower[j], lp.col_upper[j], p) for j, p in enumerate(basis.columns)]
        fixed = lp.times(x)
        right = [(NOTHING if basis.rows[i] == ZERO else _bound(lp.row_lower[i], lp.row_upper[i], basis.rows[i])) - fixed[i]
                 for i in self.active]
        for j, value in zip(self.basic, self.solve([right])[0], strict=True):
            x[j] = value
        duals, reduced = [], []
        priced = self.solve_turned([[cost[j] for j in self.basic] for cost in costs])
        for cost, prices in zip(costs, priced, strict=True):
            y = [NOTHING] * len(lp.row_lower)
            for i, price in zip(self.active, prices, strict=True):
                y[i] = price
            duals.append(tuple(y))
            reduced.append(tuple(cost[j] - sum((y[i] * v for i, v in column.items() if y[i]), NOTHING)
                                 for j, column in enumerate(lp.columns)))
        return Vertex(tuple(x), tuple(lp.times(x)), tuple(duals), tuple(reduced))

    def direction(self, change: Sparse) -> tuple[list[Fraction], list[Fraction]]:
        """(dx, d(Ax)) per unit of a change of the active rows' bounds, basis kept."""
        dx = [NOTHING] * len(self.programme.columns)
        right = [change.get(i, NOTHING) for i in self.active]
        for j, value in zip(self.basic, self.solve([right])[0], strict=True):
            dx[j] = value
        return dx, self.programme.times(dx)


def _bound(lower: Fraction | None, upper: Fraction | None, place: int) -> Fraction:
    value = lower if place == LOWER else upper if place == UPPER else None
    if value is None:
        raise ValueError("the basis puts a variable at a bound that it does not have")
    return value


def gap(value: Fraction, lower: Fraction | None, upper: Fraction | None) -> Fraction:
    """How far a value lies outside its bounds: negative below, positive above, 0 inside."""
    if lower is not None and value < lower:
        return value - lower
    return value - upper if upper is not None and value > upper else NOTHING


def leading(reduced: Sequence[Sequence[Fraction]], j: int) -> Fraction:
    """The first of the reduced costs (in the order of the costs) that is not zero."""
    return next((each[j] for each in reduced if each[j]), NOTHING)
