"""A frozen result of each kind over the real facts, with numbers that are made up but hang together.

Saving, querying and serving can be tested on it at once, without solving anything.
"""

from __future__ import annotations

from fractions import Fraction

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
from headrace.values.case import Case, Demand, Feed, Finding, Limit, Supplement
from headrace.values.facts import Facts

HOST = "corynebacterium-glutamicum"
CITED = "Petersen S et al. (2000)"


def case(facts: Facts, title: str = "HR-12, lysine on glucose") -> Case:
    """Lysine on glucose."""
    rows = {row.slug: row for row in facts.hosts[HOST].reactions}
    outlet = "l-lysine" if "l-lysine" in facts.outlets else next(iter(facts.outlets), "l-lysine")
    return Case(
        title=title,
        host=HOST,
        feeds=(Feed("glucose", 6.0),),
        demands=(
            Demand(outlet, "L-lysine", "aspartate-family", {"lysine": Fraction(1)}, "cytosol", rate=1.4, molar_mass=146.19),
        ),
        growth=0.15,
        oxygen="aerobic",
        rows=rows,
        levels={},
        supplements=(Supplement("biotin"),),
        removed_genes=("pck",),
        removed_rows=("pep-carboxykinase-gtp",),
        limits=(Limit("pyruvate carboxylase", ("pyruvate-carboxylase",), 2.0),),
        energy={"maintenance": 1.9, "growth-associated-atp": 40.0},
        quantities=tuple(quantity.slug for quantity in facts.hosts[HOST].quantities[:3]),
        source_text='title = "HR-12, lysine on glucose"\nhost = "corynebacterium-glutamicum"\n',
        path="somewhere/hr-12.toml",
    )


def _draws() -> tuple[Draw, ...]:
    terms = (
        PoolTerm("oxaloacetate", "cytosol", Fraction(1), Fraction(0), Fraction(1)),
        PoolTerm("pyruvate", "cytosol", Fraction(1), Fraction(1, 3)),
    )
    needs = {"nadph": Fraction(4), "atp": Fraction(3, 2)}
    return (
        Draw("l-lysine", "L-lysine", ("outlet.0",), terms, needs, Fraction(1), {"aspartate-kinase": Fraction(1)}, (), "route"),
    )


def _drains() -> tuple[DrainRow, ...]:
    return (
        DrainRow("L-lysine", "oxaloacetate (cytosol)", "oxaloacetate", "cytosol", 1.4, 0.0, 1.4, 1.4, 5.6, 1.4),
        DrainRow("biomass", "oxoglutarate (cytosol)", "oxoglutarate", "cytosol", 0.2 + 0.1, 0.1, 0.0, 1 / 3, 5 / 3, 1 / 3),
    )


def _refill_rows() -> tuple[RefillRow, ...]:
    return (
        RefillRow(
            "pyruvate-carboxylase",
            "pyruvate carboxylase",
            "pep-and-pyruvate",
            ("6.4.1.1",),
            "cytosol",
            ("pyruvate-carboxylase",),
            1.0,
            0.0,
            1.577,
            1.733,
            "91 % by pyruvate carboxylase",
            2.0,
            2.0 / 1.577,
            False,
            True,
            "",
            1.0,
            1.0,
            "pyc",
            ("biotin",),
            "seen",
            CITED,
        ),
        RefillRow(
            "pep-carboxylase",
            "PEP carboxylase",
            "pep-and-pyruvate",
            ("4.1.1.31",),
            "cytosol",
            ("pep-carboxylase",),
            1.0,
            0.0,
            0.156,
            1.733,
            "the rest",
            None,
            None,
            False,
            True,
            "",
            0.0,
            1.0,
            "ppc",
            (),
            "recalled",
            CITED,
        ),
        RefillRow(
            "malate-synthase",
            "isocitrate lyase with malate synthase",
            "shunt",
            ("2.3.3.9", "4.1.3.1"),
            "cytosol",
            ("isocitrate-lyase", "malate-synthase"),
            1.0,
            None,
            None,
            None,
            "",
            None,
            None,
            False,
            False,
            "not expressed on this feed",
            0.0,
            0.0,
            "aceB",
            (),
            "seen",
            CITED,
        ),
    )


def _ledger() -> Ledger:
    rows = (
        LedgerRow("left", "drained", "L-lysine", "cytosol", 1.4),
        LedgerRow("left", "drained", "biomass", "cytosol", 1 / 3),
        LedgerRow("right", "refilled", "pyruvate carboxylase", "cytosol", 1.577),
    )
    sheet = CompartmentLedger("cytosol", 1.4 + 1 / 3, 0.0, 0.0, 0.0, 1.733, 0.0, 0.0, 1e-16)
    return Ledger(1.4 + 1 / 3, 0.0, 0.0, 1.4 + 1 / 3, 0.0, 1e-16, rows, (sheet,))


FINDINGS = (
    Finding("caution", "dependence", "pyruvate-carboxylase", 'needs biotin; "supplied" here\nby the medium', CITED),
    Finding("note", "recalled", "", "the split rests on a recalled fact"),
)


def refills(facts: Facts, title: str = "HR-12, lysine on glucose") -> Result:
    """A feasible requirement."""
    groups = (
        GroupRow("pep-and-pyruvate", "carboxylation of PEP and pyruvate", ("pyruvate-carboxylase", "pep-carboxylase"), 1.733, 1.733,
                 1.733, float("inf"), 0.9, True, "91 % by pyruvate carboxylase"),
    )  # fmt: skip
    answer = RefillAnswer(
        answer="feasible",
        aim="least total rate at the stated uptake",
        drains=_drains(),
        ledger=_ledger(),
        refills=_refill_rows(),
        groups=groups,
        feed=(FeedRow("glucose", 6.0, 36.0),),
        crossings=(Crossing("oxygen", 9.5), Crossing("carbon-dioxide", -11.2)),
        drawn=(Crossing("lysine", -1.4),),
        shortage=(),
        repairs=(),
        closure={"C": 1.2e-15, "N": -0.0, "electrons": 0.0},
        removals=(RateRow("PEP carboxykinase", 0.0),),
        rates=(RateRow("pyruvate-carboxylase", 1.577, 0.0, 1.733), RateRow("citrate-synthase", 2.2, None, float("inf"))),
        energy={"maintenance": 1.9, "growth": 6.0},
        surplus_carbon=0.25,
        design_cover=0.9,
        scalars={"growth": 0.15, "outlet.0": 1.4},
        findings=FINDINGS,
    )
    return Result("refills", case(facts, title), facts.version, facts, _draws(), _drains(), answer, FINDINGS, ("dependence",))


def stuck(facts: Facts) -> Result:
    """An infeasible requirement."""
    answer = RefillAnswer(
        answer="infeasible", aim="least feed carbon", drains=_drains(), ledger=None, refills=_refill_rows()[2:], groups=(), feed=(),
        crossings=(), shortage=(Shortage("oxaloacetate (cytosol)", 0.2),), closure={}, scalars={"growth": 0.15},
        repairs=(Repair("reopen PEP carboxylase", "reopen", 12.5), Repair("supply malate", "supply", None)),
    )  # fmt: skip
    return Result("refills", case(facts, "HR-13, <script>alert(1)</script>"), facts.version, facts, _draws(), _drains(), answer)


def drains(facts: Facts) -> Result:
    """The drains alone."""
    return Result("drains", case(facts), facts.version, facts, _draws(), _drains(), None, FINDINGS, ("dependence",))


def ceiling(facts: Facts) -> Result:
    """The largest yield of an outlet."""
    answer = CeilingAnswer(
        "L-lysine", "glucose", 0.0, 0.75, 0.8, 0.61, 0.75, 0.857, 1.0, 1.2, "CO2 may enter", ("carbon", "ATP"), "feasible",
        FINDINGS[:1],
    )  # fmt: skip
    return Result("ceiling", case(facts), facts.version, facts, (), (), answer)


def grows(facts: Facts) -> Result:
    """No growth."""
    answer = GrowsAnswer(
        False, 0.0, ("biotin is not in the medium", "no refill is open"), ("biotin",), True, ("biotin-supplied",), False,
        (Repair("supply biotin", "supply", 30.0),),
    )  # fmt: skip
    return Result("grows", case(facts), facts.version, facts, (), (), answer, FINDINGS)


ALL = {"refills": refills, "stuck": stuck, "drains": drains, "ceiling": ceiling, "grows": grows}
