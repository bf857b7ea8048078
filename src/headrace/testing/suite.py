"""The conformance suite: what every plugin must keep to, tried on the plugin's own example."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Iterator
from functools import lru_cache
from pathlib import Path
from typing import Any, NamedTuple

import msgspec

from headrace import paths
from headrace.errors import HeadraceError
from headrace.graph.build import build as build_facts
from headrace.graph.check import check
from headrace.graph.files import fact_files, version
from headrace.graph.findings import completed
from headrace.graph.ruletexts import rule_texts
from headrace.hooks import merge
from headrace.hooks.bench import Bench
from headrace.hooks.brought import missing
from headrace.hooks.entry import describe, hooks_of
from headrace.hooks.manager import Manager
from headrace.hooks.table import FIRST_PARTY
from headrace.network.build import build
from headrace.run import Desk
from headrace.testing import closure
from headrace.testing.compare import difference, plain, resorted
from headrace.testing.renamed import Renaming, renamed
from headrace.testing.watch import Call, call, watched
from headrace.values.answers import AddedTable, Result
from headrace.values.case import Case, Finding
from headrace.values.facts import Facts

FACTOR = 3.0  # by which rates are scaled; exact in binary times small numbers, and no neighbour of 1


class _Unusable(Exception):
    """A plugin that can't be put on trial."""


class Trial(NamedTuple):
    """A plugin at work on its example: the desk with its plugins and facts, the calls of its hooks, the answers."""

    plugin: type
    desk: Desk
    calls: list[Call]
    results: tuple[Result, ...]


def conformance(plugin: type) -> tuple[str, ...]:
    """Check a plugin class against the contract. The answer names the checks made, for whoever likes to print them.

    Raises AssertionError that lists every fault found, each with the check that found it.
    """
    made: list[str] = []
    faults: list[str] = []
    trial: Trial | None = None
    for name, examine in CHECKS.items():
        try:
            trial = trial or _trial(plugin)
            faults += [f"{name}: {fault}" for fault in examine(trial)]
        except (HeadraceError, _Unusable) as error:
            faults.append(f"{name}: {error}")
        made.append(name)
        if trial is None:
            break
    if faults:
        raise AssertionError("\n  ".join((f"plugin {getattr(plugin, 'name', plugin.__name__)} breaks the contract:", *faults)))
    return tuple(made)


def _trial(plugin: type) -> Trial:
    """Run the example with every question that makes a hook of the plugin run. Raises PluginError for a wrong class."""
    describe(plugin)
    calls: list[Call] = []
    desk = _desk(plugin, watched(plugin, calls))
    example: str | Path = getattr(plugin, "example", "")
    if not example:
        raise _Unusable("it has no example scenario")
    scenario = desk.scenario(example)
    hooks = hooks_of(plugin)
    results = [desk.refills(scenario)] if {"drains", "refills", "checks", "report"} & set(hooks) else []
    if "report" in hooks:
        desk.plugins.report(results[0], only=[plugin.name])  # type: ignore[attr-defined]
    return Trial(plugin, desk, calls, tuple(results))


def _desk(plugin: type, stand_in: type) -> Desk:
    name = plugin.name  # type: ignore[attr-defined]
    others = [entry for entry in FIRST_PARTY if entry.name != name]
    desk = Desk(plugins=Manager(first_party=others, classes=[stand_in]))
    if refused := desk.plugins.refused:
        raise _Unusable(f"it is refused: {refused[0].reason}")
    return desk


def _facts(trial: Trial) -> Iterator[str]:
    """What it needs is there, and the facts that it brings pass every check that the shipped ones pass."""
    for need in missing(getattr(trial.plugin, "facts_needed", ()), trial.desk.facts):
        yield f"it needs {need}, which the facts do not have"
    folders = [item for item in trial.desk.plugins.fact_folders() if item[0] == _name(trial)]
    if folders:
        for fault in check(extra=folders):
            if fault.file.startswith(f"plugin/{_name(trial)}/"):
                yield f"{fault.file}, {fault.node}: {fault.message}"


def _example(trial: Trial) -> Iterator[str]:
    """Every hook runs on the example, and it is answered."""
    ran = {item.hook for item in trial.calls}
    for hook in hooks_of(trial.plugin):
        if hook not in ran:
            yield f"its example never calls {hook}"
    for result in trial.results:
        for finding in result.findings:
            if finding.level == "stop":
                yield f"its example ends in a stop: {finding.message}"


def _pure(trial: Trial) -> Iterator[str]:
    """No argument changed, nothing of the outside was touched."""
    for item in trial.calls:
        for name in item.changed:
            yield f"{item.hook} changes its {name}"
        for what in item.tried:
            yield f"{item.hook} reaches outside: {what}"


def _repeatable(trial: Trial) -> Iterator[str]:
    """A fresh plugin gives the same answer to the same arguments, twice."""
    for item in trial.calls:
        answers = [call(trial.plugin, item.hook, item.arguments) for _ in range(2)]
        for answer in answers:
            if found := difference(plain(item.answer), plain(answer), item.hook):
                yield f"{found} for the same arguments"
                break


def _closed(trial: Trial) -> Iterator[str]:
    """Draws close in every element; ledgers close; findings have a known level."""
    facts = trial.desk.facts
    grouped: dict[str, list[Call]] = defaultdict(list)
    for item in trial.calls:
        grouped[item.hook].append(item)
    for item in grouped["drains"]:
        drawn = closure.asked(facts, _case(trial), item.arguments["outlet"], item.answer)
        yield from closure.faults(facts, item.answer, drawn)
    for item in grouped["refills"]:
        yield from (finding.message for finding in merge.refills([(_name(trial), item.answer)]).findings)
    for item in grouped["checks"]:
        for finding in item.answer or ():
            if isinstance(finding, AddedTable):
                continue
            if not isinstance(finding, Finding) or finding.level not in merge.LEVELS:
                yield f"checks gives {finding!r:.80}, which is no finding of level {', '.join(merge.LEVELS)}"


def _linear(trial: Trial) -> Iterator[str]:
    """All rates times a factor: draws, which are per mole, stay; requirements and ledger grow by the factor."""
    case = scaled(_case(trial), FACTOR)
    for item in trial.calls:
        if item.hook == "drains":
            outlet = item.arguments["outlet"]
            larger = msgspec.structs.replace(outlet, rate=None if outlet.rate is None else outlet.rate * FACTOR)
            answer = call(trial.plugin, "drains", item.arguments | {"case": case, "outlet": larger})
            if found := difference(plain(item.answer), plain(answer), "draws"):
                yield f"draws are per mole, but change with the rate: {found}"
        if item.hook == "refills":
            given = item.arguments | {"case": case, "network": build(trial.desk.facts, case), "bench": _bench(trial)}
            answer = call(trial.plugin, "refills", given)
            if found := difference(_sized(item.answer, FACTOR), _sized(answer, 1.0), "answer"):
                yield f"{FACTOR:g} times all rates do not give {FACTOR:g} times the answer: {found}"


def _nameless(trial: Trial) -> Iterator[str]:
    """Under other slugs, and so in another order of pools and rows, the answers are the same."""
    hooks = set(hooks_of(trial.plugin)) & {"drains", "refills", "checks"}
    if not hooks:
        return
    renaming, facts = _under_other_names(tuple(trial.desk.plugins.fact_folders()))
    calls: list[Call] = []
    others = [entry for entry in FIRST_PARTY if entry.name != _name(trial)]
    manager = Manager(first_party=others, classes=[watched(trial.plugin, calls)])
    desk = Desk(plugins=manager, facts=facts)
    desk.refills(renaming.scenario(desk.scenario(trial.plugin.example)))  # type: ignore[attr-defined]
    ours = [item for item in trial.calls if item.hook in hooks]
    theirs = [item for item in calls if item.hook in hooks]
    if len(ours) != len(theirs):
        yield f"{len(ours)} calls, {len(theirs)} under other names"
    for one, other in zip(ours, theirs, strict=False):
        restored = resorted(renaming.undone(plain(other.answer)))
        if found := difference(resorted(plain(one.answer)), restored, one.hook):
            yield f"under other names: {found}"


@lru_cache(maxsize=2)
def _under_other_names(folders: tuple[tuple[str, Path], ...]) -> tuple[Renaming, Facts]:
    """All facts with new slugs; kept, since plugins that bring no facts share them."""
    renaming = renamed(fact_files([paths.facts_folder()], folders))
    rules = rule_texts([paths.facts_folder()], folders)
    return renaming, completed(build_facts(renaming.files, version(renaming.files)), rules, renaming.files)


CHECKS: dict[str, Callable[[Trial], Iterator[str]]] = {
    "declaration and facts": _facts,
    "example": _example,
    "frozen input, no files, network or clock": _pure,
    "same input, same output": _repeatable,
    "draws and ledgers close": _closed,
    "linear": _linear,
    "no name matters": _nameless,
}


def scaled(case: Case, factor: float) -> Case:
    """The case with every rate times a factor: feeds, oxygen, supplements, outlets, growth, limits, maintenance."""

    def times(rate: float | None) -> float | None:
        return None if rate is None else rate * factor

    def rated(items: Any, name: str = "rate") -> Any:
        return tuple(msgspec.structs.replace(item, **{name: times(getattr(item, name))}) for item in items)

    energy = {kind: value * factor if kind == "maintenance" else value for kind, value in case.energy.items()}
    return msgspec.structs.replace(
        case,
        feeds=rated(case.feeds, "uptake"),
        supplements=rated(case.supplements),
        demands=rated(case.demands),
        limits=rated(case.limits),
        growth=times(case.growth),
        oxygen_rate=times(case.oxygen_rate),
        energy=energy,
    )


def _bench(trial: Trial) -> Bench:
    scenario = trial.desk.scenario(trial.plugin.example)  # type: ignore[attr-defined]
    return Bench(trial.desk.facts, lambda changes: scaled(trial.desk.case(scenario, changes=changes), FACTOR))


def _sized(answer: Any, factor: float) -> Any:
    """What grows with the rates: the ledger's sums, the requirement of each refill and group, and the feed."""
    ledger = answer.ledger and merge.totals(answer.ledger)
    rows = [(row.refill, row.least, row.nominal, row.most) for row in answer.refills]
    rows += [(row.group, row.least, row.nominal, row.most) for row in answer.groups]
    rows += [(row.substrate, row.uptake, None, None) for row in answer.feed]
    sized = {name: [None if rate is None else rate * factor for rate in rates] for name, *rates in rows}
    sums = (ledger.drained * factor, ledger.made * factor) if ledger else None
    return {"answer": answer.answer, "drained and made": sums and list(sums)} | sized


def _case(trial: Trial) -> Case:
    return trial.results[0].case


def _name(trial: Trial) -> str:
    return str(trial.plugin.name)  # type: ignore[attr-defined]
