"""Every shipped scenario through every command and format, looked at as a designer would and as a program would."""

from __future__ import annotations

import csv
import json
import re
import sys
from collections.abc import Callable
from io import StringIO
from pathlib import Path

import jsonschema
import pytest

from headrace.outputs import jsonout
from headrace.outputs.cli import main, shared
from headrace.pages import answers, csvtext, markdown, plain
from headrace.pages.model import Table
from headrace.run import Desk
from headrace.values.answers import Result
from headrace.values.facts import Facts
from tests.outputs.test_jsonout import schema_of, strict
from tests.outputs.test_markdown_and_csv import cells

EXAMPLES = sorted((Path(__file__).resolve().parents[2] / "examples" / "scenarios").glob("*.toml"))
NO = {"aspartate-without-refill", "threonine-without-carboxylase"}
SHORTHAND = re.compile(r"\[[cmep]\]|\bakg\b|\baccoa\b|\bproton_out\b|\w \((?:\w+ (?:and|or) )+\w+\)|__")


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk()


@pytest.fixture(scope="module")
def ask(desk: Desk) -> Callable[[str, Path], Result]:
    """Answers, each worked out once."""
    known: dict[tuple[str, Path], Result] = {}

    def answered(kind: str, path: Path) -> Result:
        if (kind, path) not in known:
            known[kind, path] = getattr(desk, kind)(path)
        return known[kind, path]

    return answered


pytestmark = pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
KINDS = pytest.mark.parametrize("kind", ["drains", "refills", "ceiling", "grows"])


@KINDS
def test_the_terminal_keeps_to_80_columns_and_says_names_not_slugs(
    ask: Callable[[str, Path], Result], facts: Facts, kind: str, path: Path
) -> None:
    text = plain.page(answers.page(ask(kind, path), "0.1.0"), 80)
    assert not [line for line in text.splitlines() if len(line) > 80]
    assert not SHORTHAND.search(text)
    assert not slugs_shown(text, facts)


def slugs_shown(text: str, facts: Facts) -> set[str]:
    """Slugs that stand in a text as words and are no part of a label."""
    tables = (facts.compounds, facts.reactions, facts.enzymes, facts.outlets, facts.hosts)
    labels = " ".join(str(item.label).lower() for table in tables for item in table.values())
    rows = {row.slug for host in facts.hosts.values() for row in host.reactions}
    slugs = {slug for table in (*tables, facts.routes, facts.kinds) for slug in table} | rows
    words = set(re.findall(r"[a-z0-9]+(?:-[a-z0-9]+)+", text))
    return {word for word in words & slugs if word not in labels}


@KINDS
def test_json_has_the_keys_of_its_schema(ask: Callable[[str, Path], Result], kind: str, path: Path) -> None:
    result = ask(kind, path)
    document = json.loads(jsonout.text(jsonout.document(result, "0.1.0")))
    schema = strict(schema_of(kind))
    schema["properties"] |= {table.key: {"type": "array"} for table in getattr(result, "tables", ())}
    schema["properties"]["units"]["properties"]["tables"] = {"type": "object"}
    jsonschema.Draft202012Validator(schema).validate(document)


def test_the_ledger_closes_from_the_printed_rows_alone(ask: Callable[[str, Path], Result], path: Path) -> None:
    document = json.loads(jsonout.text(jsonout.document(ask("refills", path), "0.1.0")))
    assert (document["ledger"] is None) == (path.stem in NO)
    if document["ledger"] is None:
        assert document["shortage"] and document["repairs"]
        return
    sides = {side: sum(row["skeletons"] for row in document["ledger"]["rows"] if row["side"] == side) for side in ("left", "right")}
    assert sides["left"] == pytest.approx(sides["right"], abs=1e-9)
    assert all(abs(value) < 1e-9 for value in document["closure"].values())
    for place in document["ledger"]["compartments"]:
        assert abs(place["residual"]) < 1e-9


@KINDS
def test_markdown_tables_and_csv_are_whole(ask: Callable[[str, Path], Result], kind: str, path: Path) -> None:
    page = answers.page(ask(kind, path), "0.1.0")
    filled = [block for block in page.blocks if isinstance(block, Table) and block.rows]
    assert [len(rows) - 1 for rows in cells(markdown.page(page))] == [len(table.rows) for table in filled]
    rows = list(csv.reader(StringIO(csvtext.table(page.main))))
    assert {len(row) for row in rows} == {len(page.main.columns)} and len(rows) == len(page.main.rows) + 1


def test_a_nominal_rate_is_between_least_and_most(ask: Callable[[str, Path], Result], path: Path) -> None:
    document = json.loads(jsonout.text(jsonout.document(ask("refills", path), "0.1.0")))
    for row in [*document["groups"], *document["refills"]]:
        if None not in (row["least"], row["nominal"], row["most"]):
            assert row["least"] - 1e-6 <= row["nominal"] <= row["most"] + 1e-6, row


def test_a_review_is_written_with_every_source_it_cites(
    desk: Desk, path: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.setattr(shared, "desk", lambda: desk)
    monkeypatch.setattr(sys, "argv", ["headrace", "review", str(path), "-o", str(tmp_path)])
    with pytest.raises(SystemExit) as stopped:
        main.run()
    assert stopped.value.code == (1 if path.stem in NO else 0)
    assert str(tmp_path / f"{path.stem}.md") in capsys.readouterr().out
    text = (tmp_path / f"{path.stem}.md").read_text()
    body, sources = text.split("## Sources")
    cited = {int(number) for found in re.findall(r"\[(\d+(?:, \d+)*)\]", body) for number in found.split(", ")}
    listed = {int(number) for number in re.findall(r"^(\d+)\. ", sources, re.M)}
    assert cited == listed and cited
    assert "biosafety rules" in text and "lower bound from a model" in text
    for row in cells(text)[0][1:]:
        assert row[3] and (row[4] or not row[5]), row
