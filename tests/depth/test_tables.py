"""Tables that checks add: on the page, in Markdown and in JSON, under keys that an answer itself does not have."""

from __future__ import annotations

import json

import pytest

from headrace.hooks import merge
from headrace.outputs import jsonout
from headrace.pages import answers, markdown, plain
from headrace.run import Desk
from headrace.values.answers import Result

SCENARIO = """
title = "threonine on glucose"
host = "escherichia-coli"
growth = "0.2 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "L-threonine"
rate = "1.0 mmol/gDW/h"
[strain]
limit = { pep-carboxylase = "0.12 U/mg" }
"""
ADDED = {"capacity", "energetics", "reaction_energies", "effectors", "cofactors"}


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk()


@pytest.fixture(scope="module")
def result(desk: Desk) -> Result:
    return desk.refills(SCENARIO)


def test_json_has_each_table_under_its_key(result: Result) -> None:
    document = json.loads(jsonout.text(jsonout.document(result, "0")))
    assert set(document) >= ADDED
    force = document["energetics"][0]
    assert force["refill"] == "pep-carboxylase"
    assert force["force"] == pytest.approx(49.55, abs=0.1)
    assert document["units"]["tables"]["energetics"]["force"] == "kJ/mol"
    assert document["capacity"][0]["cover"] == pytest.approx(document["groups"][0]["cover"])


@pytest.mark.parametrize("question", ["drains", "refills", "grows", "ceiling"])
def test_no_table_can_take_a_key_of_an_answer(desk: Desk, question: str) -> None:
    found: Result = getattr(desk, question)(SCENARIO)
    document = jsonout.document(found, "0")
    own = set(document) - {table.key for table in found.tables}
    assert question in ("grows", "ceiling") or own <= merge.TAKEN


def test_a_terminal_shows_the_main_ones_and_names_the_rest(result: Result) -> None:
    page = answers.page(result, "0")
    text = plain.page(page)
    assert "Capacity and enzyme" in text
    assert "Driving force (kJ/mol)" in text
    assert "With --format md or json also: Energies of the steps; What acts on the refills; What the refills" in text
    assert "\nEnergies of the steps" not in text
    shown = markdown.page(page)
    assert all(title in shown for title in ("Energies of the steps", "What acts on the refills", "What the refills hold"))


def test_drains_alone_have_no_such_table(desk: Desk) -> None:
    assert not desk.drains(SCENARIO).tables
