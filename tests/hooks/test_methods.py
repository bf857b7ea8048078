"""Several refill methods side by side, through the manager."""

from __future__ import annotations

from typing import Any

import pytest

from headrace.errors import PluginError
from headrace.hooks.manager import Manager
from headrace.values.answers import Ledger, LedgerRow, RefillAnswer
from headrace.values.case import Case

CASE = Case("a case", "a-host", (), (), 0.1, "aerobic", {}, {})


def answer(drained: float) -> RefillAnswer:
    """What is drained is refilled, and nothing else happens."""
    rows = (
        LedgerRow("left", "drained", "an outlet", "cytosol", drained),
        LedgerRow("right", "refilled", "a refill", "cytosol", drained),
    )
    ledger = Ledger(drained, 0.0, 0.0, drained, 0.0, 0.0, rows, ())
    return RefillAnswer("feasible", "none", (), ledger, (), (), (), (), (), (), {})


def method(name: str, drained: float | None) -> type:
    """A refill plugin that finds this much drained; None fails."""

    class Method:
        summary = "Finds what it was told to find."

        def refills(self, case: Case) -> Any:
            if drained is None:
                raise ArithmeticError("no solution")
            return answer(drained)

    Method.name = name  # type: ignore[attr-defined]
    return Method


def merged(*classes: type) -> Any:
    loaded = Manager(first_party=(), classes=classes, trace=False)
    return loaded.refills(CASE, network=None, draws=(), bench=None)  # type: ignore[arg-type]


def test_methods_that_agree_stand_side_by_side() -> None:
    found = merged(method("one", 2.0), method("two", 2.0))
    assert (found.method, found.answer, [name for name, _ in found.others]) == ("one", answer(2.0), ["two"])
    assert not found.findings


def test_methods_that_disagree_are_stopped() -> None:
    found = merged(method("one", 2.0), method("two", 2.5))
    assert {finding.level for finding in found.findings} == {"stop"}


def test_a_method_that_fails_is_a_caution_and_the_other_answers() -> None:
    found = merged(method("one", None), method("two", 2.0))
    assert found.method == "two"
    assert [(finding.level, finding.about) for finding in found.findings] == [("caution", "one")]
    assert "ArithmeticError: no solution" in found.findings[0].message


def test_no_method_at_all_is_an_error() -> None:
    with pytest.raises(PluginError, match="no method gave an answer: plugin one: failed in refills: ArithmeticError"):
        merged(method("one", None))
    with pytest.raises(PluginError, match="no plugin has the refills hook"):
        merged()
