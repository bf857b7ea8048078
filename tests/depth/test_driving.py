"""The max-min driving force against paper, and against an independent solver on the same data."""

from __future__ import annotations

import random
from collections.abc import Mapping, Sequence
from math import log

import numpy as np
import pytest
from scipy.optimize import linprog

from headrace.network import drive as module
from headrace.network.driving import Key, Pair, max_min
from headrace.network.energetics import RT, Energies
from headrace.network.segment import segment
from headrace.network.triggers import leans_on
from headrace.run import Desk
from headrace.values.answers import Result

A, B, C, D = (("a", "x"), ("b", "x"), ("c", "x"), ("d", "x"))
WIDE = dict.fromkeys((A, B, C, D), (1e-6, 1e-2))


def independent(
    energies: Sequence[float], counts: Sequence[Mapping[Key, float]], bounds: Mapping[Key, tuple[float, float]], pairs: Sequence[Pair] = ()
) -> float:
    """The same LP through scipy."""
    keys = sorted(bounds)
    rows = [[RT * each.get(key, 0.0) for key in keys] + [1.0] for each in counts]
    right = [-energy for energy in energies]
    for pair in pairs:
        row = [float(key == pair.first) - float(key == pair.second) for key in keys] + [0.0]
        rows += [row, [-value for value in row]]
        right += [log(pair.high), -log(pair.low)]
    limits = [(log(low), log(high)) for low, high in (bounds[key] for key in keys)] + [(None, None)]
    found = linprog([0.0] * len(keys) + [-1.0], A_ub=rows, b_ub=right, bounds=limits, method="highs-ds")
    assert found.status == 0
    return -float(found.fun)


def test_one_step_on_paper() -> None:
    """a -> b at +10 kJ/mol: F = -10 + RT ln(1e-2 / 1e-6) = -10 + 2.47897 * 9.21034 = 12.8322; a up or b down, RT each."""
    found = max_min([10.0], [{A: -1, B: 1}], WIDE)
    assert found.force == pytest.approx(12.8322, abs=1e-4)
    assert found.weights == pytest.approx((1.0,))
    assert found.slopes == pytest.approx({A: RT, B: -RT})


def test_two_steps_share_on_paper() -> None:
    """a -> b at +10, b -> c at -2: with b free both get F = (-(10 - 2) + RT ln 1e4) / 2 = 7.4161."""
    found = max_min([10.0, -2.0], [{A: -1, B: 1}, {B: -1, C: 1}], WIDE)
    assert found.force == pytest.approx((-8 + RT * log(1e4)) / 2)
    assert found.weights == pytest.approx((0.5, 0.5))
    assert found.forces == pytest.approx((found.force, found.force))


def test_a_far_step_does_not_count() -> None:
    """a -> b at +10, b -> c at -80: b sits at its lower bound, the first step alone limits."""
    found = max_min([10.0, -80.0], [{A: -1, B: 1}, {B: -1, C: 1}], WIDE)
    assert found.force == pytest.approx(-10 + RT * log(1e4))
    assert found.weights == pytest.approx((1.0, 0.0))


def test_a_pair_keeps_its_ratio() -> None:
    """a + c -> b + d at 0, d/c at least 0.1: F = RT ln 1e4 + RT ln 10."""
    found = max_min([0.0], [{A: -1, C: -1, B: 1, D: 1}], WIDE, [Pair(D, C, 0.1, 10.0)])
    assert found.force == pytest.approx(RT * log(1e5))


def test_a_slope_is_what_a_wider_bound_gives() -> None:
    energies, counts = [12.0, -3.0, 4.0], [{A: -1, B: 1}, {B: -2, C: 1}, {C: -1, D: 1}]
    found = max_min(energies, counts, WIDE)
    assert found.slopes
    for key, slope in found.slopes.items():
        low, high = WIDE[key]
        step = 1e-4
        moved = WIDE | {key: (low, high * (1 + step)) if slope > 0 else (low * (1 - step), high)}
        gain = max_min(energies, counts, moved).force - found.force
        assert gain == pytest.approx(abs(slope) * log(1 + step) if slope > 0 else -abs(slope) * log(1 - step), rel=1e-3)


def test_wrong_input_is_refused() -> None:
    with pytest.raises(ValueError, match="no reaction"):
        max_min([], [], WIDE)
    with pytest.raises(ValueError, match="no usable range of concentration for e"):
        max_min([1.0], [{("e", "x"): -1.0}], WIDE)
    with pytest.raises(ValueError, match="no usable range"):
        max_min([1.0], [{A: -1.0}], {A: (1e-2, 1e-6)})


@pytest.mark.parametrize("seed", range(40))
def test_an_independent_solver_agrees(seed: int) -> None:
    """Random chains and branches with ranges of several widths."""
    draw = random.Random(seed)
    keys = [(f"m{number}", "x") for number in range(draw.randint(3, 9))]
    bounds = {}
    for key in keys:
        low = 10 ** draw.uniform(-6, -3)
        bounds[key] = (low, low * 10 ** draw.uniform(0.1, 4))
    counts = []
    for _ in range(draw.randint(2, 8)):
        taken, made = draw.sample(keys, 2)
        counts.append({taken: -float(draw.choice((1, 1, 2))), made: float(draw.choice((1, 1, 2)))})
    energies = [draw.uniform(-40, 30) for _ in counts]
    pairs = [Pair(keys[0], keys[1], 0.1, 10.0)] if draw.random() < 0.5 else []
    used = {key for each in counts for key in each} | {key for pair in pairs for key in (pair.first, pair.second)}
    kept = {key: bounds[key] for key in used}
    try:
        expected = independent(energies, counts, kept, pairs)
    except AssertionError:  # the pair's ratio lies outside the two ranges
        with pytest.raises(RuntimeError, match="infeasible"):
            max_min(energies, counts, kept, pairs)
        return
    found = max_min(energies, counts, kept, pairs)
    assert found.force == pytest.approx(expected, abs=1e-6)
    assert sum(found.weights) == pytest.approx(1.0)
    assert min(found.forces) == pytest.approx(found.force, abs=1e-6)


SCENARIOS = ["arginine-on-glucose", "glutamate-on-acetate", "lysine-on-glucose", "heme-from-succinyl-coa", "succinate-without-oxygen"]


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk()


@pytest.mark.parametrize("name", SCENARIOS)
def test_an_independent_solver_agrees_on_the_examples(desk: Desk, root: object, name: str) -> None:
    result = desk.refills(f"{root}/examples/scenarios/{name}.toml")
    found = module.drives(result.facts, result.case, result.answer, result.drains)
    assert found
    for each in found:
        assert each.force == pytest.approx(again(result, each), abs=1e-6)


def again(result: Result, found: module.Drive) -> float:
    """One drive's programme, put together anew from its steps and solved by scipy."""
    facts, case, energies = result.facts, result.case, Energies(result.facts)
    refill = next(row for row in result.answer.refills if row.refill == found.refill and leans_on(row))
    path = [s for s in segment(facts, case, result.answer, refill, result.drains)]
    counted = [(step, shown) for step, shown in zip(path, found.steps, strict=True) if shown.counted]
    carbon = set(facts.roles["inorganic-carbon"])
    silent = set(facts.roles["water"]) | set(facts.roles["proton"])
    counts = []
    for step, _ in counted:
        row, each = case.rows[step.row], {}
        for term in facts.reactions[row.reaction].terms:
            name = "bicarbonate" if term.compound in carbon else term.compound
            place = next(p for n, p in found.ranges if n == name) if name not in silent else ""
            if name not in silent:
                place = next((p for n, p in found.ranges if n == name and p == row.place), place)
                each[name, place] = each.get((name, place), 0.0) + step.sign * float(term.count)
        counts.append(each)
    bounds = {key: (one.low, one.high) for key, one in found.ranges.items()}
    pairs = []
    for (name, place), one in found.ranges.items():
        other = (facts.electron_pairs.get(name, ""), place)
        if other in bounds and one.origin == found.ranges[other].origin == "assumed":
            pairs.append(Pair((name, place), other, 0.1, 10.0))
    values = [energies.reaction(case.rows[s.row].reaction, s.sign, found.conditions[shown.place]).value for s, shown in counted]
    return independent([float(v) for v in values if v is not None], counts, bounds, pairs)


def test_a_wider_range_never_lowers_the_force() -> None:
    draw = np.random.default_rng(3)
    counts = [{A: -1.0, B: 1.0}, {B: -1.0, C: 1.0}, {C: -1.0, D: 1.0}]
    for _ in range(20):
        energies = list(draw.uniform(-20, 20, 3))
        narrow = {key: (1e-4, 1e-3) for key in (A, B, C, D)}
        assert max_min(energies, counts, WIDE).force >= max_min(energies, counts, narrow).force - 1e-9
