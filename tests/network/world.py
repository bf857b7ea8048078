"""A four-reaction world, solved on paper.

    uptake   fuel outside -> fuel            burn    fuel + 2.5 O2 + 10 ADP + ... -> 3 CO2 + 10 ATP + ...
    refill   fuel + CO2 + ATP -> acid + ...  unmake  acid -> fuel + CO2        turn   acid -> product (a route)

Asked: product 2 mmol/gDW/h, maintenance 5 mmol ATP/gDW/h. On paper: refill 2 (2 fuel, 2 CO2, 2 ATP); ATP 5 + 2 = 7,
so burn 0.7; feed 2.7, O2 1.75, CO2 out 3 * 0.7 - 2 = 0.1; drained 2 = refilled 2.
"""

from __future__ import annotations

from fractions import Fraction

from headrace.values.case import Case, Demand, Feed, Level
from headrace.values.facts import (
    Basis,
    Compartment,
    Compound,
    Expression,
    Facts,
    Host,
    HostReaction,
    Quantity,
    Reaction,
    Route,
    Source,
    Term,
)

SEEN = Basis("seen", ("paper",))
ATP = {"C": 10, "H": 12, "N": 5, "O": 13, "P": 3}
ADP = {"C": 10, "H": 12, "N": 5, "O": 10, "P": 2}


def _compound(slug: str, formula: dict[str, int], charge: int = 0, **flags: bool) -> Compound:
    return Compound(slug, slug, formula, charge, SEEN, **flags)  # type: ignore[arg-type]


COMPOUNDS = (
    _compound("fuel", {"C": 3, "H": 4, "O": 3}, precursor=True),
    _compound("gas", {"C": 1, "O": 2}),
    _compound("air", {"O": 2}),
    _compound("wet", {"H": 2, "O": 1}),
    _compound("sour", {"H": 1}, 1),
    _compound("motive", {"H": 1}, 1, membrane=True),
    _compound("full", ATP, -4, carrier=True),
    _compound("empty", ADP, -3, carrier=True),
    _compound("salt", {"H": 1, "O": 4, "P": 1}, -2),
    _compound("acid", {"C": 4, "H": 4, "O": 5}, anchor=True),
    _compound("product", {"C": 4, "H": 4, "O": 5}),
)


def _reaction(slug: str, transport: bool = False, **counts: str | int) -> Reaction:
    """Terms as name=count; name__outer / name__inner for carriers."""
    terms = []
    for name, count in counts.items():
        compound, _, side = name.partition("__")
        terms.append(Term(compound, Fraction(count), side))
    return Reaction(slug, slug, tuple(terms), SEEN, transport=transport)


REACTIONS = (
    _reaction("release", full=-1, wet=-1, empty=1, salt=1, sour=1),
    _reaction("uptake", True, fuel__outer=-1, fuel__inner=1),
    _reaction("breathe", True, air__outer=-1, air__inner=1),
    _reaction("exhale", True, gas__inner=-1, gas__outer=1),
    _reaction("burn", fuel=-1, air="-5/2", empty=-10, salt=-10, sour=-10, gas=3, wet=12, full=10),
    _reaction("refill", fuel=-1, gas=-1, full=-1, wet=-1, acid=1, empty=1, salt=1, sour=1),
    _reaction("unmake", acid=-1, fuel=1, gas=1),
    _reaction("turn", acid=-1, product=1),
)


def rows(both: tuple[str, ...] = ()) -> dict[str, HostReaction]:
    """The host's rows; those in `both` run both ways."""
    found = {}
    for reaction in REACTIONS:
        if reaction.slug == "release":
            continue
        direction = "both" if reaction.slug in both or reaction.slug == "exhale" else "forward"
        where = {"outer": "outside", "inner": "inside"} if reaction.transport else {"place": "inside"}
        found[reaction.slug] = HostReaction(reaction.slug, reaction.slug, reaction.slug, direction, SEEN,
                                            expression=("always",), **where)
    return found


def facts(**contents: int) -> Facts:
    """The world's facts; contents override skeletons per mole."""
    y = {c.slug: Fraction(0) for c in COMPOUNDS} | {"acid": Fraction(1), "product": Fraction(1)}
    host = Host("host", "host", "", (Compartment("inside", "inside", "cytosol"), Compartment("skin", "skin", "membrane"),
                                     Compartment("outside", "outside", "medium")), tuple(rows().values()),
                (Expression("always", "always", "on", SEEN),),
                (Quantity("q", "host", "maintenance", Fraction(5), "5", "mmol-per-gdw-h", "assumed", SEEN),), (), (), (),
                "motive-balanced", SEEN, nutrients=("air", "gas", "wet"))
    roles = {"energy-release": ("release",), "oxygen": ("air",), "carbon-dioxide": ("gas",), "inorganic-carbon": ("gas",),
             "water": ("wet",), "proton": ("sour",), "motive-proton": ("motive",), "ammonium": ()}
    return Facts("world", {c.slug: c for c in COMPOUNDS}, {r.slug: r for r in REACTIONS}, {}, {"host": host}, {},
                 {"rt": Route("rt", "rt", "product", ("turn",), SEEN)}, {"paper": Source("paper", "solved on paper")},
                 {}, {}, contents=y | {k: Fraction(v) for k, v in contents.items()}, roles=roles)


def case(rate: float | None = 2.0, uptake: float | None = None, maintenance: float = 5.0, off: tuple[str, ...] = (),
         both: tuple[str, ...] = (), **fields: object) -> Case:
    """The question of the docstring, or a variant of it."""
    found = rows(both)
    levels = {s: Level("off", "not-expressed", "shut for the test") if s in off else Level("on", "expressed", "always")
              for s in found}
    demands = () if rate is None else (Demand("product", "product", "world", {"product": Fraction(1)}, "inside", rate=rate),)
    values: dict[str, object] = dict(title="world", host="host", feeds=(Feed("fuel", uptake),), demands=demands, growth=0.0,
                                     oxygen="aerobic", rows=found, levels=levels, energy={"maintenance": maintenance})
    return Case(**(values | fields))  # type: ignore[arg-type]
