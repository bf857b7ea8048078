"""How much refill a case needs as one outlet grows, exactly: where the need bends, what changes there, what capacities carry.

The outlet's rate runs from 0 to the largest that the host can make under the case (twice what is asked where there is no
largest); the aim is the case's. Limits on refills are lifted, so that the need can be held against them. The need is that
of all refills together: the least where the aim leaves a choice. Its pieces are exact (`headrace.solve.parametric`).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

import msgspec

from headrace.network import aim, exactly
from headrace.network.build import Network, build
from headrace.network.build import exactly as exactly_
from headrace.network.prices import aim_costs
from headrace.network.refills import open_refills
from headrace.network.requirement import in_force
from headrace.solve.parametric import Piece, joined, reach, walk
from headrace.solve.vertex import Sparse
from headrace.values.case import Case
from headrace.values.facts import Facts

ZERO, ONE = Fraction(0), Fraction(1)


@dataclass(frozen=True)
class Bend:
    """A point of the curve. rate: of the outlet, mmol/gDW/h; feed: total uptake; need: all refills; slope: from here on.

    starts, stops: reactions that begin or cease to run from here on. yields: mol per mol of feed (None without feed).
    """

    rate: Fraction
    feed: Fraction
    need: Fraction
    slope: Fraction
    starts: tuple[str, ...] = ()
    stops: tuple[str, ...] = ()

    @property
    def yields(self) -> Fraction | None:
        """Mole of the outlet per mole of feed."""
        return self.rate / self.feed if self.feed else None


@dataclass(frozen=True)
class Crossing:
    """Where the need reaches a capacity. what: the limit's label; rate and yields as in `Bend`."""

    what: str
    capacity: Fraction
    rate: Fraction | None
    yields: Fraction | None


@dataclass(frozen=True)
class Curve:
    """bends: the first at the lowest rate, the last at the highest. largest: whether the last is the largest rate there is."""

    scalar: str
    asked: Fraction
    bends: tuple[Bend, ...]
    largest: bool
    crossings: tuple[Crossing, ...]

    def at(self, rate: Fraction) -> Bend:
        """The point at a rate, on the line between its neighbours (from the nearest end where it lies outside)."""
        here, there = self.bends[0], self.bends[-1]
        for first, second in zip(self.bends, self.bends[1:], strict=False):
            if first.rate <= rate <= second.rate:
                here, there = first, second
        share = (rate - here.rate) / (there.rate - here.rate) if there.rate > here.rate else ZERO
        feed, need = (a + share * (b - a) for a, b in ((here.feed, there.feed), (here.need, there.need)))
        return Bend(rate, feed, need, here.slope)


def curve(facts: Facts, case: Case, number: int) -> Curve | None:
    """The curve of outlet `number` of a case whose outlets and growth have rates; None if the case can't be met at any."""
    refill_rows = {refill.row for refill in open_refills(build(facts, case))}
    limits = tuple(limit for limit in case.limits if not refill_rows.issuperset(limit.rows))
    net, _ = in_force(build(facts, msgspec.structs.replace(case, limits=limits)))
    scalar = f"outlet.{number}"
    asked, change, programme = net.exact.rates[scalar], exactly.draws_of(net, scalar), exactly.rational(net)
    span = reach(programme, change)
    if span.empty or (span.high is not None and span.high <= -asked):
        return None
    low = -asked if span.low is None else max(-asked, span.low)
    high = asked if span.high is None else span.high
    pieces = walk(programme, aim_costs(net), change, low, high)
    need = {refill.column: ONE for refill in open_refills(net) if refill.column is not None}
    fed = dict.fromkeys(aim.feed_columns(net), ONE)
    bends = _bends(net, joined(pieces, [need, fed]), asked, need, fed)
    lifted = [(limit.label, exactly_(limit.rate)) for limit in case.limits if limit not in limits]
    return Curve(scalar, asked, bends, span.high is not None, tuple(_crossing(bends, *each) for each in _together(lifted)))


def _together(limits: Sequence[tuple[str, Fraction]]) -> list[tuple[str, Fraction]]:
    """Each limit on refills, and all of them together where there are several."""
    total = [("all together", sum((rate for _, rate in limits), ZERO))] if len(limits) > 1 else []
    return [*limits, *total]


def _bends(net: Network, pieces: Sequence[Piece], asked: Fraction, need: Sparse, fed: Sparse) -> tuple[Bend, ...]:
    found: list[Bend] = []
    running: set[str] | None = None
    for piece in pieces:
        now = _running(net, piece, (piece.low + piece.high) / 2)
        starts, stops = (tuple(sorted(now - running)), tuple(sorted(running - now))) if running is not None else ((), ())
        at = piece.low
        found.append(Bend(asked + at, piece.at(at, fed), piece.at(at, need), piece.slope(need), starts, stops))
        running = now
    last = pieces[-1]
    found.append(Bend(asked + last.high, last.at(last.high, fed), last.at(last.high, need), ZERO))
    return tuple(found)


def _running(net: Network, piece: Piece, t: Fraction) -> set[str]:
    """The reactions that run at t, whichever of their rows do."""
    return {net.case.rows[c.name].reaction for j, c in enumerate(net.columns)
            if c.kind == "row" and piece.x[j] + t * piece.slopes[j] > 0}


def _crossing(bends: Sequence[Bend], what: str, capacity: Fraction) -> Crossing:
    """The first rate at which the need exceeds a capacity, between two bends by the line that joins them."""
    for here, there in zip(bends, bends[1:], strict=False):
        if here.need <= capacity < there.need:
            share = (capacity - here.need) / (there.need - here.need)
            rate, feed = (a + share * (b - a) for a, b in ((here.rate, there.rate), (here.feed, there.feed)))
            return Crossing(what, capacity, rate, rate / feed if feed else None)
    return Crossing(what, capacity, None, None)

