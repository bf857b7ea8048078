"""Exact linear algebra: unique, many, none; every claim recomputed from A and b."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace.solve.exact import nullspace, rank, residual, solve

NUMBERS = st.fractions(min_value=-9, max_value=9, max_denominator=6)


def sparse(rows: list[list[Fraction]]) -> list[dict[int, Fraction]]:
    """A dense matrix by rows, as columns of non-zeros."""
    return [{i: row[j] for i, row in enumerate(rows) if row[j]} for j in range(len(rows[0]))]


def times(columns: list[dict[int, Fraction]], x: tuple[Fraction, ...], height: int) -> list[Fraction]:
    found = [Fraction(0)] * height
    for column, value in zip(columns, x, strict=True):
        for row, entry in column.items():
            found[row] += entry * value
    return found


matrices = st.integers(1, 5).flatmap(
    lambda m: st.integers(1, 5).flatmap(lambda n: st.lists(st.lists(NUMBERS, min_size=n, max_size=n), min_size=m, max_size=m))
)


def test_a_third_stays_a_third() -> None:
    answer = solve([{0: Fraction(3)}], [Fraction(1)])
    assert answer.x == (Fraction(1, 3),) and answer.residual == 0 and answer.rank == 1


def test_more_rows_than_columns_may_still_fit() -> None:
    answer = solve([{0: Fraction(1), 1: Fraction(2)}], [Fraction(2), Fraction(4)])
    assert answer.status == "unique" and answer.x == (Fraction(2),)


def test_without_columns_only_zero_is_made() -> None:
    assert solve([], [Fraction(0)]).status == "unique"
    assert solve([], [Fraction(1)]).status == "none"


def test_an_empty_column_is_free() -> None:
    assert solve([{0: Fraction(1)}, {}], [Fraction(1)]).free == (1,)


def test_entries_outside_are_refused() -> None:
    with pytest.raises(ValueError, match="column 0"):
        solve([{1: Fraction(1)}], [Fraction(1)])


@given(matrices, st.data())
def test_a_planted_solution_is_found_or_shown_not_to_be_the_only_one(rows: list[list[Fraction]], data: st.DataObject) -> None:
    columns = sparse(rows)
    planted = tuple(data.draw(st.lists(NUMBERS, min_size=len(columns), max_size=len(columns))))
    right = times(columns, planted, len(rows))
    answer = solve(columns, right)
    assert answer.rank == rank(columns, len(rows))
    if answer.status == "unique":
        assert answer.x == planted and residual(columns, right, answer.x) == 0
    else:
        assert answer.status == "many" and len(nullspace(columns, len(rows))) == len(answer.free) > 0


@given(matrices)
def test_the_nullspace_is_mapped_to_nothing(rows: list[list[Fraction]]) -> None:
    columns = sparse(rows)
    basis = nullspace(columns, len(rows))
    assert len(basis) + rank(columns, len(rows)) == len(columns)
    assert all(value == 0 for vector in basis for value in times(columns, vector, len(rows)))


@given(matrices, st.data())
def test_a_clash_proves_that_nothing_solves_it(rows: list[list[Fraction]], data: st.DataObject) -> None:
    columns = sparse(rows)
    right = data.draw(st.lists(NUMBERS, min_size=len(rows), max_size=len(rows)))
    answer = solve(columns, right)
    if answer.status != "none":
        return
    assert answer.clash is not None
    for column in columns:
        assert sum(answer.clash.get(row, Fraction(0)) * value for row, value in column.items()) == 0
    assert sum(weight * right[row] for row, weight in answer.clash.items()) == 1


@given(matrices, st.data())
def test_order_does_not_matter(rows: list[list[Fraction]], data: st.DataObject) -> None:
    columns = sparse(rows)
    right = data.draw(st.lists(NUMBERS, min_size=len(rows), max_size=len(rows)))
    order = data.draw(st.permutations(range(len(columns))))
    answer, turned = solve(columns, right), solve([columns[j] for j in order], right)
    assert answer.status == turned.status and answer.rank == turned.rank
    if answer.status == "unique":
        assert turned.x == tuple(answer.x[j] for j in order)
