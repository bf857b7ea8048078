"""The skeleton law on random cases, recomputed from printed JSON, reviewed contents and independent route vectors.

500 cases over the four hosts: random feeds (sugars, glycerol, acids, skeleton-bringing ones), growth, outlets, forced
by-products, reversed PEP carboxykinase or malic enzymes, knock-outs of rows that are not necessary, oxygen. A case is
built to be feasible: outlets are kept only if the host can make them, and uptake is left out.
"""

from __future__ import annotations

import csv
import json
import random
from fractions import Fraction
from pathlib import Path

import pytest

from headrace.network.routes import RouteBook
from headrace.outputs.jsonout import document, text
from headrace.run import Desk

CONTENTS = Path(__file__).parents[1] / "data" / "contents.csv"
MANY = 500
FEEDS = {
    "escherichia-coli": ["glucose", "glycerol", "acetate", "succinate", "L-malate", "fumarate", "gluconate", "pyruvate"],
    "corynebacterium-glutamicum": ["glucose", "acetate", "L-lactate", "pyruvate", "citrate", "ethanol"],
    "saccharomyces-cerevisiae": ["glucose", "ethanol", "acetate", "galactose", "L-lactate"],
    "yarrowia-lipolytica": ["glucose", "glycerol", "acetate", "citrate", "oleate", "ethanol"],
}
OUTLETS = ["L-glutamate", "L-lysine", "L-aspartate", "L-threonine", "L-arginine", "L-proline", "uridylate", "heme b",
           "succinate", "L-methionine", "putrescine", "guanylate", "L-glutamine", "citrate", "malate", "fumarate"]
REVERSED = {"escherichia-coli": "pep-carboxykinase-atp running in reverse", "corynebacterium-glutamicum": "pep-carboxykinase-gtp running in reverse",
            "saccharomyces-cerevisiae": "pep-carboxykinase-atp running in reverse", "yarrowia-lipolytica": "pep-carboxykinase-atp running in reverse"}
RELEASES = {"escherichia-coli": ["acetate", "succinate"], "corynebacterium-glutamicum": ["acetate", "succinate"],
            "saccharomyces-cerevisiae": ["succinate", "ethanol"], "yarrowia-lipolytica": ["citrate", "isocitrate"]}


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def scenario(rng: random.Random) -> dict:
    host = rng.choice(sorted(FEEDS))
    outlets = rng.sample(OUTLETS, rng.choice([1, 1, 2, 3]))
    question = {
        "title": "random", "host": host, "growth": f"{rng.choice([0, 0.02, 0.05, 0.1])} /h",
        "feed": [{"substrate": s} for s in rng.sample(FEEDS[host], rng.choice([1, 1, 2]))],
        "conditions": {"oxygen": "aerobic", "supplements": ["biotin"] if host.startswith("coryne") else []},
        "outlet": [{"product": p, "rate": f"{rng.uniform(0.01, 0.5):.4f} mmol/gDW/h"} for p in outlets],
        "aim": {"expression": rng.choice(["as expressed", "open"])},
    }
    if rng.random() < 0.3:
        question["strain"] = {"add": [REVERSED[host]]}
    if rng.random() < 0.3:
        question["conditions"]["release"] = RELEASES[host]
    if rng.random() < 0.3:
        question["conditions"]["supplements"] += ["L-glutamate" if host[0] in "sy" else "L-aspartate"]
    return question


def recompute(answer: dict, case, book: RouteBook, contents: dict[str, Fraction]) -> tuple[float, float]:
    """(residual, scale) of the law from printed numbers: refill rows, removals, crossings; drains from route vectors."""
    drained = 0.0
    for i, demand in enumerate(case.demands):
        for compound, count in demand.draws.items():
            drained += float(book.vector(compound, demand.place).skeletons * count) * answer["demands"][f"outlet.{i}"]
    for part in book.host.composition:
        if part.oxygen in ("", "present"):
            drained += float(book.vector(part.compound, part.place).skeletons * part.amount) * answer["demands"]["growth"]
    rows = answer["ledger"]["rows"]
    refilled = sum(r["skeletons"] for r in rows if r["kind"] == "refilled")
    removed = sum(r["skeletons"] for r in rows if r["kind"] == "removed")
    moved = {c["compound"]: c["rate"] for c in answer["crossings"]}
    net_in = sum(rate * float(contents[name]) for name, rate in moved.items())
    return drained + removed - refilled - net_in, max(1.0, drained, refilled)


def test_random_cases_close(desk, capsys):
    contents = {r["compound"]: Fraction(r["skeletons"]) for r in csv.DictReader(CONTENTS.read_text("utf-8").splitlines())}
    rng = random.Random(20261201)
    done = tried = 0
    seen = {"removed": 0, "released": 0, "supplied": 0, "reversed": 0, "carried": 0}
    worst = 0.0
    while done < MANY:
        tried += 1
        question = scenario(rng)
        result = desk.refills(question)
        if result.answer.answer != "feasible":
            assert tried - done < MANY, "too few random cases are feasible to mean anything"
            continue
        done += 1
        answer = json.loads(text(document(result, "test")))
        book = RouteBook(desk.facts, result.case)
        residual, scale = recompute(answer, result.case, book, contents)
        worst = max(worst, abs(residual) / scale)
        assert abs(residual) < 1e-9 * scale, (question, residual)
        assert abs(answer["ledger"]["residual"]) < 1e-9 * scale
        for cell in answer["ledger"]["compartments"]:
            assert abs(cell["residual"]) < 1e-9 * scale, (question, cell)
        for name, left in answer["closure"].items():
            assert abs(left) < 1e-8, (question, name, left)
        ledger = answer["ledger"]
        for kind in ("removed", "released", "supplied"):
            seen[kind] += ledger[kind] > 1e-9
        seen["reversed"] += any("reverse" in r["refill"] and (r["most"] or 0) > 1e-9 for r in answer["refills"] if r["open"])
        seen["carried"] += any(c["carried_in"] > 1e-9 for c in ledger["compartments"])
    with capsys.disabled():
        print(f"\nrandom cases: {done} of {tried} feasible, worst relative residual {worst:.1e}, with {seen}")
    assert all(count >= 10 for count in seen.values()), seen
