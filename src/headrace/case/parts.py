"""Scenarios within a scenario: the strain that exists ([parent]) and the phases of a plan ([[phase]]), each one whole.

    [parent]    growth, feed, conditions, energy: the scenario's unless stated; strain, outlet: none unless stated
    [[phase]]   everything the scenario's unless stated; conditions, strain and energy key by key
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path, PurePosixPath
from typing import Any

from headrace import units
from headrace.case.document import place, read
from headrace.errors import InputError
from headrace.names import nearest
from headrace.values.case import Scenario
from headrace.values.phases import Phase

_WHOLE = ("growth", "feed", "outlet")
_BY_KEY = ("conditions", "strain", "energy")


def parent(scenario: Scenario) -> Scenario | None:
    """The scenario of the strain that exists, with the rates measured on it; None when there is no [parent].

    Raises InputError for a file that can't be read, that lies outside of the scenario's folder, or that has a parent or phases.
    """
    own = scenario.raw.get("parent")
    if own is None:
        return None
    if "file" in own:
        return _from_file(scenario, own)
    raw = {key: value for key, value in scenario.raw.items() if key not in ("parent", "phase", "uncertainty", "strain", "outlet")}
    moved: dict[str, str] = {}
    _merge(raw, own, "parent", moved)
    raw["title"] = f"{scenario.title}, parental strain" if scenario.title else "parental strain"
    return _part(scenario, raw, moved)


def phases(scenario: Scenario, uncertain: bool = False) -> tuple[Phase, ...]:
    """The phases of a plan, in order; () when there are none. uncertain: whether they keep [uncertainty].

    Raises InputError where a name stands twice, the first phase has no biomass, or rates are measured without a [parent].
    """
    stated = scenario.raw.get("phase", ())
    if stated and "measured" in scenario.raw and "parent" not in scenario.raw:
        _refuse(scenario, "measured", "with phases, measured rates are those of a parental strain", "a [parent] beside it")
    found: list[Phase] = []
    left_out = ("parent", "phase", "measured") if uncertain else ("parent", "phase", "measured", "uncertainty")
    for number, own in enumerate(stated):
        key = f"phase[{number}]"
        raw = {name: value for name, value in scenario.raw.items() if name not in left_out}
        moved: dict[str, str] = {}
        _merge(raw, own, key, moved)
        name = own.get("name", f"phase {number + 1}")
        if name in {each.name for each in found}:
            _refuse(scenario, f"{key}.name", f"two phases are called {name!r}", "each name once")
        raw["title"] = f"{scenario.title}, {name}" if scenario.title else name
        biomass = float(units.read(own["biomass"], units.CELL_DENSITY).value) if "biomass" in own else None
        if biomass is None and not found:
            _refuse(scenario, key, "the first phase needs the dry cells that it starts with", 'biomass = "0.5 g/L"')
        hours = float(units.read(own["duration"], units.DURATION).value)
        found.append(Phase(name, _part(scenario, raw, moved), hours, biomass, key))
    return tuple(found)


def one(scenario: Scenario, phase: str = "", uncertain: bool = False) -> Scenario:
    """The scenario of one phase by its name; a scenario without phases is its own. uncertain: see `phases`.

    Raises InputError where the scenario has phases and none of them is named, or a name fits none.
    """
    found = phases(scenario, uncertain)
    names = [each.name for each in found]
    if phase in names:
        return found[names.index(phase)].scenario
    if not found and not phase:
        return scenario
    words = f"no phase is called {phase!r}" if phase else "the scenario has phases, and this is asked of one"
    accepted = ", ".join(names) or "nothing: the scenario has no phases"
    raise InputError(words, file=scenario.path, key="--phase", accepted=accepted, near=nearest(phase, names))


def _merge(raw: dict[str, Any], own: Mapping[str, Any], key: str, moved: dict[str, str]) -> None:
    """Put what a part states over what the scenario states, and note where it stands."""
    for name in _WHOLE:
        if name in own:
            raw[name] = own[name]
            moved[name] = f"{key}.{name}"
    for name in _BY_KEY:
        if name in own:
            raw[name] = {**raw.get(name, {}), **own[name]}
            moved.update({f"{name}.{each}": f"{key}.{name}.{each}" for each in own[name]})


def _part(scenario: Scenario, raw: dict[str, Any], moved: dict[str, str]) -> Scenario:
    """A scenario of its own whose messages point to where its values stand."""
    places = {key: line for key, line in scenario.places.items() if not any(_below(key, new) for new in moved)}
    for new, old in moved.items():
        places |= {new + key[len(old) :]: line for key, line in scenario.places.items() if _below(key, old)}
    return Scenario(raw.get("title", ""), scenario.path, raw, places, scenario.text, moved)


def _below(key: str, top: str) -> bool:
    return key == top or key.startswith((f"{top}.", f"{top}["))


def _from_file(scenario: Scenario, own: Mapping[str, Any]) -> Scenario:
    name = own["file"]
    if len(own) > 1:
        others = ", ".join(key for key in own if key != "file")
        _refuse(scenario, "parent.file", f"a file and {others} are stated together", "either a file or what differs")
    plain = PurePosixPath(name.replace("\\", "/"))
    if not Path(scenario.path or "/").is_file():
        _refuse(scenario, "parent.file", "only a scenario that stands in a file can name another file", "the tables of [parent]")
    if plain.is_absolute() or ".." in plain.parts or ":" in name:
        accepted = "a file beside the scenario or below it"
        _refuse(scenario, "parent.file", "the file lies outside of the scenario's folder", accepted)
    path = Path(scenario.path).parent / plain
    if not path.is_file():
        _refuse(scenario, "parent.file", f"there is no such file: {name}", "the path of a scenario file")
    found = read(path)
    for key in ("parent", "phase"):
        if key in found.raw:
            _refuse(scenario, "parent.file", f"{name} has a {key} itself", "the scenario of one strain under one condition")
    if "measured" not in scenario.raw:
        return found
    if "measured" in found.raw:
        _refuse(scenario, "measured", f"rates are measured here and in {name}", "one of them")
    raw = {**found.raw, "measured": scenario.raw["measured"]}
    return Scenario(found.title, found.path, raw, found.places, found.text)


def _refuse(scenario: Scenario, key: str, words: str, accepted: str) -> None:
    raise place(InputError(words, key=key, accepted=accepted), scenario.path, scenario.places, scenario.inside)
