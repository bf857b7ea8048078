"""One turn of the cycle, exactly, from the reactions of the graph.

3 NADH, 1 quinol, 1 GTP (or ATP) and 2 CO2 per acetyl-CoA; 10 ATP at 2.5 ATP per NADH and 1.5 per quinol (common
practice; both the products and the two ratios stand in every textbook of biochemistry).
"""

from __future__ import annotations

from collections import defaultdict
from fractions import Fraction

import pytest

from headrace import graph

TURN = ("citrate-synthase", "aconitase-dehydration", "aconitase-hydration", "isocitrate-dehydrogenase-nad",
        "oxoglutarate-dehydrogenase", "succinate-dehydrogenase", "fumarase", "malate-dehydrogenase")


def net(facts, reactions):
    total = defaultdict(Fraction)
    for slug in reactions:
        for term in facts.reactions[slug].terms:
            total[term.compound] += term.count
    return {k: v for k, v in total.items() if v}


@pytest.mark.parametrize("synthetase, charged", [("succinyl-coa-synthetase-gdp", "gtp"), ("succinyl-coa-synthetase-adp", "atp")])
def test_one_turn(synthetase, charged):
    facts = graph.load()
    total = net(facts, (*TURN, synthetase))
    assert total["acetyl-coa"] == -1 and total["coa"] == 1
    assert (total["nadh"], total["ubiquinol"], total[charged], total["carbon-dioxide"]) == (3, 1, 1, 2)
    anchors = {c for c in total if facts.compounds[c].anchor}
    assert not anchors, "a turn conserves its skeletons"
    assert total["nadh"] * Fraction("2.5") + total["ubiquinol"] * Fraction("1.5") + total[charged] == 10
