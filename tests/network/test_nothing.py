"""Nothing from nothing on the shipped facts: each host, each expression state, open as well, with and without oxygen."""

from __future__ import annotations

import msgspec
import pytest

from headrace.network.build import build
from headrace.network.nothing import bare, leaks, probes, prove
from headrace.run import Desk

FEEDS = ("glucose", "fructose", "sucrose", "glycerol", "acetate", "ethanol", "L-lactate", "pyruvate", "succinate", "citrate",
         "L-glutamate", "L-aspartate", "palmitate", "propanoate", "xylose", "galactose", "gluconate")


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk(strangers=False)


def states(desk, host):
    """Levels as each feed, oxygen supply and circumstance sets them, then every gene open."""
    question = {"title": "state", "host": host, "growth": "0.1 /h"}
    for oxygen in ("aerobic", "anaerobic"):
        for feed in FEEDS:
            yield f"{feed}, {oxygen}", desk.case({**question, "feed": [{"substrate": feed}], "conditions": {"oxygen": oxygen}})
    for label in desk.facts.circumstances.values():
        conditions = {"oxygen": "aerobic", "circumstances": [label]}
        yield label, desk.case({**question, "feed": [{"substrate": "glucose"}], "conditions": conditions})
    yield "open", desk.case({**question, "feed": [{"substrate": "glucose"}], "conditions": {"oxygen": "aerobic"}}, opened=True)


@pytest.mark.parametrize("host", ["escherichia-coli", "corynebacterium-glutamicum", "saccharomyces-cerevisiae", "yarrowia-lipolytica"])
def test_nothing_comes_from_nothing(desk, host):
    found = prove(desk.facts, states(desk, host))
    assert found == [], found[:3]


def test_the_probes_cover_energy_electrons_and_skeletons_in_each_compartment(desk):
    for host in desk.facts.hosts.values():
        case = desk.case({"title": "p", "host": host.slug, "growth": "0.1 /h", "feed": [{"substrate": "glucose"}]}, opened=True)
        names = [name for name, _ in probes(build(desk.facts, bare(host, case, "aerobic")))]
        assert "ATP" in names and "motive protons" in names
        for place in (c.slug for c in host.compartments if c.role in ("cytosol", "organelle")):
            assert any(name.startswith("skeletons") and place in name for name in names), (host.slug, place)
        assert any("NADPH" in name for name in names) and any("NADH" in name for name in names)


@pytest.mark.parametrize("host, rows, probe", [
    ("escherichia-coli", ("nadp-transhydrogenase", "nadp-transhydrogenase-pumping"), "ATP"),
    ("saccharomyces-cerevisiae", ("atp-hydrolysis",), "ATP"),
])
def test_a_row_turned_both_ways_leaks(desk, host, rows, probe):
    """The same proof with a wrong direction speaks up, so its silence means something."""
    about = desk.facts.hosts[host]
    assert {r.reaction for r in about.reactions} >= set(rows)
    turned = tuple(msgspec.structs.replace(r, direction="both") if r.reaction in rows else r for r in about.reactions)
    facts = msgspec.structs.replace(desk.facts, hosts={**desk.facts.hosts, host: msgspec.structs.replace(about, reactions=turned)})
    case = Desk(strangers=False, facts=facts).case(
        {"title": "t", "host": host, "growth": "0.1 /h", "feed": [{"substrate": "glucose"}]}, opened=True)
    assert probe in {leak.probe for leak in leaks(facts, bare(facts.hosts[host], case, "aerobic"), "turned")}
