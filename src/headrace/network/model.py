"""What a network is made of: pools, columns, bounds and demands, as floats for the solver and as fractions for proofs."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field, replace
from fractions import Fraction

import numpy as np

from headrace.solve.linear import INFINITY, Floats
from headrace.values.case import Case
from headrace.values.facts import Facts, Host

Pool = tuple[str, str]


@dataclass(frozen=True)
class Column:
    """kind: row | enter | leave. name: row slug or compound slug. sign: +1 as written, -1 backward (rows)."""

    kind: str
    name: str
    sign: int = 1


@dataclass(frozen=True)
class Bound:
    """lower <= sum coefficients[column] v + sum scalars[k] r_k <= upper, with a label for messages."""

    label: str
    coefficients: dict[int, float]
    scalars: dict[str, float]
    lower: float
    upper: float


@dataclass(frozen=True)
class ExactBound:
    """A `Bound` in fractions; None = no bound on that side."""

    coefficients: dict[int, Fraction]
    scalars: dict[str, Fraction]
    lower: Fraction | None
    upper: Fraction | None

    def rounded(self, label: str) -> Bound:
        """The same in floats."""
        return Bound(label, {j: float(v) for j, v in self.coefficients.items()}, {k: float(v) for k, v in self.scalars.items()},
                     -INFINITY if self.lower is None else float(self.lower),
                     INFINITY if self.upper is None else float(self.upper))


@dataclass(frozen=True)
class Exact:
    """A network's numbers as fractions: counts and amounts as the facts have them, the case's rates as decimals.

    The floats of `Network` are these, rounded; what is proven about a case is proven on these.
    """

    entries: tuple[dict[int, Fraction], ...]
    lower: tuple[Fraction | None, ...]
    upper: tuple[Fraction | None, ...]
    demands: dict[str, dict[int, Fraction]]
    bounds: tuple[ExactBound, ...]
    rates: dict[str, Fraction]


@dataclass(frozen=True)
class Network:
    """One case's pools, columns and demands. entries: per column {pool number: coefficient}. exact: the same in fractions."""

    facts: Facts
    host: Host
    case: Case
    pools: tuple[Pool, ...]
    columns: tuple[Column, ...]
    entries: tuple[dict[int, float], ...]
    upper: Floats
    lower: Floats
    free: frozenset[int]
    demands: dict[str, dict[int, float]]
    bounds: tuple[Bound, ...]
    rates: dict[str, float]
    coupled: tuple[str, ...]
    exact: Exact
    index: dict[Pool, int] = field(default_factory=dict)

    def columns_of(self, rows: Iterable[str]) -> list[int]:
        """The columns that any of these rows runs in."""
        wanted = set(rows)
        return [j for j, c in enumerate(self.columns) if c.kind == "row" and c.name in wanted]

    def bounded(self, extra: Iterable[tuple[str, ExactBound]]) -> Network:
        """The network with more bounds after its own, each with its label."""
        more = tuple(extra)
        floats = tuple(each.rounded(label) for label, each in more)
        exact = replace(self.exact, bounds=(*self.exact.bounds, *(each for _, each in more)))
        return replace(self, bounds=(*self.bounds, *floats), exact=exact) if more else self

    def vector(self, values: Mapping[int, float]) -> Floats:
        """A dense vector over the columns."""
        dense = np.zeros(len(self.columns))
        for j, value in values.items():
            dense[j] = value
        return dense
