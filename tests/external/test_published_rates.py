"""Net refill and the shunt on acetate against published rates and maps; the source stands beside each check."""

from __future__ import annotations

import pytest

from headrace.run import Desk


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def glucose(growth, uptake, host="escherichia-coli"):
    return {"title": "published rates", "host": host, "growth": f"{growth} /h",
            "feed": [{"substrate": "glucose", "uptake": f"{uptake} mmol/gDW/h"}], "conditions": {"oxygen": "aerobic"}}


# Haverkorn van Rijsewijk BRB, Nanchen A, Nallet S, Kleijn RJ, Sauer U (2011) Mol Syst Biol 7:477, table I and flux map
# (read from a transcription): growth 0.61 1/h, glucose 8.13 mmol/gDW/h in the map; PEP carboxylase 3.02, PEP carboxykinase
# 0.67, malic enzyme 0.46, so net refill 1.89 mmol/gDW/h, 23.2 per 100 glucose.
def test_net_refill_on_glucose_is_that_of_the_published_map(desk):
    answer = desk.refills(glucose(0.61, 8.13)).answer
    ledger = answer.ledger
    net = ledger.refilled - ledger.removed
    assert net == pytest.approx(1.89, rel=0.10)
    assert 100 * net / answer.feed[0].uptake == pytest.approx(23.2, rel=0.10)


# The same composition as the map's authors assumed underlies this figure, so it proves the bookkeeping, not the biology:
# 2.8646 mmol skeletons/gDW (Kim BH, Gadd GM 2008, table 6.9) times growth.
@pytest.mark.parametrize("growth, uptake, per_100", [(0.61, 8.24, 21.2), (0.65, 7.6, 24.5)])
def test_net_refill_follows_from_composition(desk, growth, uptake, per_100):
    """Expected figures: arithmetic on the precursor table at the rates of Haverkorn van Rijsewijk 2011 and of
    Perrenoud A, Sauer U (2005) J Bacteriol 187:3171, table 2."""
    ledger = desk.refills(glucose(growth, uptake)).answer.ledger
    assert 100 * (ledger.refilled - ledger.removed) / uptake == pytest.approx(per_100, rel=0.01)


# Petersen S et al. (2000) J Biol Chem 275:35932-35941, abstract: pyruvate carboxylase 91 +- 7 % of C3 carboxylation.
def test_split_of_carboxylation_follows_the_measured_share(desk):
    question = glucose(0.2, 4.0, "corynebacterium-glutamicum")
    question["conditions"]["supplements"] = ["biotin"]
    rows = {r.refill: r for r in desk.refills(question).answer.refills}
    share = rows["pyruvate-carboxylase"].nominal / (rows["pyruvate-carboxylase"].nominal + rows["pep-carboxylase"].nominal)
    assert share == pytest.approx(0.91)
    assert "Petersen" in rows["pyruvate-carboxylase"].split


# On acetate PEP and pyruvate come from oxaloacetate and malate, so malate synthase runs far above the net drain (Kornberg's
# glyoxylate cycle; textbook knowledge, common practice).
def test_on_acetate_the_shunt_runs_above_the_net_drain(desk):
    question = {"title": "acetate", "host": "escherichia-coli", "growth": "0.2 /h", "feed": [{"substrate": "acetate"}],
                "conditions": {"oxygen": "aerobic"}, "outlet": [{"product": "L-glutamate", "rate": "0.2 mmol/gDW/h"}]}
    answer = desk.refills(question).answer
    (shunt,) = [g for g in answer.groups if g.group.startswith("malate-synthase")]
    assert shunt.necessary and shunt.nominal > 1.5 * answer.ledger.net_drain
    removed = {r.reaction: r.rate for r in answer.removals}
    to_pep = sum(rate for name, rate in removed.items() if "carboxykinase" in name)
    assert to_pep > 0 and sum(removed.values()) == pytest.approx(shunt.nominal - answer.ledger.net_drain, rel=1e-6)
    (row,) = [r for r in answer.refills if r.open and r.refill == "malate-synthase-aceb"]
    assert row.steps == ("isocitrate-lyase",)


# Figures of an independent calculation on the same literature (counted apart: it shares our facts).
@pytest.mark.parametrize("host, growth, per_100, per_gdw, extra", [
    ("saccharomyces-cerevisiae", 0.1, 19.6, 2.33, {"supplements": ["biotin"]}),
    ("yarrowia-lipolytica", 0.24, 18.4, 1.98, {"supplements": ["thiamine"]}),
])
def test_net_refill_of_the_yeasts(desk, host, growth, per_100, per_gdw, extra):
    question = {"title": "yeast", "host": host, "growth": f"{growth} /h", "feed": [{"substrate": "glucose"}],
                "conditions": {"oxygen": "aerobic", **extra}}
    answer = desk.refills(question).answer
    net = answer.ledger.refilled - answer.ledger.removed
    assert net / growth == pytest.approx(per_gdw, rel=0.02)
    assert 100 * net / answer.feed[0].uptake == pytest.approx(per_100, rel=0.02)
