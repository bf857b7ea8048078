"""Cases with a dozen refills or more, and the same question asked of brute force and of a mixed-integer programme."""

from __future__ import annotations

import random
from collections.abc import Sequence
from itertools import combinations

import highspy
import msgspec
import numpy as np

from headrace.network.build import Network, build
from headrace.network.refills import open_refills
from headrace.network.skeletons import on_route, turnover
from headrace.run import Desk
from headrace.solve.linear import Programme, Session
from headrace.values.case import Limit
from headrace.values.changes import Add
from tests.depth.asked import FEEDS, OUTLETS

HOSTS = ("escherichia-coli", "corynebacterium-glutamicum", "saccharomyces-cerevisiae", "yarrowia-lipolytica")


def network(desk: Desk, seed: int, host: str = "", candidates: int = 12, share: float | None = None) -> Network:
    """A random case in which `candidates` refills are open, reversed and foreign ones among them, each with a limit.

    Every refill that any host has is brought into the cytosol and the organelles, in the direction in which it refills.
    share: the limit of each as a share of the outlet's rate (default: random).
    """
    rng = random.Random(seed)
    host = host or HOSTS[seed % len(HOSTS)]
    question = {"title": "several", "host": host, "growth": "0.02 /h", "aim": {"expression": "open"},
                "feed": [{"substrate": rng.choice([f for f in FEEDS[host] if f != "acetate"])}],
                "conditions": {"oxygen": "aerobic", "supplements": ["biotin"] if "coryne" in host else []},
                "outlet": [{"product": rng.choice(OUTLETS[:6]), "rate": "0.5 mmol/gDW/h"}]}
    places = [c.slug for c in desk.facts.hosts[host].compartments if c.role in ("cytosol", "organelle")]
    own = {(row.reaction, row.place) for row in desk.facts.hosts[host].reactions}
    changes = [Add(reaction, place, direction) for place in places for reaction, direction in foreign(desk)
               if (reaction, place) not in own or direction == "reverse"]
    case = desk.case(question, changes=changes)
    refills = open_refills(build(desk.facts, case))
    chosen = rng.sample(refills, min(candidates, len(refills)))
    kept = {r.row for r in chosen}
    closed = {r.row for r in refills} - kept
    limits = tuple(Limit(r.row, (r.row,), 0.5 * (share or rng.choice([0.3, 0.45, 0.7, 1.0, 1.5, 6.0]))) for r in chosen)
    levels = {s: msgspec.structs.replace(v, level="off") if s in closed else v for s, v in case.levels.items()}
    return build(desk.facts, msgspec.structs.replace(case, limits=limits, levels=levels))


def foreign(desk: Desk) -> list[tuple[str, str]]:
    """(reaction, direction) of every refill that some host's row could run, reversed ones included."""
    facts = desk.facts
    found = set()
    for host in facts.hosts.values():
        for row in host.reactions:
            made = turnover(facts, row.reaction)
            reaction = facts.reactions[row.reaction]
            if abs(made) > 1e-9 and row.reaction not in on_route(facts) and not reaction.transport and not reaction.lumped:
                found.add((row.reaction, "forward" if made > 0 else "reverse"))
    return sorted(found)


def brute_force(lp: Programme, columns: Sequence[int]) -> set[tuple[int, ...]]:
    """Every subset of the columns, smallest first; only supersets of a set that is feasible already are left out."""
    session, found = Session(lp), list[frozenset[int]]()
    for size in range(len(columns) + 1):
        for taken in map(frozenset, combinations(range(len(columns)), size)):
            if any(old <= taken for old in found):
                continue
            for k, j in enumerate(columns):
                session.bound(j, 0.0, float(lp.col_upper[j]) if k in taken else 0.0)
            if session.feasible():
                found.append(taken)
    return {tuple(sorted(each)) for each in found}


def mixed_integer(lp: Programme, columns: Sequence[int], largest: Sequence[float], most: int = 10_000) -> list[tuple[int, ...]]:
    """Least sum of z with 0 <= x_j <= largest_j z_j, z 0 or 1; each set found is cut off together with its supersets."""
    n, k = len(lp.col_lower), len(columns)
    solver = highspy.Highs()
    for name, value in (("output_flag", False), ("threads", 1), ("mip_feasibility_tolerance", 1e-9), ("primal_feasibility_tolerance", 1e-9)):
        solver.setOptionValue(name, value)
    model = highspy.HighsLp()
    model.num_col_, model.num_row_ = n + k, len(lp.row_lower)
    model.col_cost_ = np.concatenate([np.zeros(n), np.ones(k)])
    model.col_lower_, model.col_upper_ = np.concatenate([lp.col_lower, np.zeros(k)]), np.concatenate([lp.col_upper, np.ones(k)])
    model.row_lower_, model.row_upper_ = lp.row_lower, lp.row_upper
    model.a_matrix_.format_ = highspy.MatrixFormat.kColwise
    model.a_matrix_.start_ = np.concatenate([lp.starts, np.full(k, lp.starts[-1])]).astype(np.int32)
    model.a_matrix_.index_, model.a_matrix_.value_ = lp.rows, lp.values
    model.integrality_ = [highspy.HighsVarType.kContinuous] * n + [highspy.HighsVarType.kInteger] * k
    solver.passModel(model)
    for i, (j, bound) in enumerate(zip(columns, largest, strict=True)):
        solver.addRow(-highspy.kHighsInf, 0.0, 2, np.array([j, n + i], dtype=np.int32), np.array([1.0, -bound]))
    found: list[tuple[int, ...]] = []
    while len(found) < most:
        solver.run()
        if solver.getModelStatus() != highspy.HighsModelStatus.kOptimal:
            break
        z = solver.getSolution().col_value[n:]
        taken = tuple(i for i in range(k) if z[i] > 0.5)
        found.append(taken)
        solver.addRow(-highspy.kHighsInf, len(taken) - 1.0, len(taken), np.array([n + i for i in taken], dtype=np.int32), np.ones(len(taken)))
        if not taken:
            break
    return found
