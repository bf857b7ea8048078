"""Uncertain inputs of a case, and what they do to its requirement. Frozen values."""

from __future__ import annotations

from msgspec import Struct


class Input(Struct, frozen=True):
    """One uncertain quantity. low, high: its ends (uniform, triangular), or its 5 % and 95 % points (normal, lognormal).

    target: growth | outlet | feed | supplement | oxygen-rate | energy | p-o | limit | protein | split | share-of-feed |
    composition; index: which one (position of an outlet or feed, kind of energy, label of a limit, slug of a row or
    supplement, name of a biomass fraction). Numbers are in the case's own units (unit says which); factor and offset turn a
    P/O into motive protons per ATP, factor / value - offset. origin: where the spread comes from. key: in the scenario.
    """

    label: str
    target: str
    index: str
    nominal: float
    low: float
    high: float
    unit: str
    distribution: str = "uniform"
    origin: str = "stated in the scenario"
    source: str = ""
    key: str = ""
    factor: float = 0.0
    offset: float = 0.0


class Band(Struct, frozen=True):
    """Percentiles of one outcome over the samples. kind: group | refill | feed | crossing | ledger; what: its slug.

    nominal: of the case as stated. carried: share of samples in which the capacity is enough (None without a capacity).
    """

    kind: str
    what: str
    label: str
    unit: str
    nominal: float | None
    p5: float
    p50: float
    p95: float
    carried: float | None = None


class Driver(Struct, frozen=True):
    """How much of the variance of one requirement an input explains: alone (first), and with all others (total).

    first is what measuring this input exactly would take off the variance. Errors: half widths of 95 % intervals.
    narrowed: about how wide the band would then be, as a share of now, sqrt(1 - first).
    """

    about: str
    label: str
    input: str
    first: float
    first_error: float
    total: float
    total_error: float
    narrowed: float


class Bands(Struct, frozen=True):
    """The answer. samples = feasible + beyond_capacity + infeasible.

    beyond_capacity: the case can be met in these only without its stated limits; the requirement then counts as it is
    without them. infeasible: not even then; these have no requirement. evaluations: cases solved for samples and drivers.
    """

    samples: int
    seed: int
    feasible: int
    beyond_capacity: int
    infeasible: int
    inputs: tuple[Input, ...]
    bands: tuple[Band, ...]
    drivers: tuple[Driver, ...]
    evaluations: int
    notes: tuple[str, ...] = ()
