"""Squalene, sterols and carotenoids."""

from __future__ import annotations

from headrace_plugins.drains.base import RouteDrain


class Sterols(RouteDrain):
    """Isoprenoids from acetyl-CoA or, by the other route to isopentenyl diphosphate, from pyruvate and triose phosphate."""

    name = "sterols"
    summary = "Squalene, ergosterol, cholesterol and carotenoids, by the isopentenyl diphosphate route of the host."
    families = ("sterols", "isoprenoids")
    _follows = True
    example = """
title = "squalene on glucose"
host = "saccharomyces-cerevisiae"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "squalene"
rate = "0.02 mmol/gDW/h"
"""
