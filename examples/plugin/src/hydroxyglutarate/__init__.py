"""The outlet (R)-2-hydroxyglutarate: one step from 2-oxoglutarate. The facts stand beside this file, as Turtle."""

from __future__ import annotations

from pathlib import Path

from headrace.api import Case, Demand, Draw, RouteBook

HERE = Path(__file__).parent


class Hydroxyglutarate:
    """Draws what the route in the facts takes: nothing is typed in as a result."""

    name = "hydroxyglutarate"
    summary = "Drains of (R)-2-hydroxyglutarate, made from 2-oxoglutarate in one step."
    families = ("hydroxy-acids",)
    facts_needed = ("compounds/oxoglutarate",)
    example = HERE / "example.toml"

    def facts(self) -> Path:
        """The compound, the reaction, the route and the outlet."""
        return HERE / "facts"

    def drains(self, case: Case, outlet: Demand, routes: RouteBook) -> tuple[Draw, ...]:
        """One mole of the outlet, by the exact solution of its route in the case's host."""
        place = {(compound, outlet.place): count for compound, count in outlet.draws.items()}
        vector = routes.sum(place)
        number = [demand.outlet for demand in case.demands].index(outlet.outlet)
        return (
            Draw(
                outlet=outlet.outlet,
                label=outlet.label,
                scale=(f"outlet.{number}",),
                pools=vector.pools,
                needs=vector.needs,
                skeletons=vector.skeletons,
                steps=vector.steps,
                routes=vector.routes,
                origin="calculated from the route in the facts",
                recalled=vector.recalled,
                readings=vector.readings,
                draws=dict(outlet.draws),
                missing=vector.missing,
            ),
        )
