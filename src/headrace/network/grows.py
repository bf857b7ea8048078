"""Whether a strain grows on a medium: largest growth rate at the stated feed, at least 0.01 1/h; if not, why not.

Growth is a variable here: basal rows carry at most basal-level * growth, so the LP stays linear.
"""

from __future__ import annotations

import msgspec
import numpy as np

from headrace.network import repair
from headrace.network.aim import feed_columns
from headrace.network.build import Network, build, programme
from headrace.network.refills import closed_refills, open_refills
from headrace.network.shortage import shortage
from headrace.solve.linear import Session, Solution
from headrace.values.answers import GrowsAnswer
from headrace.values.case import Case, Feed, Finding
from headrace.values.facts import Facts

LEAST_GROWTH = 0.01
ASSUMED_UPTAKE = 10.0
ABOVE_BASAL = 3.0


def largest_growth(facts: Facts, case: Case) -> tuple[float, Solution, Network]:
    """Largest growth rate in 1/h (0 if even none is feasible) with feeds up to their uptake."""
    net = build(facts, _open_feeds(case))
    lp = programme(net, free={"growth": {"growth": 1.0}}, rates={k: v for k, v in net.rates.items() if k != "growth"})
    for j in feed_columns(net):
        lp.col_lower[j] = 0.0
    session = Session(lp)
    gain = np.zeros(session.columns)
    gain[len(net.columns)] = 1.0
    found = session.maximise(gain)
    return (found.objective if found.optimal else 0.0), found, net


def _open_feeds(case: Case) -> Case:
    feeds = tuple(Feed(f.compound, ASSUMED_UPTAKE if f.uptake is None else f.uptake) for f in case.feeds)
    return msgspec.structs.replace(case, feeds=feeds, growth=0.0, growth_yield=None, demands=())


def grows(facts: Facts, case: Case) -> GrowsAnswer:
    """Answer `headrace grows`. Words name pools, closed refills and the smallest changes that would open growth."""
    rate, found, net = largest_growth(facts, case)
    yes = rate >= LEAST_GROWTH
    flips = any((largest_growth(facts, _basal(case, factor))[0] >= LEAST_GROWTH) != yes for factor in (0.0, ABOVE_BASAL)) \
        if case.energy.get("basal-level") else False
    notes = [Finding("note", "growth", f.compound, f"no uptake is stated for {facts.compounds[f.compound].label}; "
                     f"{ASSUMED_UPTAKE:g} mmol/gDW/h assumed") for f in case.feeds if f.uptake is None]
    running = {c.name for j, c in enumerate(net.columns) if found.optimal and c.kind == "row" and found.x[j] > 1e-9}
    closed = {r.row for r in closed_refills(net) if r.row in case.levels}
    rules = tuple(sorted({r for row in (running if yes else closed) for r in case.levels[row].rules}))
    fitted = any(case.levels[row].fitted for row in running)
    if yes:
        used = [r for r in open_refills(net) if r.column is not None and found.x[r.column] > 1e-9]
        words = tuple(f"{case.rows[r.row].label} refills" for r in used) or ("no refill is needed",)
        return GrowsAnswer(True, rate, words, (), flips, rules, fitted, findings=tuple(notes))
    return _no(facts, case, rate, flips, rules, fitted, notes)


def _basal(case: Case, factor: float) -> Case:
    return msgspec.structs.replace(case, energy={**case.energy, "basal-level": case.energy["basal-level"] * factor})


def _no(facts: Facts, case: Case, rate: float, flips: bool, rules: tuple[str, ...], fitted: bool,
        notes: list[Finding]) -> GrowsAnswer:
    slow = msgspec.structs.replace(_open_feeds(case), growth=LEAST_GROWTH)
    slow = msgspec.structs.replace(slow, feeds=tuple(Feed(f.compound) for f in slow.feeds))
    net = build(facts, slow)
    short, _ = shortage(net)
    because = [f"{s.pool} can't be served" for s in short] or ["energy: maintenance can't be met at this feed"]
    because += [f"{case.rows[r.row].label if r.row in case.rows else facts.reactions[r.reaction].label} is closed: {r.reason}"
                for r in closed_refills(net)]
    return GrowsAnswer(False, rate, tuple(because), tuple(s.pool for s in short), flips, rules, fitted,
                       repair.repairs(net), tuple(notes))
