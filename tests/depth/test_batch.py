"""Many right-hand sides at once: the kept bases answer what a fresh solve of each point answers."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from headrace.solve import batch
from headrace.solve.linear import BASIC, Programme, Session

SMALL = st.integers(-3, 3)


def programme(matrix: np.ndarray, row: tuple[float, float], upper: float) -> Programme:
    rows, columns = matrix.shape
    starts, indices, values = [0], [], []
    for j in range(columns):
        used = np.flatnonzero(matrix[:, j])
        indices += used.tolist()
        values += matrix[used, j].tolist()
        starts.append(len(indices))
    return Programme(np.array(starts, dtype=np.int32), np.array(indices, dtype=np.int32), np.array(values, dtype=float),
                     np.full(rows, row[0], dtype=float), np.full(rows, row[1], dtype=float), np.zeros(columns), np.full(columns, upper))


def fresh(given_: Programme, cost: np.ndarray, points: batch.Points, k: int) -> float:
    """The optimum at one point from a cold session; NaN when there is none."""
    session, width = Session(given_), len(given_.col_lower)
    for variable, low, high in zip(points.varying, points.lower[k], points.upper[k], strict=True):
        (session.bound if variable < width else session.bound_row)(int(variable) % width if variable < width else int(variable) - width, low, high)
    for (row, column), value in zip(points.entries, points.values[k] if points.entries else (), strict=True):
        session.entry(row, column, value)
    return session.minimise(cost).objective


@settings(max_examples=30)
@given(st.lists(st.lists(SMALL, min_size=5, max_size=5), min_size=2, max_size=3), st.integers(0, 10_000))
def test_equals_fresh_solves(rows: list[list[int]], seed: int) -> None:
    rng = np.random.default_rng(seed)
    given_ = programme(np.array(rows, dtype=float), (-1.0, 1.0), 10.0)
    cost = rng.integers(0, 5, 5).astype(float)
    number, width = 40, 5
    varying = np.array([1, *range(width, width + len(rows))])
    lower = rng.uniform(-2, 2, (number, len(varying)))
    upper = lower + np.where(rng.random((number, len(varying))) < 0.5, 0.0, rng.uniform(0, 2, (number, len(varying))))
    lower[:, 0], upper[:, 0] = 0.0, rng.uniform(0, 3, number)
    points = batch.Points(varying, lower, upper)
    found = batch.solve(given_, cost, points, np.eye(5))
    for k in range(number):
        expected = fresh(given_, cost, points, k)
        assert found.optimal[k] == (not np.isnan(expected))
        if found.optimal[k]:
            assert found.objective[k] == pytest.approx(expected, abs=1e-7)
            assert cost @ found.read[k] == pytest.approx(expected, abs=1e-7)
            x = found.read[k]
            sums = given_.times(x)
            assert (sums >= lower[k, 1:] - 1e-7).all() and (sums <= upper[k, 1:] + 1e-7).all() and x[1] <= upper[k, 0] + 1e-7


def test_one_basis_serves_many_points() -> None:
    """x0 + x1 = b, x0 <= 1, cost 1 and 2: x0 first. Two bases: b below 1, b above 1."""
    given_ = programme(np.array([[1.0, 1.0]]), (1.0, 1.0), 100.0)
    right = np.linspace(0.1, 3.0, 500)[:, None]
    lower, upper = np.hstack([np.zeros_like(right), right]), np.hstack([np.ones_like(right), right])
    told: list[int] = []
    found = batch.solve(given_, np.array([1.0, 2.0]), batch.Points(np.array([0, 2]), lower, upper), np.eye(2), told.append)
    assert found.solves <= 3 and found.bases <= 2 and told[-1] == 500 and told == sorted(told)
    assert found.read[:, 0] == pytest.approx(np.minimum(right[:, 0], 1.0))
    assert found.objective == pytest.approx(np.where(right[:, 0] <= 1, right[:, 0], 2 * right[:, 0] - 1))


def test_points_without_an_answer_are_said() -> None:
    given_ = programme(np.array([[1.0, 1.0]]), (1.0, 1.0), 1.0)
    right = np.array([[0.5], [5.0], [1.5]])
    found = batch.solve(given_, np.ones(2), batch.Points(np.array([2]), right, right), np.eye(2))
    assert found.optimal.tolist() == [True, False, True] and np.isnan(found.objective[1]) and np.isnan(found.read[1]).all()


@settings(max_examples=30)
@given(st.lists(st.lists(SMALL, min_size=6, max_size=6), min_size=3, max_size=3), st.integers(0, 10_000))
def test_equals_fresh_solves_with_other_coefficients(rows: list[list[int]], seed: int) -> None:
    rng = np.random.default_rng(seed)
    matrix = np.array(rows, dtype=float)
    matrix[0, :2] = matrix[2, 1] = 1.0
    given_, cost = programme(matrix, (-1.0, 1.0), 10.0), rng.integers(1, 5, 6).astype(float)
    number, entries = 60, ((0, 0), (0, 1), (2, 1))
    lower = rng.uniform(0, 2, (number, 1))
    values = rng.uniform(0.5, 2, (number, 3))
    points = batch.Points(np.array([6]), lower, lower, entries, values)
    found = batch.solve(given_, cost, points, np.eye(6))
    for k in range(number):
        expected = fresh(given_, cost, points, k)
        assert found.optimal[k] == (not np.isnan(expected))
        if found.optimal[k]:
            assert found.objective[k] == pytest.approx(expected, abs=1e-6)


def test_other_coefficients_share_a_basis() -> None:
    """a x0 = b: x0 = b / a, one basis for all."""
    given_ = programme(np.array([[1.0]]), (1.0, 1.0), 100.0)
    factors, right = np.linspace(1, 4, 50)[:, None], np.linspace(2, 3, 50)[:, None]
    points = batch.Points(np.array([1]), right, right, ((0, 0),), factors)
    found = batch.solve(given_, np.ones(1), points, np.eye(1))
    assert found.read[:, 0] == pytest.approx((right / factors)[:, 0]) and found.solves == 1 and found.bases == 1


def test_a_row_more() -> None:
    given_ = programme(np.array([[1.0, 1.0, 0.0], [0.0, 2.0, 3.0]]), (0.0, 4.0), 9.0)
    wide = batch.with_row(given_, np.array([5.0, 0.0, 6.0]))
    x = np.array([1.0, 2.0, 3.0])
    assert wide.times(x).tolist() == [*given_.times(x).tolist(), 23.0]
    assert wide.row_upper.tolist()[:2] == [4.0, 4.0] and np.isinf(wide.row_upper[2])


def test_a_basis_has_as_many_members_as_rows() -> None:
    given_ = programme(np.array([[1.0, 1.0, 0.0], [0.0, 2.0, 3.0]]), (1.0, 1.0), 9.0)
    session = Session(given_)
    with pytest.raises(RuntimeError, match="no basis"):
        session.basis()
    session.minimise(np.ones(3))
    found = session.basis()
    assert (found.columns == BASIC).sum() + (found.rows == BASIC).sum() == 2
