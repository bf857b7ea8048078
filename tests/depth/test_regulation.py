"""Effectors and cofactors: each finding fires in its case and stays silent in one that differs in the cause alone."""

from __future__ import annotations

from typing import Any

import pytest

from headrace.run import Desk
from headrace.values.answers import AddedTable, Result
from headrace.values.case import Finding

Change = dict[str, Any]


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk()


def scenario(host: str, product: str, feeds: list[Any], rate: str = "0.5 mmol/gDW/h", growth: str = "0.1 /h", **more: Any) -> Change:
    fed = [{"substrate": feed} if isinstance(feed, str) else feed for feed in feeds]
    asked = [{"product": product, "rate": rate}] if product else []
    return {"host": host, "growth": growth, "feed": fed, "outlet": asked, **more}


def said(desk: Desk, question: Change, check: str) -> list[Finding]:
    result = desk.refills(question)
    assert result.answer is not None
    assert result.answer.answer == "feasible"  # type: ignore[union-attr]
    return [finding for finding in result.findings if finding.check == check]


ECOLI, GLUTAMICUM, YEAST, YARROWIA = (
    "escherichia-coli", "corynebacterium-glutamicum", "saccharomyces-cerevisiae", "yarrowia-lipolytica"
)
BIOTIN, THIAMINE = ({"conditions": {"supplements": [name]}} for name in ("biotin", "thiamine"))
SHUNT = ["isocitrate lyase", "malate synthase"]

# check -> (case in which it fires, matched case in which it does not, words of the message, a word of the source)
PAIRS: dict[str, tuple[Change, Change, str, str]] = {
    "activator-drained": (
        scenario(YEAST, "ergosterol", ["glucose"], "0.02 mmol/gDW/h", **BIOTIN),
        scenario(YEAST, "L-aspartate", ["glucose"], "0.1 mmol/gDW/h", **BIOTIN),
        "acetyl-CoA activates pyruvate carboxylase", "Myers",
    ),
    "inhibitor-made": (
        scenario(ECOLI, "L-threonine", ["glucose"]),
        scenario(ECOLI, "L-glutamate", ["glucose"]),
        "L-aspartate inhibits PEP carboxylase in Escherichia coli", "allosteric effectors",
    ),
    "inhibitor-fed": (
        scenario(GLUTAMICUM, "", ["glucose", {"substrate": "citrate", "uptake": "0.02 mmol/gDW/h"}], **BIOTIN),
        scenario(GLUTAMICUM, "", ["glucose"], **BIOTIN),
        "citrate is fed", "Wu X",
    ),
    "inhibitor-without-oxygen": (
        scenario(ECOLI, "", ["glucose"], conditions={"oxygen": "anaerobic"}),
        scenario(ECOLI, "", ["glucose"], conditions={"oxygen": "aerobic"}),
        "NADH inhibits citrate synthase", "desensitised",
    ),
    "repressed-by-feed": (
        scenario(ECOLI, "L-threonine", ["glucose"], strain={"remove": ["ppc"], "add": SHUNT}),
        scenario(ECOLI, "L-threonine", ["glucose"], strain={"remove": ["ppc", "iclR"]}),
        "isocitrate lyase runs in this design on D-glucose", "Maloy",
    ),
    "vitamin-missing": (
        scenario(YARROWIA, "", ["glucose"]),
        scenario(YARROWIA, "", ["glucose"], **THIAMINE),
        "needs thiamine (B1), which Yarrowia lipolytica does not make", "Kamzolova",
    ),
    "refill-takes-over": (
        scenario(GLUTAMICUM, "L-glutamate", ["glucose"]),
        scenario(GLUTAMICUM, "L-glutamate", ["glucose"], **BIOTIN),
        "without biotin (B7) pyruvate carboxylase rests in Corynebacterium glutamicum; PEP carboxylase, which needs none, takes over",
        "biotin and anaplerosis",
    ),
    "vitamin-unknown": (
        scenario(YARROWIA, "L-glutamate", ["glucose"], **THIAMINE),
        scenario(YARROWIA, "L-glutamate", ["glucose"], conditions={"supplements": ["thiamine", "biotin"]}),
        "pyruvate carboxylase needs biotin (B7); no fact says whether Yarrowia lipolytica makes it", "UniProt",
    ),
}


@pytest.mark.parametrize("check", PAIRS)
def test_it_fires_in_its_case(desk: Desk, check: str) -> None:
    fires, _, words, source = PAIRS[check]
    found = [finding for finding in said(desk, fires, check) if words in finding.message]
    assert found
    assert source in found[0].source


@pytest.mark.parametrize("check", PAIRS)
def test_it_stays_silent_in_a_matched_case(desk: Desk, check: str) -> None:
    _, silent, words, _ = PAIRS[check]
    assert not [finding for finding in said(desk, silent, check) if words in finding.message]


def test_every_rule_has_its_pair(desk: Desk) -> None:
    assert {row.rule for row in desk.facts.rule_rows} == set(PAIRS)


def test_the_published_shift_of_corynebacterium(desk: Desk) -> None:
    """At 20 ug/L biotin PEP carboxylase carries what glutamate needs, at 200 ug/L both do (abstract, cited in the facts)."""
    short, ample = PAIRS["refill-takes-over"][:2]
    resting = [finding for finding in said(desk, short, "vitamin-missing") if finding.about == "pyruvate-carboxylase"]
    assert len(resting) == 1
    assert "PEP carboxylase" in said(desk, short, "refill-takes-over")[0].message
    assert not said(desk, ample, "vitamin-missing")
    assert not said(desk, ample, "refill-takes-over")


def test_a_host_of_its_own_study_does_not_take_the_general_effect(desk: Desk) -> None:
    """C. glutamicum's pyruvate carboxylase is inhibited by acetyl-CoA, most others are activated (both cited)."""
    about = {(row.host, row.rule): row.message for row in desk.facts.rule_rows if row.about == "pyruvate-carboxylase"}
    assert (GLUTAMICUM, "activator-drained") not in about
    assert (YARROWIA, "activator-drained") in about


def table(result: Result, key: str) -> list[dict[str, Any]]:
    found: AddedTable = next(each for each in result.tables if each.key == key)
    return [dict(zip([column.key for column in found.columns], row, strict=True)) for row in found.rows]


def test_the_tables_say_what_acts_and_where_a_vitamin_is_from(desk: Desk) -> None:
    with_biotin = desk.refills(PAIRS["refill-takes-over"][1])
    acting = {(row["enzyme"], row["effector"]): row for row in table(with_biotin, "effectors")}
    assert acting["PEP carboxylase", "L-glutamate"]["case"] == "makes it on the way"
    assert acting["PEP carboxylase", "L-glutamate"]["effect"] == "inhibitor"
    assert acting["PEP carboxylase", "fumarate"]["case"] == "leaves it alone"
    held = {(row["enzyme"], row["cofactor"]): row["supply"] for row in table(with_biotin, "cofactors")}
    assert held["pyruvate carboxylase", "biotin"] == "the medium"
    assert held["PEP carboxylase", "magnesium"] == "the medium's minerals"


def test_a_nitrogen_carrier_is_not_made_on_the_way(desk: Desk) -> None:
    """Lysine's route turns glutamate over as an amino donor; that is no reason to warn of glutamate."""
    found = said(desk, scenario(GLUTAMICUM, "L-lysine", ["glucose"], **BIOTIN), "inhibitor-made")
    assert any("L-aspartate" in finding.message for finding in found)
    assert not any("L-glutamate" in finding.message for finding in found)


def test_an_infeasible_case_has_no_refill_findings(desk: Desk) -> None:
    question = scenario(ECOLI, "L-threonine", ["glucose"], strain={"remove": ["ppc"]})
    result = desk.refills(question)
    assert result.answer is not None
    assert result.answer.answer == "infeasible"  # type: ignore[union-attr]
    assert not {finding.check for finding in result.findings} & set(PAIRS)
