"""Fatty acids and lipids, by chain length and saturation.

One mole of a mixture has as many chains as its example in the facts; each chain is an acyl group on the carrier that
the host makes it on. Shares of chains are the outlet's option, or the host's own profile from its composition.
"""

from __future__ import annotations

import re
from fractions import Fraction
from typing import Any

from headrace.api import Case, Demand, InputError, RouteBook, exact, nearest, slugify
from headrace_plugins.drains.base import Choice, Composition, RouteDrain, named, option_key
from headrace_plugins.drains.blocks import acid_chain, acyl_chain, assemblies, parts

Chain = tuple[int, int]
MIXTURES = "lipid-mixtures"


class ChainChoice(Choice, frozen=True):
    """chains: share of each chain, as carbons:double bonds ("18:1") or by the name of the acid; any common scale."""

    chains: dict[str, float] = {}


class Lipids(RouteDrain):
    """Free acids, ethyl esters, triacylglycerol and phospholipids from acyl groups."""

    name = "lipids"
    summary = "Fatty acids, esters, triacylglycerol and phospholipids, by chain length and saturation."
    families = ("lipids", MIXTURES)
    options = ChainChoice
    _follows = True
    example = """
title = "oil on glucose"
host = "yarrowia-lipolytica"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "triacylglycerol"
rate = "0.05 mmol/gDW/h"
options = { chains = { "16:0" = 0.2, "18:1" = 0.6, "18:2" = 0.2 } }
"""

    def _composition(self, case: Case, outlet: Demand, routes: RouteBook, choice: Any) -> Composition:
        if outlet.family != MIXTURES:
            if choice.chains and outlet.options.get("chains"):
                raise InputError(
                    f"{outlet.label} is one compound, so it has no chains to choose",
                    key=f"{option_key(case, outlet)}.chains",
                    read=outlet.options["chains"],
                )
            return super()._composition(case, outlet, routes, choice)
        (example,) = routes.facts.outlets[outlet.outlet].draws
        chains = _stated(case, outlet, routes, choice.chains) if choice.chains else _profile(case, outlet, routes)
        drawn: dict[str, Fraction] = {}
        whole = sum(chains.values())
        for chain, share in chains.items():
            for compound, count in _with_chain(case, outlet, routes, example, chain).items():
                drawn[compound] = drawn.get(compound, Fraction(0)) + count * share / whole
        return {(compound, outlet.place): count for compound, count in sorted(drawn.items()) if count}


def _stated(case: Case, outlet: Demand, routes: RouteBook, chains: dict[str, float]) -> dict[Chain, Fraction]:
    """The scenario's shares by chain. Raises InputError for a chain that is none, or shares that are no shares."""
    key = f"{option_key(case, outlet)}.chains"
    found: dict[Chain, Fraction] = {}
    for name, share in chains.items():
        chain = _chain(routes, name, key)
        if share < 0:
            raise InputError(f"the share of {name} is negative", key=f"{key}.{name}", read=share, accepted="0 or more")
        found[chain] = found.get(chain, Fraction(0)) + exact(str(share))
    if not any(found.values()):
        raise InputError("all shares of chains are 0", key=key, read=chains, accepted="at least one above 0")
    return found


def _chain(routes: RouteBook, name: str, key: str) -> Chain:
    if match := re.fullmatch(r"C?(\d{1,2}):(\d)", name.strip()):
        return int(match[1]), int(match[2])
    acids = {compound: chain for compound, c in routes.facts.compounds.items() if (chain := acid_chain(c))}
    for compound, chain in acids.items():
        if slugify(name) in named(routes, compound):
            return chain
    labels = [routes.facts.compounds[compound].label for compound in acids]
    raise InputError(
        f"no fatty acid {name!r}", key=key, read=name, accepted='such as "18:1" or "oleate"', near=nearest(name, labels)
    )


def _profile(case: Case, outlet: Demand, routes: RouteBook) -> dict[Chain, Fraction]:
    """The host's own shares: acyl groups and free acids that its composition draws, by chain."""
    found: dict[Chain, Fraction] = {}
    for part in routes.host.composition:
        compound = routes.facts.compounds[part.compound]
        acyl = acyl_chain(routes, compound)
        chain = acyl[0] if acyl else acid_chain(compound)
        if chain and chain[0] >= 8 and part.amount > 0 and part.oxygen != "absent":
            found[chain] = found.get(chain, Fraction(0)) + part.amount
    if not found:
        raise InputError(
            f"the composition of {routes.host.label} states no fatty acids",
            key=f"{option_key(case, outlet)}.chains",
            accepted='shares of chains, such as { "16:0" = 0.4, "18:1" = 0.6 }',
        )
    return found


def _with_chain(case: Case, outlet: Demand, routes: RouteBook, example: str, chain: Chain) -> dict[str, Fraction]:
    """What the example is drawn as when all its chains are this one.

    A free acid that the facts name, and that comes from the host's own activated chain, is drawn as itself, so that its
    thioesterase counts as a step; any other is released from its carrier here.
    """
    compounds = routes.facts.compounds
    acyl, carrier = _acyl(case, outlet, routes, chain)
    if acid_chain(compounds[example]):
        for acid in (slug for slug, c in compounds.items() if acid_chain(c) == chain and routes.routes(slug)):
            if acyl in parts(routes, acid) or not _lacking(routes, acid):
                return {acid: Fraction(1)}
    drawn: dict[str, Fraction] = {}
    for compound, count in parts(routes, example).items():
        found = acyl_chain(routes, compounds[compound])
        if found:
            drawn[acyl] = drawn.get(acyl, Fraction(0)) + count
        elif compound in routes.facts.roles["acyl-carrier"]:
            drawn[carrier] = drawn.get(carrier, Fraction(0)) + count
        elif count > 0 and _has_chains(routes, compound):
            for inner, n in _with_chain(case, outlet, routes, compound, chain).items():
                drawn[inner] = drawn.get(inner, Fraction(0)) + n * count
        else:
            drawn[compound] = drawn.get(compound, Fraction(0)) + count
    return drawn


def _has_chains(routes: RouteBook, compound: str) -> bool:
    taken = (t.compound for reaction in assemblies(routes, compound) for t in reaction.terms if t.count < 0)
    return any(acyl_chain(routes, routes.facts.compounds[name]) for name in taken)


def _acyl(case: Case, outlet: Demand, routes: RouteBook, chain: Chain) -> tuple[str, str]:
    """The activated chain and its carrier: the one for which the host lacks the fewest steps; on a tie, its own carrier."""
    compounds = routes.facts.compounds
    on = {slug: found[1] for slug, c in compounds.items() if (found := acyl_chain(routes, c)) and routes.routes(slug)}
    known = [slug for slug in on if acyl_chain(routes, compounds[slug]) == (chain, on[slug])]
    if not known:
        chains = sorted({found[0] for slug in on if (found := acyl_chain(routes, compounds[slug])) and found[0][0] >= 8})
        raise InputError(
            f"no route makes a chain of {chain[0]}:{chain[1]}",
            key=f"{option_key(case, outlet)}.chains",
            read=f"{chain[0]}:{chain[1]}",
            accepted=", ".join(f"{n}:{d}" for n, d in chains),
        )
    own = {on[slug] for slug in on if not _lacking(routes, slug)}
    best = min(known, key=lambda slug: (_lacking(routes, slug), on[slug] not in own, sorted(compounds[slug].formula.items())))
    return best, on[best]


def _lacking(routes: RouteBook, compound: str) -> int:
    return len(routes.vector(compound).missing)
