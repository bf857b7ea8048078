"""Skeleton contents against textbooks, against a reviewed table, and against the sparsest account.

tests/data/contents.csv is the reviewed table: a change there needs a line in graph_data/CHANGELOG.md.
"""

from __future__ import annotations

import csv
from fractions import Fraction
from pathlib import Path

import msgspec
import numpy as np
import pytest
from scipy.optimize import linprog
from scipy.sparse import csr_array

from headrace.errors import FactsError
from headrace.graph.contents import contents, fixed, turnover
from headrace.values.facts import Facts, Reaction, Term

TABLE = Path(__file__).parents[1] / "data" / "contents.csv"
TEXTBOOK = "which atoms of a product come from which precursor: textbooks of biochemistry"

# Skeletons per mole, each with its reason; TEXTBOOK is the source of all but those that say otherwise.
KNOWN: dict[str, tuple[int, str]] = {
    "citrate": (1, "an anchor: one oxaloacetate with an acetyl group"),
    "glyoxylate": (0, "the other half of isocitrate; succinate keeps the backbone"),
    "glutamate": (1, "2-oxoglutarate"),
    "glutamine": (1, "2-oxoglutarate"),
    "proline": (1, "2-oxoglutarate"),
    "arginine": (1, "2-oxoglutarate; the aspartate leaves as fumarate"),
    "argininosuccinate": (2, "arginine with the fumarate still in it"),
    "ornithine": (1, "2-oxoglutarate"),
    "putrescine": (1, "ornithine less carbon dioxide"),
    "spermidine": (2, "putrescine and the backbone of methionine"),
    "aspartate": (1, "oxaloacetate"),
    "threonine": (1, "oxaloacetate"),
    "methionine": (1, "oxaloacetate; sulfur and methyl come from elsewhere"),
    "homocysteine": (1, "oxaloacetate"),
    "isoleucine": (1, "oxaloacetate by 2-oxobutanoate, and pyruvate"),
    "lysine": (1, "oxaloacetate and pyruvate, or 2-oxoglutarate and acetyl-CoA"),
    "succinyl-diaminopimelate": (2, "diaminopimelate with the succinyl group still on"),
    "saccharopine": (2, "lysine with the 2-oxoglutarate still in it"),
    "beta-alanine": (1, "aspartate less carbon dioxide"),
    "ectoine": (1, "aspartate semialdehyde"),
    "ump": (1, "orotate from aspartate"),
    "ctp": (1, "orotate from aspartate"),
    "dttp": (1, "orotate from aspartate"),
    "gmp": (0, "purines take nitrogen from aspartate, which leaves as fumarate"),
    "histidine": (0, "phosphoribosyl diphosphate and an adenylate that comes back"),
    "serine": (0, "3-phosphoglycerate"),
    "glycine": (0, "serine less a one-carbon unit"),
    "leucine": (0, "pyruvate and acetyl-CoA"),
    "tryptophan": (0, "chorismate, phosphoribosyl diphosphate and serine"),
    "palmitate": (0, "eight acetyl-CoA"),
    "squalene": (0, "acetyl-CoA, or pyruvate and triose phosphate"),
    "ergosterol": (0, "acetyl-CoA"),
    "5-aminolevulinate": (1, "succinyl-CoA and glycine, or glutamate"),
    "porphobilinogen": (2, "two 5-aminolevulinate"),
    "heme-b": (8, "eight 5-aminolevulinate"),
    "siroheme": (8, "eight 5-aminolevulinate"),
    "chlorophyll-a": (8, "eight 5-aminolevulinate; phytol carries none"),
    "itaconate": (1, "cis-aconitate less carbon dioxide"),
    "2-methylcitrate": (1, "oxaloacetate and propanoyl-CoA"),
    "propanoyl-coa": (0, "fed as propanoate; the mutase to succinyl-CoA refills (design, section 1)"),
}

# Refills and removals by one turn as written (design, section 1), and what else the facts have.
REFILLS = {"malate-synthase": 1, "methylmalonyl-coa-mutase": 1, "pep-carboxylase": 1, "pyruvate-carboxylase": 1}
REMOVALS = {
    "malic-enzyme-nad": -1,
    "malic-enzyme-nadp": -1,
    "oxaloacetate-decarboxylase": -1,
    "pep-carboxykinase-atp": -1,
    "pep-carboxykinase-gtp": -1,
    "threonine-aldolase": -1,
}
OTHERS = {
    "beta-alanine-transaminase": (
        -1,
        "aspartate's backbone, less one carbon, becomes a three-carbon acid that none is counted in",
    ),
    "methylthioadenosine-salvage": (1, "rebuilds the backbone of methionine from ribose"),
    "quinolinate-synthase": (-1, "the entry into NAD, a coenzyme, which carries none by definition"),
    "threonine-dehydrogenase-ligase": (-1, "threonine to glycine and acetyl-CoA"),
}

# Compounds that the sparsest account leaves open upwards at no cost. The first group is the propanoyl-CoA of the design.
TIES = {
    "propanoate",
    "propanoyl-coa",
    "s-methylmalonyl-coa",
    "r-methylmalonyl-coa",
    "2-methylcitrate",
    "2-methyl-cis-aconitate",
    "2-methylisocitrate",
    "malonate-semialdehyde",
    "3-hydroxypropanoate",
}


def test_contents_are_whole_and_reviewed(facts: Facts) -> None:
    with TABLE.open(encoding="utf-8") as file:
        reviewed = {row["compound"]: Fraction(row["skeletons"]) for row in csv.DictReader(file)}
    assert reviewed == facts.contents
    assert all(value.denominator == 1 and value >= 0 for value in facts.contents.values())
    assert set(facts.contents) == set(facts.compounds)


@pytest.mark.parametrize("name", sorted(KNOWN))
def test_textbook_contents(facts: Facts, name: str) -> None:
    value, reason = KNOWN[name]
    assert facts.contents[name] == value, f"{reason} ({TEXTBOOK})"


def test_routes_conserve_skeletons(facts: Facts) -> None:
    for route in facts.routes.values():
        assert all(turnover(facts.reactions[name], facts.contents) == 0 for name in route.uses), route.slug


def test_refills_and_removals_are_those_of_the_design(facts: Facts) -> None:
    found = {
        slug: made
        for slug, reaction in facts.reactions.items()
        if not reaction.transport and (made := turnover(reaction, facts.contents))
    }
    assert found == REFILLS | REMOVALS | {slug: made for slug, (made, _) in OTHERS.items()}


def test_carriers_move_skeletons_and_make_none(facts: Facts) -> None:
    assert not [slug for slug, r in facts.reactions.items() if r.transport and turnover(r, facts.contents)]


def test_the_sparsest_account_agrees(facts: Facts, capsys: pytest.CaptureFixture[str]) -> None:
    """min sum_j w_j |y S_j| (20 on route reactions, 1 on others), then least sum of y: the same whole numbers.

    The contents are not made that way; this is a second method on the same reactions.
    """
    account = Account(facts)
    ours = account.cost(facts.contents)
    best, low = account.solve(account.weights)
    assert best == pytest.approx(ours, abs=1e-6)
    _, low = account.solve(account.ones, best)
    assert account.read(low) == {name: float(facts.contents[name]) for name in account.names}
    _, high = account.solve(-account.ones, best)
    ties = {name for name, value in account.read(high).items() if value > float(facts.contents[name]) + 1e-6}
    with capsys.disabled():
        print(f"\nsparsest account: {best:g} skeletons made or unmade; ties, open upwards: {', '.join(sorted(ties))}")
    assert ties == TIES


class Account:
    """The LP of the sparsest account over compounds whose content is not given by definition."""

    def __init__(self, facts: Facts) -> None:
        self.facts, self.known = facts, fixed(facts)
        self.reactions = [r for r in facts.reactions.values() if not r.transport]
        touched = {term.compound for reaction in self.reactions for term in reaction.terms}
        self.names = sorted(touched - set(self.known))
        on_route = {name for route in facts.routes.values() for name in route.uses}
        self.prices = np.array([20.0 if r.slug in on_route else 1.0 for r in self.reactions])
        n, m = len(self.names), len(self.reactions)
        number = {name: i for i, name in enumerate(self.names)}
        self.given = np.zeros(m)
        rows, columns, values = [], [], []
        for j, reaction in enumerate(self.reactions):
            for term in reaction.terms:
                if term.compound in self.known:
                    self.given[j] += float(term.count * self.known[term.compound])
                else:
                    rows.append(j)
                    columns.append(number[term.compound])
                    values.append(float(term.count))
        counts = csr_array((values, (rows, columns)), shape=(m, n)).toarray()
        gap = -np.eye(m)
        self.table = csr_array(np.block([[counts, gap], [-counts, gap]]))
        self.right = np.concatenate([-self.given, self.given])
        self.weights = np.concatenate([np.zeros(n), self.prices])
        self.ones = np.concatenate([np.ones(n), np.zeros(m)])

    def cost(self, values: dict[str, Fraction]) -> float:
        """Weighted skeletons that given contents make or unmake."""
        return float(sum(w * abs(float(turnover(r, values))) for w, r in zip(self.prices, self.reactions, strict=True)))

    def solve(self, aim: np.ndarray, account: float | None = None) -> tuple[float, np.ndarray]:
        table, right = self.table, self.right
        if account is not None:
            table = csr_array(np.vstack([table.toarray(), self.weights]))
            right = np.append(right, account + 1e-7)
        bounds = [(0, 30)] * len(self.names) + [(0, None)] * len(self.reactions)
        found = linprog(aim, A_ub=table, b_ub=right, bounds=bounds, method="highs")
        assert found.status == 0
        return float(found.fun), found.x

    def read(self, x: np.ndarray) -> dict[str, float]:
        return {name: round(float(x[i]), 5) for i, name in enumerate(self.names)}


def test_contents_do_not_hang_on_how_a_reaction_is_written(facts: Facts) -> None:
    flip = {"forward": "reverse", "reverse": "forward", "both": "both"}

    def turned(reaction: Reaction) -> Reaction:
        return msgspec.structs.replace(reaction, terms=tuple(Term(t.compound, -t.count, t.side) for t in reaction.terms))

    hosts = {
        slug: msgspec.structs.replace(
            host,
            reactions=tuple(msgspec.structs.replace(row, direction=flip[row.direction]) for row in reversed(host.reactions)),
        )
        for slug, host in facts.hosts.items()
    }
    other = msgspec.structs.replace(facts, reactions={s: turned(r) for s, r in facts.reactions.items()}, hosts=hosts)
    assert contents(other) == facts.contents


def test_a_refill_in_a_route_is_a_fault(facts: Facts) -> None:
    route = facts.routes["aspartate"]
    wrong = msgspec.structs.replace(route, uses=(*route.uses, "pep-carboxylase"))
    with pytest.raises(FactsError, match="contradictory skeleton contents; at odds: .*pep-carboxylase"):
        contents(msgspec.structs.replace(facts, routes={**facts.routes, "aspartate": wrong}))


def test_a_loose_end_of_a_route_is_a_fault(facts: Facts) -> None:
    roles = {**facts.roles, "by-product": ()}
    with pytest.raises(FactsError, match="do not determine the skeleton content of .*(spermidine|methylthioribose)"):
        contents(msgspec.structs.replace(facts, roles=roles))
