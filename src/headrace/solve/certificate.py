"""Proofs in exact fractions that a point is optimal, or that a programme has no point at all.

    minimise  c x   subject to   row_lower <= A x <= row_upper,   col_lower <= x <= col_upper

For any y, with d = c - y A,   c x >= sum_i y_i r_i + sum_j d_j b_j   for all x within the bounds, where r_i is the lower
bound of row i if y_i > 0 and its upper bound if y_i < 0, b_j likewise (weak duality). A point that meets all bounds and
this sum with equality is optimal; nothing is rounded and the basis is used only to find x and y. For several costs in
order, the next proof runs on the points that are optimal so far: by complementary slackness, those that keep every row
with y_i != 0 and every column with d_j != 0 at its bound. Infeasible: the least sum of all violations is above 0.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from headrace.solve.linear import INFINITY, LOWER, UPPER, Basis, Floats, Ints, Programme, Session
from headrace.solve.pivots import MOST, settle
from headrace.solve.vertex import NOTHING, ONE, Costs, Rational, gap


@dataclass(frozen=True)
class Proof:
    """proven: whether every check held, else `reason` says which did not.

    objectives: the least value of each cost in order. x: the point. duals: y per cost. violation: the least sum of
    violations when the programme has no point. pivots: exact pivots after the solver's basis. digits: of the longest
    denominator in x and y.
    """

    proven: bool
    reason: str = ""
    objectives: tuple[Fraction, ...] = ()
    x: tuple[Fraction, ...] = ()
    duals: tuple[tuple[Fraction, ...], ...] = ()
    violation: Fraction | None = None
    pivots: int = 0
    digits: int = 0


def prove(programme: Rational, costs: Costs, basis: Basis, most: int = 0) -> Proof:
    """Prove that the vertex of `basis` is optimal for the costs in order; a basis that is not is refused.

    most: how many exact pivots may mend it first (the solver's tolerance may stop it a pivot too early).
    """
    found = settle(programme, costs, basis, most)
    if found.status != "optimal" or found.vertex is None:
        reason = f": {found.reason}" if found.reason else ""
        return Proof(False, f"the basis does not lead to an optimum ({found.status}{reason})", pivots=found.pivots)
    x, duals = found.vertex.x, found.vertex.duals
    reason = check(programme, costs, x, duals)
    numbers = (*x, *(value for y in duals for value in y))
    digits = max((len(str(value.denominator)) for value in numbers), default=1)
    objectives = tuple(_times(cost, x) for cost in costs)
    return Proof(not reason, reason, objectives, x, duals, pivots=found.pivots, digits=digits)


def check(programme: Rational, costs: Costs, x: Sequence[Fraction], duals: Sequence[Sequence[Fraction]]) -> str:
    """Why x is not proven optimal for the costs in order by these duals; "" when it is. Uses no basis and no solver."""
    ax = programme.times(x)
    for what, values, lower, upper in (("row", ax, programme.row_lower, programme.row_upper),
                                       ("column", x, programme.col_lower, programme.col_upper)):
        for number, (value, low, high) in enumerate(zip(values, lower, upper, strict=True)):
            if gap(value, low, high):
                return f"{what} {number} lies outside its bounds by {float(gap(value, low, high)):.3g}"
    if len(duals) != len(costs):
        return "a cost has no duals"
    for number, (cost, y) in enumerate(zip(costs, duals, strict=True)):
        reduced = [c - sum((y[i] * v for i, v in column.items() if y[i]), NOTHING)
                   for c, column in zip(cost, programme.columns, strict=True)]
        bound = NOTHING
        for weight, low, high in (*zip(y, programme.row_lower, programme.row_upper, strict=True),
                                  *zip(reduced, programme.col_lower, programme.col_upper, strict=True)):
            if weight:
                side = low if weight > 0 else high
                if side is None:
                    return f"a dual of cost {number} leans on a bound that is not there"
                bound += weight * side
        if bound != _times(cost, x):
            return f"cost {number} is {float(_times(cost, x)):.12g} at the point but bounded only by {float(bound):.12g}"
        programme = tightened(programme, y, reduced)
    return ""


def tightened(programme: Rational, y: Sequence[Fraction], reduced: Sequence[Fraction]) -> Rational:
    """The programme on the optimal points that (y, reduced) prove: rows and columns with a price stay at their bound."""
    rows = [_pinned(*each) for each in zip(y, programme.row_lower, programme.row_upper, strict=True)]
    columns = [_pinned(*each) for each in zip(reduced, programme.col_lower, programme.col_upper, strict=True)]
    return replace(programme, row_lower=tuple(r[0] for r in rows), row_upper=tuple(r[1] for r in rows),
                   col_lower=tuple(c[0] for c in columns), col_upper=tuple(c[1] for c in columns))


def elastic(programme: Rational) -> tuple[Rational, list[Fraction]]:
    """(the programme with two columns per bounded row that take up its violation, their sum as cost)."""
    columns, lower, upper = list(programme.columns), list(programme.col_lower), list(programme.col_upper)
    for row, (low, high) in enumerate(zip(programme.row_lower, programme.row_upper, strict=True)):
        for sign, bound in ((ONE, low), (-ONE, high)):
            if bound is not None:
                columns.append({row: sign})
                lower.append(NOTHING)
                upper.append(None)
    wide = replace(programme, columns=tuple(columns), col_lower=tuple(lower), col_upper=tuple(upper))
    return wide, [NOTHING] * len(programme.columns) + [ONE] * (len(columns) - len(programme.columns))


def refute(programme: Rational) -> Proof:
    """Prove that no point meets all bounds, by the least sum of violations; not proven when that is 0."""
    wide, cost = elastic(programme)
    basis = ordered_basis(wide, [cost])
    if basis is None:
        return Proof(False, "the solver found no basis")
    found = prove(wide, [cost], basis, MOST)
    if not found.proven:
        return found
    (violation,) = found.objectives
    reason = "" if violation > 0 else "a point meets all bounds"
    return replace(found, proven=violation > 0, reason=reason, violation=violation, objectives=())


def certify(programme: Rational, costs: Costs) -> Proof:
    """Solve for the costs in order with the solver, then prove the result from its final basis."""
    basis = ordered_basis(programme, costs)
    return Proof(False, "the solver found no optimum") if basis is None else prove(programme, costs, basis, MOST)


def ordered_basis(programme: Rational, costs: Costs, tolerance: float = 1e-9) -> Basis | None:
    """The solver's final basis for the costs in order: what has a price stays at its bound for the next cost."""
    lp = rounded(programme)
    session = Session(lp)
    for number, cost in enumerate(costs):
        found = session.minimise(np.array([float(c) for c in cost]))
        if not found.optimal:
            return None
        if number + 1 < len(costs):
            _pin(session.bound, found.reduced, lp.col_lower, lp.col_upper, tolerance)
            _pin(session.bound_row, found.duals, lp.row_lower, lp.row_upper, tolerance)
    basis = session.basis()
    return Basis(_sided(basis.columns, lp.col_lower, lp.col_upper), _sided(basis.rows, lp.row_lower, lp.row_upper))


def _pin(bound: Callable[[int, float, float], None], prices: Floats, lower: Floats, upper: Floats, tolerance: float) -> None:
    """Keep what has a price at the bound that it leans on."""
    for number in np.flatnonzero(np.abs(prices) > tolerance):
        side = float(lower[number] if prices[number] > 0 else upper[number])
        if abs(side) < INFINITY:
            bound(int(number), side, side)


def _sided(places: Ints, lower: Floats, upper: Floats) -> Ints:
    """The places with the bound that there is: a pinned variable may be reported at the side that it lacks."""
    no_lower, no_upper = np.isinf(lower), np.isinf(upper)
    found = np.where((places == UPPER) & no_upper & ~no_lower, LOWER, places)
    sided: Ints = np.where((found == LOWER) & no_lower & ~no_upper, UPPER, found).astype(np.int32)
    return sided


def rounded(programme: Rational) -> Programme:
    """The programme as floats, for the solver."""
    starts, rows, values = [0], [], []
    for column in programme.columns:
        for row in sorted(column):
            rows.append(row)
            values.append(float(column[row]))
        starts.append(len(rows))

    def side(bounds: Sequence[Fraction | None], missing: float) -> list[float]:
        return [missing if b is None else float(b) for b in bounds]

    return Programme(
        np.array(starts, dtype=np.int32), np.array(rows, dtype=np.int32), np.array(values, dtype=float),
        np.array(side(programme.row_lower, -INFINITY)), np.array(side(programme.row_upper, INFINITY)),
        np.array(side(programme.col_lower, -INFINITY)), np.array(side(programme.col_upper, INFINITY)))


def _pinned(weight: Fraction, low: Fraction | None, high: Fraction | None) -> tuple[Fraction | None, Fraction | None]:
    if not weight:
        return low, high
    return (low, low) if weight > 0 else (high, high)


def _times(cost: Sequence[Fraction], x: Sequence[Fraction]) -> Fraction:
    return sum((c * v for c, v in zip(cost, x, strict=True) if c and v), NOTHING)
