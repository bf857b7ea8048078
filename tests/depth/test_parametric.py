"""Pieces and breakpoints against paper and against a dense grid."""

from __future__ import annotations

import random
from fractions import Fraction

import numpy as np
import pytest

from headrace.solve.certificate import rounded
from headrace.solve.linear import Session
from headrace.solve.parametric import after, joined, piece, reach, walk
from headrace.solve.vertex import Rational

ONE, NIL = Fraction(1), Fraction(0)


def paper() -> tuple[Rational, list[Fraction]]:
    """Least x + 3 y with x + y = t, x <= 2, y <= 3: cost t up to 2, then 2 + 3 (t - 2); feasible for 0 <= t <= 5."""
    lp = Rational(({0: ONE}, {0: ONE}), (NIL,), (NIL,), (NIL, NIL), (Fraction(2), Fraction(3)))
    return lp, [ONE, Fraction(3)]


def test_on_paper() -> None:
    lp, cost = paper()
    found = walk(lp, [cost], {0: ONE}, NIL, Fraction(5))
    assert [(p.low, p.high) for p in found] == [(0, 2), (2, 5)]
    weights = dict(enumerate(cost))
    assert [p.slope(weights) for p in found] == [1, 3]
    assert [p.at(Fraction(2), weights) for p in found] == [2, 2]
    assert joined(found, [{0: ONE, 1: ONE}])[0].high == 5
    assert reach(lp, {0: ONE}) .low == 0 and reach(lp, {0: ONE}).high == 5


def test_the_price_of_one_more_is_the_slope_above() -> None:
    """At t = 2, where two slopes meet, one more costs 3 and one less saves 1."""
    lp, cost = paper()
    above = after(lp, [cost], {0: ONE}, Fraction(2))
    assert above is not None and above.slope(dict(enumerate(cost))) == 3
    below = piece(lp, [cost], {0: ONE}, Fraction(199, 100))
    assert below is not None and below.slope(dict(enumerate(cost))) == 1
    assert after(lp, [cost], {0: ONE}, Fraction(5)) is None


def test_reach_without_end_and_nowhere() -> None:
    lp = Rational(({0: ONE},), (NIL,), (NIL,), (NIL,), (None,))
    assert reach(lp, {0: ONE}).high is None and reach(lp, {0: ONE}).low == 0
    stuck = Rational(({0: ONE}, {}), (NIL, ONE), (NIL, ONE), (NIL, NIL), (None, None))
    assert reach(stuck, {0: ONE}).empty


def random_programme(seed: int) -> tuple[Rational, list[Fraction], dict[int, Fraction], Fraction]:
    rng = random.Random(seed)
    rows, n = 6, 14
    columns = tuple({i: Fraction(rng.randint(-3, 4)) for i in rng.sample(range(rows), 3)} for _ in range(n))
    x = [Fraction(rng.randint(0, 4)) for _ in range(n)]
    at = [sum((c.get(i, NIL) * v for c, v in zip(columns, x, strict=True)), NIL) for i in range(rows)]
    upper = tuple(rng.choice([None, Fraction(5), Fraction(9)]) for _ in range(n))
    high = tuple(b + rng.choice([0, 0, 3]) for b in at)
    lp = Rational(tuple({i: v for i, v in c.items() if v} for c in columns), tuple(at), high, (NIL,) * n, upper)
    return lp, [Fraction(rng.randint(1, 6)) for _ in range(n)], {rng.randrange(rows): ONE, rng.randrange(rows): -ONE}, ONE


def values(lp: Rational, cost: list[Fraction], change: dict[int, Fraction], grid: np.ndarray) -> np.ndarray:
    """The least cost at each t of a grid, by the float solver."""
    base, floats = Session(rounded(lp)), np.array([float(c) for c in cost])
    found = []
    for t in grid:
        for i, amount in change.items():
            base.bound_row(i, float(lp.row_lower[i]) + t * float(amount), float(lp.row_upper[i]) + t * float(amount))
        found.append(base.minimise(floats).objective)
    return np.array(found)


def from_a_grid(grid: np.ndarray, value: np.ndarray) -> list[float]:
    """Breakpoints: where the lines on both sides of a bent interval meet."""
    slope = np.diff(value) / np.diff(grid)
    found, k = [], 1
    while k < len(slope):
        if abs(slope[k] - slope[k - 1]) > 1e-7:
            last = k + 1 if k + 1 < len(slope) and abs(slope[k + 1] - slope[k]) > 1e-7 else k
            before, behind = slope[k - 1], slope[last]
            found.append((value[last + 1] - behind * grid[last + 1] - value[k - 1] + before * grid[k - 1]) / (before - behind))
            k = last + 1
        else:
            k += 1
    return found


@pytest.mark.parametrize("seed", range(8))
def test_breakpoints_equal_those_of_a_dense_grid(seed: int) -> None:
    lp, cost, change, _ = random_programme(seed)
    span = reach(lp, change)
    low = max(span.low if span.low is not None else Fraction(-4), Fraction(-4))
    high = min(span.high if span.high is not None else Fraction(4), Fraction(4))
    assert low < high
    pieces = walk(lp, [cost], change, low, high)
    weights = dict(enumerate(cost))
    assert pieces[0].low == low and pieces[-1].high == high
    assert all(a.high == b.low and a.at(a.high, weights) == b.at(b.low, weights) for a, b in zip(pieces, pieces[1:], strict=False))
    grid = np.linspace(float(low), float(high), 1501)
    value = values(lp, cost, change, grid)
    ours = [float(p.low) for p in joined(pieces, [weights])[1:]]
    theirs = from_a_grid(grid, value)
    assert len(ours) == len(theirs)
    np.testing.assert_allclose(ours, theirs, atol=1e-7)
    exact = [next(p for p in pieces if p.high >= Fraction(t) or p is pieces[-1]).at(Fraction(t), weights) for t in grid[1:-1:50]]
    np.testing.assert_allclose([float(v) for v in exact], value[1:-1:50], atol=1e-8)
