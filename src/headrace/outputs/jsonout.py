"""Answers as JSON. The keys are a promise (schemas/ has one JSON Schema per answer); all digits, units beside the numbers.

Slugs name facts, texts name outlets and pools; rates are mmol/gDW/h, carbon is mmol C/gDW/h, skeletons mmol/gDW/h.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from fractions import Fraction
from typing import Any

import msgspec

from headrace.outputs.besidejson import PLAN_UNITS, beside
from headrace.pages.notes import collected
from headrace.values.answers import (
    AddedTable,
    CeilingAnswer,
    DrainRow,
    Draw,
    GrowsAnswer,
    Ledger,
    RefillAnswer,
    RefillRow,
    Result,
)

UNITS = {
    "rate": "mmol/gDW/h",
    "carbon": "mmol C/gDW/h",
    "skeletons": "mmol/gDW/h",
    "growth": "1/h",
    "per_mole": "mol/mol",
}
UCUM = {"rate": "mmol/(g.h)", "carbon": "mmol/(g.h)", "skeletons": "mmol/(g.h)", "growth": "/h", "per_mole": "mol/mol"}


def text(document: dict[str, Any]) -> str:
    """The document as indented JSON. Raises ValueError for a number that JSON can't say (never written as null)."""
    return msgspec.json.format(msgspec.json.encode(_plain(document)), indent=2).decode() + "\n"


def document(result: Result, headrace: str, rates: bool = False) -> dict[str, Any]:
    """The JSON document of a result. headrace: version; rates: add the rate of every reaction (refills only)."""
    build: dict[str, Callable[[Result, bool], dict[str, Any]]] = {
        "drains": _drains,
        "refills": _refills,
        "ceiling": _ceiling,
        "grows": _grows,
    }
    found = build[result.kind](result, rates)
    if result.plan is not None:
        found["units"]["plan"] = dict(PLAN_UNITS)
    if result.tables:
        found["units"]["tables"] = {each.key: _table_units(each) for each in result.tables}
    return {
        "scenario": result.case.title,
        "host": result.case.host,
        **found,
        **beside(result),
        **{each.key: _table(each) for each in result.tables},
        "findings": [msgspec.structs.asdict(finding) for finding in collected(result)],
        "versions": {"headrace": headrace, "facts": result.facts_version},
        "plugins": list(result.plugins),
    }


def _table(table: AddedTable) -> list[dict[str, Any]] | dict[str, Any]:
    """A table that a check adds: one object per row, or the one object of a single row."""
    keys = [column.key for column in table.columns]
    rows = [dict(zip(keys, row, strict=True)) for row in table.rows]
    return rows[0] if table.single else rows


def _table_units(table: AddedTable) -> dict[str, str]:
    return {column.key: column.unit for column in table.columns if column.unit}


def _units() -> dict[str, Any]:
    return {**UNITS, "ucum": dict(UCUM)}


def _drains(result: Result, rates: bool) -> dict[str, Any]:
    return {
        "units": _units(),
        "drains": [msgspec.structs.asdict(row) for row in result.drains],
        "ledger": {"net_drain": math.fsum(row.skeletons for row in result.drains)},
        "draws": [_draw(draw) for draw in result.draws],
    }


def _draw(draw: Draw) -> dict[str, Any]:
    """A route vector per mole of outlet; exact fractions as text ("3/2")."""
    pools = [
        {
            "compound": term.compound,
            "compartment": term.place,
            "taken": term.taken,
            "returned": term.returned,
            "shuttled": term.shuttled,
            "net": term.taken - term.returned,
        }
        for term in draw.pools
    ]
    names = {"outlet": draw.outlet, "label": draw.label, "scale": list(draw.scale), "routes": list(draw.routes)}
    exact = {"pools": pools, "needs": draw.needs, "skeletons": draw.skeletons}
    more = {"draws": draw.draws, "missing": list(draw.missing)}
    return {**names, **exact, **more, "origin": draw.origin, "recalled": draw.recalled}


def _refills(result: Result, rates: bool) -> dict[str, Any]:
    answer = result.answer
    assert isinstance(answer, RefillAnswer)
    found: dict[str, Any] = {
        "answer": answer.answer,
        "aim": answer.aim,
        "units": _units(),
        "drains": [msgspec.structs.asdict(row) for row in _drain_rows(result, answer)],
        "ledger": _ledger(answer.ledger),
        "groups": [msgspec.to_builtins(row) for row in answer.groups],
        "refills": [_refill(row) for row in answer.refills],
        "removals": [msgspec.structs.asdict(row) for row in answer.removals],
        "feed": [msgspec.structs.asdict(row) for row in answer.feed],
        "crossings": [msgspec.structs.asdict(row) for row in answer.crossings],
        "drawn": [msgspec.structs.asdict(row) for row in answer.drawn],
        "shortage": [msgspec.structs.asdict(row) for row in answer.shortage],
        "repairs": [msgspec.structs.asdict(row) for row in answer.repairs],
        "closure": dict(answer.closure),
        "energy": dict(answer.energy),
        "demands": dict(answer.scalars),
        "surplus_carbon": answer.surplus_carbon,
        "cycling_cap": answer.cycling_cap,
        "design_cover": answer.design_cover,
    }
    return found | ({"rates": [msgspec.structs.asdict(row) for row in answer.rates]} if rates else {})


def _drain_rows(result: Result, answer: RefillAnswer) -> tuple[DrainRow, ...]:
    return answer.drains or result.drains


def _ledger(ledger: Ledger | None) -> dict[str, Any] | None:
    return None if ledger is None else msgspec.to_builtins(ledger)


def _refill(row: RefillRow) -> dict[str, Any]:
    found: dict[str, Any] = msgspec.to_builtins(row)
    return found


def _ceiling(result: Result, rates: bool) -> dict[str, Any]:
    answer = result.answer
    assert isinstance(answer, CeilingAnswer)
    found = {name: value for name, value in msgspec.structs.asdict(answer).items() if name != "findings"}
    return found | {"binding": list(answer.binding), "units": _units()}


def _grows(result: Result, rates: bool) -> dict[str, Any]:
    answer = result.answer
    assert isinstance(answer, GrowsAnswer)
    return {
        "grows": answer.grows,
        "rate": answer.rate,
        "because": list(answer.because),
        "missing": list(answer.missing),
        "flips_with_basal": answer.flips_with_basal,
        "fitted": answer.fitted,
        "rules": list(answer.rules),
        "repairs": [msgspec.structs.asdict(row) for row in answer.repairs],
        "units": _units(),
    }


def _plain(value: Any) -> Any:
    """Plain data: fractions as exact text, -0.0 as 0.0, infinity as "unbounded"; NaN is refused."""
    if isinstance(value, dict):
        return {name: _plain(item) for name, item in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(item) for item in value]
    if isinstance(value, Fraction):
        return str(value)
    if isinstance(value, float):
        if math.isnan(value):
            raise ValueError("a result holds a number that is not defined (NaN)")
        return "unbounded" if math.isinf(value) else value + 0.0
    return value
