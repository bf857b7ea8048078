"""What stands beside a requirement, as JSON keys; each only where there is something to say.

    measured    recoveries, reconciled rates, the test, what would explain a gross error
    parent      the strain that exists, in short;  fold: the design against it
    phases      each phase with what its groups carry;  plan: totals, peaks, and the phase that binds
    bands       P5, P50, P95;  drivers: Sobol indices;  sampling: samples, seed, inputs

Names of parts differ from those of the answer itself ("carried", not "groups"), so that no query over saved answers takes a
phase or the parental strain for the design.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from msgspec import to_builtins
from msgspec.structs import asdict

from headrace.values.answers import RefillAnswer, Result
from headrace.values.measured import Reconciliation
from headrace.values.phases import PhaseRow, Plan
from headrace.values.uncertainty import Bands, Driver

_RATE = {"measured": "read_rate", "error": "reading_error", "remaining": "remaining_error"}
_TEST = {"h": "chi_square", "freedom": "degrees_of_freedom", "p": "chance", "error": "reading_error"}
PLAN_UNITS = {"at_end": "mmol/L/h", "total": "mmol/L", "biomass": "gDW/L", "integral": "gDW h/L", "grams": "g/L", "hours": "h"}


def beside(result: Result) -> dict[str, Any]:
    """The keys of a result on refills; {} where nothing stands beside it."""
    found: dict[str, Any] = {}
    if result.measured is not None:
        found["measured"] = _measured(result.measured)
    if result.parent is not None:
        found |= {"parent": _parent(result.parent), "fold": [asdict(row) for row in result.folds]}
    if result.plan is not None:
        found |= {"phases": [_phase(row) for row in result.plan.phases], "plan": _plan(result.plan)}
    if result.bands is not None:
        found |= _bands(result.bands)
    return found


def _measured(found: Reconciliation) -> dict[str, Any]:
    tested = {"chi_square": found.h, "degrees_of_freedom": found.freedom, "chance": found.p, "test_level": found.level}
    return {
        "verdict": found.verdict,
        "named": found.named,
        **tested,
        "exact_gap": found.gap,
        "balances": list(found.balances),
        "respiratory_quotient": found.respiratory_quotient,
        "recoveries": _builtins(found.recoveries),
        "reconciled_rates": [_renamed(row, _RATE) for row in found.rates],
        "suspicions": [_renamed(row, _TEST) for row in found.suspicions],
    }


def _parent(result: Result) -> dict[str, Any]:
    answer = result.answer
    assert isinstance(answer, RefillAnswer)
    law = answer.ledger
    return {
        "strain": result.case.title,
        "answer": answer.answer,
        "growth": answer.scalars.get("growth"),
        "net_drain": law and law.net_drain,
        "refilled": law and law.refilled,
        "removed": law and law.removed,
        "supplied": law and law.supplied,
        "measured": None if result.measured is None else _measured(result.measured),
        "notes": [f"{each.level}: {each.message}" for each in dict.fromkeys((*result.findings, *answer.findings))],
    }


def _phase(row: PhaseRow) -> dict[str, Any]:
    return _renamed(row, {"groups": "carried", "answer": "verdict", "drained": "net_drain"})


def _plan(plan: Plan) -> dict[str, Any]:
    """Drained and refilled are skeletons over the plan, mmol/L."""
    names = {"groups": "carried", "drained": "drained_total", "refilled": "refilled_total", "findings": "notes"}
    found = _renamed(plan, names)
    del found["phases"]
    return found


def _bands(found: Bands) -> dict[str, Any]:
    sampling = {name: value for name, value in to_builtins(found).items() if name not in ("bands", "drivers")}
    sampling["inputs"] = [_input(each) for each in sampling["inputs"]]
    rows = [_renamed(band, {"carried": "capacity_enough"}) for band in found.bands]
    return {"bands": rows, "drivers": [_driver(each) for each in found.drivers], "sampling": sampling}


def _driver(driver: Driver) -> dict[str, Any]:
    names = {"first": "alone", "first_error": "alone_error", "total": "with_others", "total_error": "with_others_error"}
    return _renamed(driver, names)


def _builtins(rows: Sequence[Any]) -> list[dict[str, Any]]:
    return [dict(to_builtins(row)) for row in rows]


def _renamed(row: Any, names: dict[str, str]) -> dict[str, Any]:
    return {names.get(name, name): value for name, value in to_builtins(row).items()}


def _input(row: dict[str, Any]) -> dict[str, Any]:
    return {"which" if name == "index" else name: value for name, value in row.items() if name not in ("factor", "offset")}
