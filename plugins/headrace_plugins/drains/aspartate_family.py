"""Products whose carbon leaves the cycle as oxaloacetate, and lysine by 2-aminoadipate where the host has that route."""

from __future__ import annotations

from headrace_plugins.drains.base import RouteDrain


class AspartateFamily(RouteDrain):
    """Succinyl-CoA that comes back as succinate and aspartate that comes back as fumarate are returned, not drained."""

    name = "aspartate-family"
    summary = "Aspartate, asparagine, lysine (either route), threonine, methionine, isoleucine, homoserine, ectoine and such."
    families = ("aspartate-family",)
    example = """
title = "lysine on glucose by the dehydrogenase branch"
host = "corynebacterium-glutamicum"
growth = "0.1 /h"
[conditions]
supplements = ["biotin"]
[[feed]]
substrate = "glucose"
[[outlet]]
product = "L-lysine"
rate = "0.8 mmol/gDW/h"
options = { routes = ["meso-diaminopimelate-by-dehydrogenase"] }
"""
