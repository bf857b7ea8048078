"""Samples of uncertain inputs and what they explain: distributions, Latin hypercube, Sobol indices.

Everything starts from points u in the unit cube (0, 1)^d; `values` turns them into numbers by each distribution's
inverse. The same seed gives the same points. scipy and SALib are optional parts: only these calls load them.

Methods: McKay MD, Beckman RJ, Conover WJ (1979) Technometrics 21:239-245 (Latin hypercube); Saltelli A (2002) Comput Phys
Commun 145:280-297 and Saltelli A et al. (2010) Comput Phys Commun 181:259-270 (Sobol indices), from memory.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from headrace.errors import MissingPartError
from headrace.solve.linear import Floats

DISTRIBUTIONS = ("uniform", "triangular", "normal", "lognormal")
_P95 = 1.6448536269514722  # of the standard normal distribution
_HINT = 'pip install "headrace[depth]"'


@dataclass(frozen=True)
class Spread:
    """One input. low, high: the ends (uniform, triangular), or the 5 % and 95 % points (normal, lognormal).

    peak: the mode of a triangle, else not used. Values below `floor` do not occur (the distribution is cut there).
    """

    distribution: str
    low: float
    high: float
    peak: float = 0.0
    floor: float = 0.0

    def __post_init__(self) -> None:
        if self.distribution not in DISTRIBUTIONS:
            raise ValueError(f"no distribution is called {self.distribution!r}; there are {', '.join(DISTRIBUTIONS)}")
        if not self.low < self.high:
            raise ValueError("the low end lies not below the high end")
        if self.distribution == "triangular" and not self.low <= self.peak <= self.high:
            raise ValueError("the peak of a triangle lies between its ends")
        if self.distribution == "lognormal" and self.low <= 0:
            raise ValueError("a lognormal distribution has no values at or below 0")


def values(spread: Spread, u: Floats) -> Floats:
    """The inverse distribution function at u, each in (0, 1).

    >>> [float(v) for v in values(Spread("uniform", 1.0, 3.0), np.array([0.25, 0.5]))]
    [1.5, 2.0]
    """
    low, high = spread.low, spread.high
    if spread.distribution == "uniform":
        return low + u * (high - low)
    if spread.distribution == "triangular":
        share = (spread.peak - low) / (high - low)
        rising = low + np.sqrt(u * share) * (high - low)
        return np.where(u < share, rising, high - np.sqrt((1 - u) * (1 - share)) * (high - low))
    if spread.distribution == "lognormal":
        middle, deviation = (np.log(low) + np.log(high)) / 2, (np.log(high) - np.log(low)) / (2 * _P95)
        return np.asarray(np.exp(middle + deviation * _special().ndtri(u)))
    middle, deviation = (low + high) / 2, (high - low) / (2 * _P95)
    below = float(_special().ndtr((spread.floor - middle) / deviation))
    return np.asarray(middle + deviation * _special().ndtri(below + u * (1 - below)))


def hypercube(number: int, dimensions: int, seed: int) -> Floats:
    """A Latin hypercube: (number, dimensions) points in (0, 1), one in each of `number` slices of each dimension."""
    return np.asarray(_qmc().LatinHypercube(d=dimensions, rng=np.random.default_rng(seed)).random(number))


@dataclass(frozen=True)
class Index:
    """Sobol indices of one input: the shares of the variance that it explains alone, and with all others.

    Errors are half widths of the 95 % intervals from 200 resamples.
    """

    first: float
    first_error: float
    total: float
    total_error: float


class Saltelli:
    """The points of a Sobol analysis: blocks of dimensions + 2 points. points: (blocks * (dimensions + 2), dimensions)."""

    def __init__(self, blocks: int, dimensions: int, seed: int) -> None:
        if blocks < 2 or blocks & (blocks - 1):
            raise ValueError("the number of blocks must be a power of two")
        self.dimensions, self.seed = dimensions, seed
        self._problem = {"num_vars": dimensions, "names": [f"x{i}" for i in range(dimensions)],
                         "bounds": [[0.0, 1.0]] * dimensions}
        sampled = _salib()[0].sample(self._problem, blocks, calc_second_order=False, seed=seed)
        self.points: Floats = np.clip(sampled, 1e-12, 1 - 1e-12)

    def indices(self, outputs: Floats) -> tuple[Index, ...]:
        """Indices of each input from one output per point; () when the outputs do not vary.

        Blocks with an output that is not a number are left out whole. Raises ValueError when fewer than two are left.
        """
        blocks = outputs.reshape(-1, self.dimensions + 2)
        whole = blocks[np.isfinite(blocks).all(axis=1)]
        if len(whole) < 2:
            raise ValueError("too few whole blocks for an analysis")
        if np.ptp(whole) <= 1e-12 * max(1.0, float(np.abs(whole).max())):
            return ()
        found = _salib()[1].analyze(self._problem, whole.ravel(), calc_second_order=False, num_resamples=200, seed=self.seed)
        columns = (found["S1"], found["S1_conf"], found["ST"], found["ST_conf"])
        return tuple(Index(*map(float, each)) for each in zip(*columns, strict=True))


def bands(outputs: Floats, percentiles: Sequence[float] = (5.0, 50.0, 95.0)) -> tuple[float, ...]:
    """Percentiles of the outputs that are numbers (linear between order statistics). Raises ValueError if none is.

    >>> bands(np.arange(101.0))
    (5.0, 50.0, 95.0)
    """
    known = outputs[np.isfinite(outputs)]
    if not len(known):
        raise ValueError("no output is a number")
    return tuple(float(p) for p in np.percentile(known, percentiles))


def _qmc() -> Any:
    try:
        from scipy.stats import qmc  # optional, and half a second to load
    except ImportError:
        raise MissingPartError("scipy", "sampling uncertain inputs", _HINT) from None
    return qmc


def _special() -> Any:
    try:
        from scipy import special  # optional, as above
    except ImportError:
        raise MissingPartError("scipy", "sampling uncertain inputs", _HINT) from None
    return special


def _salib() -> tuple[Any, Any]:
    try:
        from SALib.analyze import sobol as analysis  # optional, and more than a second to load
        from SALib.sample import sobol as sample  # as above
    except ImportError:
        raise MissingPartError("SALib", "finding what drives a band", _HINT) from None
    return sample, analysis
