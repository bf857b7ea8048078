"""Drain plugins: each keeps the contract, each outlet works on each host, options mean what they say."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import pytest

from headrace import case as cases
from headrace.errors import InputError
from headrace.hooks.manager import Manager
from headrace.network.routes import RouteBook
from headrace.testing import conformance
from headrace.values.answers import Draw
from headrace.values.facts import Facts
from headrace_plugins.drains.aspartate_family import AspartateFamily
from headrace_plugins.drains.biomass import Biomass
from headrace_plugins.drains.glutamate_family import GlutamateFamily
from headrace_plugins.drains.lipids import Lipids
from headrace_plugins.drains.nucleotides import Nucleotides
from headrace_plugins.drains.organic_acids import OrganicAcids
from headrace_plugins.drains.other_amino_acids import OtherAminoAcids
from headrace_plugins.drains.porphyrins import Porphyrins
from headrace_plugins.drains.sterols import Sterols

PLUGINS = (
    AspartateFamily,
    Biomass,
    GlutamateFamily,
    Lipids,
    Nucleotides,
    OrganicAcids,
    OtherAminoAcids,
    Porphyrins,
    Sterols,
)
HOSTS = ("corynebacterium-glutamicum", "escherichia-coli", "saccharomyces-cerevisiae", "yarrowia-lipolytica")
COLI, YARR = HOSTS[1], HOSTS[3]


@pytest.fixture(scope="module")
def manager() -> Manager:
    return Manager.load(strangers=False)


def draw(manager: Manager, facts: Facts, host: str, product: str, options: dict[str, Any] | None = None) -> Draw:
    case = cases.resolve(
        cases.from_dict(
            {
                "host": host,
                "growth": "0 /h",
                "feed": [{"substrate": "glucose", "uptake": "5 mmol/gDW/h"}],
                "outlet": [{"product": product, "rate": "0.1 mmol/gDW/h", "options": options or {}}],
            }
        ),
        facts,
    )
    (found,) = manager.drains(case, case.demands, RouteBook(facts, case))
    return found


def net(found: Draw) -> dict[str, Fraction]:
    return {f"{t.compound} {t.place}": t.taken - t.returned for t in found.pools if t.taken != t.returned}


@pytest.mark.parametrize("plugin", PLUGINS, ids=lambda plugin: plugin.name)
def test_conformance(plugin: type) -> None:
    assert conformance(plugin)


@pytest.mark.parametrize("host", HOSTS)
def test_every_outlet_on_every_host(manager: Manager, facts: Facts, host: str) -> None:
    lacking = {}
    for slug in facts.outlets:
        found = draw(manager, facts, host, slug)
        drawn = sum((count * facts.contents[name] for name, count in found.draws.items()), Fraction(0))
        assert found.skeletons == drawn and found.draws and found.scale == ("outlet.0",), slug
        lacking[slug] = found.missing
    assert not any(
        lacking[slug] for slug in ("l-lysine", "l-arginine", "heme-b", "succinate", "rna", "triacylglycerol", "fatty-acids")
    )
    assert lacking["itaconate"] == ("cis-aconitate-decarboxylase",)


def test_every_family_of_the_facts_is_claimed_once(manager: Manager, facts: Facts) -> None:
    for family in {outlet.family for outlet in facts.outlets.values()} | {"biomass"}:
        assert sum(family in plugin.families for plugin in PLUGINS) == 1, family
        assert manager.claimant(family)


def test_oil_by_its_chains(manager: Manager, facts: Facts) -> None:
    """Triolein on paper: glycerol phosphate and 3 x 9 acetyl-CoA. Followed back: 27 citrate out, 27 oxaloacetate returned."""
    chains = {"chains": {"18:1": 1}}
    plain = draw(manager, facts, YARR, "triacylglycerol", chains | {"trace": []})
    assert net(plain) == {"acetyl-coa cytosol": 27, "glyceraldehyde-3-phosphate cytosol": 1}
    assert plain.needs["atp"] == 24 and plain.needs["oxygen"] == 3
    back = draw(manager, facts, YARR, "triacylglycerol", chains)
    assert net(back) == {"citrate cytosol": 27, "oxaloacetate cytosol": -27, "glyceraldehyde-3-phosphate cytosol": 1}
    assert back.needs["atp"] == 24 + 27 and back.skeletons == 0


def test_chains_are_shares_and_names(manager: Manager, facts: Facts) -> None:
    one = draw(manager, facts, YARR, "fatty acids", {"chains": {"palmitate": 1, "oleic acid": 3}})
    two = draw(manager, facts, YARR, "fatty acids", {"chains": {"16:0": 0.25, "18:1": 0.75}})
    assert one == two
    assert one.draws == {"palmitate": Fraction(1, 4), "oleate": Fraction(3, 4)}


def test_the_host_gives_its_own_profile(manager: Manager, facts: Facts) -> None:
    """E. coli: 110.9, 85.1 and 62.0 umol of chains on the acyl-carrier protein (its composition); hydroxy acids left out."""
    found = draw(manager, facts, COLI, "phosphatidylethanolamine")
    amounts = [Fraction("110.9"), Fraction("85.1"), Fraction("62.0")]
    names = ("palmitoyl-acyl-carrier-protein", "palmitoleoyl-acyl-carrier-protein", "vaccenoyl-acyl-carrier-protein")
    for name, amount in zip(names, amounts, strict=True):
        assert found.draws[name] == 2 * amount / sum(amounts)
    assert found.draws["holo-acyl-carrier-protein"] == -2 and found.draws["serine"] == 1 and found.draws["cmp"] == -1
    assert not found.missing


def test_an_ester_takes_the_acid_and_the_alcohol(manager: Manager, facts: Facts) -> None:
    found = draw(manager, facts, "saccharomyces-cerevisiae", "fatty acid ethyl esters", {"chains": {"16:0": 1}})
    assert found.draws == {"palmitoyl-coa": 1, "ethanol": 1, "coa": -1}
    assert net(found) == {"acetyl-coa cytosol": 8, "pyruvate cytosol": 1}


def test_choline_lipids_take_three_methyl_groups(manager: Manager, facts: Facts) -> None:
    found = draw(manager, facts, "saccharomyces-cerevisiae", "phosphatidylcholine", {"chains": {"16:0": 1}})
    assert found.draws["s-adenosylmethionine"] == 3 and found.draws["s-adenosylhomocysteine"] == -3
    assert found.needs["one-carbon"] == 3 and found.skeletons == 0


def test_nucleic_acids_by_composition(manager: Manager, facts: Facts) -> None:
    even = draw(manager, facts, COLI, "RNA", {"residues": {"ATP": 1, "GTP": 1, "CTP": 1, "UTP": 1}})
    assert even.skeletons == 2 and even.draws["diphosphate"] == -4
    only = draw(manager, facts, COLI, "DNA", {"residues": {"dGTP": 0.5, "dCTP": 0.5}})
    assert only.draws == {"dgtp": 2, "dctp": 2, "diphosphate": -4} and only.skeletons == 2
    own = draw(manager, facts, COLI, "RNA")
    assert own.draws["gtp"] == 4 * Fraction(203, 630)  # 165, 203, 126, 136 umol of its composition
    by_monophosphates = draw(manager, facts, YARR, "RNA")
    assert by_monophosphates.draws["utp"] == 4 * Fraction(67, 219)  # 51, 51, 50, 67 umol


def test_either_route_to_the_porphyrins(manager: Manager, facts: Facts) -> None:
    usual = draw(manager, facts, COLI, "heme b")
    other = draw(manager, facts, COLI, "heme b", {"routes": ["5-aminolevulinate, C4 route"]})
    assert net(usual) == {"oxoglutarate cytosol": 8}
    assert net(other) == {"succinyl-coa cytosol": 8, "3-phosphoglycerate cytosol": 8}


def test_pools_are_followed_back_by_name(manager: Manager, facts: Facts) -> None:
    found = draw(manager, facts, COLI, "squalene", {"routes": ["isopentenyl-diphosphate-by-mevalonate"], "trace": ["acetyl-CoA"]})
    assert net(found) == {"citrate cytosol": 18, "oxaloacetate cytosol": -18}
    assert "atp-citrate-lyase" in found.missing


def test_growth_is_drawn_by_the_composition(manager: Manager, facts: Facts) -> None:
    case = cases.resolve(
        cases.from_dict({"host": COLI, "growth": "0.4 /h", "feed": [{"substrate": "glucose"}]}),
        facts,
    )
    (found,) = manager.drains(case, (cases.biomass(case),), RouteBook(facts, case))
    assert found.scale == ("growth",) and float(found.skeletons) == 2.8646


@pytest.mark.parametrize(
    ("product", "options", "key", "words"),
    [
        ("fatty acids", {"chains": {"17:9": 1}}, "outlet[0].options.chains", "no route makes a chain of 17:9"),
        ("fatty acids", {"chains": {"olive": 1}}, "outlet[0].options.chains", "no fatty acid 'olive'"),
        ("fatty acids", {"chains": {"16:0": -1}}, "outlet[0].options.chains.16:0", "the share of 16:0 is negative"),
        ("fatty acids", {"chains": {"16:0": 0}}, "outlet[0].options.chains", "all shares of chains are 0"),
        ("palmitate", {"chains": {"18:1": 1}}, "outlet[0].options.chains", "palmitate is one compound"),
        ("fatty acids", {"chain": {"16:0": 1}}, "outlet[0].options", "unknown field `chain`"),
        ("RNA", {"residues": {"TTP": 1}}, "outlet[0].options.residues", "no residue 'TTP'"),
        ("RNA", {"residues": {"ATP": 0}}, "outlet[0].options.residues", "all shares of residues are 0"),
        ("heme b", {"routes": ["C6"]}, "outlet[0].options.routes", "no route 'C6' in Escherichia coli"),
        ("heme b", {"trace": ["acetyl-CoA"]}, "outlet[0].options.trace", "takes nothing called 'acetyl-CoA'"),
    ],
)
def test_wrong_options_are_refused(
    manager: Manager, facts: Facts, product: str, options: dict[str, Any], key: str, words: str
) -> None:
    with pytest.raises(InputError, match="^") as caught:
        draw(manager, facts, COLI, product, options)
    assert words in str(caught.value) and caught.value.key == key
