"""Linear algebra over the rationals: one solution or none, and why.

    A x = b     A (m rows, n columns), b (m) and x (n) hold exact fractions

The only importer of python-flint. Nothing here is rounded: a residual is zero or it is a fault. Method: reduced row
echelon form of (A | b) over the rationals (Gauss and Jordan), as in any textbook of linear algebra.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from flint import fmpq, fmpq_mat

Sparse = Mapping[int, Fraction]
ZERO = Fraction(0)


@dataclass(frozen=True)
class Solution:
    """What A x = b has to say.

    status: unique | many | none. x: the n values when unique, else (). rank: of A. free: columns that are not
    determined by the others (when many). clash: a combination y of rows with y A = 0 and y b = 1 (when none), as
    {row: weight}: the certificate that nothing solves it. residual: the largest |A x - b|, recomputed from x.
    """

    status: str
    x: tuple[Fraction, ...]
    rank: int
    free: tuple[int, ...] = ()
    clash: Mapping[int, Fraction] | None = None
    residual: Fraction = ZERO


def solve(columns: Sequence[Sparse], right: Sequence[Fraction]) -> Solution:
    """Solve A x = b exactly. columns[j] holds {row: value} of column j; right holds b. Raises ValueError on a bad shape.

    >>> two = Fraction(2)
    >>> solve([{0: two}, {0: Fraction(1), 1: Fraction(1)}], [Fraction(5), Fraction(1)]).x
    (Fraction(2, 1), Fraction(1, 1))
    >>> solve([{0: two}, {0: two}], [Fraction(1)]).status
    'many'
    """
    _check(columns, len(right))
    reduced, pivots = _echelon(columns, right)
    n = len(columns)
    if n in pivots:
        return Solution("none", (), len(pivots) - 1, clash=_clash(columns, right))
    free = tuple(j for j in range(n) if j not in pivots)
    if free:
        return Solution("many", (), len(pivots), free=free)
    x = tuple(_fraction(reduced[i, n]) for i in range(n))
    return Solution("unique", x, n, residual=residual(columns, right, x))


def residual(columns: Sequence[Sparse], right: Sequence[Fraction], x: Sequence[Fraction]) -> Fraction:
    """The largest |A x - b| over the rows; 0 for a solution. Recomputed from the entries, not from the elimination."""
    gaps = [-value for value in right]
    for column, value in zip(columns, x, strict=True):
        for row, entry in column.items():
            gaps[row] += entry * value
    return max((abs(gap) for gap in gaps), default=ZERO)


def nullspace(columns: Sequence[Sparse], height: int) -> tuple[tuple[Fraction, ...], ...]:
    """A basis of all x with A x = 0, one tuple of n values each; () when only x = 0 does.

    >>> nullspace([{0: Fraction(1)}, {0: Fraction(2)}], 1)
    ((Fraction(-2, 1), Fraction(1, 1)),)
    """
    _check(columns, height)
    n = len(columns)
    reduced, pivots = _echelon(columns, [ZERO] * height)
    basis = []
    for free in (j for j in range(n) if j not in pivots):
        vector = [ZERO] * n
        vector[free] = Fraction(1)
        for row, pivot in enumerate(pivots):
            vector[pivot] = -_fraction(reduced[row, free])
        basis.append(tuple(vector))
    return tuple(basis)


def rank(columns: Sequence[Sparse], height: int) -> int:
    """The number of independent columns of A."""
    _check(columns, height)
    return len(_echelon(columns, [ZERO] * height)[1]) if columns else 0


def square(columns: Sequence[Sparse], rights: Sequence[Sequence[Fraction]]) -> tuple[tuple[Fraction, ...], ...] | None:
    """Solve A x = b for a square A and each b of rights; None when A is singular.

    >>> square([{0: Fraction(2)}, {0: Fraction(1), 1: Fraction(4)}], [[Fraction(5), Fraction(2)]])
    ((Fraction(9, 4), Fraction(1, 2)),)
    """
    n = len(columns)
    _check(columns, n)
    if n == 0:
        return tuple(() for _ in rights)
    table, wanted = fmpq_mat(n, n), fmpq_mat(n, len(rights))
    for j, column in enumerate(columns):
        for row, value in column.items():
            table[row, j] = fmpq(value.numerator, value.denominator)
    for k, right in enumerate(rights):
        for row, value in enumerate(right):
            if value:
                wanted[row, k] = fmpq(value.numerator, value.denominator)
    try:
        found = table.solve(wanted)
    except ZeroDivisionError:
        return None
    return tuple(tuple(_fraction(found[i, k]) for i in range(n)) for k in range(len(rights)))


def _clash(columns: Sequence[Sparse], right: Sequence[Fraction]) -> Mapping[int, Fraction]:
    """{row: weight} with y A = 0 and y b = 1, from the transposed system."""
    rows: list[dict[int, Fraction]] = [{} for _ in right]
    for j, column in enumerate(columns):
        for row, value in column.items():
            rows[row][j] = value
    for row, value in enumerate(right):
        rows[row][len(columns)] = value
    target = [*[ZERO] * len(columns), Fraction(1)]
    reduced, pivots = _echelon(rows, target)
    found = {pivot: _fraction(reduced[i, len(rows)]) for i, pivot in enumerate(pivots)}
    return {row: weight for row, weight in found.items() if weight}


def _echelon(columns: Sequence[Sparse], right: Sequence[Fraction]) -> tuple[fmpq_mat, list[int]]:
    """The reduced row echelon form of (A | b) and the pivot column of each of its first rows."""
    width = len(columns) + 1
    table = fmpq_mat(max(len(right), 1), width)
    for j, column in enumerate(columns):
        for row, value in column.items():
            table[row, j] = fmpq(value.numerator, value.denominator)
    for row, value in enumerate(right):
        table[row, width - 1] = fmpq(value.numerator, value.denominator)
    reduced, rank_ = table.rref()
    pivots = []
    column_number = 0
    for row in range(rank_):
        while reduced[row, column_number] == 0:
            column_number += 1
        pivots.append(column_number)
    return reduced, pivots


def _fraction(value: fmpq) -> Fraction:
    return Fraction(int(value.p), int(value.q))


def _check(columns: Sequence[Sparse], height: int) -> None:
    for j, column in enumerate(columns):
        if any(not 0 <= row < height for row in column):
            raise ValueError(f"column {j} has an entry outside the {height} rows")
