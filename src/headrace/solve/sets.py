"""All smallest sets of choices that make a linear programme feasible.

A choice is a group of columns that stand shut at zero until it is taken. A set of choices is wanted if the programme has
a point with just these open and has none with any of them left out. Opening more never hurts, so the wanted sets are found
level by level: every infeasible set gives, by Farkas' lemma, weights y with

    y A x < y s   for all x and s within their bounds while the rest is shut,

and so a group of choices (those with a column j of y A_j > 0) of which every wanted set has one. A set is solved only once
it meets all groups known so far; its children take one choice of the group each. (Reiter R 1987 Artif Intell 32:57-95,
hitting sets by levels; Gleeson J, Ryan J 1990 ORSA J Comput 2:61-63, infeasible subsystems by Farkas; both from memory.)
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from headrace.solve.linear import INFINITY, Floats, Programme, Session

_ZERO = 1e-7
Group = frozenset[int]


@dataclass(frozen=True)
class Found:
    """sets: choices by number, smallest sets first. complete: no other set exists. level: the largest size searched in full.

    solves: how many programmes were solved; groups: how many groups of "one of these is needed" were found.
    """

    sets: tuple[tuple[int, ...], ...]
    complete: bool
    level: int
    solves: int
    groups: int


def smallest(programme: Programme, choices: Sequence[Sequence[int]], *, levels: int | None = None, most: int | None = None,
             first_level: bool = False, solves: int = 20_000, step: Callable[[int], None] = lambda found: None) -> Found:
    """Search level by level, to `levels` choices at most, until `most` sets or `solves` programmes.

    first_level: stop after the first level with a set. Columns outside all choices keep their bounds; an open choice gives
    its columns the bounds of the programme. step is told how many sets are found. Raises ValueError for a column that may
    not be zero.
    """
    search = _Search(programme, choices)
    nodes: list[tuple[Group, Group]] = [(frozenset(), frozenset())]
    level, found, stopped = 0, list[Group](), False
    while nodes and not stopped and (levels is None or level <= levels):
        children: list[tuple[Group, Group]] = []
        for taken, barred in nodes:
            if any(old <= taken for old in found):
                continue
            group = search.needed(taken)
            if group is None:
                found.append(taken)
                step(len(found))
            else:
                children.extend(_children(taken, barred, group))
            stopped = (most is not None and len(found) >= most) or search.solves >= solves
            if stopped:
                break
        if not stopped:
            nodes, level = children, level + 1
            stopped = first_level and bool(found)
    sets = tuple(tuple(sorted(each)) for each in found)
    return Found(sets, not nodes, level - 1, search.solves, len(search.groups))


def _children(taken: Group, barred: Group, group: Group) -> list[tuple[Group, Group]]:
    """One child per choice of the group; a choice is barred from the children after its own, so that no set comes twice."""
    found = []
    for choice in sorted(group - barred):
        found.append((taken | {choice}, barred))
        barred = barred | {choice}
    return found


class _Search:
    """The warm programme, and the groups of which every wanted set has one."""

    def __init__(self, programme: Programme, choices: Sequence[Sequence[int]]) -> None:
        self.choices = [tuple(columns) for columns in choices]
        self.lower, self.upper = programme.col_lower.copy(), programme.col_upper.copy()
        self.governed = sorted({j for columns in self.choices for j in columns})
        if any(self.lower[j] > 0 or self.upper[j] < 0 for j in self.governed):
            raise ValueError("a column of a choice may not be zero, so it can't be shut")
        self.programme = programme
        self.session = Session(programme)
        self.open = set(self.governed)
        self.groups: list[Group] = []
        self.solves = 0
        self._columns = np.repeat(np.arange(len(self.lower)), np.diff(programme.starts))

    def needed(self, taken: Group) -> Group | None:
        """A group of which a feasible set with `taken` must have a member (empty: there is none); None when it is feasible."""
        unmet = [group for group in self.groups if not group & taken]
        if unmet:
            return min(unmet, key=len)
        self._set(taken)
        self.solves += 1
        if self.session.feasible():
            return None
        group = self._group()
        self.groups.append(group)
        return group

    def _set(self, taken: Group) -> None:
        wanted = {j for choice in taken for j in self.choices[choice]}
        for j in wanted - self.open:
            self.session.bound(j, float(self.lower[j]), float(self.upper[j]))
        for j in self.open - wanted:
            self.session.bound(j, 0.0, 0.0)
        self.open = wanted

    def _group(self) -> Group:
        """The choices that could undo the proof that the last programme has no point."""
        ray = self.session.ray()
        pull = None if ray is None else self._pull(ray)
        if pull is None:
            pull = self._pull(_relaxed(self.programme, self._upper(), self._lower()))
        if pull is None:
            raise RuntimeError("no proof was found for an infeasible programme")
        useful = {j for j in self.governed if j not in self.open and
                  (pull[j] > _ZERO and self.upper[j] > 0 or pull[j] < -_ZERO and self.lower[j] < 0)}
        return frozenset(k for k, columns in enumerate(self.choices) if useful.intersection(columns))

    def _upper(self) -> Floats:
        upper = self.upper.copy()
        upper[[j for j in self.governed if j not in self.open]] = 0.0
        return upper

    def _lower(self) -> Floats:
        lower = self.lower.copy()
        lower[[j for j in self.governed if j not in self.open]] = 0.0
        return lower

    def _pull(self, y: Floats) -> Floats | None:
        """y A, if y is a proof: the largest y A x lies below the least y s. None if rounding spoils it."""
        lp = self.programme
        scale = max(1.0, float(np.abs(y).max(initial=0.0)))
        y = y.copy()
        y[np.abs(y) < 1e-11 * scale] = 0.0
        pull: Floats = np.bincount(self._columns, weights=y[lp.rows] * lp.values, minlength=len(self.lower)).astype(np.float64)
        pull[np.abs(pull) < 1e-9 * scale] = 0.0
        most = _reach(pull, self._lower(), self._upper())
        least = -_reach(-y, lp.row_lower, lp.row_upper)
        return pull if least > most + 1e-10 else None


def _reach(weights: Floats, lower: Floats, upper: Floats) -> float:
    """The largest weights @ x with x within its bounds."""
    side = np.where(weights > 0, upper, lower)
    used = weights != 0
    return float(weights[used] @ side[used]) if used.any() else 0.0


def _relaxed(programme: Programme, upper: Floats, lower: Floats) -> Floats:
    """Row weights from the least sum of violations: its duals (where the solver kept no proof of its own)."""
    rows, n = len(programme.row_lower), len(lower)
    more = np.arange(rows, dtype=np.int32)
    session = Session(Programme(
        np.concatenate([programme.starts, programme.starts[-1] + 1 + np.arange(2 * rows, dtype=np.int32)]).astype(np.int32),
        np.concatenate([programme.rows, more, more]).astype(np.int32),
        np.concatenate([programme.values, np.ones(rows), -np.ones(rows)]), programme.row_lower, programme.row_upper,
        np.concatenate([lower, np.zeros(2 * rows)]), np.concatenate([upper, np.full(2 * rows, INFINITY)])))
    found = session.minimise(np.concatenate([np.zeros(n), np.ones(2 * rows)]))
    return found.duals
