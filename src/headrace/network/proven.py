"""Proof that every route of every host has one solution, wherever its steps make its compound."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from headrace.errors import FactsError
from headrace.network.routes import RouteBook
from headrace.network.sites import terms_of
from headrace.values.facts import Facts, Route


@dataclass(frozen=True)
class Open:
    """A route that is open or contradictory in a host, and why."""

    route: str
    host: str
    message: str


def prove_routes(facts: Facts) -> Iterator[Open]:
    """Each route of each host that has no unique solution. Routes that only recycle a coenzyme make none and are left out."""
    for host in sorted(facts.hosts):
        book = RouteBook.of_host(facts, host)
        for route in book.available():
            if facts.compounds[route.makes].carrier or route.makes in book.boundary.free:
                continue
            if reason := _fault(facts, book, route):
                yield Open(route.slug, host, reason)


def _fault(facts: Facts, book: RouteBook, route: Route) -> str:
    try:
        steps = book.steps(route)
        pools = {pool for step in steps for pool, _ in terms_of(facts, book.host, step) if pool[0] == route.makes}
    except FactsError as error:
        return error.message
    reasons = []
    for compound, place in sorted(pools):
        try:
            book.vector(compound, place, chosen=[route.slug])
            return ""
        except FactsError as error:
            reasons.append(error.message)
    return reasons[0] if reasons else f"none of its steps makes {route.makes}"
