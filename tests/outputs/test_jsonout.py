"""JSON: exactly the promised keys, all digits, nothing that a reader would choke on."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import jsonschema
import pytest

import headrace
from headrace.outputs import jsonout
from headrace.values.answers import Result
from tests.outputs import samples
from tests.outputs.test_pages import RESULTS

SCHEMAS = Path(headrace.__file__).parent / "outputs" / "schemas"
PROMISED = {
    "refills": {
        "": "scenario host answer aim units drains ledger refills feed crossings shortage repairs findings closure versions",
        "drains": "outlet pool compound compartment taken returned shuttled net carbon_net skeletons",
        "ledger": "net_drain released removed refilled supplied residual rows compartments",
        "ledger.rows": "side kind what compartment skeletons",
        "refills": "refill group ec compartment steps skeletons_per_turn least nominal most split capacity cover necessary"
        " open reason atp carbon_fixed",
        "feed": "substrate uptake carbon",
        "crossings": "compound rate",
        "findings": "level check about message source",
        "closure": "C N P S electrons",
        "versions": "headrace facts",
        "units": "rate carbon",
        "rates": "reaction rate least most",
    },
    "infeasible": {"shortage": "pool missing", "repairs": "change kind aim"},
    "drains": {"": "drains ledger units", "ledger": "net_drain"},
    "ceiling": {
        "": "outlet substrate growth mol_per_mol open_mol_per_mol g_per_g cmol_per_cmol electron_ceiling_mol_per_mol"
        " carbon_ceiling_mol_per_mol co2_rule binding answer"
    },
    "grows": {"": "grows rate because missing flips_with_basal"},
}


def strict(schema: Any) -> Any:
    """The schema with no room for keys that it does not name."""
    if isinstance(schema, dict):
        closed = {name: strict(value) for name, value in schema.items()}
        return closed | {"additionalProperties": False} if "properties" in closed and "additionalProperties" not in closed else closed
    return [strict(item) for item in schema] if isinstance(schema, list) else schema


def schema_of(kind: str) -> Any:
    return json.loads((SCHEMAS / f"{kind}.schema.json").read_text())


def written(result: Result, rates: bool = True) -> Any:
    return json.loads(jsonout.text(jsonout.document(result, "0.1.0", rates)))


@pytest.mark.parametrize("name", RESULTS)
def test_answers_have_exactly_the_keys_of_their_schema(name: str) -> None:
    document = written(RESULTS[name])
    jsonschema.Draft202012Validator(strict(schema_of(RESULTS[name].kind))).validate(document)


@pytest.mark.parametrize(("name", "path"), [(name, path) for name, paths in PROMISED.items() for path in paths])
def test_the_promised_keys_are_there(name: str, path: str) -> None:
    part = written(RESULTS[name])
    for step in filter(None, path.split(".")):
        part = part[step]
    for item in part if isinstance(part, list) else [part]:
        assert set(PROMISED[name][path].split()) <= set(item)
    assert part != []


# Keys that come only when asked for: --rates, --bands, and what the scenario's [parent], [measured] and [[phase]] bring.
ASKED_FOR = {"rates", "bands", "drivers", "sampling", "parent", "fold", "measured", "phases", "plan"}


@pytest.mark.parametrize("path", sorted(SCHEMAS.glob("*.json")), ids=lambda path: path.name)
def test_schemas_are_schemas_and_require_every_key_but_those_asked_for(path: Path) -> None:
    schema = json.loads(path.read_text())
    jsonschema.Draft202012Validator.check_schema(schema)
    assert set(schema["properties"]) - set(schema["required"]) <= ASKED_FOR


def test_a_missing_key_is_seen() -> None:
    document = written(RESULTS["refills"])
    del document["ledger"]["residual"]
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.Draft202012Validator(schema_of("refills")).validate(document)


def test_rates_only_when_asked() -> None:
    assert "rates" not in written(RESULTS["refills"], rates=False)
    assert written(RESULTS["refills"])["rates"] == [{"reaction": "fix", "rate": samples.NET, "least": 0.0, "most": "unbounded"}]


def test_all_digits_are_kept() -> None:
    assert written(RESULTS["drains"])["drains"][1]["skeletons"] == 2 / 70
    assert written(RESULTS["drains"])["draws"][1]["skeletons"] == "2/7"


def test_units_are_said_for_people_and_for_machines() -> None:
    units = written(RESULTS["refills"])["units"]
    assert (units["rate"], units["carbon"], units["ucum"]["rate"]) == ("mmol/gDW/h", "mmol C/gDW/h", "mmol/(g.h)")


def test_minus_zero_is_zero() -> None:
    document = jsonout.text(jsonout.document(samples.result("refills", samples.refills(surplus_carbon=-0.0)), "0"))
    assert '"surplus_carbon": 0.0' in document


def test_an_undefined_number_is_refused_not_hidden() -> None:
    with pytest.raises(ValueError, match="NaN"):
        jsonout.text(jsonout.document(samples.result("refills", samples.refills(surplus_carbon=float("nan"))), "0"))


def test_infeasible_has_no_ledger_but_says_what_is_missing() -> None:
    document = written(RESULTS["infeasible"])
    assert document["answer"] == "infeasible" and document["ledger"] is None
    assert document["shortage"] == [{"pool": "C4 acid (vesicle)", "missing": 0.25, "price": None}]
