"""Planted faults: each is caught by at least one of the proofs that every build or answer goes through.

Proofs: balance of each reaction; skeleton contents against the facts' own routes; exact route vectors; nothing from
nothing; the ledger (route vectors against contents and rates), whole; closure of elements and electrons from what is
printed. The facts as shipped raise none of them.
"""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import msgspec
import pytest

from headrace.errors import HeadraceError
from headrace.graph.balance import imbalance
from headrace.graph.contents import contents
from headrace.network.nothing import prove
from headrace.run import Desk
from headrace.values.facts import Facts, HostReaction, Term

SCENARIOS = ("arginine-on-glucose", "heme-from-succinyl-coa", "lysine-on-glucose")
replace = msgspec.structs.replace


@pytest.fixture(scope="module")
def facts() -> Facts:
    return Desk(strangers=False).facts


def open_cases(desk: Desk):
    for host in desk.facts.hosts:
        question = {"title": "open", "host": host, "growth": "0.1 /h", "feed": [{"substrate": "glucose"}]}
        yield "open", desk.case(question, opened=True)


def alarms(facts: Facts) -> dict[str, str]:
    """Which proofs speak up on these facts, with what they say."""
    found: dict[str, str] = {}
    for slug, reaction in facts.reactions.items():
        if wrong := imbalance(reaction.terms, facts.compounds):
            found["balance"] = f"{slug}: {wrong}"
    try:
        if contents(facts) != facts.contents:
            found["contents"] = "the contents in use are not those that the routes give"
        desk = Desk(strangers=False, facts=facts)
        if leaks := prove(facts, open_cases(desk)):
            found["nothing"] = f"{leaks[0].probe} in {leaks[0].host}"
        for name in SCENARIOS:
            answer = desk.refills(f"examples/scenarios/{name}.toml").answer
            if answer.answer != "feasible":
                found["feasible"] = f"{name}: {answer.shortage[:1]}"
                continue
            if abs(answer.ledger.residual) > 1e-9:
                found["ledger"] = f"{name}: {answer.ledger.residual}"
            if max(abs(v) for v in answer.closure.values()) > 1e-8:
                found["closure"] = f"{name}: {answer.closure}"
    except HeadraceError as error:
        found["routes"] = str(error)[:200]
    return found


def reaction(facts: Facts, slug: str, change: Callable[[tuple[Term, ...]], tuple[Term, ...]]) -> Facts:
    old = facts.reactions[slug]
    return replace(facts, reactions={**facts.reactions, slug: replace(old, terms=change(old.terms))})


def flip(facts: Facts, slug: str, compound: str) -> Facts:
    return reaction(facts, slug, lambda ts: tuple(replace(t, count=-t.count) if t.compound == compound else t for t in ts))


def drop(facts: Facts, slug: str, *compounds: str) -> Facts:
    return reaction(facts, slug, lambda ts: tuple(t for t in ts if t.compound not in compounds))


def swap(facts: Facts, slug: str, old: str, new: str) -> Facts:
    return reaction(facts, slug, lambda ts: tuple(replace(t, compound=new) if t.compound == old else t for t in ts))


def content(facts: Facts, compound: str, value: int) -> Facts:
    return replace(facts, contents={**facts.contents, compound: Fraction(value)})


def rows(facts: Facts, host: str, change: Callable[[HostReaction], HostReaction | None]) -> Facts:
    old = facts.hosts[host]
    kept = tuple(r for r in (change(row) for row in old.reactions) if r is not None)
    return replace(facts, hosts={**facts.hosts, host: replace(old, reactions=kept)})


def without(facts: Facts, host: str, slug: str) -> Facts:
    assert any(row.slug == slug for row in facts.hosts[host].reactions)
    return rows(facts, host, lambda row: None if row.slug == slug else row)


def both(facts: Facts, host: str, *slugs: str) -> Facts:
    assert {row.slug for row in facts.hosts[host].reactions} >= set(slugs)
    return rows(facts, host, lambda row: replace(row, direction="both") if row.slug in slugs else row)


def unrouted(facts: Facts, uses: str) -> Facts:
    """The reaction left out of every route."""
    routes = {s: replace(r, uses=tuple(u for u in r.uses if u != uses)) for s, r in facts.routes.items()}
    return replace(facts, routes=routes)


def free_motive(facts: Facts) -> Facts:
    """An oxidase that pumps without spending electrons."""
    return drop(facts, "ubiquinol-oxidase-bc1-cytochrome-c-oxidase" if "ubiquinol-oxidase-bc1-cytochrome-c-oxidase" in facts.reactions
                else next(s for s in facts.reactions if s.startswith("menaquinol-oxidase")), "oxygen", "water")


E, C, S = "escherichia-coli", "corynebacterium-glutamicum", "saccharomyces-cerevisiae"
FAULTS: dict[str, Callable[[Facts], Facts]] = {
    "a sign flipped: PEP carboxylase gives bicarbonate": lambda f: flip(f, "pep-carboxylase", "bicarbonate"),
    "a sign flipped: transaminase takes both": lambda f: flip(f, "aspartate-transaminase", "oxoglutarate"),
    "a returned fumarate dropped": lambda f: drop(f, "argininosuccinate-lyase", "fumarate"),
    "a returned succinate dropped": lambda f: drop(f, "succinyldiaminopimelate-desuccinylase", "succinate"),
    "a taken proton dropped": lambda f: drop(f, "malate-dehydrogenase", "proton"),
    "ATP made without ADP": lambda f: drop(f, "pyruvate-kinase", "adp"),
    "a carbon dioxide too few": lambda f: drop(f, "oxoglutarate-dehydrogenase", "carbon-dioxide"),
    "NADPH taken for NADH": lambda f: swap(f, "malate-dehydrogenase", "nadh", "nadph"),
    "a wrong content: glutamate none": lambda f: content(f, "glutamate", 0),
    "a wrong content: heme one": lambda f: content(f, "heme-b", 1),
    "a wrong content: lysine two": lambda f: content(f, "lysine", 2),
    "a wrong content: pyruvate one": lambda f: content(f, "pyruvate", 1),
    "a wrong content: glyoxylate one": lambda f: content(f, "glyoxylate", 1),
    "a wrong content: arginine two": lambda f: content(f, "arginine", 2),
    "a free motive proton": free_motive,
    "both transhydrogenases both ways": lambda f: both(f, E, *(r.slug for r in f.hosts[E].reactions if "transhydrogenase" in r.reaction)),
    "ATP hydrolysis backwards": lambda f: both(f, S, *(r.slug for r in f.hosts[S].reactions if r.reaction in f.roles["energy-release"])),
    "synthase without its protons": lambda f: drop(f, "atp-synthase-four-protons", "motive-proton"),
    "a lost carrier: oxoglutarate can't leave the matrix": lambda f: rows(f, S, lambda r: None if any(
        t.compound in ("oxoglutarate", "glutamate", "citrate", "isocitrate") for t in f.reactions[r.reaction].terms) and r.outer and
        {r.outer, r.inner} == {"cytosol", "mitochondrion"} else r),
    "a lost carrier: no way in for glucose": lambda f: without(f, C, "glucose-phosphotransferase"),
    "a route without one step": lambda f: unrouted(f, "argininosuccinate-lyase"),
    "a route that names a refill": lambda f: replace(f, routes={s: replace(r, uses=(*r.uses, "pep-carboxylase")) if r.makes == "aspartate" else r
                                                               for s, r in f.routes.items()}),
    "an anchor taken for none": lambda f: replace(f, compounds={**f.compounds, "fumarate": replace(f.compounds["fumarate"], anchor=False)}),
    "a formula one carbon short": lambda f: replace(f, compounds={**f.compounds, "oxaloacetate": replace(
        f.compounds["oxaloacetate"], formula={**f.compounds["oxaloacetate"].formula, "C": 3})}),
    "a charge off by one": lambda f: replace(f, compounds={**f.compounds, "pyruvate": replace(f.compounds["pyruvate"], charge=0)}),
}


def test_the_shipped_facts_raise_no_alarm(facts):
    assert alarms(facts) == {}


@pytest.mark.parametrize("name", FAULTS)
def test_a_planted_fault_is_caught(facts, name):
    raised = alarms(FAULTS[name](facts))
    assert raised, f"{name}: nothing noticed"
    assert len(FAULTS) >= 20


def test_more_than_one_proof_does_the_catching(facts):
    """No single proof carries the whole list: each of these is needed by some fault that no balance check sees."""
    needed = {"nothing": "both transhydrogenases both ways", "contents": "a wrong content: heme one", "routes": "a route without one step",
              "feasible": "a lost carrier: no way in for glucose"}
    for proof, fault in needed.items():
        raised = alarms(FAULTS[fault](facts))
        assert proof in raised and "balance" not in raised, (fault, raised)


def test_a_wrong_content_shows_in_the_ledger_itself(facts):
    """Without the comparison of contents, the ledger of a case that drains the compound still does not close."""
    for compound, value in (("lysine", 2), ("glutamate", 0)):
        desk = Desk(strangers=False, facts=content(facts, compound, value))
        assert abs(desk.refills("examples/scenarios/lysine-on-glucose.toml").answer.ledger.residual) > 1e-6, compound
