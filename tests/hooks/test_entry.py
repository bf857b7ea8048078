"""A plugin class says what it is; a wrong one is refused with its name and the reason."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from msgspec import Struct

from headrace.errors import PluginError
from headrace.hooks.entry import HOOKS, Entry, describe


class Options(Struct, frozen=True, forbid_unknown_fields=True):
    depth: int = 3


class Good:
    name = "good-one"
    summary = "Drains nothing worth keeping."
    families = ("curiosities",)
    options = Options

    def facts(self) -> Path | None:
        return None

    def drains(self, case: Any, outlet: Any) -> tuple[Any, ...]:
        return ()


def test_a_right_class_gives_its_entry() -> None:
    assert describe(Good, "a-distribution") == Entry(
        name="good-one",
        module=Good.__module__,
        attribute="Good",
        summary="Drains nothing worth keeping.",
        hooks=("facts", "drains"),
        families=("curiosities",),
        origin="a-distribution",
    )


def test_there_are_five_hooks_in_the_order_of_a_run() -> None:
    assert HOOKS == ("facts", "drains", "refills", "checks", "report")


class Loose(Struct):
    depth: int = 3


class Bare(Struct, forbid_unknown_fields=True):
    depth: int


def broken(**changes: Any) -> type:
    """Good with some attributes changed, or removed (None)."""
    attributes = {key: value for key, value in vars(Good).items() if not key.startswith("__")}
    attributes |= changes
    return type("Broken", (), {key: value for key, value in attributes.items() if value is not None})


def drains_any(self: Any, case: Any, outlet: Any, **more: Any) -> tuple[Any, ...]:
    return ()


def drains_wrong(self: Any, case: Any, product: Any) -> tuple[Any, ...]:
    return ()


def drains_by_position(self: Any, case: Any, /) -> tuple[Any, ...]:
    return ()


def needs_more(self: Any, size: int) -> None:
    return None


WRONG = [
    (broken(name="Good One"), "lower-case words joined by hyphens"),
    (broken(name=None), "lower-case words joined by hyphens"),
    (broken(summary="two\nlines"), "one line"),
    (broken(summary=None), "one line"),
    (broken(families=["a-list"]), "must be a tuple of names"),
    (broken(families=()), "claims no families"),
    (broken(drains=None), "claims families but has no drains"),
    (broken(drains=None, facts=None, families=()), "it has no hook"),
    (broken(check=lambda self: ()), "the hook is 'checks'"),
    (broken(drains=drains_any), "takes *more"),
    (broken(drains=drains_wrong), "takes 'product', which the hook does not give; the hook is drains(case, outlet, routes)"),
    (broken(drains=drains_by_position), "by position only"),
    (broken(options={"depth": 3}), "must be a msgspec Struct"),
    (broken(options=Loose), "must forbid unknown fields"),
    (broken(options=Bare), "option 'depth' needs a default"),
    (broken(example=3), "its example must be"),
    (broken(__init__=needs_more), "cannot be made without size"),
    (Good(), "a plugin is a class"),
]


@pytest.mark.parametrize(("plugin", "reason"), WRONG, ids=[reason for _, reason in WRONG])
def test_a_wrong_class_is_refused_with_the_reason(plugin: Any, reason: str) -> None:
    with pytest.raises(PluginError, match=".") as error:
        describe(plugin)
    assert reason in str(error.value)
    assert error.value.plugin
