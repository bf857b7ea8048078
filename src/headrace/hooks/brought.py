"""Facts with what plugins bring. A stranger's faulty facts take that plugin out, never the command down."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from headrace import graph
from headrace.errors import FactsError, PluginError
from headrace.hooks.manager import Manager
from headrace.values.facts import Facts

Folders = Sequence[tuple[str, Path]]


def facts(plugins: Manager, *, cache: bool = True) -> Facts:
    """The shipped facts and those that plugins bring; every outlet's family has a claimant, every needed fact is there.

    A plugin whose facts can't be added, or whose needs are not met, is refused. Raises FactsError or PluginError for
    what is wrong without any stranger.
    """
    while True:
        folders = plugins.fact_folders()
        try:
            found = _load(plugins, folders, cache)
        except (FactsError, PluginError) as error:
            _refuse_culprits(plugins, folders, error, cache)
            continue
        unmet = _unmet(plugins, found)
        if not unmet:
            return found
        for name, need in unmet:
            plugins.refuse(name, f"it needs {need}, which the facts do not have")


def _load(plugins: Manager, folders: Folders, cache: bool) -> Facts:
    found = graph.load(extra=folders, cache=cache)
    plugins.check_families(found.outlets.values())
    return found


def _refuse_culprits(plugins: Manager, folders: Folders, error: FactsError | PluginError, cache: bool) -> None:
    """Refuse each stranger whose facts fail beside the shipped ones alone; all of them when only together they fail."""
    shipped = [item for item in folders if plugins.entries[item[0]].origin == "headrace"]
    strangers = [item for item in folders if item not in shipped]
    if not strangers:
        raise error
    faults: list[tuple[str, str]] = []
    for name, folder in strangers:
        try:
            _load(plugins, [*shipped, (name, folder)], cache)
        except (FactsError, PluginError) as fault:
            faults.append((name, fault.message))
    for name, reason in faults or [(name, f"beside other plugins' facts: {error.message}") for name, _ in strangers]:
        plugins.refuse(name, f"its facts can't be used: {reason}")


def _unmet(plugins: Manager, found: Facts) -> list[tuple[str, str]]:
    """(plugin, need) of strangers whose `facts_needed`, such as "outlets/l-lysine", is not among the facts."""
    return [
        (name, need)
        for name, entry in plugins.entries.items()
        if entry.origin != "headrace"
        for need in missing(getattr(plugins.plugin(name), "facts_needed", ()), found)
    ]


def missing(needs: Sequence[str], found: Facts) -> tuple[str, ...]:
    """The needs, each "TABLE/SLUG" with a table of `Facts` ("reactions/...", "outlets/..."), that are not met."""
    unmet = []
    for need in needs:
        table, _, slug = need.partition("/")
        if slug not in getattr(found, table, {}):
            unmet.append(need)
    return tuple(unmet)
