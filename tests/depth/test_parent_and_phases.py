"""The parental strain and the phases of a plan: each part answers as a scenario of its own would; integrals against a solver of
differential equations; messages point to where a value stands."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest
from scipy import integrate

from headrace.errors import InputError
from headrace.network.phases import integral
from headrace.run import Desk
from headrace.values.answers import RefillAnswer, Result
from headrace.values.elements import neutral_mass

DESIGN: dict[str, Any] = {
    "title": "design", "host": "corynebacterium-glutamicum", "growth": "0.15 /h", "feed": [{"substrate": "glucose"}],
    "conditions": {"oxygen": "aerobic", "supplements": ["biotin"]},
    "strain": {"remove": ["pck"], "limit": {"pyruvate-carboxylase": "2.5 mmol/gDW/h", "pep-carboxylase": "0.6 mmol/gDW/h"}},
    "outlet": [{"product": "L-lysine", "rate": "1.4 mmol/gDW/h"}],
}
PHASES = [
    {"name": "growth", "duration": "12 h", "biomass": "1 g/L", "growth": "0.25 /h", "outlet": []},
    {"name": "production", "duration": "36 h", "growth": "0.02 /h", "conditions": {"release": ["acetate", "glycine"]}},
]
PLAN = {**DESIGN, "phase": PHASES}


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


@pytest.fixture(scope="module")
def planned(desk: Desk) -> Result:
    return desk.refills(PLAN)


def answer_of(result: Result | None) -> RefillAnswer:
    assert result is not None and isinstance(result.answer, RefillAnswer)
    return result.answer


def test_the_parental_strain_is_the_unedited_host_without_outlets_unless_stated(desk: Desk) -> None:
    result = desk.refills({**DESIGN, "parent": {"growth": "0.3 /h"}})
    alone = desk.refills({key: value for key, value in DESIGN.items() if key not in ("strain", "outlet")} | {"growth": "0.3 /h"})
    assert answer_of(result.parent).groups == answer_of(alone).groups and answer_of(result) == answer_of(desk.refills(DESIGN))
    fold = next(each for each in result.folds if each.kind == "group")
    assert fold.now == answer_of(alone).groups[0].nominal and fold.needs == answer_of(result).groups[0].nominal
    assert fold.now and fold.needs and fold.fold == pytest.approx(fold.needs / fold.now)
    assert result.parent is not None and result.parent.case.limits == () and result.parent.case.demands == ()


def test_a_parental_strain_in_a_file_of_its_own(desk: Desk, tmp_path: Path) -> None:
    text = 'host = "corynebacterium-glutamicum"\ngrowth = "0.2 /h"\n[[feed]]\nsubstrate = "acetate"\n'
    (tmp_path / "parent.toml").write_text(text + '[conditions]\nsupplements = ["biotin"]\n')
    own = text.replace("acetate", "glucose") + '[parent]\nfile = "parent.toml"\n'
    (tmp_path / "design.toml").write_text(own)
    result = desk.refills(tmp_path / "design.toml")
    assert answer_of(result.parent).groups == answer_of(desk.refills(tmp_path / "parent.toml")).groups
    shunt = next(each for each in result.folds if each.kind == "group" and "malate synthase" in each.label)
    assert shunt.now and shunt.needs == 0.0 and shunt.fold == 0.0
    new = next(each for each in result.folds if each.kind == "group" and "carboxylation" in each.label)
    assert new.needs and not new.now and new.fold is None
    (tmp_path / "parent.toml").write_text(text.replace("corynebacterium-glutamicum", "escherichia-coli"))
    with pytest.raises(InputError, match="the parental strain is of Escherichia coli") as caught:
        desk.refills(tmp_path / "design.toml")
    assert caught.value.key == "parent" and caught.value.line == 5
    with pytest.raises(InputError, match="only a scenario that stands in a file"):
        desk.refills({**DESIGN, "parent": {"file": "parent.toml"}})


@pytest.mark.parametrize("inside", ["parent", "phase"])
def test_a_parental_file_is_one_strain_under_one_condition(desk: Desk, tmp_path: Path, inside: str) -> None:
    text = 'host = "corynebacterium-glutamicum"\ngrowth = "0.2 /h"\nfeed = [{ substrate = "glucose" }]\n'
    more = {"parent": '[parent]\ngrowth = "0.1 /h"\n', "phase": '[[phase]]\nduration = "1 h"\nbiomass = "1 g/L"\n'}[inside]
    (tmp_path / "a.toml").write_text(text + more)
    (tmp_path / "b.toml").write_text(text + '[parent]\nfile = "a.toml"\n')
    with pytest.raises(InputError, match=f"a.toml has a {inside} itself"):
        desk.refills(tmp_path / "b.toml")


@pytest.mark.parametrize(("text", "key", "line", "words"), [
    ('[parent]\nfeed = [{ substrate = "glucos", uptake = "3 mmol/gDW/h" }]', "parent.feed[0].substrate", 5, "unknown compound"),
    ('[parent.conditions]\ncircumstances = ["moonlight"]', "parent.conditions.circumstances[0]", 5, "unknown circumstance"),
    ('[[phase]]\nduration = "1 h"\nbiomass = "1 g/L"\noutlet = [{ product = "lysin", rate = "1 mmol/gDW/h" }]', "phase[0].outlet[0].product", 7, "unknown outlet"),
])
def test_a_message_points_to_where_the_value_stands(desk: Desk, tmp_path: Path, text: str, key: str, line: int, words: str) -> None:
    path = tmp_path / "scenario.toml"
    path.write_text('host = "corynebacterium-glutamicum"\ngrowth = "0.2 /h"\nfeed = [{ substrate = "glucose" }]\n' + text + "\n")
    with pytest.raises(InputError, match=words) as caught:
        desk.refills(path)
    assert (caught.value.file, caught.value.key, caught.value.line) == (str(path), key, line)


def test_biomass_is_integrated_exactly() -> None:
    for start, growth, hours in ((1.0, 0.25, 12.0), (20.0, 0.02, 36.0), (3.0, 0.0, 5.0), (2.0, 1e-12, 7.0)):
        found = integrate.solve_ivp(lambda _, y, mu=growth: [mu * y[0], y[0]], (0, hours), [start, 0.0], rtol=1e-12, atol=1e-12)
        assert integral(start, growth, hours) == pytest.approx(float(found.y[1, -1]), rel=1e-9)


def test_each_phase_answers_as_a_scenario_of_its_own(desk: Desk, planned: Result) -> None:
    first = desk.refills({**DESIGN, "growth": "0.25 /h", "outlet": []})
    second = desk.refills({**DESIGN, "growth": "0.02 /h", "conditions": {**DESIGN["conditions"], "release": ["acetate", "glycine"]}})
    assert [answer_of(each) for each in planned.phases] == [answer_of(first), answer_of(second)]
    assert answer_of(planned) == answer_of(second) and answer_of(desk.refills(PLAN, phase="growth")) == answer_of(first)
    assert planned.phases[1].case.releases == ("acetate", "glycine") and planned.phases[1].case.oxygen == "aerobic"


def test_totals_are_rates_times_the_integral(planned: Result) -> None:
    plan = planned.plan
    assert plan is not None and plan.binding == "production" and plan.findings == ()
    one, two = plan.phases
    assert one.end == pytest.approx(math.exp(3)) and two.start == one.end and two.begins == 12 and plan.hours == 48
    assert plan.final_biomass == pytest.approx(math.exp(3 + 0.72)) and plan.integral == pytest.approx(one.integral + two.integral)
    nominal = [answer_of(each).groups[0].nominal or 0.0 for each in planned.phases]
    group = plan.groups[0]
    assert group.total == pytest.approx(sum(rate * row.integral for rate, row in zip(nominal, plan.phases, strict=True)))
    assert group.peak == max(nominal) and group.rate == pytest.approx(group.total / plan.integral)
    assert group.at_end == pytest.approx(max(rate * row.end for rate, row in zip(nominal, plan.phases, strict=True)))
    assert group.cover == pytest.approx(3.1 / max(nominal)) and two.binds and not one.binds
    lysine = next(each for each in plan.flows if each.kind == "product")
    mass = next(each.molar_mass for each in planned.case.demands)
    assert lysine.total == pytest.approx(1.4 * two.integral) and lysine.grams == pytest.approx(lysine.total * mass / 1000)
    assert lysine.per_biomass == pytest.approx(lysine.total / plan.final_biomass) and lysine.at_end == pytest.approx(1.4 * two.end)
    assert plan.refilled == pytest.approx(sum(row.refilled * row.integral for row in plan.phases))


def test_carbon_closes_over_the_plan(planned: Result, desk: Desk) -> None:
    """What is fed = product + CO2 + acetate + biomass made, in mmol C per litre; biomass by its composition."""
    plan = planned.plan
    assert plan is not None
    carbon = {"glucose": -6, "l-lysine": 6, "carbon-dioxide": 1}
    total = sum(carbon[each.what] * each.total for each in plan.flows if each.what in carbon)
    host = desk.facts.hosts["corynebacterium-glutamicum"]
    cells = sum(float(part.amount) * desk.facts.compounds[part.compound].formula.get("C", 0) for part in host.composition)
    leaves = 0.0
    for row, result in zip(plan.phases, planned.phases, strict=True):
        leaves += sum(-each.rate * desk.facts.compounds[each.compound].formula.get("C", 0) * row.integral for each in answer_of(result).crossings
                      if each.compound not in ("glucose", "carbon-dioxide"))
    assert total + cells * (plan.final_biomass - 1) + leaves == pytest.approx(0.0, abs=1e-6 * 6 * 2000)
    glucose = next(each for each in plan.flows if each.what == "glucose")
    formula = desk.facts.compounds["glucose"]
    assert glucose.grams == pytest.approx(glucose.total * float(neutral_mass(formula.formula, 0)) / 1000)


def test_a_phase_may_begin_with_other_biomass(desk: Desk) -> None:
    again = [PHASES[0], {**PHASES[1], "biomass": "40 g/L"}]
    plan = desk.refills({**DESIGN, "phase": again}).plan
    assert plan is not None and plan.phases[1].start == 40 and "starts with 40 gDW/L as stated" in plan.findings[0]


def test_growth_as_a_yield_and_phases_without_capacities(desk: Desk) -> None:
    free = {key: value for key, value in DESIGN.items() if key != "strain"}
    fed = {"duration": "10 h", "biomass": "2 g/L", "growth": "0.05 gDW/mmol", "feed": [{"substrate": "glucose", "uptake": "5 mmol/gDW/h"}]}
    rest = {"duration": "10 h", "growth": 0}
    plan = desk.refills({**free, "phase": [fed, rest]}).plan
    assert plan is not None and plan.phases[0].growth == pytest.approx(0.25) and plan.phases[1].integral == pytest.approx(10 * plan.phases[0].end)
    most = max(plan.phases, key=lambda row: row.refilled)
    assert plan.phases[0].name == "phase 1" and plan.binding == most.name and f"{most.refilled:.4g}" in plan.because


def test_a_phase_that_can_not_run_binds(desk: Desk) -> None:
    stuck = [PHASES[0], {**PHASES[1], "strain": {"remove": ["pyc", "ppc", "pck"]}}]
    result = desk.refills({**DESIGN, "strain": {}, "phase": stuck})
    assert result.plan is not None and result.plan.because == "it can't run" and answer_of(result).answer == "infeasible"
    assert "leave out" in result.plan.findings[0]


def test_one_phase_is_asked_for_by_name(desk: Desk) -> None:
    assert desk.drains(PLAN, phase="growth").case.growth == 0.25
    assert desk.grows(PLAN, phase="production").case.growth == 0.02
    assert desk.ceiling(PLAN, phase="production").kind == "ceiling"
    for ask in (desk.drains, desk.grows, desk.ceiling):
        with pytest.raises(InputError, match="has phases") as caught:
            ask(PLAN)
        assert caught.value.key == "--phase" and "production" in str(caught.value)
    with pytest.raises(InputError, match="no phase is called 'prodction'") as caught:
        desk.refills(PLAN, phase="prodction")
    assert "production" in caught.value.near


def test_a_plan_beside_its_parent_and_with_bands(desk: Desk) -> None:
    question = {**PLAN, "parent": {"growth": "0.2 /h"}, "uncertainty": {"facts": "values", "growth": ["0.01 /h", "0.03 /h"]}}
    result = desk.refills(question, bands=30)
    assert result.plan is not None and result.parent is not None and result.bands is not None
    assert next(each.needs for each in result.folds if each.kind == "group") == answer_of(result.phases[1]).groups[0].nominal
    assert next(each.nominal for each in result.bands.bands if each.kind == "group") == answer_of(result.phases[1]).groups[0].nominal
