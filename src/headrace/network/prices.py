"""What one more mole of an outlet costs: in feed, in refill, in oxygen, and in the other outlets.

    price of outlet k in feed     = d z / d r_k,       z the least feed carbon, r_k the rate asked for
    price of outlet k in refill   = d v / d r_k,       v the refills at the aim (least of them where the aim leaves a choice)
    price of k in another outlet j = - d m_j / d r_k,  m_j the largest r_j at the feed carbon that the case needs now

Each is the right-hand slope of a parametric programme, exact, so that it is the price of one more also where an optimal
basis changes. In feed the feeds are taken as needed, in the proportions stated; refill and oxygen follow the aim as stated.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

import msgspec

from headrace.network import aim, exactly
from headrace.network.build import Network, build
from headrace.network.refills import open_refills
from headrace.network.requirement import in_force
from headrace.solve.certificate import certify
from headrace.solve.parametric import Piece, after
from headrace.solve.vertex import Rational, Sparse
from headrace.values.case import Case
from headrace.values.facts import Facts

ZERO, ONE = Fraction(0), Fraction(1)


@dataclass(frozen=True)
class Price:
    """One more mole of an outlet (of growth: one more gram of dry cells), per mole.

    carbon: mol C of feed; feed: mole of each feed; refill: mole, all refills together; refills: by refill slug (one that
    the aim picks where it leaves a choice); oxygen, carbon_dioxide: taken up and given off; instead: mole of each other
    scalar that the same feed then no longer gives. None where one more can't be made.
    """

    scalar: str
    carbon: Fraction | None
    feed: dict[str, Fraction]
    refill: Fraction | None
    refills: dict[str, Fraction]
    oxygen: Fraction | None
    carbon_dioxide: Fraction | None
    instead: dict[str, Fraction]


def settled(facts: Facts, case: Case) -> tuple[Case, Network, aim.Aimed]:
    """(the case with every outlet and growth at its solved rate, the network that its answer rests on, its solution).

    Raises ValueError when the case can't be met.
    """
    net, solved = in_force(build(facts, case))
    if isinstance(solved, aim.Aimed) and net.coupled:
        case = _decoupled(case, solved.scalars)
        net, solved = in_force(build(facts, case))
    if not isinstance(solved, aim.Aimed):
        raise ValueError(f"the case can't be met: {solved.status}")
    return case, net, solved


def _decoupled(case: Case, scalars: Mapping[str, float]) -> Case:
    demands = tuple(demand if demand.rate is not None else
                    msgspec.structs.replace(demand, rate=scalars[f"outlet.{i}"], yield_per_feed=None)
                    for i, demand in enumerate(case.demands))
    return msgspec.structs.replace(case, demands=demands, growth=scalars.get("growth", 0.0), growth_yield=None)


def scalars(net: Network) -> tuple[str, ...]:
    """What can be priced: outlets and growth that are asked for."""
    return tuple(k for k in net.exact.rates if k != "maintenance" and (net.exact.rates[k] > 0 or k != "growth"))


def prices(net: Network) -> tuple[Price, ...]:
    """The price of one more of each outlet and of growth. net: from `settled`."""
    programme, carbon = as_needed(net)
    least = certify(programme, [carbon])
    if not least.proven:
        raise ValueError(f"the least feed could not be proven: {least.reason}")
    stated = exactly.rational(net)
    costs = aim_costs(net)
    found = []
    for scalar in scalars(net):
        change = exactly.draws_of(net, scalar)
        needed, held = after(programme, [carbon], change, ZERO), after(stated, costs, change, ZERO)
        instead = _instead(net, programme, carbon, least.objectives[0], scalar, change)
        found.append(_price(net, scalar, carbon, needed, held, instead))
    return tuple(found)


def aim_costs(net: Network) -> list[list[Fraction]]:
    """The costs of the aim, then all refills together, so that their sum is one number."""
    width = len(net.columns) + len(net.coupled)
    refills = [ZERO] * width
    for refill in open_refills(net):
        if refill.column is not None:
            refills[refill.column] = ONE
    return [*exactly.costs(net, width), refills]


def as_needed(net: Network) -> tuple[Rational, list[Fraction]]:
    """(the programme with feeds as needed, feed carbon as cost). Feeds that are all stated come in their proportions."""
    programme = exactly.rational(net)
    width = len(programme.columns)
    carbon = exactly.carbon(net, width)
    if aim.is_free(net):
        return programme, carbon
    uptakes = {j: net.exact.upper[j] or ZERO for j in aim.feed_columns(net)}
    total = sum(uptakes.values(), ZERO)
    if not total:
        return programme, carbon
    mixed: dict[int, Fraction] = {}
    for j, uptake in uptakes.items():
        for row, value in programme.columns[j].items():
            mixed[row] = mixed.get(row, ZERO) + value * uptake / total
    lower, upper = list(programme.col_lower), list(programme.col_upper)
    for j in uptakes:
        lower[j], upper[j] = ZERO, ZERO
    cost = [*carbon, sum((carbon[j] * uptake / total for j, uptake in uptakes.items()), ZERO)]
    columns = (*programme.columns, mixed)
    return dataclasses.replace(programme, columns=columns, col_lower=(*lower, ZERO), col_upper=(*upper, None)), cost


def _instead(net: Network, programme: Rational, carbon: list[Fraction], least: Fraction, scalar: str,
             change: Sparse) -> dict[str, Fraction]:
    """How much of each other scalar is lost at the same feed carbon."""
    row, width = len(programme.row_lower), len(programme.columns)
    capped = tuple({**c, row: w} if w else c for c, w in zip(programme.columns, carbon, strict=True))
    found = {}
    for other in scalars(net):
        rate = net.exact.rates[other]
        if other == scalar or not rate:
            continue
        draw = exactly.draws_of(net, other)
        wide = dataclasses.replace(
            programme.shifted(draw, -rate), columns=(*capped, {i: -v for i, v in draw.items()}),
            col_lower=(*programme.col_lower, ZERO), col_upper=(*programme.col_upper, None))
        wide = dataclasses.replace(wide, row_lower=(*wide.row_lower, None), row_upper=(*wide.row_upper, least))
        piece = after(wide, [[ZERO] * width + [-ONE]], change, ZERO)
        if piece is not None:
            found[other] = -piece.slopes[width]
    return found


def _price(net: Network, scalar: str, carbon: list[Fraction], needed: Piece | None, held: Piece | None,
           instead: dict[str, Fraction]) -> Price:
    role = net.facts.roles
    feeds = {j: net.columns[j].name for j in aim.feed_columns(net)}
    fed: dict[str, Fraction] = {}
    if needed is not None:
        fed = {name: needed.slopes[j] for j, name in feeds.items()} if aim.is_free(net) else _shares(net, needed.slopes[-1])
    refills = {r.slug: held.slopes[r.column] for r in open_refills(net) if r.column is not None} if held else {}
    return Price(
        scalar, None if needed is None else needed.slope(dict(enumerate(carbon))), fed,
        None if held is None else sum(refills.values(), ZERO), {k: v for k, v in refills.items() if v},
        _crossing(net, held, role["oxygen"]), _crossing(net, held, role["carbon-dioxide"], out=True), instead)


def _shares(net: Network, total: Fraction) -> dict[str, Fraction]:
    uptakes = {net.columns[j].name: net.exact.upper[j] or ZERO for j in aim.feed_columns(net)}
    return {name: total * uptake / sum(uptakes.values(), ZERO) for name, uptake in uptakes.items()}


def _crossing(net: Network, piece: Piece | None, names: tuple[str, ...], out: bool = False) -> Fraction | None:
    """Net uptake (or, out, release) per unit of the scalar."""
    if piece is None:
        return None
    inward = sum((piece.slopes[j] if c.kind == "enter" else -piece.slopes[j] for j, c in enumerate(net.columns)
                  if c.kind in ("enter", "leave") and c.name in names), ZERO)
    return -inward if out else inward
