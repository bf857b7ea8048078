"""Weighted least squares under linear balances: reconciled values, the test for gross errors, and who is to blame.

    minimise  sum_i ((x_i - y_i) / s_i)^2   subject to   E x = 0

y are readings with standard errors s (0 = exact), some x are not read at all (free). The sum at the minimum, h, follows
a chi-square distribution with as many degrees of freedom as balances are left once the free values are eliminated.

Method: Wang NS, Stephanopoulos G (1983) Biotechnol Bioeng 25:2177-2208 (the test, and leaving out one reading after the
other); van der Heijden RTJM et al. (1994) Biotechnol Bioeng 43:3-10 and 11-20 (which values can be calculated or
checked; values that were forgotten). Both from memory, but for the abstracts.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from headrace.solve.linear import Floats

_RANK = 1e-9


@dataclass(frozen=True)
class Fit:
    """x: all values, NaN where nothing determines one. errors: their standard errors (NaN likewise).

    h: weighted sum of squares; freedom: degrees of freedom; p: chance of an h at least as large if all errors are as stated
    (1 when freedom is 0: nothing is checked). checked: per value, whether a balance checks its reading. gap: the largest
    balance among exact values alone that nothing can mend, in the balances' own unit.
    """

    x: Floats
    errors: Floats
    h: float
    freedom: int
    p: float
    checked: tuple[bool, ...]
    gap: float


@dataclass(frozen=True)
class Suspect:
    """The fit without one reading, or with one more free value. index: the value's; fit: what is left."""

    index: int
    fit: Fit


def fit(balances: Floats, readings: Floats, errors: Floats) -> Fit:
    """Reconcile. balances: (rows, n) coefficients; readings: (n) with NaN = free; errors: (n), 0 = exact.

    Raises ValueError for a negative error, or one that is not a number where there is a reading.

    >>> two = fit(np.array([[1.0, -1.0]]), np.array([10.0, 12.0]), np.array([1.0, 1.0]))
    >>> [float(v) for v in two.x], round(two.h, 6), two.freedom
    ([11.0, 11.0], 2.0, 1)
    """
    matrix, y, s = np.atleast_2d(balances), np.asarray(readings, float), np.asarray(errors, float)
    free = np.isnan(y)
    if not (s[~free] >= 0).all():
        raise ValueError("a standard error is negative or not a number")
    scaled = _scaled(matrix)
    left = _left_null(scaled[:, free])
    read = np.flatnonzero(~free)
    weighted = left @ scaled[:, read] * s[read]
    right = -(left @ scaled[:, read] @ y[read])
    u, size, vt = np.linalg.svd(weighted, full_matrices=False)
    rank = int((size > _RANK * max(1.0, size.max(initial=0.0))).sum())
    z = vt[:rank].T @ ((u[:, :rank].T @ right) / size[:rank])
    gap = float(np.abs(right - weighted @ z).max(initial=0.0))
    x, deviation = y.copy(), s.copy()
    x[read] = y[read] + s[read] * z
    spread = np.eye(len(read)) - vt[:rank].T @ vt[:rank]
    deviation[read] = s[read] * np.sqrt(np.clip(np.diag(spread), 0.0, None))
    covariance = s[read][:, None] * spread * s[read]
    x[free], deviation[free] = _calculated(scaled, free, read, x, covariance)
    moved = np.zeros(len(y), dtype=bool)
    moved[read] = (np.abs(vt[:rank]) > 1e-7).any(axis=0)
    h = float(z @ z)
    return Fit(x, deviation, h, rank, chance(h, rank), tuple(bool(m) for m in moved), gap)


def suspects(balances: Floats, readings: Floats, errors: Floats, added: Sequence[int] = ()) -> tuple[Suspect, ...]:
    """Fits without each inexact reading in turn, and with each of the `added` values free in turn; best p first.

    added: values whose reading is exact (an unread by-product taken as 0). Those that leave h unchanged are left out.
    """
    y, s = np.asarray(readings, float), np.asarray(errors, float)
    base = fit(balances, y, s)
    found = []
    for index in (*np.flatnonzero(~np.isnan(y) & (s > 0)), *added):
        without = y.copy()
        without[index] = np.nan
        tried = fit(balances, without, s)
        if tried.freedom < base.freedom and tried.h < base.h - 1e-12:
            found.append(Suspect(int(index), tried))
    return tuple(sorted(found, key=lambda each: (-each.fit.freedom, each.fit.h, each.index)))


def chance(h: float, freedom: int) -> float:
    """P(chi-square with `freedom` degrees of freedom >= h), in closed form.

    Even: exp(-h/2) sum_{k<f/2} (h/2)^k / k!.  Odd: erfc(sqrt(h/2)) + exp(-h/2) sum_{k<(f-1)/2} (h/2)^(k+1/2) / Gamma(k+3/2)
    (Abramowitz and Stegun 26.4.4 and 26.4.5).

    >>> [round(chance(h, f), 3) for h, f in ((3.84, 1), (5.99, 2), (7.81, 3), (9.49, 4))]
    [0.05, 0.05, 0.05, 0.05]
    """
    if freedom <= 0:
        return 1.0
    half = h / 2
    if freedom % 2 == 0:
        return math.exp(-half) * math.fsum(half**k / math.factorial(k) for k in range(freedom // 2))
    tail = math.fsum(half ** (k + 0.5) / math.gamma(k + 1.5) for k in range((freedom - 1) // 2))
    return math.erfc(math.sqrt(half)) + math.exp(-half) * tail


def _scaled(matrix: Floats) -> Floats:
    """Rows divided by their largest coefficient, so that one threshold suits all; zero rows stay."""
    size = np.abs(matrix).max(axis=1, initial=0.0)
    return matrix / np.where(size > 0, size, 1.0)[:, None]


def _left_null(columns: Floats) -> Floats:
    """Rows n with n @ columns = 0: combinations of balances that hold no free value."""
    if columns.shape[1] == 0:
        return np.eye(columns.shape[0])
    u, size, _ = np.linalg.svd(columns)
    rank = int((size > _RANK * max(1.0, size.max(initial=0.0))).sum())
    return u[:, rank:].T


def _calculated(
    matrix: Floats, free: NDArray[np.bool_], read: NDArray[np.intp], x: Floats, covariance: Floats
) -> tuple[Floats, Floats]:
    """The free values that the balances determine, with their standard errors; NaN for the others."""
    columns = matrix[:, free]
    if columns.shape[1] == 0:
        return np.zeros(0), np.zeros(0)
    inverse = np.linalg.pinv(columns, rcond=_RANK)
    map_ = -inverse @ matrix[:, read]
    values = map_ @ x[read]
    errors = np.sqrt(np.clip(np.diag(map_ @ covariance @ map_.T), 0.0, None))
    open_ = np.abs(np.eye(columns.shape[1]) - inverse @ columns).max(axis=1) > 1e-7
    values[open_] = errors[open_] = np.nan
    return values, errors
