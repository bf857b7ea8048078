"""Distributions against scipy, the Latin hypercube's slices, and Sobol indices of a function with a known answer."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from headrace.errors import MissingPartError
from headrace.solve import sampling
from headrace.solve.sampling import Spread

U = np.linspace(0.001, 0.999, 97)
P95 = 1.6448536269514722


def test_the_inverse_distributions_equal_those_of_scipy() -> None:
    assert sampling.values(Spread("uniform", 1, 3), U) == pytest.approx(stats.uniform(1, 2).ppf(U))
    assert sampling.values(Spread("triangular", 1, 5, peak=2), U) == pytest.approx(stats.triang(0.25, 1, 4).ppf(U))
    log = Spread("lognormal", 0.5, 8)
    assert sampling.values(log, U) == pytest.approx(stats.lognorm(np.log(16) / (2 * P95), scale=2).ppf(U))
    assert sampling.values(log, np.array([0.05, 0.95])) == pytest.approx([0.5, 8])
    normal = Spread("normal", 10, 12, floor=0)
    assert sampling.values(normal, U) == pytest.approx(stats.norm(11, 1 / P95).ppf(U))
    cut = sampling.values(Spread("normal", -1, 3), U)
    assert cut.min() > 0 and cut == pytest.approx(stats.truncnorm(-P95 / 2, np.inf, 1, 2 / P95).ppf(U))


@pytest.mark.parametrize(
    ("given", "words"),
    [(("beta", 0, 1), "no distribution"), (("uniform", 2, 2), "low end"), (("triangular", 1, 2, 3), "peak"), (("lognormal", 0, 1), "at or below 0")],
)
def test_a_spread_that_is_none(given: tuple[object, ...], words: str) -> None:
    with pytest.raises(ValueError, match=words):
        Spread(*given)  # type: ignore[arg-type]


def test_a_hypercube_has_one_point_in_each_slice() -> None:
    points = sampling.hypercube(50, 4, seed=7)
    for column in points.T:
        assert sorted(np.floor(column * 50).astype(int)) == list(range(50))
    assert (points == sampling.hypercube(50, 4, seed=7)).all() and (points != sampling.hypercube(50, 4, seed=8)).any()


def ishigami(u: np.ndarray) -> np.ndarray:
    x = np.pi * (2 * u - 1)
    return np.sin(x[:, 0]) + 7 * np.sin(x[:, 1]) ** 2 + 0.1 * x[:, 2] ** 4 * np.sin(x[:, 0])


def test_sobol_indices_of_the_ishigami_function(capsys: pytest.CaptureFixture[str]) -> None:
    """Ishigami T, Homma T (1990); a = 7, b = 0.1: S = 0.3139, 0.4424, 0; T = 0.5576, 0.4424, 0.2437 (Saltelli A et al. 2008)."""
    with capsys.disabled():
        for blocks in (256, 1024, 4096):
            analysis = sampling.Saltelli(blocks, 3, seed=3)
            found = analysis.indices(ishigami(analysis.points))
            print(f"\nIshigami, {blocks} blocks: " + ", ".join(f"S {i.first:.4f} T {i.total:.4f}" for i in found), end="")
    assert [i.first for i in found] == pytest.approx([0.3139, 0.4424, 0.0], abs=0.01)
    assert [i.total for i in found] == pytest.approx([0.5576, 0.4424, 0.2437], abs=0.01)
    assert all(0 < i.first_error < 0.06 and 0 < i.total_error < 0.06 for i in found)
    again = sampling.Saltelli(4096, 3, seed=3)
    assert again.indices(ishigami(again.points)) == found


def test_an_output_that_does_not_vary_has_no_indices() -> None:
    analysis = sampling.Saltelli(64, 2, seed=0)
    assert analysis.indices(np.ones(len(analysis.points))) == ()


def test_blocks_with_a_missing_output_are_left_out_whole() -> None:
    analysis = sampling.Saltelli(1024, 3, seed=3)
    outputs = ishigami(analysis.points)
    outputs[7] = np.nan
    found = analysis.indices(outputs)
    assert [i.first for i in found] == pytest.approx([0.3139, 0.4424, 0.0], abs=0.06)
    with pytest.raises(ValueError, match="too few"):
        analysis.indices(np.full(len(outputs), np.nan))


def test_a_missing_part_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(__import__("sys").modules, "scipy.stats", None)
    with pytest.raises(MissingPartError, match="sampling uncertain inputs needs scipy") as caught:
        sampling.hypercube(4, 1, 0)
    assert caught.value.exit_code == 3 and "headrace[depth]" in caught.value.hint
    monkeypatch.setitem(__import__("sys").modules, "SALib.sample", None)
    with pytest.raises(MissingPartError, match="needs SALib"):
        sampling.Saltelli(4, 1, 0)
