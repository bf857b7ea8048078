"""Requirement bands: uncertain inputs sampled, each sample's requirement solved, percentiles and what drives them.

Samples are a seeded Latin hypercube; drivers are Sobol indices from Saltelli blocks of their own. A sample is solved as the
case is (least feed carbon where an uptake is open, then least total rate, measured splits as bounds where they can hold). A
sample that the stated limits forbid counts with the requirement that it has without them, so that a band is not cut off at
a capacity. Inputs are taken as independent.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from headrace import case as cases
from headrace.errors import InputError
from headrace.network import aim
from headrace.network.build import Network, build
from headrace.network.refills import Refill, open_refills
from headrace.network.requirement import group_label, with_shares
from headrace.network.samples import Samples
from headrace.solve import batch, sampling
from headrace.solve.linear import INFINITY, Floats
from headrace.values.answers import GroupRow, RefillAnswer, RefillRow
from headrace.values.case import Case
from headrace.values.facts import Facts
from headrace.values.uncertainty import Band, Bands, Driver

FEWEST, MOST = 20, 1_000_000
RATE = "mmol/gDW/h"
Progress = Callable[..., None]
_NOISE = 1e-9
_DRIVERS_OF = 6  # requirements that are analysed, the largest first


@dataclass(frozen=True)
class _Outcome:
    """One number that is read of each sample. weights: per column of the network.

    limits: labels of those that make up its capacity (() = none). portion: labels of its own and of its group's limits, where
    it takes its share of the group by capacity. by_share: whether it is known only where the measured shares hold.
    """

    kind: str
    what: str
    label: str
    nominal: float | None
    weights: Floats
    limits: tuple[str, ...] = ()
    portion: tuple[tuple[str, ...], ...] = ()
    by_share: bool = False


@dataclass(frozen=True)
class _Solved:
    """read, capacity: (N, outcomes), NaN where there is none. state: (N) 0 feasible, 1 beyond the stated limits, 2 infeasible.

    shared: (N) whether the measured shares hold.
    """

    read: Floats
    state: NDArray[np.intp]
    capacity: Floats
    shared: NDArray[np.bool_]


def bands(
    facts: Facts, case: Case, answer: RefillAnswer, number: int, seed: int, progress: Progress = lambda *said: None
) -> Bands:
    """Bands of a case that was answered. case: as its network was built (drawn). number: samples; seed: of all that is drawn.

    Raises InputError when nothing is uncertain or the number is out of reason, MissingPartError without scipy or SALib.
    """
    if not FEWEST <= number <= MOST:
        raise InputError("the number of samples is out of reason", key="--bands", read=number, accepted=f"{FEWEST} to {MOST}")
    if not case.uncertain:
        accepted = "[uncertainty] in the scenario, or facts with a range"
        raise InputError("nothing is uncertain in this case", file=case.path, key="uncertainty", accepted=accepted)
    study = _Study(facts, case, answer)
    given = case.uncertain
    solved = study.solve(sampling.hypercube(number, len(given), seed), lambda done: progress("samples", done, number))
    if not (solved.state < 2).any():
        accepted = "ranges within which the case is feasible"
        raise InputError("no sample can be met", file=case.path, key="uncertainty", accepted=accepted)
    drivers, notes, evaluations = study.drivers(solved, seed, progress)
    counts = np.bincount(solved.state, minlength=3)
    return Bands(number, seed, int(counts[0]), int(counts[1]), int(counts[2]), given, study.bands(solved), drivers,
                 number + evaluations, (*study.notes(solved), *notes))


class _Study:
    """A case with its inputs, its outcomes, and its programme as a function of the inputs."""

    def __init__(self, facts: Facts, case: Case, answer: RefillAnswer) -> None:
        self.case, self.inputs = case, case.uncertain
        self.spreads = [sampling.Spread(i.distribution, i.low, i.high, i.nominal) for i in self.inputs]
        ends = np.array([sampling.values(spread, np.array([0.02, 0.98])) for spread in self.spreads])

        def network(coordinates: Floats) -> Network:
            return with_shares(build(*cases.apply(facts, case, self.inputs, self._decoded(coordinates))))

        low, high = (self._encoded(ends[:, k][None])[0] for k in (0, 1))
        self.samples = Samples(network, low, high)
        self.net, self.programme = self.samples.net, self.samples.programme
        self.width = len(self.programme.col_lower)
        self.outcomes = tuple(self._outcomes(answer))
        names = [bound.label for bound in self.net.bounds]
        first = self.width + len(self.net.pools)
        self.shares = [first + k for k, name in enumerate(names) if name.startswith("measured share of ")]
        limits = {f"limit of {limit.label}" for limit in case.limits}
        self.limits = [first + k for k, name in enumerate(names) if name in limits]

    def solve(self, u: Floats, step: Callable[[int], None]) -> _Solved:
        """Solve the samples at u, (N, inputs) in the unit cube."""
        values = np.column_stack([sampling.values(spread, u[:, k]) for k, spread in enumerate(self.spreads)])
        points = self.samples.points(self._encoded(values))
        weights = np.array([outcome.weights for outcome in self.outcomes]).reshape(-1, self.width)
        read, state = np.full((len(u), len(weights)), np.nan), np.full(len(u), 2, dtype=np.intp)
        shared = np.zeros(len(u), dtype=bool)
        left = np.arange(len(u))
        told = 0

        def tell(done: int) -> None:
            nonlocal told
            told = max(told, done)
            step(told)

        for found, relaxed in dict.fromkeys(self._relaxations()):
            if len(left):
                good, numbers = self._aimed(_relaxed(points, left, relaxed), weights, tell, len(u) - len(left))
                read[left[good]], state[left[good]] = numbers[good], found
                shared[left[good]] = set(self.shares).isdisjoint(relaxed)
                left = left[~good]
        tell(len(u))
        rates = self._limit_rates(values)
        for k, outcome in enumerate(self.outcomes):
            if outcome.portion:
                own, whole = (sum((rates[label] for label in labels), np.zeros(len(u))) for labels in outcome.portion)
                read[:, k] *= own / whole
            read[~shared, k] = np.nan if outcome.by_share else read[~shared, k]
        capacity = [sum((rates[label] for label in outcome.limits), np.zeros(len(u))) for outcome in self.outcomes]
        return _Solved(np.where(np.abs(read) < _NOISE, 0.0, read), state, np.array(capacity).T, shared | (state == 2))

    def _relaxations(self) -> Iterator[tuple[int, tuple[int, ...]]]:
        """What is tried for a sample, in order: its state if that works, and the rows that are left out."""
        shares, limits = tuple(self.shares), tuple(self.limits)
        yield 0, ()
        yield (0, shares) if shares else (0, ())
        if limits:
            yield 1, limits
            yield 1, shares + limits

    def _limit_rates(self, values: Floats) -> dict[str, Floats]:
        """The rate of each stated limit at each sample, by label."""
        protein = next((values[:, k] for k, i in enumerate(self.inputs) if i.target == "protein"), np.ones(len(values)))
        own = {i.index: values[:, k] for k, i in enumerate(self.inputs) if i.target == "limit"}
        return {limit.label: own.get(limit.label, limit.rate * (protein if limit.low is not None else np.ones(len(values))))
                for limit in self.case.limits}

    def bands(self, solved: _Solved) -> tuple[Band, ...]:
        """Percentiles of each outcome, and how often its capacity is enough."""
        found = []
        for k, outcome in enumerate(self.outcomes):
            column = solved.read[:, k]
            if not np.isfinite(column).any():
                continue
            p5, p50, p95 = sampling.bands(column)
            if max(abs(p5), abs(p95), abs(outcome.nominal or 0.0)) < _NOISE:
                continue
            found.append(Band(outcome.kind, outcome.what, outcome.label, RATE, outcome.nominal, p5, p50, p95,
                              _carried(solved, k) if outcome.limits else None))
        return tuple(found)

    def drivers(self, solved: _Solved, seed: int, progress: Progress) -> tuple[tuple[Driver, ...], tuple[str, ...], int]:
        """Sobol indices of the group requirements, notes on them, and how many cases were solved for them."""
        chosen = [k for k, outcome in enumerate(self.outcomes) if outcome.kind in ("group", "feed")
                  and np.nanmax(np.abs(solved.read[:, k]), initial=0.0) > _NOISE and _varies(solved.read[:, k])][:_DRIVERS_OF]
        if len(self.inputs) == 1 or not chosen:
            alone = self.inputs[0].label if len(self.inputs) == 1 else ""
            made = [self._driver(k, alone, sampling.Index(1.0, 0.0, 1.0, 0.0)) for k in chosen]
            return tuple(made), (), 0
        blocks = _blocks(len(solved.state))
        analysis = sampling.Saltelli(blocks, len(self.inputs), seed)
        number = len(analysis.points)
        again = self.solve(analysis.points, lambda done: progress("drivers", done, number))
        notes = []
        whole = int((again.state.reshape(blocks, -1) < 2).all(axis=1).sum())
        if whole < blocks:
            left_out = f"{blocks - whole} of {blocks} blocks behind the drivers"
            notes.append(f"{left_out} hold a sample without an answer and are left out")
        if whole < 16:
            return (), (*notes, "too few blocks have an answer throughout: no drivers are given"), number
        found = []
        for k in chosen:
            indices = analysis.indices(again.read[:, k])
            found += [self._driver(k, about.label, index) for about, index in zip(self.inputs, indices, strict=bool(indices))]
        return tuple(found), tuple(notes), number

    def notes(self, solved: _Solved) -> tuple[str, ...]:
        """What the reader must know about how this was done."""
        said = ["inputs are taken as independent of one another"]
        if apart := int((~solved.shared).sum()):
            said.append(f"in {apart} samples a measured share can't hold; its refills have no requirement of their own there")
        if not self.samples.learned:
            said.append("inputs multiply one another here in a way that each sample had to be built by itself")
        return tuple(said)

    def _driver(self, k: int, label: str, index: sampling.Index) -> Driver:
        narrowed = math.sqrt(min(1.0, max(0.0, 1.0 - index.first)))
        return Driver(self.outcomes[k].what, self.outcomes[k].label, label, index.first, index.first_error, index.total,
                      index.total_error, narrowed)

    def _aimed(
        self, points: batch.Points, weights: Floats, step: Callable[[int], None], done: int
    ) -> tuple[NDArray[np.bool_], Floats]:
        """The two stages of the aim at all points: flags of those with an answer, and what the weights read."""
        carbon, total = aim.carbon_cost(self.net, self.width), aim.total_cost(self.net, self.width)
        open_ = aim.is_free(self.net) or any(extra.rate is None for extra in self.case.supplements)
        tell = lambda at: step(done + at // 2)  # noqa: E731
        if not open_:
            found = batch.solve(self.programme, total, points, weights, tell)
            return found.optimal, found.read
        first = batch.solve(self.programme, carbon, points, np.zeros((0, self.width)), tell)
        wide = batch.with_row(self.programme, carbon)
        cap = first.objective * (1 + max(self.case.slack, aim.TIGHT)) + 1e-9
        held = np.flatnonzero(first.optimal)
        kept = _relaxed(points, held, ())
        limit = np.full((len(held), 1), -INFINITY), cap[held][:, None]
        last = self.width + len(self.programme.row_lower)
        lower, upper = np.hstack([kept.lower, limit[0]]), np.hstack([kept.upper, limit[1]])
        kept = batch.Points(np.append(kept.varying, last), lower, upper, kept.entries, kept.values)
        second = batch.solve(wide, total, kept, weights, lambda at: tell(len(points) + at))
        optimal, read = np.zeros(len(points), dtype=bool), np.full((len(points), len(weights)), np.nan)
        optimal[held], read[held] = second.optimal, second.read
        return optimal, read

    def _outcomes(self, answer: RefillAnswer) -> list[_Outcome]:
        """Groups, refills whose share is known, all that is refilled, feeds, oxygen and CO2."""
        opened = open_refills(self.net)
        members: dict[str, list[Refill]] = {}
        for refill in opened:
            members.setdefault(refill.group, []).append(refill)
        known = {row.group: row for row in answer.groups}
        found = [self._group(name, refills, known.get(name)) for name, refills in sorted(members.items())]
        found += [self._refill(row, members[row.group]) for row in answer.refills if row.open and row.nominal is not None]
        weights = np.zeros(self.width)
        for refill in opened:
            weights[refill.column] += refill.skeletons
        refilled = None if answer.ledger is None else answer.ledger.refilled
        found.append(_Outcome("ledger", "refilled", "refilled in all", refilled, weights))
        uptakes = {feed.substrate: feed.uptake for feed in answer.feed}
        for feed in self.case.feeds:
            label = f"uptake of {self.net.facts.compounds[feed.compound].label}"
            weights = self._crossing("enter", (feed.compound,))
            found.append(_Outcome("feed", feed.compound, label, uptakes.get(feed.compound), weights))
        crossing = {each.compound: each.rate for each in answer.crossings}
        for role, words, way, sign in (("oxygen", "uptake of", "enter", 1), ("carbon-dioxide", "release of", "leave", -1)):
            for name in self.net.facts.roles[role]:
                label = f"{words} {self.net.facts.compounds[name].label}"
                nominal = sign * crossing.get(name, 0.0) if answer.answer == "feasible" else None
                found.append(_Outcome("crossing", name, label, nominal, self._crossing(way, (name,))))
        return found

    def _crossing(self, way: str, names: Sequence[str]) -> Floats:
        """Weights of the net crossing of some compounds, positive in one way."""
        weights = np.zeros(self.width)
        for j, column in enumerate(self.net.columns):
            if column.kind in ("enter", "leave") and column.name in names:
                weights[j] = 1.0 if column.kind == way else -1.0
        return weights

    def _group(self, name: str, members: Sequence[Refill], row: GroupRow | None = None) -> _Outcome:
        weights = np.zeros(self.width)
        for refill in members:
            weights[refill.column] = 1.0
        limits, nominal = self._bounding({refill.row for refill in members}), None if row is None else row.nominal
        return _Outcome("group", name, group_label(self.net, members), nominal, weights, limits)

    def _refill(self, row: RefillRow, members: Sequence[Refill]) -> _Outcome:
        own = next(refill for refill in members if refill.slug == row.refill)
        limits = self._bounding({own.row})
        if row.split == "in proportion to capacity":
            whole = tuple(label for refill in members for label in self._bounding({refill.row}))
            weights = self._group(row.group, members).weights
            return _Outcome("refill", row.refill, row.label, row.nominal, weights, limits, (limits, whole))
        weights = np.zeros(self.width)
        weights[own.column] = 1.0
        return _Outcome("refill", row.refill, row.label, row.nominal, weights, limits, by_share=row.split.startswith("measured"))

    def _bounding(self, rows: set[str]) -> tuple[str, ...]:
        """Labels of the stated limits that together bound all of these rows; () when one of them is unlimited."""
        limits = [limit for limit in self.case.limits if not rows.isdisjoint(limit.rows)]
        bounded = {row for limit in limits for row in limit.rows}
        return tuple(limit.label for limit in limits) if rows <= bounded else ()

    def _encoded(self, values: Floats) -> Floats:
        """Values as coordinates in which the programme is linear: a P/O as motive protons per ATP."""
        coordinates = values.copy()
        for k, about in enumerate(self.inputs):
            if about.target == "p-o":
                coordinates[:, k] = about.factor / values[:, k] - about.offset
        return coordinates

    def _decoded(self, coordinates: Floats) -> list[float]:
        return [about.factor / (at + about.offset) if about.target == "p-o" else float(at)
                for about, at in zip(self.inputs, coordinates, strict=True)]


def _relaxed(points: batch.Points, chosen: NDArray[np.intp], rows: Sequence[int]) -> batch.Points:
    """Some of the points, with these rows unbounded."""
    varying = np.union1d(points.varying, np.array(rows, dtype=np.intp)).astype(np.intp)
    at = np.searchsorted(varying, points.varying)
    lower, upper = np.full((len(chosen), len(varying)), -INFINITY), np.full((len(chosen), len(varying)), INFINITY)
    lower[:, at], upper[:, at] = points.lower[chosen], points.upper[chosen]
    free = np.searchsorted(varying, np.array(rows, dtype=np.intp))
    lower[:, free], upper[:, free] = -INFINITY, INFINITY
    return batch.Points(varying, lower, upper, points.entries, points.values[chosen])


def _carried(solved: _Solved, k: int) -> float:
    """Share of the samples with an answer in which the capacity is enough."""
    answered = solved.state < 2
    return float((solved.read[answered, k] <= solved.capacity[answered, k] * (1 + 1e-6) + _NOISE).mean())


def _varies(column: Floats) -> bool:
    known = column[np.isfinite(column)]
    return bool(np.ptp(known) > 1e-6 * max(1e-3, float(np.abs(known).max())))


def _blocks(number: int) -> int:
    """Saltelli blocks for a number of samples: the power of two at or above it, 64 to 2048."""
    return int(min(2048, max(64, 2 ** math.ceil(math.log2(number)))))
