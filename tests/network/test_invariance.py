"""Answers do not depend on names, order, the direction a reaction is written in, or on lumping."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from typing import Any

import msgspec
import pytest

from headrace.graph.contents import contents
from headrace.run import Desk
from headrace.values.codec import decode_hook, encode_hook
from headrace.values.facts import Basis, Compound, Facts, Reaction, Term

SCENARIOS = ("lysine-on-glucose", "heme-from-succinyl-coa", "glutamate-on-acetate", "oil-return-as-pyruvate",
             "threonine-without-carboxylase", "arginine-on-glucose")
WORDS = {"label", "aliases", "text", "note", "reason", "condition", "fraction"}
TABLES = {"outlets", "compounds", "reactions", "enzymes", "sources", "routes", "contents", "electron_pairs", "draws"}
FLIP = {"forward": "reverse", "reverse": "forward", "both": "both"}


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def summary(desk: Desk, name: str) -> dict[str, Any]:
    """What a designer reads of an answer, without slugs: feed, ledger, groups by size, closure."""
    answer = desk.refills(f"examples/scenarios/{name}.toml").answer
    found: dict[str, Any] = {"answer": answer.answer, "feed": [f.uptake for f in answer.feed]}
    if answer.ledger:
        found["ledger"] = [getattr(answer.ledger, k) for k in ("net_drain", "released", "removed", "refilled", "supplied")]
        found["groups"] = sorted(g.nominal for g in answer.groups if g.nominal > 1e-6)
        found["closed"] = sum(not r.open for r in answer.refills)
    found["shortage"] = sum(s.missing for s in answer.shortage)
    return found


def rebuilt(facts: Facts, change: Callable[[Any], Any]) -> Facts:
    plain = change(msgspec.to_builtins(facts, enc_hook=encode_hook))
    return msgspec.convert(plain, Facts, dec_hook=decode_hook, strict=False)


def renamed(facts: Facts) -> Facts:
    """Every compound, reaction, enzyme, source and route gets another slug; labels stay, since users write those."""
    old = {*facts.compounds, *facts.reactions, *facts.enzymes, *facts.sources, *facts.routes} - set(facts.hosts)
    new = {slug: f"x{i}-renamed" for i, slug in enumerate(sorted(old))}

    def walk(value: Any, key: str = "") -> Any:
        if isinstance(value, dict):
            return {new.get(k, k) if key in TABLES else k: walk(v, k) for k, v in value.items()}
        if isinstance(value, list | tuple):
            return [walk(v, key) for v in value]
        if isinstance(value, str) and "/" in value and key == "rows":  # host/row
            host, _, row = value.partition("/")
            return f"{host}/{new.get(row, row)}"
        if isinstance(value, str) and key not in WORDS:
            return new.get(value, value)
        return value

    return rebuilt(facts, walk)


def permuted(facts: Facts) -> Facts:
    """Every table and list of independent things in reverse order."""
    hosts = {s: msgspec.structs.replace(h, reactions=h.reactions[::-1], composition=h.composition[::-1], expressions=h.expressions[::-1],
                                        quantities=h.quantities[::-1], absences=h.absences[::-1]) for s, h in reversed(facts.hosts.items())}
    tables = {k: dict(reversed(getattr(facts, k).items())) for k in ("compounds", "reactions", "enzymes", "routes", "outlets", "contents")}
    tables["reactions"] = {s: msgspec.structs.replace(r, terms=r.terms[::-1]) for s, r in tables["reactions"].items()}
    return msgspec.structs.replace(facts, hosts=hosts, **tables)


def backwards(facts: Facts) -> Facts:
    """Every second reaction written the other way round, with its rows' directions."""
    turned = set(sorted(facts.reactions)[::2]) - set(facts.roles["energy-release"])
    reactions = {s: msgspec.structs.replace(r, terms=tuple(msgspec.structs.replace(t, count=-t.count) for t in r.terms)) if s in turned else r
                 for s, r in facts.reactions.items()}
    hosts = {s: msgspec.structs.replace(h, reactions=tuple(
        msgspec.structs.replace(row, direction=FLIP[row.direction]) if row.reaction in turned else row for row in h.reactions))
        for s, h in facts.hosts.items()}
    return msgspec.structs.replace(facts, reactions=reactions, hosts=hosts)


def split(facts: Facts) -> Facts:
    """Some one-way reactions inside compartments in two steps through an invented complex of all that they take."""
    one_way = {row.reaction for h in facts.hosts.values() for row in h.reactions if row.direction == "forward" and row.place}
    other = {row.reaction for h in facts.hosts.values() for row in h.reactions if row.direction != "forward"}
    chosen = [r for r in sorted(one_way - other) if not facts.reactions[r].transport and r not in facts.roles["energy-release"]
              and not any(facts.compounds[t.compound].membrane for t in facts.reactions[r].terms)][::7]
    chosen += [r for r in ("pyruvate-carboxylase", "pep-carboxylase", "malate-synthase") if r in one_way and r not in chosen]
    compounds, reactions, routes = dict(facts.compounds), dict(facts.reactions), dict(facts.routes)
    for slug in chosen:
        whole, complex_ = reactions[slug], f"complex-{slug}"
        taken = [t for t in whole.terms if t.count < 0]
        formula: dict[str, int] = {}
        scale = 1 / min(-t.count for t in taken) if any(t.count.denominator > 1 for t in taken) else Fraction(1)
        for t in taken:
            for element, n in facts.compounds[t.compound].formula.items():
                formula[element] = formula.get(element, 0) + int(-t.count * scale * n)
        charge = int(sum(-t.count * scale * facts.compounds[t.compound].charge for t in taken))
        compounds[complex_] = Compound(complex_, complex_, formula, charge, Basis("seen"))
        first = Term(complex_, 1 / scale)
        reactions[f"bind-{slug}"] = Reaction(f"bind-{slug}", f"bind {slug}", (*taken, first), whole.basis)
        reactions[slug] = msgspec.structs.replace(whole, terms=(msgspec.structs.replace(first, count=-first.count), *(t for t in whole.terms if t.count > 0)))
        for name, route in routes.items():
            if slug in route.uses:
                routes[name] = msgspec.structs.replace(route, uses=(*route.uses, f"bind-{slug}"))
    hosts = {}
    for s, h in facts.hosts.items():
        more = tuple(msgspec.structs.replace(row, slug=f"bind-{row.slug}", label=f"bind {row.label}", reaction=f"bind-{row.reaction}")
                     for row in h.reactions if row.reaction in chosen)
        hosts[s] = msgspec.structs.replace(h, reactions=h.reactions + more)
    changed = msgspec.structs.replace(facts, compounds=compounds, reactions=reactions, routes=routes, hosts=hosts, contents={})
    return msgspec.structs.replace(changed, contents=contents(changed))


@pytest.mark.parametrize("change", [renamed, permuted, backwards, split], ids=lambda f: f.__name__)
def test_answers_do_not_change(desk, change):
    other = Desk(strangers=False, facts=change(desk.facts))
    for name in SCENARIOS:
        ours, theirs = summary(desk, name), summary(other, name)
        if change is split:  # more rows, so more that is closed
            ours.pop("closed", None), theirs.pop("closed", None)
        assert ours.pop("answer") == theirs.pop("answer") and ours.keys() == theirs.keys(), name
        for key, value in ours.items():
            assert theirs[key] == pytest.approx(value, abs=2e-6), (name, key)


def test_contents_do_not_depend_on_order_or_writing(desk):
    for change in (permuted, backwards):
        assert contents(change(desk.facts)) == desk.facts.contents
