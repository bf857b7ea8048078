"""Amino acids whose carbon does not come from the cycle, though their nitrogen passes through it."""

from __future__ import annotations

from headrace_plugins.drains.base import RouteDrain


class OtherAminoAcids(RouteDrain):
    """Drains on pyruvate, 3-phosphoglycerate, PEP and sugar phosphates; what the cycle gives is only shuttled or returned."""

    name = "other-amino-acids"
    summary = "Amino acids from pyruvate, 3-phosphoglycerate, PEP and sugar phosphates."
    families = ("pyruvate-family", "serine-family", "aromatic-family")
    example = """
title = "tryptophan on glucose"
host = "escherichia-coli"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "L-tryptophan"
rate = "0.2 mmol/gDW/h"
"""
