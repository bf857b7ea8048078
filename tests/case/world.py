"""An invented host for scenarios: a cell with a barn as its organelle, and facts small enough to read.

    press    sugar -> juice            always; genes prsA, or prsB with prsC
    mill     juice -> acid, two enzymes of one stem: the small one always, the large one only on oil
    weave    acid -> cloth             basal, on when the regulator repR is removed; genes wvnA with wvnB
    weave    the same in the barn      never by itself
    carry    sugar, outside to inside  always, no gene
    kiln     acid -> tile              not in the host; an absence says why
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import msgspec

from headrace import case
from headrace.values.case import Case
from headrace.values.facts import (
    Absence,
    Basis,
    Compartment,
    Compound,
    Enzyme,
    Expression,
    Facts,
    Form,
    Host,
    HostReaction,
    Isozyme,
    Outlet,
    Quantity,
    Reaction,
    Release,
    Source,
    Term,
)

SEEN = Basis("seen", ("paper",))
RECALLED = Basis("recalled", ("memory",))

TEXT = """\
title = "meadow"
host = "meadow"
growth = "0.1 /h"

[[feed]]
substrate = "sugar"
uptake = "2 mmol/gDW/h"
"""


def _compound(slug: str, formula: dict[str, int], charge: int = 0, *aliases: str) -> Compound:
    return Compound(slug, slug, formula, charge, SEEN, aliases)


COMPOUNDS = (
    _compound("sugar", {"C": 6, "H": 12, "O": 6}, 0, "dextrose"),
    _compound("oil", {"C": 16, "H": 31, "O": 2}, -1),
    _compound("juice", {"C": 3, "H": 3, "O": 3}, -1),
    _compound("acid", {"C": 4, "H": 4, "O": 5}, -2),
    _compound("cloth", {"C": 6, "H": 15, "N": 2, "O": 2}, 1),
    _compound("tile", {"C": 4, "H": 6, "O": 4}),
    _compound("vitamin", {"C": 10, "H": 16, "N": 2, "O": 3, "S": 1}),
    _compound("air", {"O": 2}),
)

ENZYMES = (
    Enzyme("fruitpressase", "fruit pressase", ("1.1.1.1",), aliases=("juicer",)),
    Enzyme("millase-small", "millase (small)", ("2.1.1.1",)),
    Enzyme("millase-large", "millase (large)", ("2.1.1.2",)),
    Enzyme("loomase", "loomase", ("3.1.1.1",)),
    Enzyme("kilnase", "kilnase", ("4.1.1.1",)),
)


def _reaction(slug: str, enzyme: str, transport: bool = False, **counts: int) -> Reaction:
    terms = []
    for name, count in counts.items():
        compound, _, side = name.partition("__")
        terms.append(Term(compound, Fraction(count), side))
    number = next((each.ec for each in ENZYMES if each.slug == enzyme), ())
    return Reaction(slug, slug.replace("-", " "), tuple(terms), SEEN, number, enzyme=enzyme, transport=transport)


REACTIONS = (
    _reaction("press", "fruitpressase", sugar=-1, juice=2),
    _reaction("mill-small", "millase-small", juice=-1, acid=1),
    _reaction("mill-large", "millase-large", juice=-1, acid=1),
    _reaction("weave", "loomase", acid=-1, cloth=1),
    _reaction("fire", "kilnase", acid=-1, tile=1),
    _reaction("carry-sugar", "", True, sugar__outer=-1, sugar__inner=1),
    _reaction("carry-tile", "", True, tile__outer=-1, tile__inner=1),
)


def row(slug: str, reaction: str, genes: str = "", rules: str = "always", place: str = "cell", **fields: str) -> HostReaction:
    """A row of the host. genes: isozymes separated by "/", genes of one by "+"."""
    isozymes = tuple(Isozyme(tuple(each.split("+"))) for each in genes.split("/") if each)
    where = fields if "outer" in fields else {"place": place, **fields}
    values: dict[str, Any] = {"label": slug.replace("-", " "), "direction": "forward", **where}
    return HostReaction(slug=slug, reaction=reaction, basis=SEEN, isozymes=isozymes, expression=tuple(rules.split()), **values)


ROWS = (
    row("press", "press", "prsA/prsB+prsC"),
    row("mill-small", "mill-small", "milS"),
    row("mill-large", "mill-large", "milL", "oil-only oil-relieved"),
    row("weave", "weave", "wvnA+wvnB", "weave-basal weave-relieved"),
    row("weave-barn", "weave", "wvnC", "", "barn"),
    row("carry-sugar", "carry-sugar", rules="always", outer="field", inner="cell"),
)

RULES = (
    Expression("always", "always", "on", SEEN),
    Expression("oil-only", "only oil is fed", "on", SEEN, feed_only=("oil",)),
    Expression("oil-relieved", "the small mill is gone", "on", SEEN, removed_enzymes=("milS",)),
    Expression("weave-basal", "leaky", "basal", RECALLED),
    Expression("weave-relieved", "the repressor is gone", "on", SEEN, removed_regulators=("repR",)),
)


def _quantity(slug: str, kind: str, text: str, unit: str, condition: str = "", basis: Basis = SEEN) -> Quantity:
    return Quantity(slug, "meadow", kind, Fraction(text), text, unit, "measured", basis, condition=condition)


QUANTITIES = (
    _quantity("upkeep", "maintenance", "2", "mmol-per-gdw-h"),
    _quantity("upkeep-without", "maintenance", "5", "mmol-per-gdw-h", "absent"),
    _quantity("growth-cost", "growth-associated-atp", "40", "mmol-per-gdw", basis=RECALLED),
    _quantity("leak", "basal-level", "1.5", "mmol-per-gdw"),
    _quantity("protein", "protein-fraction", "0.5", "g-per-gdw"),
    _quantity("pump", "protons-per-nadh", "8", "mol-per-mol", "present"),
)

HOST = Host(
    slug="meadow",
    label="Meadow",
    taxon="",
    compartments=(
        Compartment("cell", "cytosol", "cytosol"),
        Compartment("barn", "barn", "organelle"),
        Compartment("hedge", "hedge", "membrane"),
        Compartment("field", "medium", "medium"),
    ),
    reactions=ROWS,
    expressions=RULES,
    quantities=QUANTITIES,
    composition=(),
    absences=(Absence("fire", "no clay", SEEN),),
    releases=(Release("acid", SEEN), Release("juice", SEEN, "absent"), Release("tile", SEEN, "", ("drought",))),
    proton_convention="motive-balanced",
    basis=SEEN,
    aliases=("green meadow",),
    required_supplements=("vitamin",),
)

OUTLETS = (
    Outlet(
        "cloth",
        "cloth",
        "weaving",
        {"cloth": Fraction(1)},
        forms=(
            Form("free base", {"C": 6, "H": 14, "N": 2, "O": 2}),
            Form("hydrochloride", {"C": 6, "H": 15, "N": 2, "O": 2, "Cl": 1}, True),
        ),
    ),
    Outlet("acid", "acid", "souring", {"acid": Fraction(1)}),
    Outlet("quilt", "quilt", "weaving", {"cloth": Fraction(2), "acid": Fraction(1)}),
    Outlet("tile", "tile", "firing", {"tile": Fraction(1)}, forms=(Form("glazed", {"C": 4, "H": 6, "O": 4}),)),
)


def facts(**changes: Any) -> Facts:
    """The world's facts; changes replace fields of the host."""
    host = msgspec.structs.replace(HOST, **changes)
    return Facts(
        version="meadow",
        compounds={each.slug: each for each in COMPOUNDS},
        reactions={each.slug: each for each in REACTIONS},
        enzymes={each.slug: each for each in ENZYMES},
        hosts={host.slug: host},
        outlets={each.slug: each for each in OUTLETS},
        routes={},
        sources={"paper": Source("paper", "Paper (2001)"), "memory": Source("memory", "from memory")},
        circumstances={"drought": "a drought", "flood": "a flood"},
        units={"mmol-per-gdw": "mmol/gDW", "mmol-per-gdw-h": "mmol/gDW/h"},
    )


def resolve(text: str = TEXT, *, host: dict[str, Any] | None = None, **options: Any) -> Case:
    """A scenario's text resolved against the world; host replaces fields of the host."""
    return case.resolve(case.read(text, name="meadow.toml"), facts(**(host or {})), **options)


def stated(extra: str = "", growth: str = '"0.1 /h"', uptake: str = '"2 mmol/gDW/h"') -> str:
    """The usual scenario with other values and more tables behind it."""
    return TEXT.replace('"0.1 /h"', growth).replace('"2 mmol/gDW/h"', uptake) + "\n" + extra


def tuned(value: Any, /, **fields: Any) -> Any:
    """A frozen value with some fields replaced."""
    return msgspec.structs.replace(value, **fields)


def messages(case_: Case, check: str = "") -> list[str]:
    """The findings' messages, of one check or all."""
    return [finding.message for finding in case_.findings if check in ("", finding.check)]
