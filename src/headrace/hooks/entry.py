"""What a plugin declares about itself, read from its class; a class that breaks the contract is refused here.

A plugin is a class that can be made without arguments. `name` (a slug) and `summary` (one line) are required;
`families`, `facts_needed`, `options` and `example` may be left out. Its public methods named like a hook are its hooks.
"""

from __future__ import annotations

import inspect
import re
from collections.abc import Callable
from difflib import get_close_matches
from pathlib import Path
from typing import Any

from msgspec import NODEFAULT, Struct
from msgspec.structs import fields

from headrace.errors import PluginError
from headrace.hooks.specs import Hooks

HOOKS: tuple[str, ...] = tuple(name for name in vars(Hooks) if not name.startswith("_"))
_SLUG = re.compile(r"[a-z][a-z0-9]*(-[a-z0-9]+)*")


class Entry(Struct, frozen=True):
    """A plugin as the table, `headrace plugins` and the documentation show it. origin: "headrace" or a distribution."""

    name: str
    module: str
    attribute: str
    summary: str
    hooks: tuple[str, ...]
    families: tuple[str, ...] = ()
    origin: str = "headrace"


class Refusal(Struct, frozen=True):
    """A plugin that is not used, and why."""

    name: str
    origin: str
    reason: str


def describe(plugin: Any, origin: str = "headrace") -> Entry:
    """The entry of a plugin class. Raises PluginError, with the class's name and the reason, for a wrong one."""
    if not inspect.isclass(plugin):
        raise PluginError(str(getattr(plugin, "__name__", plugin)), f"a plugin is a class, not {type(plugin).__name__}")
    name = getattr(plugin, "name", None)
    shown = name if isinstance(name, str) and name else plugin.__qualname__
    for fault in (_attribute_fault(plugin), _hook_fault(plugin), _option_fault(plugin), _construction_fault(plugin)):
        if fault:
            raise PluginError(shown, fault, hint="DEVELOPERS.md lists what a plugin declares")
    return Entry(
        name=shown,
        module=plugin.__module__,
        attribute=plugin.__qualname__,
        summary=str(getattr(plugin, "summary", "")),
        hooks=hooks_of(plugin),
        families=tuple(getattr(plugin, "families", ())),
        origin=origin,
    )


def hooks_of(plugin: type) -> tuple[str, ...]:
    """The hooks that a class implements, in the order of a run."""
    return tuple(name for name in HOOKS if callable(getattr(plugin, name, None)))


def _attribute_fault(plugin: type) -> str:
    name, summary = getattr(plugin, "name", None), getattr(plugin, "summary", None)
    if not isinstance(name, str) or not _SLUG.fullmatch(name):
        return f"its name must be lower-case words joined by hyphens, not {name!r}"
    if not isinstance(summary, str) or not summary.strip() or "\n" in summary:
        return "its summary must be one line of text"
    for attribute in ("families", "facts_needed"):
        value = getattr(plugin, attribute, ())
        if not isinstance(value, tuple) or not all(isinstance(item, str) and item for item in value):
            return f"its {attribute} must be a tuple of names, not {value!r}"
    if not isinstance(getattr(plugin, "example", ""), str | Path):
        return "its example must be the path or the text of a scenario"
    return ""


def _hook_fault(plugin: type) -> str:
    hooks = hooks_of(plugin)
    if near := _misspelt(plugin):
        return f"it has a method {near[0]!r}, which is no hook; the hook is {near[1]!r} (a helper may start with _)"
    if not hooks:
        return f"it has no hook; the hooks are {', '.join(HOOKS)}"
    families = bool(getattr(plugin, "families", ()))
    if families != ("drains" in hooks):
        return "it claims families but has no drains hook" if families else "it answers drains but claims no families"
    faults = (_signature_fault(name, getattr(plugin, name)) for name in hooks)
    return next((fault for fault in faults if fault), "")


def _misspelt(plugin: type) -> tuple[str, str] | None:
    for name, value in vars(plugin).items():
        if name.startswith("_") or name in HOOKS or not inspect.isroutine(value):
            continue
        if close := get_close_matches(name, HOOKS, n=1, cutoff=0.8):
            return name, close[0]
    return None


def _signature_fault(name: str, method: Callable[..., Any]) -> str:
    given = list(inspect.signature(method).parameters.values())[1:]
    accepted = list(inspect.signature(getattr(Hooks, name)).parameters)[1:]
    shown = f"{name}({', '.join(accepted)})"
    for parameter in given:
        if parameter.kind in (parameter.VAR_POSITIONAL, parameter.VAR_KEYWORD):
            return f"its {name} takes *{parameter.name}; the hook is {shown}"
        if parameter.kind is parameter.POSITIONAL_ONLY:
            return f"its {name} takes {parameter.name!r} by position only; hooks are called by name"
        if parameter.name not in accepted:
            return f"its {name} takes {parameter.name!r}, which the hook does not give; the hook is {shown}"
    return ""


def _option_fault(plugin: type) -> str:
    options = getattr(plugin, "options", None)
    if options is None:
        return ""
    if not (inspect.isclass(options) and issubclass(options, Struct)):
        return "its options must be a msgspec Struct class"
    if not options.__struct_config__.forbid_unknown_fields:
        return "its options must forbid unknown fields, so that a misspelt key is not ignored"
    for field in fields(options):
        if field.default is NODEFAULT and field.default_factory is NODEFAULT:
            return f"its option {field.name!r} needs a default, since a scenario may leave it out"
    return ""


def _construction_fault(plugin: type) -> str:
    given = inspect.signature(plugin).parameters.values()
    needed = [item.name for item in given if item.default is item.empty and item.kind < item.VAR_POSITIONAL]
    needed += [item.name for item in given if item.default is item.empty and item.kind is item.KEYWORD_ONLY]
    return f"it cannot be made without {', '.join(needed)}" if needed else ""
