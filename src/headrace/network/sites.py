"""Where a reaction runs: its compartment or, for a carrier, its two sides."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction
from typing import NamedTuple

from headrace.errors import FactsError
from headrace.values.facts import Facts, Host, HostReaction, Reaction, Route


class Site(NamedTuple):
    """place for a conversion; outer and inner for a carrier."""

    place: str
    outer: str = ""
    inner: str = ""

    def words(self) -> str:
        """The site as a reader would say it."""
        return self.place or f"{self.outer} to {self.inner}"


class Step(NamedTuple):
    """A reaction at a site: one column of a route."""

    reaction: str
    site: Site


def site_of(row: HostReaction) -> Site:
    """The site of a host's row."""
    return Site(row.place, row.outer, row.inner)


def role_place(host: Host, role: str) -> str:
    """The host's one compartment of a role: cytosol, membrane or medium."""
    return next(c.slug for c in host.compartments if c.role == role)


def sites_of(host: Host, rows: Sequence[HostReaction], reaction: Reaction, route: Route) -> Iterable[Site]:
    """The sites at which a route uses a reaction.

    Rows that the route names decide; else the only site; else the cytosol's. A reaction that the host lacks runs in
    the cytosol. Raises FactsError when that does not settle it.
    """
    named = {site_of(row) for row in rows if f"{host.slug}/{row.slug}" in route.rows}
    if named:
        return sorted(named)
    cytosol, medium = role_place(host, "cytosol"), role_place(host, "medium")
    if not rows:
        if reaction.transport:
            raise FactsError(f"uses the carrier {reaction.slug}, which {host.slug} lacks", node=f"route/{route.slug}")
        return [Site(cytosol)]
    sites = {site_of(row) for row in rows}
    if len(sites) > 1:
        inside = {site for site in sites if medium not in site}
        sites = {site for site in inside if site.place == cytosol} or inside
    if len(sites) != 1:
        words = ", ".join(site.words() for site in sorted(sites))
        raise FactsError(
            f"{host.slug} has {reaction.slug} in several places ({words})",
            node=f"route/{route.slug}",
            hint="name the row that is meant with hr:usesRow",
        )
    return sites


def terms_of(facts: Facts, host: Host, step: Step) -> list[tuple[tuple[str, str], Fraction]]:
    """((compound, compartment), count) of a step as written; count < 0 is taken. Membrane compounds live in the membrane."""
    membrane = role_place(host, "membrane")
    site = step.site
    found = []
    for term in facts.reactions[step.reaction].terms:
        side = site.outer if term.side == "outer" else site.inner
        place = membrane if facts.compounds[term.compound].membrane else site.place or side
        found.append(((term.compound, place), term.count))
    return found
