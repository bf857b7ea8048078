"""5-Aminolevulinate, hemes and chlorophyll, by the route to 5-aminolevulinate that the host has."""

from __future__ import annotations

from headrace_plugins.drains.base import RouteDrain


class Porphyrins(RouteDrain):
    """Eight succinyl-CoA and eight glycine by one route, eight glutamate by the other; the option routes chooses."""

    name = "porphyrins"
    summary = "5-Aminolevulinate, heme b, siroheme, protoporphyrin IX and chlorophyll a, from succinyl-CoA or from glutamate."
    families = ("porphyrins",)
    example = """
title = "heme on glucose"
host = "saccharomyces-cerevisiae"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "heme b"
rate = "0.002 mmol/gDW/h"
"""
