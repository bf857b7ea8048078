"""Hand-made results on a small world: a host with two compartments, two outlets, three refills, one closed."""

from __future__ import annotations

from fractions import Fraction

import msgspec

from headrace.values.answers import (
    CeilingAnswer,
    CompartmentLedger,
    Crossing,
    DrainRow,
    Draw,
    FeedRow,
    GroupRow,
    GrowsAnswer,
    Ledger,
    LedgerRow,
    PoolTerm,
    RateRow,
    RefillAnswer,
    RefillRow,
    Repair,
    Result,
    Shortage,
)
from headrace.values.case import Case, Demand, Feed, Finding, Level, Limit
from headrace.values.facts import (
    Basis,
    Compartment,
    Compound,
    Expression,
    Facts,
    Host,
    HostReaction,
    Part,
    Quantity,
    Reaction,
    Route,
    Source,
)

PAPER = "Miller A; Smith B (2001) J Imag Biol 1:1-9"
BOOK = "Textbook of invented cells"
SEEN = Basis("seen", ("paper",))
RECALLED = Basis("recalled", ("book",))


def facts() -> Facts:
    compounds = {
        slug: Compound(slug, label, formula, charge, SEEN, anchor=slug == "acid")
        for slug, label, formula, charge in (
            ("sugar", "sugar", {"C": 6, "H": 12, "O": 6}, 0),
            ("acid", "C4 acid", {"C": 4, "H": 2, "O": 5}, -2),
            ("gas", "carbon | dioxide", {"C": 1, "O": 2}, 0),
            ("amber", "amber*amine", {"C": 4, "H": 7, "N": 1, "O": 4}, 0),
        )
    }
    host = Host(
        "cellula",
        "Cellula inventa",
        "",
        (Compartment("cytosol", "cytosol", "cytosol"), Compartment("vesicle", "vesicle", "organelle")),
        (
            HostReaction("fix", "sugar carboxylase", "fix", "forward", SEEN, "cytosol", expression=("always",)),
            HostReaction("shunt", "acid shunt", "shunt", "forward", RECALLED, "vesicle", expression=("fed",)),
        ),
        (Expression("always", "always", "on", SEEN), Expression("fed", "sugar is not fed", "on", RECALLED)),
        (Quantity("upkeep", "cellula", "maintenance", Fraction(2), "2.0", "per-hour", "assumed", RECALLED, Fraction(1), Fraction(3)),),
        (Part("block", "amber", "cytosol", Fraction(1, 2), "protein", "measured", SEEN),),
        (),
        (),
        "motive-balanced",
        SEEN,
    )
    reactions = {slug: Reaction(slug, slug, (), SEEN) for slug in ("fix", "shunt", "carry")}
    sources = {"paper": Source("paper", PAPER, "10.0000/paper"), "book": Source("book", BOOK)}
    routes = {"amber-way": Route("amber-way", "amber by the way", "amber", ("carry",), SEEN)}
    names = {"units": {"per-hour": "mmol/gDW/h"}, "kinds": {"maintenance": "maintenance"}}
    return Facts("f" * 64, compounds, reactions, {}, {"cellula": host}, {}, routes, sources, {}, **names)


def case(**changes: object) -> Case:
    host = facts().hosts["cellula"]
    base = Case(
        title="AB-1, amber on sugar",
        host="cellula",
        feeds=(Feed("sugar", 5.0),),
        demands=(Demand("amber", "amber*amine", "ambers", {"amber": Fraction(1)}, "cytosol", rate=1.25, form="free acid"),),
        growth=0.1,
        oxygen="aerobic",
        rows={row.slug: row for row in host.reactions},
        levels={"fix": Level("on", "expressed", "always", ("always",)), "shunt": Level("off", "not-expressed", "sugar is fed", ("fed",))},
        removed_genes=("abcD",),
        limits=(Limit("sugar carboxylase", ("fix",), 2.0),),
        energy={"maintenance": 2.0, "growth-associated-atp": 30.0},
        quantities=("upkeep",),
        findings=(
            Finding("note", "names", "amber", "amber is written as free acid"),
            Finding("note", "assumed", "oxygen", "oxygen is not stated: aerobic is assumed"),
        ),
        source_text='title = "AB-1"\n# ``` a fence in a comment\n',
        path="designs/ab-1.toml",
    )
    return msgspec.structs.replace(base, **changes)


DRAWS = (
    Draw(
        "amber",
        "amber*amine",
        ("outlet.0",),
        (PoolTerm("acid", "cytosol", Fraction(3, 2), Fraction(1, 2), Fraction(1)),),
        {"gas": Fraction(-1, 3)},
        Fraction(1),
        {"carry": Fraction(1)},
        ("amber-way",),
        "routes",
        recalled=True,
    ),
    Draw("biomass", "biomass", ("growth",), (PoolTerm("acid", "vesicle", Fraction(2, 7)),), {}, Fraction(2, 7), {}, (), "routes"),
)
DRAINS = (
    DrainRow("amber*amine", "C4 acid (cytosol)", "acid", "cytosol", 1.875, 0.625, 1.25, 1.25, 5.0, 1.25),
    DrainRow("biomass", "C4 acid (vesicle)", "acid", "vesicle", 2 / 70, 0.0, 0.0, 2 / 70, 8 / 70, 2 / 70),
)
NET = 1.25 + 2 / 70


def ledger() -> Ledger:
    rows = (
        LedgerRow("left", "drained", "amber*amine", "cytosol", 1.25),
        LedgerRow("left", "drained", "biomass", "vesicle", 2 / 70),
        LedgerRow("right", "refilled", "sugar carboxylase", "cytosol", NET),
    )
    places = (
        CompartmentLedger("cytosol", 1.25, 0.0, 0.0, 2 / 70, NET, 0.0, 0.0, 0.0),
        CompartmentLedger("vesicle", 2 / 70, 0.0, 0.0, 0.0, 0.0, 0.0, 2 / 70, 0.0),
    )
    return Ledger(NET, 0.0, 0.0, NET, 0.0, 2.2e-16, rows, places)


def refill(slug: str, **changes: object) -> RefillRow:
    base = RefillRow(
        slug, f"{slug} carboxylase", "carboxylation-cytosol", ("6.4.1.1",), "cytosol", (), 1.0, 0.0, NET, NET, "only member",
        2.0, 2.0 / NET, True, True, "expressed: always", 1.0, 1.0, "abcA with abcB; or abcC", ("gas",), "seen", PAPER,
    )  # fmt: skip
    return msgspec.structs.replace(base, **changes)


def refills(**changes: object) -> RefillAnswer:
    shut = {"least": None, "nominal": None, "most": None, "capacity": None, "cover": None, "necessary": False, "open": False}
    base = RefillAnswer(
        answer="feasible",
        aim="least total rate at the stated uptake",
        drains=DRAINS,
        ledger=ledger(),
        refills=(
            refill("fix", label="sugar carboxylase"),
            refill("shunt", label="acid shunt", group="shunt-vesicle", compartment="vesicle", reason="sugar is fed", reading="recalled",
                   source=BOOK, steps=("cut",), **shut),
        ),
        groups=(GroupRow("carboxylation-cytosol", "carboxylation in the cytosol", ("fix",), 1.0, NET, 2.0, 2.0, 2.0 / NET, True, "only member"),),
        feed=(FeedRow("sugar", 5.0, 30.0),),
        crossings=(Crossing("gas", -7.5), Crossing("sugar", 5.0)),
        shortage=(),
        repairs=(),
        closure={"C": 1e-15, "N": 0.0, "P": 0.0, "S": 0.0, "electrons": -2e-15},
        drawn=(Crossing("amber", -1.25),),
        rates=(RateRow("fix", NET, 0.0, float("inf")),),
        energy={"maintenance": 2.0, "growth": 3.0, "spilled": 0.0},
        surplus_carbon=17.25,
        design_cover=1.5,
        scalars={"growth": 0.1, "outlet.0": 1.25},
        findings=(Finding("caution", "cofactor", "fix", "needs gas", PAPER),),
    )  # fmt: skip
    return msgspec.structs.replace(base, **changes)


def infeasible() -> RefillAnswer:
    return refills(
        answer="infeasible",
        ledger=None,
        refills=tuple(msgspec.structs.replace(row, least=None, nominal=None, most=None, open=False) for row in refills().refills),
        groups=(),
        feed=(),
        crossings=(),
        closure={},
        rates=(),
        shortage=(Shortage("C4 acid (vesicle)", 0.25),),
        repairs=(Repair("keep acid shunt", "reopen", 12.5), Repair("add acid gate", "add", None)),
        surplus_carbon=None,
        design_cover=None,
    )


def result(kind: str = "refills", answer: object = None, **changes: object) -> Result:
    found = {
        "drains": None,
        "refills": refills(),
        "ceiling": CeilingAnswer(
            "amber*amine", "sugar", 0.0, 0.75, 0.8, 0.55, 0.5, 6 / 7, 1.0, float("inf"), "none enters", ("carbon",), "feasible"
        ),
        "grows": GrowsAnswer(True, 0.62, ("sugar carboxylase refills",), (), True, ("always",), True),
    }
    draws, drains = (DRAWS, DRAINS) if kind in ("drains", "refills") else ((), ())
    base = Result(kind, case(), "f" * 64, facts(), draws, drains, answer or found[kind], plugins=("whole-network",))  # type: ignore[arg-type]
    return msgspec.structs.replace(base, **changes)
