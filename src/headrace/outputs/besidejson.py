"""What stands beside a requirement, as JSON keys; each only where there is something to say.

    measured    recoveries, reconciled rates, the test, what would explain a gross error
    parent      the strain that exists: its answer in short;  fold: the design against it
    phases      each phase with what its groups carry;  plan: totals, peaks, and the phase that binds
    bands       P5, P50, P95;  drivers: Sobol indices;  sampling: samples, seed, inputs
"""

from __future__ import annotations

from typing import Any

from msgspec import to_builtins
from msgspec.structs import asdict

from headrace.values.answers import RefillAnswer, Result
from headrace.values.uncertainty import Bands

UNITS = {"volumetric": "mmol/L/h", "total": "mmol/L", "biomass": "gDW/L", "integral": "gDW h/L", "mass": "g/L", "time": "h"}


def beside(result: Result) -> dict[str, Any]:
    """The keys of a result on refills; {} where nothing stands beside it."""
    found: dict[str, Any] = {}
    if result.measured is not None:
        found["measured"] = to_builtins(result.measured)
    if result.parent is not None:
        found |= {"parent": _parent(result.parent), "fold": [asdict(row) for row in result.folds]}
    if result.plan is not None:
        plan = to_builtins(result.plan)
        found |= {"phases": plan.pop("phases"), "plan": plan | {"units": UNITS}}
    if result.bands is not None:
        found |= _bands(result.bands)
    return found


def _parent(result: Result) -> dict[str, Any]:
    answer = result.answer
    assert isinstance(answer, RefillAnswer)
    sums = ("net_drain", "refilled", "removed", "supplied")
    law = None if answer.ledger is None else {key: getattr(answer.ledger, key) for key in sums}
    return {
        "scenario": result.case.title,
        "answer": answer.answer,
        "demands": dict(answer.scalars),
        "ledger": law,
        "groups": [to_builtins(row) for row in answer.groups],
        "refills": [to_builtins(row) for row in answer.refills if row.open],
        "feed": [asdict(row) for row in answer.feed],
        "crossings": [asdict(row) for row in answer.crossings],
        "measured": None if result.measured is None else to_builtins(result.measured),
        "findings": [asdict(finding) for finding in dict.fromkeys((*result.findings, *answer.findings))],
    }


def _bands(found: Bands) -> dict[str, Any]:
    sampling = {name: value for name, value in to_builtins(found).items() if name not in ("bands", "drivers")}
    return {
        "bands": [asdict(band) for band in found.bands],
        "drivers": [asdict(driver) for driver in found.drivers],
        "sampling": sampling,
    }
