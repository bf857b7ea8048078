"""All smallest sets that make a programme feasible, against brute force over all subsets."""

from __future__ import annotations

import random
from itertools import combinations

import numpy as np
import pytest

from headrace.solve.linear import INFINITY, Programme, Session
from headrace.solve.sets import smallest


def programme(columns: list[dict[int, float]], lower: list[float], upper: list[float], most: list[float] | None = None) -> Programme:
    """A x between lower and upper, 0 <= x <= most."""
    starts, rows, values = [0], [], []
    for column in columns:
        rows += list(column)
        values += list(column.values())
        starts.append(len(rows))
    return Programme(np.array(starts, dtype=np.int32), np.array(rows, dtype=np.int32), np.array(values, dtype=float), np.array(lower, dtype=float),
                     np.array(upper, dtype=float), np.zeros(len(columns)), np.array(most or [INFINITY] * len(columns), dtype=float))


def brute(lp: Programme, choices: list[list[int]]) -> set[tuple[int, ...]]:
    """Every subset by itself, smallest first."""
    found: list[set[int]] = []
    session, governed = Session(lp), {j for columns in choices for j in columns}
    for size in range(len(choices) + 1):
        for taken in combinations(range(len(choices)), size):
            if any(old <= set(taken) for old in found):
                continue
            is_open = {j for k in taken for j in choices[k]}
            for j in governed:
                session.bound(j, 0.0, lp.col_upper[j] if j in is_open else 0.0)
            if session.feasible():
                found.append(set(taken))
    return {tuple(sorted(each)) for each in found}


def test_on_paper() -> None:
    """Row 0 needs 3; choices make at most 1, 2 and 3 of it: {2}, {0, 1}. Row 1 needs choice 3 or 4."""
    lp = programme([{0: 1}, {0: 1}, {0: 1}, {1: 1}, {1: 2}], [3, 1], [3, 5], [1, 2, 3, 9, 9])
    found = smallest(lp, [[0], [1], [2], [3], [4]])
    assert set(found.sets) == {(2, 3), (2, 4), (0, 1, 3), (0, 1, 4)} and found.complete
    assert [len(each) for each in found.sets] == [2, 2, 3, 3]


def test_nothing_needed_and_nothing_possible() -> None:
    free = programme([{0: 1}, {0: 1}], [1], [1])
    assert smallest(free, [[0]]).sets == ((),) and smallest(free, [[0]]).complete
    stuck = programme([{0: -1}, {0: -1}], [1], [1])
    assert smallest(stuck, [[0], [1]]).sets == () and smallest(stuck, [[0], [1]]).complete


def test_choices_may_share_columns_and_stop_early() -> None:
    lp = programme([{0: 1}, {1: 1}, {0: 1, 1: 1}], [1, 1], [1, 1])
    found = smallest(lp, [[0, 1], [1], [2], [0]])
    assert set(found.sets) == {(0,), (2,), (1, 3)}
    first = smallest(lp, [[0, 1], [1], [2], [0]], first_level=True)
    assert set(first.sets) == {(0,), (2,)} and not first.complete and first.level == 1
    assert len(smallest(lp, [[0, 1], [1], [2], [0]], most=1).sets) == 1
    assert not smallest(lp, [[0], [1], [2]], levels=0).complete


def test_a_column_that_must_run_can_not_be_shut() -> None:
    lp = programme([{0: 1}], [1], [1])
    lp.col_lower[0] = 1.0
    with pytest.raises(ValueError, match="may not be zero"):
        smallest(lp, [[0]])


def random_case(rng: random.Random) -> tuple[Programme, list[list[int]]]:
    rows, n = 6, 18
    columns = [{i: float(rng.randint(-2, 3)) for i in rng.sample(range(rows), 3)} for _ in range(n)]
    columns = [{i: v for i, v in c.items() if v} for c in columns]
    low = [float(rng.randint(0, 4)) for _ in range(rows)]
    high = [value + rng.choice([0, 0, 2, INFINITY]) for value in low]
    lp = programme(columns, low, high, [rng.choice([1.0, 2.0, INFINITY]) for _ in range(n)])
    numbers = rng.sample(range(n), 14)
    choices = [[j] for j in numbers[:8]] + [numbers[8:10], numbers[10:12], [numbers[12], numbers[0]]]
    return lp, choices


def test_equal_to_brute_force_on_random_programmes(capsys: pytest.CaptureFixture[str]) -> None:
    counts, solves = [], 0
    for seed in range(30):
        lp, choices = random_case(random.Random(seed))
        found = smallest(lp, choices)
        assert found.complete and set(found.sets) == brute(lp, choices)
        assert len(set(found.sets)) == len(found.sets)
        counts.append(len(found.sets))
        solves += found.solves
    with capsys.disabled():
        print(f"\nsets per programme: {counts}; {solves} programmes solved instead of {30 * 2**11}")
    assert sum(c > 1 for c in counts) > 15
