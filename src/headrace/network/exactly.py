"""A network's programme in exact fractions, and the aim proven on it.

What is proven: stage 1 (only where an uptake is left out) least feed carbon; stage 2 least total rate among the rates that
reach it, without the tolerance that the solver needs, or within the case's own slack where it states one. With stated
uptakes stage 2 alone. An infeasible case: the least sum of all imbalances (mmol/gDW/h) is above zero.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from fractions import Fraction

from headrace.network import aim
from headrace.network.build import exactly
from headrace.network.model import Network
from headrace.solve.certificate import Proof, certify, refute
from headrace.solve.vertex import Rational

ZERO = Fraction(0)


def rational(net: Network, free: Mapping[str, Mapping[str, Fraction]] | None = None,
             rates: Mapping[str, Fraction] | None = None,
             extra: Iterable[tuple[Mapping[int, Fraction], Fraction | None, Fraction | None]] = ()) -> Rational:
    """The LP of a network in fractions: `build.programme` with the same arguments, rows and columns."""
    exact = net.exact
    free = {k: {k: Fraction(1)} for k in net.coupled} if free is None else free
    fixed = dict(exact.rates if rates is None else rates)
    n_pools = len(net.pools)
    right = [ZERO] * n_pools
    for scalar, rate in fixed.items():
        for pool, amount in exact.demands.get(scalar, {}).items():
            right[pool] += amount * rate
    row_lower: list[Fraction | None] = [None if p in net.free else value for p, value in enumerate(right)]
    row_upper = list(row_lower)
    for bound in exact.bounds:
        shift = sum((bound.scalars.get(k, ZERO) * rate for k, rate in fixed.items()), ZERO)
        row_lower.append(None if bound.lower is None else bound.lower - shift)
        row_upper.append(None if bound.upper is None else bound.upper - shift)
    columns = [dict(entry) for entry in exact.entries]
    for number, bound in enumerate(exact.bounds):
        for j, coefficient in bound.coefficients.items():
            columns[j][n_pools + number] = columns[j].get(n_pools + number, ZERO) + coefficient
    lower, upper = list(exact.lower), list(exact.upper)
    for mix in free.values():
        columns.append(_drawing(net, mix))
        lower.append(ZERO)
        upper.append(None)
    for entry, low, high in extra:
        columns.append(dict(entry))
        lower.append(low)
        upper.append(high)
    return Rational(tuple(columns), tuple(row_lower), tuple(row_upper), tuple(lower), tuple(upper))


def _drawing(net: Network, mix: Mapping[str, Fraction]) -> dict[int, Fraction]:
    """The column of a free scalar (or a mix of them): what it draws from pools and adds to bounds."""
    entry: dict[int, Fraction] = {}
    for scalar, coefficient in mix.items():
        for pool, amount in net.exact.demands.get(scalar, {}).items():
            entry[pool] = entry.get(pool, ZERO) - amount * coefficient
        for number, bound in enumerate(net.exact.bounds):
            if scalar in bound.scalars:
                row = len(net.pools) + number
                entry[row] = entry.get(row, ZERO) + bound.scalars[scalar] * coefficient
    return entry


def draws_of(net: Network, scalar: str) -> dict[int, Fraction]:
    """What one more unit of a scalar adds to the bounds of the programme's rows (pools, then the network's bounds)."""
    return {row: -value for row, value in _drawing(net, {scalar: Fraction(1)}).items()}


def carbon(net: Network, width: int) -> list[Fraction]:
    """The cost of stage 1, exactly: carbon atoms of what enters."""
    return [Fraction(int(value)) for value in aim.carbon_cost(net, width)]


def total(net: Network, width: int) -> list[Fraction]:
    """The cost of stage 2, exactly: one per column that runs a row."""
    return [Fraction(int(value)) for value in aim.total_cost(net, width)]


def costs(net: Network, width: int) -> list[list[Fraction]]:
    """The costs of the case's aim in order."""
    staged = aim.is_free(net) or any(s.rate is None for s in net.case.supplements)
    return [carbon(net, width), total(net, width)] if staged else [total(net, width)]


def prove(net: Network) -> tuple[tuple[str, ...], Proof]:
    """(what each objective is, the proof) for a case's aim; for an infeasible case ("infeasible",) with its proof."""
    programme = rational(net)
    width = len(programme.columns)
    wanted = costs(net, width)
    names = ("feed carbon", "total rate") if len(wanted) > 1 else ("total rate",)
    if len(wanted) > 1 and net.case.slack > 0:
        return names, _within(net, programme, wanted)
    found = certify(programme, wanted)
    if not found.proven and "no optimum" in found.reason:
        return ("infeasible",), refute(programme)
    return names, found


def _within(net: Network, programme: Rational, wanted: list[list[Fraction]]) -> Proof:
    """Least total rate with feed carbon within the case's slack of its proven least."""
    first = certify(programme, wanted[:1])
    if not first.proven:
        return refute(programme) if "no optimum" in first.reason else first
    row = len(programme.row_lower)
    columns = tuple({**c, row: w} if w else c for c, w in zip(programme.columns, wanted[0], strict=True))
    most = first.objectives[0] * (1 + exactly(net.case.slack))
    second = certify(replace(programme, columns=columns, row_lower=(*programme.row_lower, None),
                             row_upper=(*programme.row_upper, most)), wanted[1:])
    return replace(second, objectives=first.objectives + second.objectives, duals=first.duals + second.duals,
                   pivots=first.pivots + second.pivots, digits=max(first.digits, second.digits))
