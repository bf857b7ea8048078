"""One programme under many bounds: an optimal basis is kept, and serves every point at which it stays feasible.

    minimise c x   subject to   row_lower_k <= A x <= row_upper_k,   col_lower_k <= x <= col_upper_k     for k = 1 .. N

Where only bounds differ from point to point, reduced costs do not change, and a basis that is optimal at one point is
optimal wherever its basic values stay within bounds (checked for all points at once). Where some coefficients of A differ
too, the basis' inverse is brought up to date by its few changed rows (Woodbury), and reduced costs are checked as well.
Points that no kept basis serves go to the warm solver, whose basis is kept in turn. Where a basis does not pay for its
factors, the solver alone goes on.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from headrace.solve.linear import BASIC, LOWER, UPPER, Basis, Floats, Programme, Session

Places = NDArray[np.intp]
Flags = NDArray[np.bool_]

_TOLERANCE = 1e-9
_DUAL = 1e-7
_SINGULAR = 1e-9
_CHUNK = 1024
_PATIENCE = 12  # bases in a row that serve fewer points than _WORTH: then no more are kept for this chunk
_WORTH = 4


@dataclass(frozen=True)
class Points:
    """N points. Variables are the columns, then the rows (their sums A x).

    varying: (v) variables whose bounds differ from the programme's; lower, upper: (N, v) their bounds.
    entries: (row, column) of the coefficients that differ; values: (N, entries).
    """

    varying: Places
    lower: Floats
    upper: Floats
    entries: tuple[tuple[int, int], ...] = ()
    values: Floats = field(default_factory=lambda: np.zeros((0, 0)))

    def __len__(self) -> int:
        return len(self.lower)


@dataclass(frozen=True)
class Solved:
    """optimal: (N) flags; objective: (N); read: (N, k) weighted sums of x. NaN where not optimal.

    solves: how many points went to the solver; bases: how many bases were kept.
    """

    optimal: Flags
    objective: Floats
    read: Floats
    solves: int
    bases: int


def solve(programme: Programme, cost: Floats, points: Points, weights: Floats,
          step: Callable[[int], None] = lambda done: None) -> Solved:
    """Solve all points. weights: (k, columns), what to read of each x. step is told how many points are done."""
    table = _Table(np.vstack([cost, weights]), len(points))
    session, kept = _Warm(programme, cost), list[_Vertex]()
    for start in range(0, len(points), _CHUNK):
        end = min(start + _CHUNK, len(points))
        left, poor = np.arange(start, end), 0
        for vertex in kept:
            left = table.fill(vertex, points, left)
        while len(left):
            at, left = int(left[0]), left[1:]
            table.put(at, session.at(points, at))
            if table.optimal[at] and poor < _PATIENCE and len(left):
                before, vertex_ = len(left), _vertex(programme, cost, session.basis(), points)
                left = left if vertex_ is None else table.fill(vertex_, points, left)
                worth = before - len(left) >= _WORTH
                kept += [vertex_] if vertex_ is not None and worth else []
                poor = 0 if worth else poor + 1
            step(end - len(left))
        step(end)
    return Solved(table.optimal, table.read[:, 0], table.read[:, 1:], table.solves, len(kept))


def with_row(programme: Programme, coefficients: Floats) -> Programme:
    """The programme with one more row, unbounded until a point bounds it. coefficients: (columns)."""
    last = len(programme.row_lower)
    rows = np.split(programme.rows, programme.starts[1:-1])
    values = np.split(programme.values, programme.starts[1:-1])
    for j in np.flatnonzero(coefficients):
        rows[j] = np.append(rows[j], np.int32(last))
        values[j] = np.append(values[j], coefficients[j])
    starts = np.concatenate([[0], np.cumsum([len(each) for each in rows])]).astype(np.int32)
    return Programme(starts, np.concatenate(rows).astype(np.int32), np.concatenate(values),
                     np.append(programme.row_lower, -np.inf), np.append(programme.row_upper, np.inf),
                     programme.col_lower, programme.col_upper)


class _Table:
    """The answers, as they come in. weights: what to read of each x, one row each."""

    def __init__(self, weights: Floats, number: int) -> None:
        self.weights, self.solves = weights, 0
        self.optimal, self.read = np.zeros(number, dtype=bool), np.full((number, len(weights)), np.nan)

    def put(self, at: int, x: Floats | None) -> None:
        """One answer of the solver."""
        self.solves += 1
        if x is not None:
            self.optimal[at], self.read[at] = True, self.weights @ x

    def fill(self, vertex: _Vertex, points: Points, left: Places) -> Places:
        """Fill in what a vertex serves, and return what is left."""
        if not len(left):
            return left
        good, read = vertex.serve(points, left, self.weights)
        self.optimal[left[good]], self.read[left[good]] = True, read[good]
        return left[~good]


@dataclass(frozen=True)
class _Moved:
    """Coefficients that differ, as seen from a vertex: B(s) = B + U V(s)', with U the unit columns of the rows they stand in.

    base: (E) the programme's own coefficients; at: (E) the row of each, as a position among those rows; basic, out: which
    entries stand in basic columns and which do not, with where: (E) the position there; inverse: B^-1 U; price: c_B B^-1 U;
    moves: rows of -B^-1 N, one per entry in a basic column; reduced: reduced costs with B; sides: see `_wrong`; same: non-basic
    variables that are fixed at every point.
    """

    base: Floats
    at: Places
    basic: Flags
    where: Places
    inverse: Floats
    price: Floats
    moves: Floats
    reduced: Floats
    sides: Floats
    same: Flags

    def shift(self, values: Floats, basic: Floats, out: Floats) -> tuple[Floats, Flags]:
        """Basic values with the moved coefficients, and whether the basis is optimal with them. (N, ...) arrays.

        Woodbury: x_B = t - W (I + M)^-1 V't with t = z - W g, W = B^-1 U, M = V'W, g = what non-basic columns add to the rows;
        prices of the rows q = c_B W (I + M)^-1; reduced costs d - q V' moves, less q times what moved in non-basic columns.
        """
        number, size = len(values), self.inverse.shape[1]
        moved = values - self.base
        inside, outside = np.flatnonzero(self.basic), np.flatnonzero(~self.basic)
        added, lead, mixed = np.zeros((number, size)), np.zeros((number, size)), np.zeros((number, size, size))
        for e in outside:
            added[:, self.at[e]] += moved[:, e] * out[:, self.where[e]]
        start = basic - added @ self.inverse.T
        for e in inside:
            lead[:, self.at[e]] += moved[:, e] * start[:, self.where[e]]
            mixed[:, self.at[e]] += moved[:, e, None] * self.inverse[self.where[e]]
        mixed += np.eye(size)
        known = np.abs(np.linalg.det(mixed)) > _SINGULAR
        mixed[~known] = np.eye(size)
        found = start - np.linalg.solve(mixed, lead[..., None])[..., 0] @ self.inverse.T
        prices = np.linalg.solve(mixed.swapaxes(1, 2), np.broadcast_to(self.price, (number, size))[..., None])[..., 0]
        reduced = self.reduced - (prices[:, self.at[inside]] * moved[:, inside]) @ self.moves
        for e in outside:
            reduced[:, self.where[e]] -= prices[:, self.at[e]] * moved[:, e]
        return found, known & ~(_wrong(reduced, self.sides) & ~self.same).any(axis=1)


@dataclass(frozen=True)
class _Vertex:
    """A basis with its inverse: basic = constant + moves @ (values of the non-basic variables whose bounds vary).

    driven: positions in `varying` of those, and at_upper: at which of their bounds they stand; beside: their positions among
    all non-basic ones, whose other values are `still`. lower, upper: the bounds of the basic variables by the programme;
    watched: pairs (position among the basic ones, position in `varying`) of those that vary. resting: values of all columns
    that are not basic and do not vary, else 0. width: number of columns. moved: of points whose coefficients differ.
    """

    basic: Places
    constant: Floats
    moves: Floats
    driven: Places
    beside: Places
    still: Floats
    at_upper: Flags
    lower: Floats
    upper: Floats
    watched: tuple[Places, Places]
    resting: Floats
    width: int
    moved: _Moved | None

    def serve(self, points: Points, chosen: Places, weights: Floats) -> tuple[Flags, Floats]:
        """Per chosen point: whether the vertex is optimal there, and what the weights read of x."""
        out = np.where(self.at_upper, points.upper[np.ix_(chosen, self.driven)], points.lower[np.ix_(chosen, self.driven)])
        known = np.isfinite(out).all(axis=1)
        out[~known] = 0.0
        basic = self.constant + out @ self.moves.T
        if self.moved is not None:
            every = np.repeat(self.still[None], len(chosen), axis=0)
            every[:, self.beside] = out
            basic, good = self.moved.shift(points.values[chosen], basic, every)
            known &= good
        slack = _TOLERANCE * (1 + np.abs(basic).max(axis=1, initial=0.0))[:, None]
        fixed = np.ones(len(self.basic), dtype=bool)
        fixed[self.watched[0]] = False
        inside = (basic >= self.lower - slack) & (basic <= self.upper + slack) | ~fixed
        moved = basic[:, self.watched[0]]
        low, high = (part[np.ix_(chosen, self.watched[1])] for part in (points.lower, points.upper))
        good = known & inside.all(axis=1) & ((moved >= low - slack) & (moved <= high + slack)).all(axis=1)
        here = self.basic < self.width
        columns = points.varying[self.driven]
        there = columns < self.width
        read = basic[:, here] @ weights[:, self.basic[here]].T + out[:, there] @ weights[:, columns[there]].T
        return good, read + weights @ self.resting


class _Warm:
    """A session that remembers which bounds it was given last."""

    def __init__(self, programme: Programme, cost: Floats) -> None:
        self._session, self._cost, self._width = Session(programme), cost, len(programme.col_lower)
        lower, upper = _bounds(programme)
        self._given = np.column_stack([lower, upper])

    def basis(self) -> Basis:
        return self._session.basis()

    def at(self, points: Points, k: int) -> Floats | None:
        """x at point k; None when the solver finds none."""
        for variable, low, high in zip(points.varying, points.lower[k], points.upper[k], strict=True):
            if (self._given[variable] != (low, high)).any():
                bound = self._session.bound if variable < self._width else self._session.bound_row
                bound(int(variable) - (0 if variable < self._width else self._width), float(low), float(high))
                self._given[variable] = low, high
        for (row, column), value in zip(points.entries, points.values[k] if points.entries else (), strict=True):
            self._session.entry(row, column, float(value))
        found = self._session.minimise(self._cost)
        return found.x if found.optimal else None


def _bounds(programme: Programme) -> tuple[Floats, Floats]:
    """Lower and upper bounds of columns, then rows."""
    return (np.concatenate([programme.col_lower, programme.row_lower]),
            np.concatenate([programme.col_upper, programme.row_upper]))


def _wrong(reduced: Floats, sides: Floats) -> Flags:
    """Reduced costs of the wrong sign. sides: 1 at an upper bound, -1 at a lower one, 0 between none (any cost is wrong)."""
    return np.asarray(np.where(sides == 0, np.abs(reduced), sides * reduced) > _DUAL)


def _vertex(programme: Programme, cost: Floats, basis: Basis, points: Points) -> _Vertex | None:
    """The basis' inverse; None if it is singular or, with the programme's coefficients throughout, not optimal anywhere."""
    n, m = len(programme.col_lower), len(programme.row_lower)
    lower, upper = _bounds(programme)
    places = np.concatenate([basis.columns, basis.rows])
    basic, out = np.flatnonzero(places == BASIC), np.flatnonzero(places != BASIC)
    wide = np.zeros((m, n + m))
    wide[programme.rows, np.repeat(np.arange(n), np.diff(programme.starts))] = programme.values
    wide[np.arange(m), n + np.arange(m)] = -1.0
    bounded = np.isin(places[out], (LOWER, UPPER))
    sides = np.where(bounded, np.where(places[out] == UPPER, 1.0, -1.0), 0.0)
    varies = np.isin(out, points.varying) & bounded
    still = np.where(bounded & ~varies, np.where(places[out] == UPPER, upper[out], lower[out]), 0.0)
    rows = np.unique(np.array([row for row, _ in points.entries], dtype=np.intp))
    own = {int(variable): position for position, variable in enumerate(basic)}
    inside = [own[column] for _, column in points.entries if column in own]
    costs = np.concatenate([cost, np.zeros(m)])
    right = np.column_stack([wide[:, out] @ still, wide[:, out[varies]], np.eye(m)[:, rows]])
    left = np.column_stack([costs[basic], np.eye(m)[:, inside]])
    try:  # only what is asked of the inverse: some of its columns times bounds, its prices, and a few of its rows
        solved = np.asarray(np.linalg.solve(wide[:, basic], right), dtype=np.float64)
        across = np.asarray(np.linalg.solve(wide[:, basic].T, left), dtype=np.float64)
    except np.linalg.LinAlgError:
        return None
    count = int(varies.sum())
    moves, inverse = -solved[:, 1 : 1 + count], solved[:, 1 + count :]
    reduced = costs[out] - across[:, 0] @ wide[:, out]
    same = lower == upper
    same[points.varying] = (points.lower == points.upper).all(axis=0)
    if not points.entries and (_wrong(reduced, sides) & ~same[out]).any():
        return None
    resting = np.zeros(n)
    resting[out[out < n]] = still[out < n]
    order = {int(variable): position for position, variable in enumerate(points.varying)}
    watched = [(i, order[int(variable)]) for i, variable in enumerate(basic) if int(variable) in order]
    pairs = np.array(watched, dtype=np.intp).reshape(-1, 2)
    moved = None
    if points.entries:
        base = np.array([wide[row, column] for row, column in points.entries])
        other = {int(variable): position for position, variable in enumerate(out)}
        flags = np.array([column in own for _, column in points.entries])
        where = np.array([own.get(column, other.get(column, 0)) for _, column in points.entries], dtype=np.intp)
        at = np.searchsorted(rows, [row for row, _ in points.entries])
        led = -(across[:, 1:].T @ wide[:, out])
        moved = _Moved(base, at, flags, where, inverse, costs[basic] @ inverse, led, reduced, sides, same[out])
    return _Vertex(basic, -solved[:, 0], moves, np.array([order[int(v)] for v in out[varies]], dtype=np.intp),
                   np.flatnonzero(varies), still, places[out][varies] == UPPER, lower[basic], upper[basic],
                   (pairs[:, 0], pairs[:, 1]), resting, n, moved)
