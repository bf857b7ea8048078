"""Loads plugins and calls their hooks, one plugin at a time, so that a wrong one is named and the rest go on.

Plugins that ship with Headrace stand in `table` and are imported when a hook of theirs is first called; strangers'
are found by `strangers` and imported at load, since only their class says what they do.
"""

from __future__ import annotations

import importlib
import os
import sys
import time
from collections.abc import Iterable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pluggy

from headrace.errors import HeadraceError, InputError, PluginError
from headrace.hooks import merge
from headrace.hooks.entry import HOOKS, Entry, Refusal, describe
from headrace.hooks.options import options, validate
from headrace.hooks.specs import PROJECT, Hooks
from headrace.hooks.strangers import Pointer, find
from headrace.hooks.table import FIRST_PARTY
from headrace.names import nearest
from headrace.values.answers import Document, DrainRow, Draw, RefillAnswer, Result
from headrace.values.case import Case, Demand, Finding
from headrace.values.facts import Facts, Outlet

if TYPE_CHECKING:
    from headrace.hooks.bench import Bench
    from headrace.network.build import Network
    from headrace.network.routes import RouteBook


class _Registry(pluggy.PluginManager):
    """pluggy's manager, with methods taken for hooks by their name (`describe` has refused near misses)."""

    def parse_hookimpl_opts(self, plugin: object, name: str) -> pluggy.HookimplOpts | None:
        if name not in HOOKS:
            return None
        return pluggy.HookimplOpts(
            wrapper=False, hookwrapper=False, optionalhook=False, tryfirst=False, trylast=False, specname=None
        )


class Manager:
    """The plugins in force. entries: those that may be called; refused: those that are not used, and why."""

    def __init__(
        self,
        first_party: Sequence[Entry] = FIRST_PARTY,
        pointers: Sequence[Pointer] = (),
        classes: Sequence[type] = (),
        trace: bool | None = None,
    ) -> None:
        self.entries: dict[str, Entry] = {}
        self.refused: list[Refusal] = []
        self.used: list[str] = []
        self._classes: dict[str, Any] = {}
        self._registry = _Registry(PROJECT)
        self._registry.add_hookspecs(Hooks)
        self._trace = os.environ.get("HEADRACE_TRACE", "") not in ("", "0") if trace is None else trace
        given = [self._given(plugin) for plugin in classes]
        self._accept([*first_party], [*(self._imported(pointer) for pointer in pointers), *given])

    @classmethod
    def load(cls, strangers: bool = True) -> Manager:
        """The plugins that ship with Headrace and, unless told otherwise, those that other distributions bring."""
        return cls(pointers=find() if strangers else ())

    # -- what is loaded ------------------------------------------------------------------------------------------

    def having(self, hook: str) -> tuple[str, ...]:
        """The names of plugins with a hook, first-party ones first, then by name."""
        return tuple(entry.name for entry in self.entries.values() if hook in entry.hooks)

    def claimant(self, family: str) -> str | None:
        """The plugin that answers for a family of outlets."""
        return next((entry.name for entry in self.entries.values() if family in entry.families), None)

    def check_families(self, outlets: Iterable[Outlet]) -> None:
        """Raise PluginError when an outlet's family has no claimant. (Two claimants never get past load.)"""
        orphans = sorted({(outlet.family, outlet.slug) for outlet in outlets if self.claimant(outlet.family) is None})
        if orphans:
            family, outlet = orphans[0]
            raise self._unclaimed(family, outlet, others=len(orphans) - 1)

    def plugin(self, name: str) -> Any:
        """The plugin itself, imported and registered when first asked for. Raises PluginError when it is refused."""
        if name not in self.entries:
            reason = next((refusal.reason for refusal in self.refused if refusal.name == name), "")
            if reason:
                raise PluginError(name, f"is not used: {reason}")
            raise PluginError(name, "is not loaded", hint=_near_hint(name, self.entries))
        found = self._registry.get_plugin(name)
        return self._register(self.entries[name]) if found is None else found

    def findings(self) -> tuple[Finding, ...]:
        """One caution for each plugin that is not used."""
        return tuple(
            Finding("caution", "plugins", item.name, f"plugin {item.name} of {item.origin} is not used: {item.reason}")
            for item in self.refused
        )

    # -- the hooks -----------------------------------------------------------------------------------------------

    def fact_folders(self) -> tuple[tuple[str, Path], ...]:
        """The folders of Turtle that plugins bring, with the plugin's name."""
        found: list[tuple[str, Path]] = []
        for name in self.having("facts"):
            folder = self._call(name, "facts")
            if folder is None:
                continue
            if not Path(folder).is_dir():
                self._refuse(name, f"its facts folder is not there: {Path(folder).name}")
                continue
            found.append((name, Path(folder)))
        return tuple(found)

    def validated(self, case: Case) -> Case:
        """The case as it is, once every `[plugin.NAME]` table is known to be right.

        Raises InputError, with the key, for the first fault.
        """
        for name, given in case.plugin_options.items():
            if name not in self.entries and not any(refusal.name == name for refusal in self.refused):
                near = nearest(name, self.entries)
                raise InputError(f"no plugin {name!r}", key=f"plugin.{name}", near=near, hint="headrace plugins lists all")
            plugin = self.plugin(name)
            validate(name, getattr(plugin, "options", None), given)
        return case

    def drains(self, case: Case, outlets: Sequence[Demand], routes: RouteBook) -> tuple[Draw, ...]:
        """The draws of all outlets. Raises PluginError when an outlet has no claimant or its plugin fails."""
        proposals: list[tuple[str, Demand, Any]] = []
        for outlet in outlets:
            name = self.claimant(outlet.family)
            if name is None:
                raise self._unclaimed(outlet.family, outlet.outlet)
            proposals.append((name, outlet, self._call(name, "drains", case=case, outlet=outlet, routes=routes)))
        return merge.draws(proposals)

    def refills(self, case: Case, network: Network, draws: tuple[Draw, ...], bench: Bench) -> merge.Merged:
        """The answer of the first refill method, with those of others beside it. A method that fails is a caution."""
        answers, failures = self._each("refills", case=case, network=network, draws=draws, bench=bench)
        if not answers:
            reasons = "; ".join(finding.message for finding in failures) or "no plugin has the refills hook"
            raise PluginError("refills", f"no method gave an answer: {reasons}")
        return merge.refills(answers, failures)

    def checks(
        self,
        case: Case,
        draws: tuple[Draw, ...],
        answers: Sequence[RefillAnswer],
        rows: Sequence[DrainRow],
        facts: Facts,
    ) -> merge.Said:
        """What all checks say, with the manager's own cautions: stops first, then cautions, then notes; and their tables."""
        found, failures = self._each("checks", case=case, draws=draws, answers=tuple(answers), rows=tuple(rows), facts=facts)
        return merge.said([*found, ("plugins", failures), ("plugins", self.findings())])

    def report(self, result: Result, only: Sequence[str] = ()) -> tuple[Document, ...]:
        """The documents of all report plugins, or of those named. Raises PluginError when one fails or two clash."""
        names = only or self.having("report")
        proposals = []
        for name in names:
            chosen = options(self.plugin(name), result.case)
            proposals.append((name, self._call(name, "report", result=result, options=chosen)))
        return merge.documents(proposals)

    # -- calling -------------------------------------------------------------------------------------------------

    def _each(self, hook: str, **arguments: Any) -> tuple[list[tuple[str, Any]], list[Finding]]:
        """Call a hook of every plugin that has it; a failure becomes a caution with the plugin's name."""
        answers: list[tuple[str, Any]] = []
        failures: list[Finding] = []
        for name in self.having(hook):
            try:
                answers.append((name, self._call(name, hook, **arguments)))
            except PluginError as error:
                failures.append(Finding("caution", "plugins", name, str(error)))
        return answers, failures

    def _call(self, name: str, hook: str, **arguments: Any) -> Any:
        """Call one hook of one plugin. Errors of ours pass; any other becomes a PluginError that names the plugin."""
        plugin = self.plugin(name)
        others = [other for other in self._registry.get_plugins() if other is not plugin]
        caller = self._registry.subset_hook_caller(hook, remove_plugins=others)
        if name not in self.used:
            self.used.append(name)
        started = time.perf_counter()
        try:
            answers = caller(**arguments)
            answer = _listed(answers[0]) if answers else None
        except HeadraceError:
            raise
        except Exception as error:
            if self._trace:
                sys.excepthook(type(error), error, error.__traceback__)
            reason = f"failed in {hook}: {type(error).__name__}: {error}"
            raise PluginError(name, reason, hint="HEADRACE_TRACE=1 shows where") from error
        if self._trace:
            took = (time.perf_counter() - started) * 1000
            print(f"headrace: {hook} of {name}: {_shape(answer)}, {took:.1f} ms", file=sys.stderr)
        return answer

    # -- loading -------------------------------------------------------------------------------------------------

    def _accept(self, first_party: list[Entry], others: list[Entry | None]) -> None:
        """Enter first-party plugins, then the others unless a name or a family is taken or claimed twice.

        Raises PluginError when first-party plugins clash among themselves: that is a fault of this installation.
        """
        for number, entry in enumerate(first_party):
            if reason := _clash(entry, first_party[:number]):
                raise PluginError(entry.name, reason)
        self.entries = {entry.name: entry for entry in first_party}
        strangers = [entry for entry in others if entry is not None]
        accepted = []
        for entry in strangers:
            rivals = [*first_party, *(other for other in strangers if other is not entry)]
            if reason := _clash(entry, rivals):
                self.refused.append(Refusal(entry.name, entry.origin, reason))
            else:
                accepted.append(entry)
        self.entries |= {entry.name: entry for entry in sorted(accepted, key=lambda entry: entry.name)}

    def _imported(self, pointer: Pointer) -> Entry | None:
        """The entry of a stranger's plugin; None, with a refusal noted, when it can't be imported or is wrong."""
        try:
            plugin = _resolve(pointer.module, pointer.attribute)
            entry = describe(plugin, pointer.distribution)
        except PluginError as error:
            self.refused.append(Refusal(error.plugin, pointer.distribution, error.message))
            return None
        except Exception as error:
            reason = f"importing it failed: {type(error).__name__}: {error}"
            self.refused.append(Refusal(pointer.name, pointer.distribution, reason))
            return None
        self._classes[entry.name] = plugin
        return entry

    def _given(self, plugin: type) -> Entry:
        entry = describe(plugin, f"{plugin.__module__}.{plugin.__qualname__}")
        self._classes[entry.name] = plugin
        return entry

    def _register(self, entry: Entry) -> Any:
        """Import, make and register one plugin. Whatever goes wrong refuses it."""
        try:
            found = self._classes.get(entry.name) if entry.origin != "headrace" else None
            plugin = _resolve(entry.module, entry.attribute) if found is None else found
            if describe(plugin, entry.origin) != entry:
                hint = "python -m headrace.hooks writes the table"
                raise PluginError(entry.name, "its class and headrace/hooks/table.py differ", hint=hint)
            made = plugin()
            self._registry.register(made, name=entry.name)
        except HeadraceError as error:
            self._refuse(entry.name, error.message)
            raise
        except Exception as error:
            reason = f"loading it failed: {type(error).__name__}: {error}"
            self._refuse(entry.name, reason)
            raise PluginError(entry.name, reason) from error
        return made

    def _refuse(self, name: str, reason: str) -> None:
        entry = self.entries.pop(name)
        self.refused.append(Refusal(name, entry.origin, reason))

    def refuse(self, name: str, reason: str) -> None:
        """Take a plugin out, for a reason that shows only later (facts that do not load)."""
        self._refuse(name, reason)

    def _unclaimed(self, family: str, outlet: str, others: int = 0) -> PluginError:
        families = {name for entry in self.entries.values() for name in entry.families}
        more = f" (and {others} more)" if others else ""
        refused = "; ".join(f"{refusal.name} is not used: {refusal.reason}" for refusal in self.refused)
        hint = refused or _near_hint(family, families)
        return PluginError("drains", f"no plugin claims the family {family!r} of outlet {outlet!r}{more}", hint=hint)


def survey(package: str = "headrace_plugins") -> tuple[Entry, ...]:
    """The entries of all plugin classes in the shipped plugins' package, read from the classes, by kind and name."""
    root = Path(importlib.import_module(package).__path__[0])
    found: list[Entry] = []
    for path in sorted(root.rglob("*.py")):
        parts = path.relative_to(root).with_suffix("").parts
        if any(part.startswith("_") and part != "__init__" for part in parts):
            continue
        module = importlib.import_module(".".join((package, *(part for part in parts if part != "__init__"))))
        own = (value for value in vars(module).values() if getattr(value, "__module__", "") == module.__name__)
        classes = (value for value in own if isinstance(value, type) and {"name", "summary"} <= vars(value).keys())
        found.extend(describe(value) for value in classes)
    return tuple(found)


def _resolve(module: str, attribute: str) -> Any:
    value: Any = importlib.import_module(module)
    for part in filter(None, attribute.split(".")):
        value = getattr(value, part)
    return value


def _clash(entry: Entry, rivals: Iterable[Entry]) -> str:
    """Why an entry can't stand beside its rivals; "" when it can."""
    for rival in rivals:
        if rival.name == entry.name:
            return f"{rival.origin} has a plugin of the same name"
        if shared := sorted(set(rival.families) & set(entry.families)):
            return f"the family {shared[0]!r} is claimed by plugin {rival.name} of {rival.origin} as well"
    return ""


def _near_hint(name: str, known: Iterable[str] | Mapping[str, Any]) -> str:
    near = nearest(name, known)
    return f"nearest: {', '.join(near)}; headrace plugins lists all" if near else "headrace plugins lists all"


def _listed(answer: Any) -> Any:
    """Run a generator now, so that its failure belongs to the plugin's call."""
    return tuple(answer) if isinstance(answer, Iterator | list) else answer


def _shape(answer: Any) -> str:
    if isinstance(answer, tuple):
        return f"{len(answer)} given"
    return type(answer).__name__ if answer is not None else "nothing"


