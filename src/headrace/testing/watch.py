"""A plugin under watch: the same class, whose hooks run guarded and are recorded with their arguments."""

from __future__ import annotations

import functools
import inspect
import sys
from collections.abc import Callable, Mapping
from dataclasses import fields, is_dataclass
from fractions import Fraction
from typing import Any, NamedTuple

from msgspec import Struct
from numpy import ndarray

from headrace.hooks.entry import hooks_of
from headrace.testing.guard import guarded


class Call(NamedTuple):
    """One call of a hook. changed: which arguments were not what they had been; tried: what the guard saw."""

    hook: str
    arguments: dict[str, Any]
    answer: Any
    changed: tuple[str, ...]
    tried: tuple[str, ...]


def watched(plugin: type, log: list[Call]) -> type:
    """A subclass of the plugin that writes each call to the log. A generator is run to its end inside the guard."""
    attributes: dict[str, Any] = {"__module__": plugin.__module__, "__doc__": plugin.__doc__}
    for hook in hooks_of(plugin):
        attributes[hook] = _recorded(hook, getattr(plugin, hook), log)
    return type(plugin.__name__, (plugin,), attributes)


def call(plugin: type, hook: str, arguments: Mapping[str, Any]) -> Any:
    """Call a hook of a fresh plugin, unguarded, with those of the arguments that it takes."""
    method = getattr(plugin(), hook)
    names = inspect.signature(method).parameters
    return settled(method(**{name: value for name, value in arguments.items() if name in names}))


def settled(answer: Any) -> Any:
    """An answer that does not change any more: generators and lists as tuples."""
    return tuple(answer) if inspect.isgenerator(answer) or isinstance(answer, list) else answer


def _recorded(hook: str, method: Callable[..., Any], log: list[Call]) -> Callable[..., Any]:
    names = list(inspect.signature(method).parameters)[1:]

    @functools.wraps(method)
    def run(self: Any, *given: Any) -> Any:  # hooks are called by position, in the method's own order
        arguments = dict(zip(names, given, strict=True))
        before = {name: fingerprint(value) for name, value in arguments.items()}
        with guarded(sys.modules.get(method.__module__)) as tried:
            answer = settled(method(self, *given))
        changed = tuple(name for name, value in arguments.items() if fingerprint(value) != before[name])
        log.append(Call(hook, arguments, answer, changed, tuple(tried)))
        return answer

    return run


def fingerprint(value: Any) -> Any:
    """A plain copy of a value, equal as long as the value stays the same. Objects that keep notes count by identity."""
    if isinstance(value, str | int | float | Fraction | bytes | bool | None):
        return value
    if isinstance(value, Struct):
        return type(value).__name__, tuple(fingerprint(getattr(value, name)) for name in value.__struct_fields__)
    if is_dataclass(value):
        return type(value).__name__, tuple(fingerprint(getattr(value, field.name)) for field in fields(value))
    if isinstance(value, Mapping):
        return tuple((fingerprint(key), fingerprint(item)) for key, item in value.items())
    if isinstance(value, list | tuple):
        return tuple(fingerprint(item) for item in value)
    if isinstance(value, set | frozenset):
        return frozenset(fingerprint(item) for item in value)
    if isinstance(value, ndarray):
        return value.shape, value.dtype.str, value.tobytes()
    return id(value)
