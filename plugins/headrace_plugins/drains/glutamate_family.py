"""Products whose carbon leaves the cycle as 2-oxoglutarate."""

from __future__ import annotations

from headrace_plugins.drains.base import RouteDrain


class GlutamateFamily(RouteDrain):
    """2-Oxoglutarate that only carries nitrogen back and forth is shuttled, not drained."""

    name = "glutamate-family"
    summary = "Glutamate, glutamine, proline, arginine, ornithine, putrescine and 4-aminobutanoate."
    families = ("glutamate-family",)
    example = """
title = "arginine on glucose"
host = "corynebacterium-glutamicum"
growth = "0.1 /h"
[conditions]
supplements = ["biotin"]
[[feed]]
substrate = "glucose"
[[outlet]]
product = "L-arginine"
rate = "0.5 mmol/gDW/h"
"""
