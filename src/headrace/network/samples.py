"""A case's programme as a function of its uncertain inputs, learned from a few builds.

Every bound and coefficient of a programme is linear in each input while the others stay: a polynomial with products of
different inputs only. It is found at one base point, one point per input and one per pair of inputs that meet in a number,
and checked at points of its own. Where the check fails (three inputs multiplied), each sample is built.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

from headrace.network.build import Network, programme
from headrace.solve.batch import Points
from headrace.solve.linear import Floats, Programme

_BASE, _STEP = 0.37, 0.71
_CHECKS = ((0.11, 0.93), (0.83, 0.29))
_SAME = 1e-9


class Samples:
    """Programmes of a network at any values of its inputs. lows, highs: where the inputs are varied to learn."""

    def __init__(self, network: Callable[[Floats], Network], lows: Sequence[float], highs: Sequence[float]) -> None:
        self._network, self._lows, self._spans = network, np.array(lows), np.array(highs) - np.array(lows)
        self.net = network(self._at(np.full(len(lows), _BASE)))
        self.programme = programme(self.net)
        self._base = _numbers(self.programme)
        self._single = [self._step({i: _STEP}) - self._base for i in range(len(lows))]
        meets = [(i, j) for i, j in combinations(range(len(lows)), 2) if (self._single[i] * self._single[j]).any()]
        both = {(i, j): self._step({i: _STEP, j: _STEP}) for i, j in meets}
        self._pairs = {(i, j): self._clean(at - self._base - self._single[i] - self._single[j]) for (i, j), at in both.items()}
        self._pairs = {key: change for key, change in self._pairs.items() if change.any()}
        self.learned = all(self._holds(np.resize(check, len(lows))) for check in _CHECKS)

    def points(self, values: Floats) -> Points:
        """All samples, (N, inputs), as points of `programme`."""
        numbers = self._predicted(values) if self.learned else np.array([self._built(row) for row in values])
        return self._points(numbers)

    def _at(self, shares: Floats) -> Floats:
        return np.asarray(self._lows + shares * self._spans)

    def _step(self, changed: dict[int, float]) -> Floats:
        shares = np.full(len(self._lows), _BASE)
        for i, share in changed.items():
            shares[i] = share
        return self._built(self._at(shares))

    def _built(self, values: Floats) -> Floats:
        built = programme(self._network(values))
        same = np.array_equal(built.starts, self.programme.starts) and np.array_equal(built.rows, self.programme.rows)
        if not same or len(built.row_lower) != len(self.programme.row_lower):
            raise RuntimeError("the network changes its shape within the ranges of its inputs")
        return _numbers(built)

    def _clean(self, change: Floats) -> Floats:
        """A change without what rounding left of it."""
        return np.where(np.abs(change) > 1e-12 * (1 + np.abs(self._base)), change, 0.0)

    def _predicted(self, values: Floats) -> Floats:
        """(N, numbers) from the polynomial."""
        moves = (values - self._at(np.full(len(self._lows), _BASE))) / (self._spans * (_STEP - _BASE))
        numbers = np.repeat(self._base[None], len(values), axis=0)
        for i, change in enumerate(self._single):
            used = np.flatnonzero(change)
            numbers[:, used] += moves[:, i : i + 1] * change[used]
        for (i, j), change in self._pairs.items():
            used = np.flatnonzero(change)
            numbers[:, used] += (moves[:, i] * moves[:, j])[:, None] * change[used]
        return numbers

    def _holds(self, shares: Floats) -> bool:
        values = self._at(shares)
        built, predicted = self._built(values), self._predicted(values[None])[0]
        return bool((np.abs(built - predicted) <= _SAME * (1 + np.abs(built))).all())

    def _points(self, numbers: Floats) -> Points:
        """Bounds by variable (columns, then rows) and coefficients, those that differ from the programme only."""
        given, n, m = self.programme, len(self.programme.col_lower), len(self.programme.row_lower)
        size = n + m
        differs: NDArray[np.bool_] = np.asarray((numbers != self._base).any(axis=0))
        varying = np.flatnonzero(differs[:size] | differs[size : 2 * size])
        infinite = _infinite(given)
        lower = np.where(infinite[0][varying], -np.inf, numbers[:, varying])
        upper = np.where(infinite[1][varying], np.inf, numbers[:, size + varying])
        changed = np.flatnonzero(differs[2 * size :])
        columns = np.repeat(np.arange(n), np.diff(given.starts))
        entries = tuple((int(given.rows[k]), int(columns[k])) for k in changed)
        return Points(varying, lower, upper, entries, numbers[:, 2 * size + changed])


def _numbers(given: Programme) -> Floats:
    """All bounds (columns then rows: lower, upper) and coefficients in one row; infinite bounds as 0."""
    parts = (given.col_lower, given.row_lower, given.col_upper, given.row_upper)
    return np.concatenate([*(np.where(np.isfinite(part), part, 0.0) for part in parts), given.values])


def _infinite(given: Programme) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    lower, upper = np.concatenate([given.col_lower, given.row_lower]), np.concatenate([given.col_upper, given.row_upper])
    return np.asarray(np.isinf(lower)), np.asarray(np.isinf(upper))
