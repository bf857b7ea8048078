"""The phases in order, on one page: facts, case, network, drains, refills, checks, result."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import msgspec

from headrace import case as cases
from headrace.errors import InputError
from headrace.hooks import brought
from headrace.hooks.bench import Bench
from headrace.hooks.manager import Manager
from headrace.network.bands import bands as find_bands
from headrace.network.build import build
from headrace.network.ceiling import ceiling as find_ceiling
from headrace.network.folds import folds as find_folds
from headrace.network.grows import grows as find_growth
from headrace.network.phases import plan as make_plan
from headrace.network.reconcile import findings as measured_findings
from headrace.network.reconcile import reconcile, sized
from headrace.network.requirement import drain_rows, rate_ranges
from headrace.network.routes import RouteBook
from headrace.values.answers import Draw, RefillAnswer, Result
from headrace.values.case import Case, Scenario
from headrace.values.changes import Change
from headrace.values.facts import Facts
from headrace.values.measured import Reconciliation

Question = str | Path | Scenario | dict[str, Any]
Progress = Callable[..., None]


def _quiet(*said: object) -> None:
    """The progress of who does not watch."""


class Desk:
    """Facts and plugins, loaded once; answers any number of scenarios. Plugins and facts may be given, for tests."""

    def __init__(
        self, *, cache: bool = True, strangers: bool = True, plugins: Manager | None = None, facts: Facts | None = None
    ) -> None:
        self.plugins = Manager.load(strangers=strangers) if plugins is None else plugins
        self.facts: Facts = brought.facts(self.plugins, cache=cache) if facts is None else facts
        self._lenders = tuple(self.plugins.used)  # plugins that brought facts take part in every answer

    def scenario(self, question: Question) -> Scenario:
        """A scenario from a path, TOML or JSON text, plain data, or as it is."""
        if isinstance(question, Scenario):
            return question
        return cases.from_dict(question) if isinstance(question, dict) else cases.read(question)

    def case(self, question: Question, *, opened: bool = False, changes: Sequence[Change] = ()) -> Case:
        """The scenario resolved against the facts. Raises InputError for what the facts or the plugins do not know."""
        scenario = self.scenario(question)
        case = cases.resolve(scenario, self.facts, opened=opened, changes=changes)
        try:
            return self.plugins.validated(case)
        except InputError as error:
            raise cases.place(error, scenario.path, scenario.places, scenario.inside) from None

    def drains(self, question: Question, phase: str = "") -> Result:
        """What each outlet and growth take, per pool and in skeletons. phase: which, where the scenario has phases."""
        self._begin()
        case, draws, found = self._drawn(cases.one(self.scenario(question), phase))
        rows = drain_rows(self.facts, draws, _scalars(case))
        said = self.plugins.checks(case, draws, (), rows, self.facts)
        result = self._result("drains", case, draws, rows, None, case.findings + said.findings, said.tables)
        return msgspec.structs.replace(result, measured=found)

    def refills(self, question: Question, progress: Progress = _quiet, ranges: bool = False, *, phase: str = "",
                bands: int = 0, seed: int = 0) -> Result:
        """The ledger, the requirement of each refill, and why closed ones are closed; of every phase where there are some.

        ranges: of every rate, too. phase: only that one. bands: number of samples of the uncertain inputs (0 = none), drawn
        from `seed`. With a parental strain, its answer stands beside the design's.
        """
        self._begin()
        scenario = self.scenario(question)
        parts = () if phase else cases.phases(scenario)
        if not parts:
            result = self._refills(cases.one(scenario, phase), progress, ranges)
        else:
            each = tuple(self._refills(part.scenario, progress, ranges) for part in parts)
            found = make_plan(parts, each)
            result = each[[part.name for part in parts].index(found.binding)]
            result = msgspec.structs.replace(result, plan=found, phases=each)
        result = self._beside_the_parent(scenario, result, progress)
        if bands:
            name = phase or (result.plan.binding if result.plan else "")
            case = self._drawn(cases.one(scenario, name, uncertain=True))[0]
            assert isinstance(result.answer, RefillAnswer)
            result = msgspec.structs.replace(result, bands=find_bands(self.facts, case, result.answer, bands, seed, progress))
        return result

    def _refills(self, scenario: Scenario, progress: Progress, ranges: bool) -> Result:
        """The requirement of one strain under one condition."""
        progress("drains")
        case, draws, found = self._drawn(scenario)
        progress("refills")
        network = build(self.facts, case)
        bench = Bench(self.facts, lambda changes: self._resized(_drawing(self.case(scenario, changes=changes), draws), found))
        merged = self.plugins.refills(case, network, draws, bench)
        progress("checks")
        answer: RefillAnswer = merged.answer
        if ranges and answer.answer == "feasible":
            answer = msgspec.structs.replace(answer, rates=rate_ranges(network))
        rows = answer.drains or drain_rows(self.facts, draws, answer.scalars or _scalars(case))
        answers = (answer, *(other for _, other in merged.others))
        said = self.plugins.checks(case, draws, answers, rows, self.facts)
        seen = measured_findings(network, found, answer) if found else ()
        findings = case.findings + seen + answer.findings + merged.findings + said.findings
        answer = msgspec.structs.replace(answer, findings=findings)
        result = self._result("refills", case, draws, rows, answer, findings, said.tables)
        return msgspec.structs.replace(result, measured=found)

    def _beside_the_parent(self, scenario: Scenario, result: Result, progress: Progress) -> Result:
        """The result with the answer of the parental strain, where there is one."""
        existing = cases.parent(scenario)
        if existing is None:
            return result
        now = self._refills(existing, progress, False)
        if now.case.host != result.case.host:
            hosts = [self.facts.hosts[each.case.host].label for each in (now, result)]
            words, accepted = f"the parental strain is of {hosts[0]}", f"one of {hosts[1]}, the design's host"
            error = InputError(words, key="parent", accepted=accepted)
            raise cases.place(error, scenario.path, scenario.places, scenario.inside)
        assert isinstance(now.answer, RefillAnswer) and isinstance(result.answer, RefillAnswer)
        return msgspec.structs.replace(result, parent=now, folds=find_folds(self.facts, now.answer, result.answer))

    def _drawn(self, scenario: Scenario) -> tuple[Case, tuple[Draw, ...], Reconciliation | None]:
        """The case with what its outlets draw; where rates were measured on it, at the reconciled ones."""
        case = self.case(scenario)
        draws = self.plugins.drains(case, _outlets(case), RouteBook(self.facts, case))
        case = _drawing(case, draws)
        found = reconcile(build(self.facts, case)) if case.measured else None
        return self._resized(case, found), draws, found

    def _resized(self, case: Case, found: Reconciliation | None) -> Case:
        return case if found is None else sized(case, found)

    def ceiling(self, question: Question, outlet: str = "", growth: float = 0.0, phase: str = "") -> Result:
        """Largest yields of one outlet of the scenario (default: its only one). growth in 1/h; phase as in `drains`."""
        self._begin()
        question = cases.one(self.scenario(question), phase)
        case = self.case(question)
        number = cases.outlet_number(case, self.facts, outlet)
        draws = self.plugins.drains(case, case.demands, RouteBook(self.facts, case))
        wide = _drawing(self.case(question, opened=True), draws)
        answer = find_ceiling(self.facts, _drawing(case, draws), wide, number, growth)
        return self._result("ceiling", case, (), (), answer, case.findings + answer.findings)

    def grows(self, question: Question, phase: str = "") -> Result:
        """Whether the strain grows on the medium, and if not, what is missing. phase as in `drains`."""
        self._begin()
        case = self.case(cases.one(self.scenario(question), phase))
        answer = find_growth(self.facts, case)
        return self._result("grows", case, (), (), answer, case.findings + answer.findings)

    def _begin(self) -> None:
        """Forget which plugins took part in the answer before."""
        self.plugins.used[:] = self._lenders

    def _result(self, kind: str, case: Case, draws: Any, rows: Any, answer: Any, findings: Any, tables: Any = ()) -> Result:
        return Result(kind, case, self.facts.version, self.facts, tuple(draws), tuple(rows), answer,
                      tuple(dict.fromkeys(findings)), tuple(sorted(self.plugins.used)), tables=tuple(tables))


def _outlets(case: Case) -> Any:
    """The outlets to drain: those asked for and, where the case grows, biomass."""
    grows = case.growth is None or case.growth > 0
    return case.demands + (cases.biomass(case),) if grows else case.demands


def _drawing(case: Case, draws: Sequence[Draw]) -> Case:
    """The case with each outlet drawing what its plugin says that one mole is made of."""
    made = {name: draw.draws for draw in draws for name in draw.scale if draw.draws}
    demands = tuple(msgspec.structs.replace(d, draws=made.get(f"outlet.{i}", d.draws)) for i, d in enumerate(case.demands))
    return msgspec.structs.replace(case, demands=demands)


def _scalars(case: Case) -> dict[str, float]:
    """Rates known before anything is solved: stated ones, and yields times stated uptakes (else 0)."""
    fed = sum(f.uptake or 0.0 for f in case.feeds)
    scalars = {f"outlet.{i}": d.rate if d.rate is not None else fed * (d.yield_per_feed or 0.0)
               for i, d in enumerate(case.demands)}
    scalars["growth"] = case.growth if case.growth is not None else fed * (case.growth_yield or 0.0)
    return scalars


def drains(question: Question) -> Result:
    """`Desk().drains` for one question."""
    return Desk().drains(question)


def refills(question: Question) -> Result:
    """`Desk().refills` for one question."""
    return Desk().refills(question)


def ceiling(question: Question, outlet: str = "", growth: float = 0.0) -> Result:
    """`Desk().ceiling` for one question."""
    return Desk().ceiling(question, outlet, growth)


def grows(question: Question) -> Result:
    """`Desk().grows` for one question."""
    return Desk().grows(question)
