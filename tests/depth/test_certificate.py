"""Optima proven in fractions: pivots against an independent solver, tampering, every example and 200 random cases."""

from __future__ import annotations

import random
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

from headrace.network import aim, exactly
from headrace.network.build import build, programme
from headrace.run import Desk
from headrace.solve.certificate import Proof, certify, check, ordered_basis, prove, refute, rounded
from headrace.solve.linear import BASIC, LOWER, Basis
from headrace.solve.pivots import settle
from headrace.solve.vertex import Rational
from tests.depth.asked import question
from tests.network import world

EXAMPLES = sorted((Path(__file__).parents[2] / "examples" / "scenarios").glob("*.toml"))


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def random_programme(rng: random.Random, rows: int = 5, columns: int = 8) -> tuple[Rational, list[Fraction]]:
    """Small integers; rows of every kind (equal, at least, at most, between, free), columns with and without bounds."""
    entries = [{i: Fraction(rng.randint(-3, 3)) for i in range(rows)} for _ in range(columns)]
    kinds = [rng.choice(["equal", "least", "most", "between", "free"]) for _ in range(rows)]
    at = [Fraction(rng.randint(-4, 6)) for _ in range(rows)]
    low = tuple(None if k in ("most", "free") else b for k, b in zip(kinds, at, strict=True))
    high = tuple(None if k in ("least", "free") else b + (3 if k == "between" else 0) for k, b in zip(kinds, at, strict=True))
    shape = [rng.choice([(0, None), (0, None), (0, 5), (-2, 4), (None, 3), (None, None)]) for _ in range(columns)]
    bounds = [tuple(None if b is None else Fraction(b) for b in s) for s in shape]
    lp = Rational(tuple({i: v for i, v in e.items() if v} for e in entries), low, high,
                  tuple(b[0] for b in bounds), tuple(b[1] for b in bounds))
    return lp, [Fraction(rng.randint(-3, 5)) for _ in range(columns)]


def independently(lp: Rational, cost: list[Fraction]):
    """The same programme through another library's interface."""
    dense = np.zeros((len(lp.row_lower), len(lp.columns)))
    for j, column in enumerate(lp.columns):
        for i, value in column.items():
            dense[i, j] = float(value)
    ub = [(dense[i], float(h)) for i, h in enumerate(lp.row_upper) if h is not None]
    ub += [(-dense[i], -float(b)) for i, b in enumerate(lp.row_lower) if b is not None]
    bounds = [(None if a is None else float(a), None if b is None else float(b)) for a, b in zip(lp.col_lower, lp.col_upper, strict=True)]
    return linprog([float(c) for c in cost], np.array([r for r, _ in ub]) if ub else None, [b for _, b in ub] or None, bounds=bounds)


def slack_basis(lp: Rational) -> Basis:
    places = [LOWER if low is not None else 2 if high is not None else 3 for low, high in zip(lp.col_lower, lp.col_upper, strict=True)]
    return Basis(np.array(places, dtype=np.int32), np.full(len(lp.row_lower), BASIC, dtype=np.int32))


def test_pivots_from_the_slack_basis_agree_with_another_solver() -> None:
    seen = {"optimal": 0, "infeasible": 0, "unbounded": 0}
    for seed in range(300):
        lp, cost = random_programme(random.Random(seed))
        found, other = settle(lp, [cost], slack_basis(lp), 200), independently(lp, cost)
        if other.status == 0:
            assert found.status == "optimal" and found.vertex is not None
            assert float(sum(c * v for c, v in zip(cost, found.vertex.x, strict=True))) == pytest.approx(other.fun, abs=1e-9)
            assert check(lp, [cost], found.vertex.x, found.vertex.duals) == ""
        elif independently(lp, [Fraction(0)] * len(cost)).status == 2:
            assert found.status == "infeasible" and refute(lp).proven
        else:
            assert found.status == "unbounded" and not refute(lp).proven
        seen[found.status] += 1
    assert min(seen.values()) >= 5, seen


def test_the_solvers_basis_is_proven_on_every_kind_of_row_and_column() -> None:
    proven = 0
    for seed in range(300):
        lp, cost = random_programme(random.Random(seed))
        found, other = certify(lp, [cost]), independently(lp, cost)
        assert found.proven == (other.status == 0)
        if found.proven:
            proven += 1
            assert float(found.objectives[0]) == pytest.approx(other.fun, abs=1e-9)
    assert proven > 50


def test_costs_in_order_are_proven_in_order() -> None:
    """x + y = 2, 0 <= x, y <= 3, z in [1, 4]: least z = 1, then least -x: x = 2."""
    one = Fraction(1)
    lp = Rational(({0: one}, {0: one}, {}), (Fraction(2),), (Fraction(2),), (Fraction(0), Fraction(0), one), (Fraction(3), Fraction(3), Fraction(4)))
    found = certify(lp, [[0 * one, 0 * one, one], [-one, 0 * one, -one]])
    assert found.proven and found.objectives == (1, -3) and found.x == (2, 0, 1)


def test_the_world_on_paper_is_proven_to_the_last_digit() -> None:
    names, found = exactly.prove(build(world.facts(), world.case()))
    assert names == ("feed carbon", "total rate") and found.proven
    assert found.objectives[0] == Fraction(81, 10)  # 2.7 fuel of three carbons each
    names, found = exactly.prove(build(world.facts(), world.case(off=("refill",))))
    assert names == ("infeasible",) and found.proven and found.violation > 0
    slack = exactly.prove(build(world.facts(), world.case(slack=0.2)))[1]
    assert slack.proven and slack.objectives[0] == Fraction(81, 10)


def test_a_tampered_basis_is_refused(desk: Desk) -> None:
    """Each of 60 exchanges of a basic and a nonbasic column is refused, unless it is another optimal basis."""
    net = build(desk.facts, desk.case(EXAMPLES[0]))
    lp = exactly.rational(net)
    costs = exactly.costs(net, len(lp.columns))
    basis = ordered_basis(lp, costs)
    honest = prove(lp, costs, basis)
    assert honest.proven
    rng, refused = random.Random(1), 0
    inside, outside = np.flatnonzero(basis.columns == BASIC), np.flatnonzero(basis.columns != BASIC)
    for _ in range(60):
        columns = basis.columns.copy()
        out, into = rng.choice(inside), rng.choice(outside)
        columns[out], columns[into] = columns[into], BASIC
        found = prove(lp, costs, Basis(columns, basis.rows))
        assert not found.proven and found.reason or found.objectives == honest.objectives
        refused += not found.proven
    assert refused > 40
    short = Basis(basis.columns[:-1], basis.rows)
    assert "another size" in prove(lp, costs, short).reason
    full = Basis(np.full_like(basis.columns, BASIC), basis.rows)
    assert not prove(lp, costs, full).proven


@pytest.mark.parametrize("part", ["x", "first duals", "second duals"])
def test_a_tampered_proof_is_refused(desk: Desk, part: str) -> None:
    net = build(desk.facts, desk.case(EXAMPLES[0]))
    lp = exactly.rational(net)
    costs = exactly.costs(net, len(lp.columns))
    honest = certify(lp, costs)
    assert check(lp, costs, honest.x, honest.duals) == ""
    x, duals = list(honest.x), [list(y) for y in honest.duals]
    target = x if part == "x" else duals[part.startswith("second")]
    sides = [None] * len(x) if part == "x" else lp.row_lower
    number = next(i for i, v in enumerate(target) if v and (part == "x" or sides[i]))  # a dual of a row that is not zero
    target[number] *= Fraction(10**12 + 1, 10**12)
    assert check(lp, costs, x, duals) != ""


def certified(desk: Desk, asked: object) -> tuple[Proof, str]:
    """The proof of a case, held against the float answer; (proof, answer)."""
    net = build(desk.facts, desk.case(asked))
    names, proof = exactly.prove(net)
    assert proof.proven, proof.reason
    solved = aim.solve(net)
    if names == ("infeasible",):
        assert not isinstance(solved, aim.Aimed)
        return proof, "infeasible"
    assert isinstance(solved, aim.Aimed)
    printed = {"feed carbon": solved.carbon, "total rate": solved.total}
    for name, value in zip(names, proof.objectives, strict=True):
        assert printed[name] == pytest.approx(float(value), rel=1e-4, abs=1e-6)
    return proof, "feasible"


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda p: p.stem)
def test_every_example_is_certified(desk: Desk, path: Path) -> None:
    certified(desk, path)


def test_200_random_cases_are_certified(desk: Desk, capsys: pytest.CaptureFixture[str]) -> None:
    counts, pivots, digits = {"feasible": 0, "infeasible": 0}, 0, 0
    for seed in range(200):
        proof, answer = certified(desk, question(random.Random(seed)))
        counts[answer] += 1
        pivots, digits = pivots + proof.pivots, max(digits, proof.digits)
    with capsys.disabled():
        print(f"\ncertified: {counts}, {pivots} exact pivots in all, denominators of up to {digits} digits")
    assert min(counts.values()) >= 20


def test_the_exact_programme_is_the_solvers(desk: Desk) -> None:
    for path in EXAMPLES:
        net = build(desk.facts, desk.case(path))
        one, other = rounded(exactly.rational(net)), programme(net)
        assert np.array_equal(one.starts, other.starts) and np.array_equal(one.rows, other.rows)
        for name in ("values", "row_lower", "row_upper", "col_lower", "col_upper"):
            np.testing.assert_allclose(getattr(one, name), getattr(other, name), rtol=1e-14, atol=1e-14)
