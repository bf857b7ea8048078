"""Reconciliation: a published worked example, an independent constrained least-squares solution, the chi-square table."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import optimize, stats

from headrace.solve import squares

# Six streams of a heat exchanger with a bypass: Narasimhan S, Jordache C (2000) Data Reconciliation and Gross Error
# Detection, Gulf Publishing, examples 1-1 and 7-1 (from memory: readings, reconciled values and test value as printed there).
STREAMS = np.array([[1, -1, -1, 0, 0, 0], [0, 1, 0, -1, 0, 0], [0, 0, 1, 0, -1, 0], [0, 0, 0, 1, 1, -1]], dtype=float)
READ = np.array([101.91, 64.45, 34.65, 64.20, 36.44, 98.88])
RECONCILED = [100.22, 64.50, 35.72, 64.50, 35.72, 100.22]


def test_a_published_example() -> None:
    found = squares.fit(STREAMS, READ, np.ones(6))
    assert np.round(found.x, 2).tolist() == RECONCILED
    assert found.freedom == 4 and found.checked == (True,) * 6 and found.p > 0.05


def test_a_published_gross_error() -> None:
    read = READ + np.array([0, 4.0, 0, 0, 0, 0])
    found = squares.fit(STREAMS, read, np.ones(6))
    assert round(found.h, 3) == 16.674 and found.h > 9.488 and found.p < 0.05
    first = squares.suspects(STREAMS, read, np.ones(6))[0]
    assert first.index == 1 and first.fit.p > 0.05


@pytest.mark.parametrize(
    ("freedom", "row"),
    # Nielsen J, Villadsen J, Liden G (2003) Bioreaction Engineering Principles, 2nd ed., table 3.5 (seen).
    [(1, (0.46, 1.32, 2.71, 3.84, 5.02, 6.63)), (2, (1.39, 2.77, 4.61, 5.99, 7.38, 9.21)),
     (3, (2.37, 4.11, 6.25, 7.81, 9.35, 11.30)), (4, (3.36, 5.39, 7.78, 9.49, 11.10, 13.30)),
     (5, (4.35, 6.63, 9.24, 11.10, 12.80, 15.10))],
)
def test_the_chi_square_table(freedom: int, row: tuple[float, ...]) -> None:
    for level, value in zip((0.5, 0.75, 0.9, 0.95, 0.975, 0.99), row, strict=True):
        assert squares.chance(value, freedom) == pytest.approx(1 - level, abs=4e-3)


def test_the_chance_equals_that_of_scipy() -> None:
    for freedom in range(1, 12):
        for h in (0.0, 0.01, 0.5, 3.0, 17.0, 60.0):
            assert squares.chance(h, freedom) == pytest.approx(float(stats.chi2.sf(h, freedom)), rel=1e-10, abs=1e-300)
    assert squares.chance(5.0, 0) == 1.0


def independent(balances: np.ndarray, readings: np.ndarray, errors: np.ndarray) -> tuple[np.ndarray, float]:
    """The same problem for a general optimiser: exact and free values as it sees fit, errors as weights."""
    inexact, exact = np.flatnonzero(errors > 0), np.flatnonzero(~np.isnan(readings) & (errors == 0))
    start = np.nan_to_num(readings)

    def cost(x: np.ndarray) -> float:
        return float(np.nansum(((x - readings)[inexact] / errors[inexact]) ** 2))

    def slope(x: np.ndarray) -> np.ndarray:
        grad = np.zeros(len(x))
        grad[inexact] = 2 * (x - readings)[inexact] / errors[inexact] ** 2
        return grad

    held = np.vstack([balances, np.eye(len(start))[exact]])
    target = np.concatenate([np.zeros(len(balances)), readings[exact]])
    found = optimize.minimize(cost, start, jac=slope, method="SLSQP", options={"ftol": 1e-13, "maxiter": 500},
                              constraints={"type": "eq", "fun": lambda x: held @ x - target, "jac": lambda x: held})
    assert found.success
    return found.x, float(found.fun)


@pytest.mark.parametrize("seed", range(12))
def test_equals_an_independent_solution(seed: int) -> None:
    rng = np.random.default_rng(seed)
    balances = rng.integers(-6, 7, size=(3, 7)).astype(float)
    truth = rng.uniform(1, 5, 7)
    truth -= np.linalg.pinv(balances) @ (balances @ truth)
    errors = rng.uniform(0.05, 0.4, 7)
    readings = truth + errors * rng.normal(size=7)
    readings[5], errors[5] = np.nan, 0.0
    readings[6], errors[6] = truth[6], 0.0
    found = squares.fit(balances, readings, errors)
    x, h = independent(balances, readings, errors)
    assert found.x == pytest.approx(x, abs=1e-5) and found.h == pytest.approx(h, rel=1e-6)
    assert np.abs(balances @ found.x).max() < 1e-9 and found.x[6] == readings[6]


def test_the_errors_are_those_of_many_repetitions() -> None:
    rng = np.random.default_rng(1)
    balances, truth = np.array([[1.0, -1.0, -1.0, 0.0], [0.0, 2.0, 0.0, -1.0]]), np.array([5.0, 3.0, 2.0, 6.0])
    errors = np.array([0.3, 0.1, 0.2, 0.0])
    draws = [truth + errors * rng.normal(size=4) for _ in range(4000)]
    for reading in draws:
        reading[3] = np.nan
    fits = [squares.fit(balances, reading, errors) for reading in draws]
    spread = np.std([each.x for each in fits], axis=0)
    assert fits[0].errors == pytest.approx(spread, rel=0.05)
    assert np.mean([each.h > 3.841 for each in fits]) == pytest.approx(0.05, abs=0.012)  # one degree of freedom, 5 %


def test_nothing_to_check() -> None:
    found = squares.fit(np.array([[1.0, -1.0, -1.0]]), np.array([5.0, 3.0, np.nan]), np.array([0.1, 0.1, 0.0]))
    assert found.freedom == 0 and found.p == 1.0 and found.x[2] == pytest.approx(2.0)
    assert found.checked == (False, False, False) and found.errors[2] == pytest.approx(math.hypot(0.1, 0.1))


def test_two_unread_values_in_one_balance_stay_open() -> None:
    found = squares.fit(np.array([[1.0, -1.0, -1.0]]), np.array([5.0, np.nan, np.nan]), np.zeros(3))
    assert np.isnan(found.x[1:]).all() and np.isnan(found.errors[1:]).all()


def test_exact_values_that_contradict_leave_a_gap() -> None:
    found = squares.fit(np.array([[1.0, -1.0]]), np.array([5.0, 3.0]), np.zeros(2))
    assert found.gap == pytest.approx(2.0) and found.freedom == 0


def test_a_negative_error_is_refused() -> None:
    with pytest.raises(ValueError, match="standard error"):
        squares.fit(np.array([[1.0, -1.0]]), np.array([5.0, 3.0]), np.array([-1.0, 1.0]))
