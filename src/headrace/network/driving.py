"""The max-min driving force of a set of reactions: how far from equilibrium the worst of them can be kept.

    maximise F   subject to   dG0'(j) + RT sum_i counts(i, j) ln c(i) <= -F   for every reaction j,
                              ln low(i) <= ln c(i) <= ln high(i),  and for coupled pairs  ln lo <= ln c(a) - ln c(b) <= ln hi

F in kJ/mol; c in mol/L; water has activity 1. F > 0: all can run forward at once. At the optimum each reaction has a
weight w(j) >= 0 (the dual, sum 1): the worst ones carry it. Moving a concentration that stands at its bound changes F
by s(i) = -RT sum_j w(j) counts(i, j) per unit of ln c(i).
Method: Noor E et al. (2014) PLoS Comput Biol 10:e1003483.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import log

import numpy as np

from headrace.network.energetics import RT
from headrace.solve.linear import INFINITY, Programme, Session

Key = tuple[str, str]
TIGHT = 1e-7


@dataclass(frozen=True)
class Pair:
    """Two concentrations whose ratio first/second stays between low and high."""

    first: Key
    second: Key
    low: float
    high: float


@dataclass(frozen=True)
class Driving:
    """force: F. forces: -dG' of each reaction at the optimum found. weights: w(j). logs: ln c of each compound.

    slopes: s(i), kJ/mol per unit of ln c(i), of compounds that stand at a bound.
    """

    force: float
    forces: tuple[float, ...]
    weights: tuple[float, ...]
    logs: dict[Key, float]
    slopes: dict[Key, float]


def max_min(
    energies: Sequence[float],
    counts: Sequence[Mapping[Key, float]],
    bounds: Mapping[Key, tuple[float, float]],
    pairs: Sequence[Pair] = (),
) -> Driving:
    """Solve for F. energies: dG0' in kJ/mol; counts: compounds per reaction (< 0 taken, without water); bounds: mol/L.

    Raises ValueError without reactions, and for a compound without bounds or with bounds that are none.
    """
    if not energies:
        raise ValueError("no reaction has a known energy")
    keys = sorted({key for each in counts for key in each} | {key for pair in pairs for key in (pair.first, pair.second)})
    for key in keys:
        low, high = bounds.get(key, (0.0, 0.0))
        if not 0 < low <= high:
            raise ValueError(f"no usable range of concentration for {key[0]}")
    place = {key: number for number, key in enumerate(keys)}
    session = Session(_programme(energies, counts, [bounds[key] for key in keys], pairs, place))
    gain = np.zeros(len(keys) + 1)
    gain[-1] = 1.0
    found = session.maximise(gain)
    if not found.optimal:
        raise RuntimeError(f"a driving force came back {found.status}")
    logs = {key: float(found.x[place[key]]) for key in keys}
    weights = tuple(max(0.0, -float(dual)) for dual in found.duals[: len(energies)])
    forces = tuple(-(e + RT * sum(n * logs[k] for k, n in c.items())) for e, c in zip(energies, counts, strict=True))
    slopes: dict[Key, float] = {}
    for key in keys:
        slope = -RT * sum(w * c.get(key, 0.0) for w, c in zip(weights, counts, strict=True))
        if abs(slope) > TIGHT and _at_bound(logs[key], bounds[key]):
            slopes[key] = slope
    return Driving(found.objective, forces, weights, logs, slopes)


def _at_bound(value: float, bound: tuple[float, float]) -> bool:
    return min(abs(value - log(bound[0])), abs(value - log(bound[1]))) < 1e-6


def _programme(
    energies: Sequence[float],
    counts: Sequence[Mapping[Key, float]],
    bounds: Sequence[tuple[float, float]],
    pairs: Sequence[Pair],
    place: Mapping[Key, int],
) -> Programme:
    """Columns: ln c of each compound, then F. Rows: one per reaction, then one per pair."""
    columns: list[dict[int, float]] = [{} for _ in range(len(place) + 1)]
    for row, each in enumerate(counts):
        for key, count in each.items():
            columns[place[key]][row] = columns[place[key]].get(row, 0.0) + RT * count
        columns[-1][row] = 1.0
    for row, pair in enumerate(pairs, start=len(energies)):
        columns[place[pair.first]][row] = 1.0
        columns[place[pair.second]][row] = -1.0
    starts, rows, values = [0], [], []
    for column in columns:
        for row in sorted(column):
            rows.append(row)
            values.append(column[row])
        starts.append(len(rows))
    return Programme(
        starts=np.array(starts, dtype=np.int32),
        rows=np.array(rows, dtype=np.int32),
        values=np.array(values, dtype=float),
        row_lower=np.array([-INFINITY] * len(energies) + [log(pair.low) for pair in pairs]),
        row_upper=np.array([-energy for energy in energies] + [log(pair.high) for pair in pairs]),
        col_lower=np.array([log(low) for low, _ in bounds] + [-INFINITY]),
        col_upper=np.array([log(high) for _, high in bounds] + [INFINITY]),
    )
