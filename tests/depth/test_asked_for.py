"""What `headrace refills` shows on request, through the command line: tables, JSON keys, figures, messages."""

from __future__ import annotations

import json
import sys
import xml.etree.ElementTree as ElementTree
from collections.abc import Callable
from pathlib import Path

import pytest

from headrace.outputs.cli import main
from headrace.outputs.cli.optional import filled

EXAMPLES = Path(__file__).parents[2] / "examples" / "scenarios"
LYSINE, STUCK = str(EXAMPLES / "lysine-on-glucose.toml"), str(EXAMPLES / "threonine-without-carboxylase.toml")
Run = Callable[..., tuple[int, str, str]]


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Run:
    def call(*arguments: str) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["headrace", *arguments])
        with pytest.raises(SystemExit) as stopped:
            main.run()
        out, err = capsys.readouterr()
        return int(stopped.value.code or 0), out, err

    return call


def test_nothing_is_worked_out_unless_asked_for(run: Run) -> None:
    code, out, _ = run("refills", LYSINE, "--format", "json")
    assert code == 0 and not {"alternatives", "prices", "certificate", "per_litre"} & set(json.loads(out))


def test_all_of_it_as_json(run: Run) -> None:
    code, out, err = run("refills", LYSINE, "--alternatives", "2", "--changes", "--prices", "--density", "20 g/L", "--certify", "--format", "json")
    found = json.loads(out)
    assert (code, err) == (0, "")
    assert [row["rank"] for row in found["alternatives"]] == [1, 2]
    first = found["alternatives"][0]
    assert isinstance(first["set"], list) and {"aim", "atp", "carbon_fixed", "redox", "extra", "enzyme_high", "changes"} <= set(first)
    assert first["extra"] == 0 and first["aim"] < found["alternatives"][1]["aim"]
    assert found["certificate"]["proven"] is True and found["certificate"]["gap"] < 1e-5
    assert found["certificate"]["feed_carbon_exact"].count("/") == 1
    assert [row["outlet"] for row in found["prices"]] == ["L-lysine", "growth"]
    assert found["prices"][0]["refill"] == 1 and found["prices"][0]["carbon"] == pytest.approx(7.210526, rel=1e-6)
    assert {row["compound"] for row in found["shared_pools"]} >= {"pyruvate", "oxaloacetate"}
    assert {row["is"] for row in found["breakpoints"]} == {"lowest", "bend", "asked for", "end of the table"}
    assert [row["capacity"] for row in found["capacity_lines"]] == [2.0, 0.6, 2.6]
    assert {row["kind"] for row in found["budgets"]} >= {"uptake", "refill", "crossing"}
    assert found["per_litre"]["heat"] == pytest.approx(found["per_litre"]["oxygen"] * 0.46)
    assert found["units"]["tables"]["prices"]["carbon"] == "mol C/mol"


def test_an_infeasible_case_is_certified_and_has_alternatives(run: Run) -> None:
    code, out, _ = run("refills", STUCK, "--certify", "--alternatives", "--changes", "--prices", "--format", "json")
    found = json.loads(out)
    assert code == 1 and found["certificate"]["answer"] == "infeasible" and found["certificate"]["proven"]
    assert found["certificate"]["violation_exact"] == "100247/100000"
    assert ["pep-carboxylase"] in [row["set"] for row in found["alternatives"]] and "prices" not in found


def test_the_tables_for_people(run: Run) -> None:
    code, out, _ = run("refills", STUCK, "--alternatives", "--certify")
    assert code == 1 and "No set of open refills carries it (--changes adds closed ones)." in out and "Certificate" in out
    code, out, _ = run("refills", LYSINE, "--alternatives", "--changes", "--format", "md")
    assert code == 0 and "Smallest sets of refills that carry it" in out and "driving force to say" in out


def test_the_figure(run: Run, tmp_path: Path) -> None:
    folder = tmp_path / "figures"
    code, out, _ = run("refills", LYSINE, "--figures", str(folder))
    (path,) = folder.glob("*.svg")
    assert code == 0 and "Refill needed as an outlet grows" in out
    text = path.read_text()
    drawn = ElementTree.fromstring(text)
    assert drawn.get("viewBox") == "0 0 860 500"
    assert sum(element.tag.endswith("polyline") for element in drawn.iter()) == 1
    words = " ".join(element.text or "" for element in drawn.iter() if element.tag.endswith("text"))
    for said in ("L-lysine", "Corynebacterium glutamicum", "pyruvate carboxylase 2", "carries a yield of 0.463", "asked for: 0.439, needs 1.82", "1: bend"):
        assert said in words


@pytest.mark.parametrize(("arguments", "said"), [(("--density", "20 bars"), "plugin.competition.density"), (("--alternatives", "-3"), "alternatives")])
def test_a_wrong_option_is_said(run: Run, arguments: tuple[str, ...], said: str) -> None:
    code, out, err = run("refills", LYSINE, *arguments)
    assert (code, out) == (2, "") and said in err


def test_options_in_the_scenario_count_too(run: Run, tmp_path: Path) -> None:
    path = tmp_path / "own.toml"
    path.write_text(Path(LYSINE).read_text() + "\n[plugin.alternatives]\nmost = 1\n\n[plugin.certificate]\nprove = true\n")
    _, out, _ = run("refills", str(path), "--format", "json")
    found = json.loads(out)
    assert len(found["alternatives"]) == 1 and found["certificate"]["proven"]


def test_a_number_may_be_left_out() -> None:
    assert filled(["--alternatives", "a.toml"]) == ["--alternatives", "20", "a.toml"]
