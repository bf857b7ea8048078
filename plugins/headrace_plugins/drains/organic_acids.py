"""Acids of the cycle, and itaconate from it."""

from __future__ import annotations

from headrace_plugins.drains.base import RouteDrain


class OrganicAcids(RouteDrain):
    """Most are pools of the cycle themselves: one mole of acid is one mole of drain and one skeleton."""

    name = "organic-acids"
    summary = "Succinate, malate, fumarate, citrate, isocitrate, itaconate and 2-oxoglutarate."
    families = ("organic-acids",)
    example = """
title = "itaconate on glucose"
host = "yarrowia-lipolytica"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
[strain]
add = ["cis-aconitate-decarboxylase"]
[[outlet]]
product = "itaconate"
rate = "0.1 mmol/gDW/h"
"""
