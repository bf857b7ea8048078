"""Nucleotides, and nucleic acids by composition.

One mole of a nucleic acid has as many residues as its example in the facts; the shares of the residues are the
outlet's option, or the host's own from its composition.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import Any

from headrace.api import Case, Demand, InputError, RouteBook, exact, nearest, shares, slugify
from headrace_plugins.drains.base import Choice, Composition, RouteDrain, named, option_key
from headrace_plugins.drains.blocks import core, parts

POLYMERS = "nucleic-acids"


class ResidueChoice(Choice, frozen=True):
    """residues: share of each residue, by the triphosphate that brings it ("ATP", "dGTP"); any common scale."""

    residues: dict[str, float] = {}


class Nucleotides(RouteDrain):
    """Purines take nitrogen but no carbon from the cycle; pyrimidines take an oxaloacetate each."""

    name = "nucleotides"
    summary = "Purine and pyrimidine nucleotides, and RNA and DNA by composition."
    families = ("nucleotides", POLYMERS)
    options = ResidueChoice
    example = """
title = "RNA on glucose"
host = "escherichia-coli"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "RNA"
rate = "0.02 mmol/gDW/h"
options = { residues = { ATP = 0.27, GTP = 0.24, CTP = 0.2, UTP = 0.29 } }
"""

    def _composition(self, case: Case, outlet: Demand, routes: RouteBook, choice: Any) -> Composition:
        if outlet.family != POLYMERS:
            return super()._composition(case, outlet, routes, choice)
        (example,) = routes.facts.outlets[outlet.outlet].draws
        drawn = parts(routes, example)
        residues = [name for name, count in drawn.items() if count > 0 and routes.facts.compounds[name].formula.get("N")]
        total = sum((drawn[name] for name in residues), Fraction(0))
        if choice.residues:
            stated = _stated(case, outlet, routes, choice.residues, residues)
        else:
            stated = _profile(routes, residues) or dict.fromkeys(residues, Fraction(1))
        drawn |= {name: share * total for name, share in shares(stated).items()}
        return {(name, outlet.place): count for name, count in sorted(drawn.items()) if count}


def _stated(
    case: Case, outlet: Demand, routes: RouteBook, given: Mapping[str, float], residues: list[str]
) -> dict[str, Fraction]:
    key = f"{option_key(case, outlet)}.residues"
    labels = [routes.facts.compounds[name].label for name in residues]
    found = dict.fromkeys(residues, Fraction(0))
    for text, share in given.items():
        match = [name for name in residues if slugify(text) in named(routes, name)]
        if not match:
            raise InputError(f"no residue {text!r}", key=key, read=text, accepted=", ".join(labels), near=nearest(text, labels))
        if share < 0:
            raise InputError(f"the share of {text} is negative", key=f"{key}.{text}", read=share, accepted="0 or more")
        found[match[0]] += exact(str(share))
    if not any(found.values()):
        raise InputError("all shares of residues are 0", key=key, read=dict(given), accepted="at least one above 0")
    return found


def _profile(routes: RouteBook, residues: list[str]) -> dict[str, Fraction]:
    """The host's own shares: the fraction of its composition that draws one nucleotide of each residue's core; {} without."""
    compounds = routes.facts.compounds
    wanted = {name: core(compounds[name]) for name in residues}
    for fraction in sorted({part.fraction for part in routes.host.composition}):
        drawn = [part for part in routes.host.composition if part.fraction == fraction and part.amount > 0]
        found = {
            name: sum((part.amount for part in drawn if core(compounds[part.compound]) == atoms), Fraction(0))
            for name, atoms in wanted.items()
        }
        if all(found.values()):
            return found
    return {}
