"""Proofs about the facts that need the network: nothing from nothing, for each host with every row open; and routes.

The open state holds every row in every direction that it is listed with, so what holds there holds in each expression
state; each is tried with and without oxygen.
"""

from __future__ import annotations

from collections.abc import Iterable

from headrace.graph import Fault
from headrace.network.nothing import prove
from headrace.network.proven import prove_routes
from headrace.values.case import Case, Level
from headrace.values.facts import Facts, Host

_OPEN = Level("on", "open", "every row of the host is tried")


def nothing_from_nothing(facts: Facts) -> Iterable[Fault]:
    """A fault for whatever arises without a feed, with the rows that make it."""
    for leak in prove(facts, ((f"{host.label}, open", _open(host)) for host in facts.hosts.values())):
        rows = ", ".join(leak.rows)
        message = f"{leak.probe} arise without a feed ({leak.state}), {leak.rate:.3g} mmol/gDW/h, by {rows}"
        yield Fault("nothing-from-nothing", f"host/{leak.host}", message)


def one_solution_each(facts: Facts) -> Iterable[Fault]:
    """A fault for each route that has no unique exact solution in a host that may use it."""
    for open_route in prove_routes(facts):
        yield Fault("route-not-solved", f"route/{open_route.route}", open_route.message)


def _open(host: Host) -> Case:
    """A case of the host with all its rows and nothing else."""
    rows = {row.slug: row for row in host.reactions}
    levels = dict.fromkeys(rows, _OPEN)
    return Case("", host.slug, (), (), 0.0, "aerobic", rows, levels, opened=True)
