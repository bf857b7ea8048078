"""What all drain plugins share: an outlet's composition, its exact route vector, and the draw made from both.

    draw = sum_c d_c x vector(c)         d_c: mole of compound c per mole of outlet (negative: given back)

A family differs in what one mole of its outlets is made of, so it overrides `_composition` and nothing else.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import Any

import msgspec
from msgspec import Struct

from headrace.api import Case, Demand, Draw, InputError, RouteBook, RouteVector, nearest, options, slugify

Composition = Mapping[tuple[str, str], Fraction]


class Choice(Struct, frozen=True, forbid_unknown_fields=True):
    """Options of every family, for all its outlets under [plugin.NAME] or for one as outlet.options.

    routes: routes that go before others, by slug or label. trace: pools that are followed further back, by the route
    that makes them ("acetyl-CoA" to citrate); left out, those are that the family follows by itself.
    """

    routes: tuple[str, ...] = ()
    trace: tuple[str, ...] | None = None


class RouteDrain:
    """A family of outlets whose draws are route vectors of the compounds that they draw."""

    name: str
    summary: str
    families: tuple[str, ...]
    options: type[Struct] = Choice
    example = ""
    _follows = False

    def drains(self, case: Case, outlet: Demand, routes: RouteBook) -> tuple[Draw, ...]:
        choice = self._choice(case, outlet)
        key = option_key(case, outlet)
        amounts = self._composition(case, outlet, routes, choice)
        chosen = [_route(routes, name, f"{key}.routes") for name in choice.routes]
        vector = routes.sum(amounts, chosen=chosen)
        if traced := self._traced(routes, vector, choice, f"{key}.trace"):
            vector = routes.sum(amounts, chosen=chosen, through=traced)
        return (drawn(self.name, case, outlet, amounts, vector),)

    def _composition(self, case: Case, outlet: Demand, routes: RouteBook, choice: Any) -> Composition:
        """What one mole of the outlet is drawn as; by default what its facts say."""
        return {(compound, outlet.place): count for compound, count in outlet.draws.items()}

    def _choice(self, case: Case, outlet: Demand) -> Any:
        """The options in force: the outlet's own go before the plugin's."""
        stated = options(self, case)
        if not outlet.options:
            return stated
        merged = msgspec.to_builtins(stated) | dict(outlet.options)
        try:
            return msgspec.convert(merged, self.options)
        except msgspec.ValidationError as error:
            known = ", ".join(field.name for field in msgspec.structs.fields(self.options))
            raise InputError(
                f"options of {outlet.label}: {error}", key=option_key(case, outlet), read=outlet.options, accepted=known
            ) from error

    def _traced(self, routes: RouteBook, vector: RouteVector, choice: Any, key: str) -> list[str]:
        """The pools to follow back: those stated, else for families that follow, those with a route that is all on."""
        if choice.trace is not None:
            return [_pool(routes, vector, name, key) for name in choice.trace]
        if not self._follows:
            return []
        return sorted({term.compound for term in vector.pools if routes.follows(term.compound)})


def drawn(plugin: str, case: Case, outlet: Demand, amounts: Composition, vector: RouteVector) -> Draw:
    """The draw of one outlet from its vector; growth is scaled by the growth rate, any other by its own rate."""
    draws: dict[str, Fraction] = {}
    for (compound, _), count in amounts.items():
        draws[compound] = draws.get(compound, Fraction(0)) + count
    return Draw(
        outlet=outlet.outlet,
        label=outlet.label,
        scale=(scalar(case, outlet),),
        pools=vector.pools,
        needs=vector.needs,
        skeletons=vector.skeletons,
        steps=vector.steps,
        routes=vector.routes,
        origin=f"exact route vector (plugin {plugin})",
        recalled=vector.recalled,
        readings=vector.readings,
        draws={compound: count for compound, count in draws.items() if count},
        missing=vector.missing,
    )


def scalar(case: Case, outlet: Demand) -> str:
    """The name of the scenario scalar that multiplies an outlet's draw."""
    numbers = [i for i, demand in enumerate(case.demands) if demand.outlet == outlet.outlet]
    return f"outlet.{numbers[0]}" if numbers else "growth"


def option_key(case: Case, outlet: Demand) -> str:
    """Where an outlet's options stand in the scenario."""
    which = scalar(case, outlet)
    return f"outlet[{which.partition('.')[2]}].options" if which != "growth" else "plugin.biomass"


def _route(routes: RouteBook, name: str, key: str) -> str:
    known = {route.slug: route for route in routes.available()}
    for slug, route in known.items():
        if slugify(name) in (slug, slugify(route.label)):
            return slug
    labels = [route.label for route in known.values()]
    raise InputError(f"no route {name!r} in {routes.host.label}", key=key, read=name, near=nearest(name, [*known, *labels]))


def _pool(routes: RouteBook, vector: RouteVector, name: str, key: str) -> str:
    compounds = routes.facts.compounds
    for slug in {term.compound for term in vector.pools}:
        if slugify(name) in named(routes, slug):
            if not routes.routes(slug):
                raise InputError(f"no route makes {compounds[slug].label} in {routes.host.label}", key=key, read=name)
            return slug
    touched = sorted({compounds[term.compound].label for term in vector.pools})
    raise InputError(f"the outlet takes nothing called {name!r}", key=key, read=name, accepted=", ".join(touched))


def named(routes: RouteBook, compound: str) -> set[str]:
    """All names of a compound, folded for comparison."""
    entity = routes.facts.compounds[compound]
    return {slugify(text) for text in (entity.slug, entity.label, *entity.aliases)}
