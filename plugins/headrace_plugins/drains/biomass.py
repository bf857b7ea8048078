"""Growth: what one gram of dry cells takes, by the composition of the host."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from headrace.api import Case, Demand, RouteBook
from headrace_plugins.drains.base import Composition, RouteDrain


class Biomass(RouteDrain):
    """One vector for the whole composition (mmol per gram), so that what one block gives back serves another."""

    name = "biomass"
    summary = "What growth takes, from the biomass composition of the host."
    families = ("biomass",)
    example = """
title = "growth on glucose"
host = "escherichia-coli"
growth = "0.4 /h"
[[feed]]
substrate = "glucose"
"""

    def _composition(self, case: Case, outlet: Demand, routes: RouteBook, choice: Any) -> Composition:
        state = "absent" if case.oxygen == "anaerobic" else "present"
        drawn: dict[tuple[str, str], Fraction] = {}
        for part in routes.host.composition:
            if part.oxygen in ("", state):
                pool = (part.compound, part.place)
                drawn[pool] = drawn.get(pool, Fraction(0)) + part.amount
        return drawn
