"""Bands: on paper where the requirement is linear, sample by sample against whole cases, converging, repeatable."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from msgspec.structs import replace

from headrace import case as cases
from headrace.errors import InputError, MissingPartError
from headrace.network.aim import Aimed
from headrace.network.build import build
from headrace.network.refills import open_refills
from headrace.network.requirement import in_force
from headrace.run import Desk
from headrace.solve import sampling
from headrace.values.uncertainty import Bands

LYSINE: dict[str, Any] = {
    "host": "corynebacterium-glutamicum", "growth": "0.15 /h", "feed": [{"substrate": "glucose"}],
    "conditions": {"oxygen": "aerobic", "supplements": ["biotin"]}, "strain": {"remove": ["pck"]},
    "outlet": [{"product": "L-lysine", "rate": "1.4 mmol/gDW/h"}],
}
GROUP = "carboxylation-cytosol"


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def asked(base: dict[str, Any], uncertainty: dict[str, Any], **changed: Any) -> dict[str, Any]:
    return {**base, **changed, "uncertainty": {"facts": "values", **uncertainty}}


def solved(desk: Desk, question: dict[str, Any], number: int, seed: int = 1) -> Bands:
    found = desk.refills(question, bands=number, seed=seed).bands
    assert found is not None
    return found


def band(found: Bands, what: str = GROUP) -> tuple[float, float, float]:
    return next((each.p5, each.p50, each.p95) for each in found.bands if each.what == what)


@pytest.fixture(scope="module")
def per_growth(desk: Desk) -> float:
    """Skeletons that a gram of cells takes: the requirement is rate + growth * this, as long as nothing else is removed."""
    answer: Any = desk.refills(LYSINE).answer
    return float((answer.groups[0].nominal - 1.4) / 0.15)


def test_bands_of_a_linear_requirement_are_those_on_paper(desk: Desk, per_growth: float, capsys: pytest.CaptureFixture[str]) -> None:
    """requirement = 1.4 + k growth, growth uniform on 0.1 to 0.2: P5, P50, P95 at growth 0.105, 0.15, 0.195."""
    question = asked(LYSINE, {"growth": ["0.1 /h", "0.2 /h"]})
    exact = [1.4 + per_growth * growth for growth in (0.105, 0.15, 0.195)]
    gaps = []
    with capsys.disabled():
        for number in (50, 200, 800, 3200):
            found = band(solved(desk, question, number))
            gaps.append(max(abs(one - two) for one, two in zip(found, exact, strict=True)))
            print(f"\n{number} samples: P5 {found[0]:.5f}, P50 {found[1]:.5f}, P95 {found[2]:.5f}; off by {gaps[-1]:.1e}", end="")
    assert gaps[-1] < 1e-4 and gaps[-1] < gaps[0]
    assert all(gap < 2 * 0.1 * per_growth / number for gap, number in zip(gaps, (50, 200, 800, 3200), strict=True))


def test_drivers_of_a_linear_requirement_are_those_on_paper(desk: Desk, per_growth: float) -> None:
    """Shares of the variance: k^2 (0.1)^2 / 12 against sd^2 (the normal one is cut at 0, far away)."""
    product = [{"product": "L-lysine", "rate": "0.8 mmol/gDW/h"}]  # at more than this, corners of the cube need NADPH by a cycle
    question = asked(LYSINE, {"growth": ["0.1 /h", "0.2 /h"], "outlet": {"L-lysine": {"sd": "0.1 mmol/gDW/h"}}}, outlet=product)
    found = solved(desk, question, 1000)
    parts = {"growth": per_growth**2 * 0.01 / 12, "L-lysine": 0.01}
    for driver in (each for each in found.drivers if each.about == GROUP):
        share = parts[driver.input] / sum(parts.values())
        assert abs(driver.first - share) < driver.first_error < 0.15 and driver.total == pytest.approx(share, abs=0.03)
        assert driver.narrowed == pytest.approx(math.sqrt(1 - min(1, driver.first)))
    middle, deviation = 0.8 + 0.15 * per_growth, math.sqrt(sum(parts.values()))
    assert band(found)[1] == pytest.approx(middle, abs=0.01)
    assert band(found)[2] - band(found)[0] == pytest.approx(2 * 1.645 * deviation, rel=0.05)


MANY = [
    asked(LYSINE, {
        "growth": {"low": "0.05 /h", "high": "0.25 /h", "distribution": "triangular"}, "maintenance": ["1 mmol/gDW/h", "3 mmol/gDW/h"],
        "growth-associated-atp": {"low": "25 mmol/gDW", "high": "60 mmol/gDW", "distribution": "lognormal"},
        "p-o-nadh": ["1.1 mol/mol", "1.5 mol/mol"], "outlet": {"L-lysine": {"sd": "0.2 mmol/gDW/h"}},
        "limit": {"pyruvate-carboxylase": ["1.2 mmol/gDW/h", "2.0 mmol/gDW/h"]}, "split": {"pyruvate carboxylase": ["0.8 mol/mol", "0.99 mol/mol"]},
        "composition": {"protein": ["80 %", "120 %"]}},
        energy={"p-o-nadh": "1.4 mol/mol"},
        strain={"remove": ["pck"], "limit": {"pyruvate-carboxylase": "1.6 mmol/gDW/h", "pep-carboxylase": "0.3 mmol/gDW/h"}}),
    asked({"host": "escherichia-coli", "growth": "0.02 gDW/mmol", "feed": [{"substrate": "glycerol"}, {"substrate": "glucose", "uptake": "3 mmol/gDW/h"}],
           "conditions": {"supplements": [{"compound": "L-aspartate", "rate": "0.2 mmol/gDW/h"}]},
           "outlet": [{"product": "L-threonine", "yield": "0.1 mol/mol"}]},
          {"growth": ["0.01 gDW/mmol", "0.03 gDW/mmol"], "outlet": {"threonine": ["0.05 mol/mol", "0.15 mol/mol"]},
           "feed": {"glucose": ["2 mmol/gDW/h", "4 mmol/gDW/h"]}, "supplement": {"L-aspartate": ["0 mmol/gDW/h", "0.3 mmol/gDW/h"]}}),
    asked({"host": "saccharomyces-cerevisiae", "growth": "0.1 /h", "feed": [{"substrate": "glucose", "uptake": "8 mmol/gDW/h"}],
           "conditions": {"oxygen": "limited", "oxygen-rate": "2 mmol/gDW/h", "release": ["ethanol", "glycerol"]}, "outlet": [{"product": "succinate", "productivity": "1 g/L/h", "biomass": "20 g/L", "form": "succinic acid"}]},
          {"growth": ["0.05 /h", "0.15 /h"], "oxygen-rate": ["1 mmol/gDW/h", "4 mmol/gDW/h"], "outlet": {"succinate": ["0.5 g/L/h", "1.5 g/L/h"]}}),
]


@pytest.mark.parametrize("question", MANY, ids=lambda question: question["host"])
def test_each_sample_is_a_case_of_its_own(desk: Desk, question: dict[str, Any]) -> None:
    """20 samples, each built and solved whole, give the same percentiles, states and capacities."""
    found = solved(desk, question, 20, seed=5)
    case = desk._drawn(desk.scenario(question))[0]
    given = case.uncertain
    assert len(given) == sum(len(v) if isinstance(v, dict) and k in ("outlet", "limit", "split", "feed", "supplement", "composition") else 1
                             for k, v in question["uncertainty"].items() if k != "facts")
    spreads = [sampling.Spread(i.distribution, i.low, i.high, i.nominal) for i in given]
    u = sampling.hypercube(20, len(given), 5)
    states, groups = [], {each.what: [] for each in found.bands if each.kind == "group"}  # type: ignore[var-annotated]
    for row in u:
        values = [float(sampling.values(spread, np.array([at]))[0]) for spread, at in zip(spreads, row, strict=True)]
        facts, sampled = cases.apply(desk.facts, case, given, values)
        state = 0
        net, answer = in_force(build(facts, sampled))
        if not isinstance(answer, Aimed):
            state = 1
            net, answer = in_force(build(facts, replace(sampled, limits=())))
        states.append(state if isinstance(answer, Aimed) else 2)
        if isinstance(answer, Aimed):
            for what, rates in groups.items():
                rates.append(sum(answer.rate(r.column) for r in open_refills(net) if r.group == what and r.column is not None))
    assert [states.count(k) for k in range(3)] == [found.feasible, found.beyond_capacity, found.infeasible]
    assert found.feasible + found.beyond_capacity >= 10
    for what, rates in groups.items():
        assert band(found, what) == pytest.approx(np.percentile(rates, (5, 50, 95)), rel=2e-6, abs=2e-6)


def test_a_sample_beyond_a_limit_counts_with_what_it_needs(desk: Desk, per_growth: float) -> None:
    """The capacity of 1.8 carries growth up to (1.8 - 1.4) / k; the band is not cut off there."""
    limits = {"pyruvate-carboxylase": "1.6 mmol/gDW/h", "pep-carboxylase": "0.2 mmol/gDW/h"}
    question = asked(LYSINE, {"growth": ["0.1 /h", "0.2 /h"]}, strain={"remove": ["pck"], "limit": limits})
    found = solved(desk, question, 400)
    share = ((1.8 - 1.4) / per_growth - 0.1) / 0.1
    assert found.feasible / 400 == pytest.approx(share, abs=0.01) and found.infeasible == 0
    group = next(each for each in found.bands if each.what == GROUP)
    assert group.carried == pytest.approx(share, abs=0.01) and group.p95 == pytest.approx(1.4 + per_growth * 0.195, abs=2e-3)


def test_the_same_seed_gives_the_same_bands(desk: Desk) -> None:
    question = asked(LYSINE, {"growth": ["0.1 /h", "0.2 /h"], "maintenance": ["1 mmol/gDW/h", "3 mmol/gDW/h"]})
    first, second, other = (solved(desk, question, 40, seed=seed) for seed in (4, 4, 5))
    assert first == second and band(first) != band(other)


def test_facts_bring_their_ranges(desk: Desk) -> None:
    found = desk.case({**LYSINE, "strain": {"limit": {"pyruvate-carboxylase": "0.1 U/mg"}}}).uncertain
    assert {each.target for each in found} == {"energy", "split", "protein"}
    assert all(each.low < each.high and each.origin == "the host's facts" for each in found)
    stated = desk.case({**LYSINE, "uncertainty": {"maintenance": ["1 mmol/gDW/h", "3 mmol/gDW/h"]}}).uncertain
    assert [each.low for each in stated if each.index == "maintenance"] == [1.0]
    assert desk.case({**LYSINE, "energy": {"maintenance": "2 mmol/gDW/h"}, "uncertainty": {"facts": "values"}}).uncertain == ()


def test_ranges_are_read_as_the_quantity_itself(desk: Desk) -> None:
    """Grams and productivities become moles by the same rule; sd is 1.645 times to either side."""
    base = {**LYSINE, "outlet": [{"product": "L-lysine", "productivity": "2 g/L/h", "biomass": "10 g/L", "form": "free base"}]}
    given = desk.case(asked(base, {"outlet": {"lysine": ["1 g/L/h", "3 g/L/h"]}, "growth": {"sd": "0.01 /h"}})).uncertain
    growth, lysine = given
    assert lysine.nominal == pytest.approx((lysine.low + lysine.high) / 2) and lysine.low == pytest.approx(1000 / 146.19 / 10, rel=1e-4)
    assert growth.high - growth.nominal == pytest.approx(1.6449 * 0.01, rel=1e-4) and growth.distribution == "normal"


def test_what_can_not_be_sampled_is_said(desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    with pytest.raises(InputError, match="nothing is uncertain"):
        desk.refills(asked(LYSINE, {}), bands=100)
    with pytest.raises(InputError, match="out of reason"):
        desk.refills(asked(LYSINE, {"growth": ["0.1 /h", "0.2 /h"]}), bands=3)
    monkeypatch.setitem(__import__("sys").modules, "scipy.stats", None)
    with pytest.raises(MissingPartError, match="scipy"):
        desk.refills(asked(LYSINE, {"growth": ["0.1 /h", "0.2 /h"]}), bands=50)
