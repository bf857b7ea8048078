"""`headrace ceiling` and energy yields against published figures; the source stands beside each check."""

from __future__ import annotations

import hashlib
from fractions import Fraction

import msgspec
import pytest

from headrace.network.build import build
from headrace.network.ceiling import largest
from headrace.run import Desk
from headrace.values.changes import Close

# Kaleta C, Schauble S, Rinas U, Schuster S (2013) Biotechnol J 8:1105-1114 (doi from memory: 10.1002/biot.201200267), table 1,
# column of the linear programme with balanced cofactors; 1 NADH = 1 NADPH = 2 quinol = 2 ATP; mol per mol.
AMINO_ACIDS = """
L-alanine glucose 2.0|L-alanine glycerol 1.0|L-alanine acetate 0.5|L-arginine glycerol 0.51|L-asparagine glycerol 1.0
L-aspartate glucose 1.86|L-aspartate glycerol 1.0|L-aspartate acetate 0.5|L-cysteine glucose 1.03|L-cysteine acetate 0.27
L-glutamate glucose 1.15|L-glutamate acetate 0.33|L-glutamine glucose 1.19|L-glutamine glycerol 0.61|glycine glucose 2.73
glycine glycerol 1.54|glycine acetate 0.71|L-histidine glycerol 0.49|L-histidine acetate 0.22|L-isoleucine acetate 0.2
L-leucine glucose 0.75|L-leucine glycerol 0.38|L-lysine glucose 0.8|L-lysine glycerol 0.47|L-methionine glycerol 0.36
L-methionine acetate 0.16|L-phenylalanine glucose 0.56|L-phenylalanine acetate 0.14|L-proline glucose 1.01
L-proline acetate 0.29|L-serine glucose 2.0|L-serine glycerol 1.0|L-serine acetate 0.5|L-threonine glucose 1.3
L-threonine acetate 0.35|L-tryptophan glycerol 0.25|L-tryptophan acetate 0.12|L-tyrosine glucose 0.58
L-tyrosine glycerol 0.3|L-valine glucose 1.0|L-valine glycerol 0.5|L-valine acetate 0.25
"""
PUBLISHED = [tuple(cell.rsplit(" ", 2)) for line in AMINO_ACIDS.split("\n") for cell in line.split("|") if cell.strip()]

# Directions of this host's rows when the table above was first compared: they come from sourced facts, not from a fit.
DIRECTIONS = "46d31e6a88bb7cd4"


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def scenario(host, product, feed="glucose", oxygen="aerobic", **tables):
    return {"title": "ceiling", "host": host, "growth": 0, "feed": [{"substrate": feed, "uptake": "10 mmol/gDW/h"}],
            "conditions": {"oxygen": oxygen, "supplements": ["biotin"] if host.startswith("coryne") else []},
            "outlet": [{"product": product, "rate": "0.1 mmol/gDW/h"}], **tables}


def ceiling(desk, *args, **tables):
    return desk.ceiling(scenario(*args, **tables)).answer


def directions(desk, host):
    text = "\n".join(f"{r.slug} {r.direction}" for r in sorted(desk.facts.hosts[host].reactions, key=lambda r: r.slug))
    return hashlib.sha256(text.encode()).hexdigest()[:16]


def test_published_amino_acid_yields(desk, capsys):
    """At least 80 % of the open ceilings within 5 % of the published network column; the rest is listed."""
    energy = {"energy": {"p-o-nadh": "2.0 mol/mol"}}
    off = []
    for product, feed, value in PUBLISHED:
        found = ceiling(desk, "escherichia-coli", product, feed, **energy).open_mol_per_mol
        if abs(found / float(value) - 1) > 0.05:
            off.append(f"{product} on {feed}: {found:.3f} for {value}")
    with capsys.disabled():
        print(f"\namino-acid yields: {len(PUBLISHED) - len(off)} of {len(PUBLISHED)} within 5 %; off: {'; '.join(off)}")
    assert len(off) <= 0.2 * len(PUBLISHED)


# What a changed assumption explains: one named change that hits the published figure within 2 %. Histidine on glycerol,
# leucine on glycerol and tryptophan on acetate stay unexplained (no single row or direction of the graph does it).
@pytest.mark.parametrize("product, value", [("L-arginine", 0.51), ("L-asparagine", 1.0)])
def test_a_carboxylating_malic_enzyme_explains_two_yields_on_glycerol(desk, product, value):
    tables = {"energy": {"p-o-nadh": "2.0 mol/mol"}, "strain": {"add": ["malic-enzyme-nad running both ways"]}}
    assert ceiling(desk, "escherichia-coli", product, "glycerol", **tables).open_mol_per_mol == pytest.approx(value, rel=0.02)


def test_directions_are_those_first_compared(desk):
    assert directions(desk, "escherichia-coli") == DIRECTIONS


def test_glutamate_needs_its_refill(desk):
    """As expressed 1.0 mol/mol; with PEP carboxylase removed and the shunt open 2/3 (stoichiometry: 3 acetyl-CoA per
    glutamate through the shunt, common practice)."""
    assert ceiling(desk, "escherichia-coli", "L-glutamate").mol_per_mol == pytest.approx(1.0)
    shunt = {"strain": {"remove": ["ppc", "iclR"]}}
    assert ceiling(desk, "escherichia-coli", "L-glutamate", **shunt).mol_per_mol == pytest.approx(2 / 3)


def test_anaerobic_succinate(desk):
    """1.00 as expressed, 1.71 open: Cheng KK et al. (2013) BioMed Res Int; van Heerden CD, Nicol W (2013) Microb Cell Fact 12:80."""
    answer = ceiling(desk, "escherichia-coli", "succinate", oxygen="anaerobic")
    assert answer.mol_per_mol == pytest.approx(1.0) and answer.open_mol_per_mol == pytest.approx(12 / 7)
    assert "expression" in answer.binding


def test_lysine_on_glucose(desk):
    """0.75 without the malic-enzyme cycle: Vallino JJ, Stephanopoulos G (1994) Biotechnol Prog; 6/7 by electrons: Villadsen J,
    Nielsen J, Liden G, Bioreaction Engineering Principles (degree-of-reduction rule)."""
    removed = {"strain": {"remove": ["malE"]}}
    answer = ceiling(desk, "corynebacterium-glutamicum", "L-lysine", **removed)
    assert answer.mol_per_mol == pytest.approx(0.75)
    assert answer.electron_ceiling_mol_per_mol == pytest.approx(6 / 7)
    with_cycle = ceiling(desk, "corynebacterium-glutamicum", "L-lysine")
    assert 0.75 < with_cycle.mol_per_mol < 6 / 7
    assert answer.g_per_g == pytest.approx(0.75 * 146.19 / 180.16, rel=1e-3)


# Degree-of-reduction rule gamma_S / gamma_P (Villadsen, Nielsen, Liden): mol per mol of glucose, by hand from formulas.
@pytest.mark.parametrize("product, value", [
    ("succinate", Fraction(12, 7)), ("malate", Fraction(2)), ("fumarate", Fraction(2)), ("citrate", Fraction(4, 3)),
    ("itaconate", Fraction(4, 3)), ("L-aspartate", Fraction(2)), ("L-glutamate", Fraction(4, 3)), ("L-threonine", Fraction(3, 2)),
    ("palmitate", Fraction(24, 92)), ("5-aminolevulinate", Fraction(6, 5)), ("putrescine", Fraction(12, 11)), ("squalene", Fraction(24, 170)),
])
def test_electron_ceilings(desk, product, value):
    assert ceiling(desk, "escherichia-coli", product).electron_ceiling_mol_per_mol == pytest.approx(float(value))


# ATP per glucose and largest yields from an independent calculation on the same literature (counted apart: it shares our facts).
@pytest.mark.parametrize("host, oxygen, atp", [
    ("escherichia-coli", "aerobic", 30.4), ("escherichia-coli", "anaerobic", 3.2), ("corynebacterium-glutamicum", "aerobic", 22),
    ("corynebacterium-glutamicum", "anaerobic", 2), ("saccharomyces-cerevisiae", "aerobic", 16), ("saccharomyces-cerevisiae", "anaerobic", 2),
    ("yarrowia-lipolytica", "aerobic", 28.9),
])
def test_atp_per_glucose(desk, host, oxygen, atp):
    assert atp_per_glucose(desk, host, oxygen) == pytest.approx(atp, rel=2e-3)


def atp_per_glucose(desk, host, oxygen="aerobic", changes=(), **tables):
    import numpy as np

    from headrace.network.build import programme
    from headrace.solve.linear import INFINITY, Session

    question = {"title": "ATP", "host": host, "growth": 0, "feed": [{"substrate": "glucose", "uptake": "10 mmol/gDW/h"}],
                "conditions": {"oxygen": oxygen}, **tables}
    net = build(desk.facts, desk.case(question, changes=changes))
    lp = programme(net, free={"atp": {"maintenance": 1.0}}, rates={})
    gain = np.zeros(len(lp.col_lower))
    gain[len(net.columns)] = 1.0
    found = Session(lp).maximise(gain)
    assert found.objective < INFINITY
    return found.objective / 10


def test_stated_p_o_gives_26_atp_per_glucose(desk):
    """26 ATP per glucose at P/O 2 for NADH and 1 for quinol: Kaleta et al. 2013, table 1 (10 NADH, 2 quinol, 4 ATP)."""
    assert atp_per_glucose(desk, "escherichia-coli", energy={"p-o-nadh": "2.0 mol/mol"}) == pytest.approx(26)


@pytest.mark.parametrize("host, product, value", [
    ("corynebacterium-glutamicum", "L-glutamate", 1.0), ("corynebacterium-glutamicum", "L-aspartate", 1.875),
    ("corynebacterium-glutamicum", "palmitate", 0.231), ("corynebacterium-glutamicum", "heme b", 0.125),
    ("corynebacterium-glutamicum", "lycopene", 0.097), ("yarrowia-lipolytica", "L-glutamate", 1.0), ("yarrowia-lipolytica", "L-lysine", 0.60),
    ("yarrowia-lipolytica", "L-aspartate", 1.90), ("yarrowia-lipolytica", "succinate", 1.0), ("yarrowia-lipolytica", "palmitate", 0.194),
    ("yarrowia-lipolytica", "heme b", 0.107), ("yarrowia-lipolytica", "ergosterol", 0.086), ("yarrowia-lipolytica", "citrate", 1.0),
])
def test_largest_yields_of_the_independent_calculation(desk, host, product, value):
    assert ceiling(desk, host, product).mol_per_mol == pytest.approx(value, rel=6e-3)


def test_lysine_exporter_explains_the_other_published_ceiling(desk):
    """An independent calculation gives 0.805 where the exporter's one motive proton is paid; ours draws lysine inside (0.811).
    Changing only that hits it."""
    case = desk.case(scenario("corynebacterium-glutamicum", "L-lysine"))
    demand = msgspec.structs.replace(case.demands[0], place="medium", rate=0.0)
    outside = msgspec.structs.replace(case, demands=(demand,), energy={**case.energy, "maintenance": 0.0})
    exported = largest(build(desk.facts, outside))
    assert exported == pytest.approx(0.805, abs=5e-4)
    assert ceiling(desk, "corynebacterium-glutamicum", "L-lysine").mol_per_mol == pytest.approx(0.811, abs=5e-4)


def test_a_closed_row_lowers_a_ceiling(desk):
    """A ceiling that did not see the network would not move."""
    shut = desk.case(scenario("escherichia-coli", "L-glutamate"), changes=(Close("isocitrate-dehydrogenase-nadp"),))
    shut = msgspec.structs.replace(shut, demands=(msgspec.structs.replace(shut.demands[0], rate=0.0),))
    assert largest(build(desk.facts, shut)) == pytest.approx(0, abs=1e-9)
