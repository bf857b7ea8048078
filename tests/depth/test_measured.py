"""Measured rates: balances written by hand, an independent constrained least-squares solution, and planted gross errors."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from scipy import optimize

from headrace.network.build import build
from headrace.network.reconcile import reconcile, sized
from headrace.run import Desk
from headrace.values.answers import RefillAnswer
from headrace.values.measured import Reconciliation

STRAIN: dict[str, Any] = {
    "host": "escherichia-coli", "growth": "0.3 /h", "feed": [{"substrate": "glucose", "uptake": "6 mmol/gDW/h"}],
    "conditions": {"oxygen": "aerobic", "release": ["acetate"]},
}
# Per mole: carbon atoms, and electrons that burning it to CO2, water and ammonium gives (counted by hand).
GLUCOSE, ACETATE, OXYGEN, CO2 = (6, 24), (2, 8), (0, -4), (1, 0)


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


@pytest.fixture(scope="module")
def truth(desk: Desk) -> dict[str, float]:
    """Rates that balance: the crossings of a solved case."""
    answer = desk.refills(STRAIN).answer
    assert isinstance(answer, RefillAnswer)
    return {each.compound: abs(each.rate) for each in answer.crossings} | {"growth": 0.3}


def measured(rates: dict[str, float], share: float = 0.03, **left_out: bool) -> dict[str, Any]:
    def reading(name: str, unit: str = "mmol/gDW/h") -> dict[str, str]:
        return {"rate": f"{rates[name]:.9f} {unit}", "error": f"{100 * share:g} %"}

    table: dict[str, Any] = {"growth": reading("growth", "/h")}
    table["uptake"] = {name: reading(name) for name in ("glucose", "oxygen") if name not in left_out}
    table["release"] = {name: reading(name) for name in ("carbon-dioxide", "acetate") if name not in left_out}
    return {**STRAIN, "measured": table}


def found(desk: Desk, question: dict[str, Any]) -> Reconciliation:
    answer = desk.refills(question).measured
    assert answer is not None
    return answer


def biomass(desk: Desk) -> tuple[float, float]:
    """Carbon and electrons of a gram of cells, from the composition alone: electrons 4 C + H - 2 O - 3 N + 5 P + 6 S + 2 Fe - charge."""
    carbon = gained = 0.0
    for part in desk.facts.hosts["escherichia-coli"].composition:
        if part.oxygen in ("", "present"):
            compound, n = desk.facts.compounds[part.compound], float(part.amount)
            count = compound.formula.get
            carbon += n * count("C", 0)
            gained += n * (4 * count("C", 0) + count("H", 0) - 2 * count("O", 0) - 3 * count("N", 0) + 5 * count("P", 0)
                           + 6 * count("S", 0) + 2 * count("Fe", 0) - compound.charge)
    return carbon, gained


def test_rates_that_balance_are_left_alone(desk: Desk, truth: dict[str, float]) -> None:
    answer = found(desk, measured(truth))
    assert answer.verdict == "consistent" and answer.h < 1e-9 and answer.freedom == 2 and answer.p > 0.999
    assert all(each.share == pytest.approx(1.0, abs=1e-6) for each in answer.recoveries)
    assert all(each.reconciled == pytest.approx(each.measured, rel=1e-6) for each in answer.rates if each.measured is not None)
    assert all(each.remaining is not None and each.error is not None and each.remaining < each.error for each in answer.rates if each.checked)
    ammonium = next(each for each in answer.rates if each.compound == "ammonium")
    assert ammonium.measured is None and ammonium.reconciled == pytest.approx(truth["ammonium"], rel=1e-6)
    assert answer.respiratory_quotient == pytest.approx(truth["carbon-dioxide"] / truth["oxygen"])


def test_equals_an_independent_solution(desk: Desk, truth: dict[str, float]) -> None:
    """Carbon and electron balances written by hand, minimised by a general optimiser."""
    rng = np.random.default_rng(2)
    names = ("growth", "glucose", "oxygen", "carbon-dioxide", "acetate")
    read = {name: truth[name] * (1 + 0.03 * rng.normal()) for name in names}
    answer = found(desk, measured(read))
    cells = biomass(desk)
    balances = np.array([[-cells[k], GLUCOSE[k], OXYGEN[k], -CO2[k], -ACETATE[k]] for k in (0, 1)])
    y = np.array([float(f"{read[name]:.9f}") for name in names])
    s = 0.03 * y
    best = optimize.minimize(lambda x: float((((x - y) / s) ** 2).sum()), y, jac=lambda x: 2 * (x - y) / s**2, method="SLSQP",
                             constraints={"type": "eq", "fun": lambda x: balances @ x, "jac": lambda x: balances}, options={"ftol": 1e-14})
    assert best.success and answer.h == pytest.approx(best.fun, rel=1e-6)
    rates = {each.compound or "growth": each.reconciled for each in answer.rates}
    assert [rates[name] for name in names] == pytest.approx(list(best.x), rel=1e-6)
    taken = GLUCOSE[0] * read["glucose"]
    share = (cells[0] * read["growth"] + read["carbon-dioxide"] + 2 * read["acetate"]) / taken
    carbon, electrons = answer.recoveries[:2]
    assert (carbon.element, electrons.element) == ("carbon", "electrons") and carbon.share == pytest.approx(share, rel=1e-6)
    parts = [0.03 * cells[0] * read["growth"], 0.03 * read["carbon-dioxide"], 0.06 * read["acetate"], 0.03 * share * taken]
    assert carbon.error == pytest.approx(float(np.hypot.reduce(parts)) / taken, rel=1e-6)


@pytest.mark.parametrize(("name", "factor", "words"), [("carbon-dioxide", 1.4, "release of carbon dioxide"), ("oxygen", 0.6, "uptake of oxygen")])
def test_a_gross_error_is_named(desk: Desk, truth: dict[str, float], name: str, factor: float, words: str) -> None:
    answer = found(desk, measured(truth | {name: truth[name] * factor}))
    assert answer.verdict == "gross error" and words in answer.named and "any one of these" not in answer.named
    first = answer.suspicions[0]
    assert first.compound == name and first.explains and first.would_be == pytest.approx(truth[name], rel=1e-6)
    assert all(each.reconciled == pytest.approx(truth[each.compound or "growth"], rel=1e-6) for each in answer.rates if each.measured is not None)
    assert any(finding.check == "measured" and words in finding.message for finding in desk.refills(measured(truth | {name: truth[name] * factor})).findings)


def test_a_by_product_that_nobody_measured_is_named_among_what_can_not_be_told_apart(desk: Desk, truth: dict[str, float]) -> None:
    """Acetate and sugar hold the same electrons per carbon: too much of one fed looks like the other leaving."""
    answer = found(desk, measured(truth, acetate=True))
    assert answer.verdict == "gross error" and "any one of these would explain it" in answer.named
    told = {each.compound: each for each in answer.suspicions if each.explains}
    assert told["acetate"].kind == "forgotten" and told["acetate"].would_be == pytest.approx(truth["acetate"], rel=1e-6)
    assert told["glucose"].kind == "reading" and told["glucose"].h == pytest.approx(told["acetate"].h, abs=1e-6)


def test_without_oxygen_and_carbon_dioxide_nothing_is_checked(desk: Desk, truth: dict[str, float]) -> None:
    question = measured(truth, **{"oxygen": True, "carbon-dioxide": True})
    answer = found(desk, question)
    assert answer.verdict == "not checked" and answer.freedom == 0 and answer.named == ""
    assert [each.share for each in answer.recoveries] == [None, None]
    assert "carbon dioxide" in answer.recoveries[0].missing and "oxygen" in answer.recoveries[1].missing
    gas = {each.compound: each.reconciled for each in answer.rates}
    assert gas["oxygen"] == pytest.approx(truth["oxygen"], rel=1e-5) and gas["carbon-dioxide"] == pytest.approx(truth["carbon-dioxide"], rel=1e-5)
    one = found(desk, measured(truth | {"glucose": truth["glucose"] * 2}, oxygen=True))
    assert one.freedom == 1 and one.verdict == "gross error" and "one balance alone" in one.named


def test_the_strain_is_sized_at_its_reconciled_rates(desk: Desk, truth: dict[str, float]) -> None:
    question = measured(truth | {"glucose": truth["glucose"] * 1.02})
    result = desk.refills(question)
    answer = result.answer
    assert isinstance(answer, RefillAnswer) and result.measured is not None and answer.answer == "feasible"
    rates = {each.compound: each.reconciled for each in result.measured.rates if each.sized}
    assert set(rates) == {"", "glucose", "acetate"}
    assert answer.feed[0].uptake == pytest.approx(rates["glucose"]) and answer.scalars["growth"] == pytest.approx(rates[""])
    assert next(-each.rate for each in answer.crossings if each.compound == "acetate") == pytest.approx(rates["acetate"])
    assert answer.energy["spilled"] >= 0 and max(abs(v) for v in answer.closure.values()) < 1e-9


def test_what_the_network_asks_for_is_held_against_what_was_measured(desk: Desk, truth: dict[str, float]) -> None:
    """Nothing is said where rates agree; with oxygen misread, the network's own need of oxygen stands beside the reading."""
    assert not [each for each in desk.refills(measured(truth)).findings if each.check == "measured"]
    said = [each for each in desk.refills(measured(truth | {"oxygen": truth["oxygen"] * 0.6})).findings if each.about == "oxygen"]
    asked = f"the network asks for {truth['oxygen']:.4g} mmol/gDW/h"
    assert len(said) == 1 and asked in said[0].message and f"{truth['oxygen'] * 0.6:.4g} +-" in said[0].message


def test_a_compound_without_a_way_out_is_said(desk: Desk, truth: dict[str, float]) -> None:
    question = measured(truth)
    question["measured"]["release"]["citrate"] = {"rate": "0.01 mmol/gDW/h", "error": "50 %"}
    said = [each.message for each in desk.refills(question).findings if each.check == "measured"]
    case = desk._drawn(desk.scenario(question))[0]
    can_leave = any(column.kind == "leave" and column.name == "citrate" for column in build(desk.facts, case).columns)
    assert case.fixed["citrate"] < 0 and bool([each for each in said if "no way across" in each]) == (not can_leave)


def test_the_case_itself_is_not_changed(desk: Desk, truth: dict[str, float]) -> None:
    case = desk.case(measured(truth))
    net = build(desk.facts, case)
    before = (case.growth, case.feeds, case.fixed)
    changed = sized(case, reconcile(net))
    assert (case.growth, case.feeds, case.fixed) == before and changed.fixed == pytest.approx({"acetate": -truth["acetate"]}, rel=1e-6)
