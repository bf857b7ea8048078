"""Linear programmes through HiGHS: validate, solve, translate.

    minimise  c x   subject to   row_lower <= A x <= row_upper,   col_lower <= x <= col_upper

A is held by columns (starts, rows, values). A `Session` keeps one HiGHS model warm while costs, bounds and extra
rows change. Infeasible and unbounded are statuses, never exceptions; residuals are recomputed here from A and x.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import highspy
import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int32]
INFINITY = highspy.kHighsInf

_STATUS = {
    highspy.HighsModelStatus.kOptimal: "optimal",
    highspy.HighsModelStatus.kInfeasible: "infeasible",
    highspy.HighsModelStatus.kUnbounded: "unbounded",
    highspy.HighsModelStatus.kUnboundedOrInfeasible: "unknown",
    highspy.HighsModelStatus.kModelEmpty: "optimal",
}


@dataclass(frozen=True)
class Programme:
    """An LP without its cost. starts (n_cols + 1), rows and values (non-zeros) hold A by columns; bounds may be infinite."""

    starts: Ints
    rows: Ints
    values: Floats
    row_lower: Floats
    row_upper: Floats
    col_lower: Floats
    col_upper: Floats

    def __post_init__(self) -> None:
        n = len(self.col_lower)
        if len(self.starts) != n + 1 or len(self.col_upper) != n or len(self.row_lower) != len(self.row_upper):
            raise ValueError("the parts of a programme do not fit one another")
        if len(self.rows) != len(self.values) or (len(self.rows) and self.rows.max() >= len(self.row_lower)):
            raise ValueError("a row index points outside the programme")
        if np.isnan(self.values).any() or (self.col_lower > self.col_upper).any():
            raise ValueError("a coefficient is not a number or a lower bound lies above its upper bound")

    def times(self, x: Floats) -> Floats:
        """A x, one value per row."""
        columns = np.repeat(np.arange(len(self.col_lower)), np.diff(self.starts))
        return np.bincount(self.rows, weights=self.values * x[columns], minlength=len(self.row_lower)).astype(np.float64)

    def residual(self, x: Floats) -> float:
        """The largest violation of a row or column bound by x (absolute, in the rows' own unit)."""
        ax = self.times(x)
        gaps = (self.row_lower - ax, ax - self.row_upper, self.col_lower - x, x - self.col_upper)
        return float(max(0.0, *(np.max(g, initial=0.0) for g in gaps)))


@dataclass(frozen=True)
class Solution:
    """status: optimal | infeasible | unbounded | unknown. x, duals (per row) and reduced costs exist when optimal."""

    status: str
    objective: float = float("nan")
    x: Floats = field(default_factory=lambda: np.zeros(0))
    duals: Floats = field(default_factory=lambda: np.zeros(0))
    reduced: Floats = field(default_factory=lambda: np.zeros(0))

    @property
    def optimal(self) -> bool:
        return self.status == "optimal"


LOWER, BASIC, UPPER, ZERO = 0, 1, 2, 3
_PLACES = {
    highspy.HighsBasisStatus.kLower: LOWER,
    highspy.HighsBasisStatus.kBasic: BASIC,
    highspy.HighsBasisStatus.kUpper: UPPER,
    highspy.HighsBasisStatus.kZero: ZERO,
}


@dataclass(frozen=True)
class Basis:
    """Where each column and each row stands at a vertex: LOWER or UPPER bound, BASIC, or ZERO (free and out of the basis)."""

    columns: Ints
    rows: Ints


class Session:
    """One programme kept warm in HiGHS. Bound changes last until changed again; `row` adds one row for good."""

    def __init__(self, programme: Programme, tolerance: float = 1e-9) -> None:
        self.programme = programme
        self.columns = len(programme.col_lower)
        self._highs = highspy.Highs()
        for name, value in (("output_flag", False), ("threads", 1), ("presolve", "off"),
                            ("primal_feasibility_tolerance", tolerance), ("dual_feasibility_tolerance", tolerance)):
            self._highs.setOptionValue(name, value)
        lp = highspy.HighsLp()
        lp.num_col_, lp.num_row_ = self.columns, len(programme.row_lower)
        lp.col_cost_ = np.zeros(self.columns)
        lp.col_lower_, lp.col_upper_ = programme.col_lower, programme.col_upper
        lp.row_lower_, lp.row_upper_ = programme.row_lower, programme.row_upper
        lp.a_matrix_.format_ = highspy.MatrixFormat.kColwise
        lp.a_matrix_.start_, lp.a_matrix_.index_, lp.a_matrix_.value_ = programme.starts, programme.rows, programme.values
        self._highs.passModel(lp)
        self._all = np.arange(self.columns, dtype=np.int32)

    def minimise(self, cost: Floats) -> Solution:
        """Solve for the least cost @ x from the last basis on."""
        self._highs.changeColsCost(self.columns, self._all, np.ascontiguousarray(cost, dtype=np.float64))
        self._highs.run()
        status = self._status()
        if status != "optimal":
            return Solution(status)
        found = self._highs.getSolution()
        x = np.array(found.col_value)
        return Solution(status, float(cost @ x), x, np.array(found.row_dual), np.array(found.col_dual))

    def maximise(self, gain: Floats) -> Solution:
        """Solve for the largest gain @ x; duals are those of minimising -gain."""
        found = self.minimise(-np.asarray(gain, dtype=np.float64))
        return Solution(found.status, -found.objective, found.x, found.duals, found.reduced)

    def feasible(self) -> bool:
        """Whether any x satisfies all bounds."""
        return self.minimise(np.zeros(self.columns)).optimal

    def basis(self) -> Basis:
        """The basis that the last solve ended on. Raises RuntimeError when it left none."""
        found = self._highs.getBasis()
        if not found.valid:
            raise RuntimeError("the last solve left no basis")
        places = [np.array([_PLACES[each] for each in part], dtype=np.int32) for part in (found.col_status, found.row_status)]
        return Basis(*places)

    def ray(self) -> Floats | None:
        """After an infeasible solve, row weights y with y A x < y s for all x within their bounds and all s within the rows'.

        So the rows and columns with a weight can't hold together. None when the solver has none to give.
        """
        _, exists, found = self._highs.getDualRay()  # type: ignore[attr-defined]
        return np.array(found) if exists else None

    def entry(self, row: int, column: int, value: float) -> None:
        """Set one coefficient of A (in the solver only: `programme` stays as it was)."""
        self._highs.changeCoeff(row, column, value)

    def bound(self, column: int, lower: float, upper: float) -> None:
        """Set one column's bounds."""
        self._highs.changeColBounds(column, lower, upper)

    def bound_row(self, row: int, lower: float, upper: float) -> None:
        """Set one row's bounds."""
        self._highs.changeRowBounds(row, lower, upper)

    def row(self, coefficients: Floats, lower: float, upper: float) -> int:
        """Append the row lower <= coefficients @ x <= upper and return its number."""
        used = np.flatnonzero(coefficients).astype(np.int32)
        self._highs.addRow(lower, upper, len(used), used, np.ascontiguousarray(coefficients[used]))
        return int(self._highs.getNumRow()) - 1

    def _status(self) -> str:
        status = _STATUS.get(self._highs.getModelStatus(), "unknown")
        if status == "unknown":  # presolve is off: a cold second run settles what a warm basis left open
            self._highs.clearSolver()
            self._highs.run()
            status = _STATUS.get(self._highs.getModelStatus(), "unknown")
        return status
