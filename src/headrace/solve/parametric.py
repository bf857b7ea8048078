"""Optima as a bound moves: exact pieces and breakpoints of a linear programme whose rows shift with one number t.

    minimise  c x (costs in order)   subject to   row_lower + t e <= A x <= row_upper + t e,   col_lower <= x <= col_upper

An optimal basis stays optimal while its basic variables stay within their bounds, since reduced costs do not depend on t;
there x is linear in t, and the interval's ends follow exactly. Pieces are found by solving inside what is not yet covered,
so that they meet without a gap; the objective is convex in t. Method: parametric right-hand sides (Gass S, Saaty T 1955
Nav Res Logist Q 2:39-45; from memory), every basis verified in fractions.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from headrace.solve.certificate import certify, ordered_basis
from headrace.solve.pivots import settle
from headrace.solve.vertex import NOTHING, ONE, Corner, Costs, Rational, Sparse

MOST = 400


@dataclass(frozen=True)
class Piece:
    """One basis between t = low and t = high. x(t) = x + t slopes, for each column."""

    low: Fraction
    high: Fraction
    x: tuple[Fraction, ...]
    slopes: tuple[Fraction, ...]

    def at(self, t: Fraction, weights: Sparse) -> Fraction:
        """sum of weights[j] x_j at t."""
        return sum((w * (self.x[j] + t * self.slopes[j]) for j, w in weights.items()), NOTHING)

    def slope(self, weights: Sparse) -> Fraction:
        """The change of sum weights[j] x_j per unit of t."""
        return sum((w * self.slopes[j] for j, w in weights.items()), NOTHING)


@dataclass(frozen=True)
class Range:
    """The t for which the programme has a point: from low to high; None = no end. empty: for none at all."""

    low: Fraction | None = None
    high: Fraction | None = None
    empty: bool = False


def reach(programme: Rational, change: Sparse) -> Range:
    """The exact range of t. Raises ValueError when it can't be proven."""
    row_count, columns = len(programme.row_lower), len(programme.columns)
    wide = replace(programme, columns=(*programme.columns, {i: -v for i, v in change.items() if i < row_count}),
                   col_lower=(*programme.col_lower, None), col_upper=(*programme.col_upper, None))
    ends: list[Fraction | None] = []
    for sign in (ONE, -ONE):
        cost = [NOTHING] * columns + [sign]
        found = certify(wide, [cost])
        if found.proven:
            ends.append(found.x[columns])
        elif not certify(wide, [[NOTHING] * (columns + 1)]).proven:
            return Range(empty=True)
        else:
            ends.append(None)
    return Range(ends[0], ends[1])


def piece(programme: Rational, costs: Costs, change: Sparse, at: Fraction) -> Piece | None:
    """The piece around t = at; None when the programme has no optimum there. Raises ValueError when pivots do not settle it."""
    shifted = programme.shifted(change, at)
    basis = ordered_basis(shifted, costs)
    if basis is None:
        return None
    found = settle(shifted, costs, basis)
    if found.status in ("infeasible", "unbounded"):
        return None
    if found.vertex is None or found.status != "optimal":
        raise ValueError(f"the optimum at {float(at):g} could not be settled: {found.status} {found.reason}")
    corner = Corner(shifted, found.basis)
    dx, dax = corner.direction(change)
    vertex, rest = found.vertex, set(range(len(dax))) - set(corner.active)
    moving = [(vertex.x[j], dx[j], shifted.col_lower[j], shifted.col_upper[j]) for j in corner.basic]
    moving += [(vertex.ax[i], dax[i] - change.get(i, NOTHING), shifted.row_lower[i], shifted.row_upper[i]) for i in rest]
    back, ahead = _room(moving, -ONE), _room(moving, ONE)
    x = tuple(value - at * slope for value, slope in zip(vertex.x, dx, strict=True))
    far = Fraction(10**9)
    return Piece(at - (far if back is None else back), at + (far if ahead is None else ahead), x, tuple(dx))


def _room(moving: Sequence[tuple[Fraction, Fraction, Fraction | None, Fraction | None]], way: Fraction) -> Fraction | None:
    """How far t may go before one of (value, slope, lower, upper) leaves its bounds; None = without end."""
    room: Fraction | None = None
    for value, slope, low, high in moving:
        step = slope * way
        bound = high if step > 0 else low
        if step and bound is not None:
            here = (bound - value) / step
            room = here if room is None or here < room else room
    return room


def after(programme: Rational, costs: Costs, change: Sparse, t: Fraction, near: Fraction = Fraction(1, 10**6)) -> Piece | None:
    """The piece that holds just above t, so that its slopes are what one more unit costs. None when t can't grow."""
    for _ in range(6):
        found = piece(programme, costs, change, t + near)
        if found is not None and found.low <= t:
            return found
        near /= 1000
    return None


def walk(programme: Rational, costs: Costs, change: Sparse, low: Fraction, high: Fraction, most: int = MOST) -> tuple[Piece, ...]:
    """All pieces between low and high, in order, where the programme has an optimum throughout. Clip to `reach` first.

    Raises ValueError when there are more than `most` pieces or none inside the range.
    """
    found: list[Piece] = []
    left = [(low, high)]
    while left:
        start, end = left.pop()
        if start >= end:
            continue
        here = _inside(programme, costs, change, start, end)
        if len(found) >= most:
            raise ValueError(f"more than {most} pieces")
        found.append(here)
        left += [(start, here.low), (here.high, end)]
    return tuple(sorted(found, key=lambda each: each.low))


def _inside(programme: Rational, costs: Costs, change: Sparse, start: Fraction, end: Fraction) -> Piece:
    """A piece with some length between start and end; a basis that holds at one point only is passed over."""
    for share in (Fraction(1, 2), Fraction(1, 3), Fraction(5, 7), Fraction(1, 11), Fraction(12, 13)):
        here = piece(programme, costs, change, start + (end - start) * share)
        if here is None:
            raise ValueError("the range is not covered")
        if here.low < here.high:
            return replace(here, low=max(here.low, start), high=min(here.high, end))
    raise ValueError("only bases that hold at a single point were found")


def joined(pieces: Sequence[Piece], watched: Sequence[Sparse]) -> tuple[Piece, ...]:
    """The pieces with neighbours put together where no watched sum changes its slope."""
    kept: list[Piece] = []
    for each in pieces:
        if kept and all(kept[-1].slope(w) == each.slope(w) for w in watched):
            kept[-1] = replace(kept[-1], high=each.high)
        else:
            kept.append(each)
    return tuple(kept)
