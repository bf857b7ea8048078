"""Exact route vectors: one solution, every element closed, the same whatever the order, names and way of writing."""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction

import msgspec
import pytest

from headrace import case as cases
from headrace.errors import FactsError
from headrace.graph.boundary import own_carbon
from headrace.network.proven import prove_routes
from headrace.network.routes import RouteBook, RouteVector
from headrace.network.sites import Step, site_of, terms_of
from headrace.values.case import Case
from headrace.values.facts import Facts, HostReaction, Route, Term

HOSTS = ("corynebacterium-glutamicum", "escherichia-coli", "saccharomyces-cerevisiae", "yarrowia-lipolytica")
# Steps that may stand with a count against the direction of their rows, each with the reason.
AGAINST = {
    "acetate": "acetyl-CoA synthetase only uses acetate",
    "cysteine": "2-oxobutanoate that comes back spares threonine",
    "glutathione": "holds cysteine",
    "s-adenosylhomocysteine": "its recycling only uses it",
    "ethanol": "yeasts and C. glutamicum whose alcohol dehydrogenase only oxidises",
    "ethyl-oleate": "holds ethanol",
}
# One-carbon carriers are no product: nothing in the facts makes the carrier itself.
CARRIERS = ("dihydrofolate", "formyl-tetrahydrofolate", "methyl-tetrahydrofolate")


@pytest.fixture(scope="module")
def books(facts: Facts) -> dict[str, RouteBook]:
    return {host: RouteBook.of_host(facts, host) for host in HOSTS}


def made(facts: Facts, book: RouteBook) -> Iterator[tuple[str, str]]:
    """(compound, compartment) of every route of a host: where its own steps make it, the cytosol first."""
    for compound in sorted({route.makes for route in book.available()} - set(CARRIERS) - book.boundary.free):
        places = {
            place
            for reaction in book.routes(compound)[0].uses
            for row in book.rows.get(reaction, ())
            for (name, place), _ in _terms(facts, book, reaction, row)
            if name == compound and place != "medium"
        }
        yield compound, "cytosol" if not places or "cytosol" in places else min(places)


def _terms(facts: Facts, book: RouteBook, reaction: str, row: HostReaction) -> list[tuple[tuple[str, str], Fraction]]:
    return terms_of(facts, book.host, Step(reaction, site_of(row)))


def vectors(facts: Facts, book: RouteBook) -> Iterator[tuple[str, RouteVector]]:
    for compound, place in made(facts, book):
        yield compound, book.vector(compound, place)


def left_over(facts: Facts, vector: RouteVector) -> dict[str, Fraction]:
    """Atoms and charge taken from the boundary less those in what is drawn; coenzymes and pools drawn cancel."""
    rest: dict[str, Fraction] = {}
    drawn = {compound: amount for (compound, _), amount in vector.amounts.items()}
    for name, amount in [*vector.crossings.items(), *((name, -amount) for name, amount in drawn.items())]:
        compound = facts.compounds[name]
        for element, atoms in {**compound.formula, "charge": compound.charge}.items():
            rest[element] = rest.get(element, Fraction(0)) + amount * atoms
    return {element: count for element, count in rest.items() if count}


@pytest.mark.parametrize("host", HOSTS)
def test_every_route_has_one_solution_that_closes_in_every_element(facts: Facts, books: dict[str, RouteBook], host: str) -> None:
    count = 0
    for compound, vector in vectors(facts, books[host]):
        assert vector.steps, compound
        assert not left_over(facts, vector), (compound, left_over(facts, vector))
        assert all(min(term.taken, term.returned, term.shuttled) >= 0 for term in vector.pools)
        count += 1
    assert count > 110


@pytest.mark.parametrize("host", HOSTS)
def test_skeletons_are_the_contents(facts: Facts, books: dict[str, RouteBook], host: str) -> None:
    found = {name: vector.skeletons for name, vector in vectors(facts, books[host])}
    assert found == {name: facts.contents[name] for name in found}


@pytest.mark.parametrize("host", HOSTS)
def test_steps_run_as_the_host_runs_them(facts: Facts, books: dict[str, RouteBook], host: str) -> None:
    found = {name for name, vector in vectors(facts, books[host]) if vector.against}
    assert found <= set(AGAINST), found - set(AGAINST)


@pytest.mark.parametrize("host", HOSTS)
def test_no_choice_between_routes_hangs_on_a_name(books: dict[str, RouteBook], host: str) -> None:
    book = books[host]
    for route in book.available():
        ranks = [book.rank(other)[:-1] for other in book.routes(route.makes)]
        assert ranks == sorted(ranks) and len(ranks) < 2 or ranks[0] < ranks[1], route.makes


def test_every_outlet_is_drawn_in_every_host(facts: Facts, books: dict[str, RouteBook]) -> None:
    for outlet in facts.outlets.values():
        for host, book in books.items():
            vector = book.sum({(name, "cytosol"): count for name, count in outlet.draws.items()})
            assert vector.skeletons == sum(facts.contents[name] * count for name, count in outlet.draws.items()), (
                outlet.slug,
                host,
            )


def test_sums_are_linear(facts: Facts, books: dict[str, RouteBook]) -> None:
    for book in books.values():
        parts = {"lysine": Fraction(2), "arginine": Fraction(1, 3), "cmp": Fraction(-5, 7)}
        whole = book.sum({(name, "cytosol"): amount for name, amount in parts.items()})
        expected: dict[object, Fraction] = {}
        for name, amount in parts.items():
            for step, rate in book.vector(name).rates.items():
                expected[step] = expected.get(step, Fraction(0)) + rate * amount
        assert dict(whole.rates) == {step: rate for step, rate in expected.items() if rate}


def test_what_is_given_back_cancels_what_is_taken(books: dict[str, RouteBook]) -> None:
    nothing = books["escherichia-coli"].sum({("udp-glucose", "cytosol"): Fraction(1), ("udp", "cytosol"): Fraction(-1)})
    assert {term.compound: (term.taken, term.returned) for term in nothing.pools} == {"glucose-6-phosphate": (1, 0)}
    assert nothing.needs == {"atp": 1} and nothing.skeletons == 0


def test_a_drawn_pool_is_its_own_drain(books: dict[str, RouteBook]) -> None:
    vector = books["yarrowia-lipolytica"].vector("citrate")
    assert [(t.compound, t.place, t.taken, t.returned) for t in vector.pools] == [("citrate", "cytosol", 1, 0)]
    assert vector.skeletons == 1 and not vector.steps


def test_a_pool_is_followed_further_back_on_request(books: dict[str, RouteBook]) -> None:
    plain = books["yarrowia-lipolytica"].vector("palmitate")
    traced = books["yarrowia-lipolytica"].vector("palmitate", through=["acetyl-coa"])
    assert [(t.compound, t.taken) for t in plain.pools] == [("acetyl-coa", 8)]
    assert [(t.compound, t.taken, t.returned) for t in traced.pools] == [("citrate", 8, 0), ("oxaloacetate", 0, 8)]
    assert traced.needs["atp"] - plain.needs["atp"] == 8 and traced.skeletons == 0
    assert books["yarrowia-lipolytica"].follows("acetyl-coa") and not books["saccharomyces-cerevisiae"].follows("acetyl-coa")


def test_another_route_can_be_chosen(books: dict[str, RouteBook]) -> None:
    book = books["corynebacterium-glutamicum"]
    usual = book.vector("lysine")
    other = book.vector("lysine", chosen=["meso-diaminopimelate-by-dehydrogenase"])
    assert {t.compound for t in usual.pools} - {t.compound for t in other.pools} == {"succinyl-coa", "succinate"}
    assert usual.skeletons == other.skeletons == 1 and usual.needs["ammonium"] == other.needs["ammonium"] == 2
    assert "meso-diaminopimelate-by-dehydrogenase" in other.routes


def test_lacking_steps_are_named(books: dict[str, RouteBook]) -> None:
    vector = books["yarrowia-lipolytica"].vector("itaconate")
    assert vector.missing == ("cis-aconitate-decarboxylase",) and vector.skeletons == 1


def case_of(facts: Facts, oxygen: str) -> Case:
    return cases.resolve(
        cases.from_dict(
            {
                "host": "escherichia-coli",
                "growth": "0.1 /h",
                "feed": [{"substrate": "glucose", "uptake": "5 mmol/gDW/h"}],
                "conditions": {"oxygen": oxygen},
            }
        ),
        facts,
    )


def test_expression_decides_between_routes(facts: Facts) -> None:
    aerobic, anaerobic = (RouteBook(facts, case_of(facts, oxygen)) for oxygen in ("aerobic", "anaerobic"))
    assert aerobic.vector("heme-b").needs["oxygen"] == 1
    assert "oxygen" not in anaerobic.vector("heme-b").needs
    assert "dihydroorotate-dehydrogenase-menaquinone" in anaerobic.vector("utp").steps
    assert "ribonucleotide-reductase-anaerobic-atp" in anaerobic.vector("datp").steps


def test_nitrogen_that_goes_round_is_shuttled(books: dict[str, RouteBook]) -> None:
    """Arginine in E. coli: glutamate as carbon 1, as amino donor 2 (one through aspartate)."""
    terms = {t.compound: (t.taken, t.returned, t.shuttled) for t in books["escherichia-coli"].vector("arginine").pools}
    assert terms["oxoglutarate"] == (1, 0, 2)
    assert terms["oxaloacetate"] == (1, 0, 0) and terms["fumarate"] == (0, 1, 0)


def test_a_reaction_may_be_written_backwards(facts: Facts) -> None:
    turned = {"aspartate-transaminase", "glutamate-dehydrogenase-nadp", "aspartate-kinase", "triose-phosphate-isomerase"}
    flip = {"forward": "reverse", "reverse": "forward", "both": "both"}
    reactions = {
        slug: msgspec.structs.replace(r, terms=tuple(Term(t.compound, -t.count, t.side) for t in r.terms))
        if slug in turned
        else r
        for slug, r in facts.reactions.items()
    }
    hosts = {
        slug: msgspec.structs.replace(
            host,
            reactions=tuple(
                msgspec.structs.replace(row, direction=flip[row.direction]) if row.reaction in turned else row
                for row in reversed(host.reactions)
            ),
        )
        for slug, host in facts.hosts.items()
    }
    other = msgspec.structs.replace(facts, reactions=reactions, hosts=hosts)
    for host in HOSTS:
        for name in ("lysine", "arginine", "triolein", "ctp"):
            one, two = (RouteBook.of_host(each, host).vector(name) for each in (facts, other))
            assert (one.pools, one.needs, one.skeletons) == (two.pools, two.needs, two.skeletons)


def with_route(facts: Facts, **changed: object) -> Facts:
    """The facts with the lysine route of bacteria changed."""
    slug = "lysine-by-diaminopimelate"
    return msgspec.structs.replace(facts, routes={**facts.routes, slug: msgspec.structs.replace(facts.routes[slug], **changed)})


def test_two_ways_at_once_are_a_fault(facts: Facts) -> None:
    doubled = with_route(facts, uses=("diaminopimelate-decarboxylase", "diaminopimelate-dehydrogenase"))
    with pytest.raises(FactsError, match="more than one solution in corynebacterium-glutamicum; not determined: "):
        RouteBook.of_host(doubled, "corynebacterium-glutamicum").vector("lysine")


def test_a_dropped_step_is_a_fault(facts: Facts) -> None:
    for slug, route in facts.routes.items():
        if route.makes == "meso-diaminopimelate" and route.preferred:
            cut = msgspec.structs.replace(route, uses=tuple(u for u in route.uses if u != "succinyldiaminopimelate-transaminase"))
            broken = msgspec.structs.replace(facts, routes={**facts.routes, slug: cut})
            with pytest.raises(FactsError, match="can't be balanced in escherichia-coli; at odds: .*pimelate"):
                RouteBook.of_host(broken, "escherichia-coli").vector("lysine")


def test_a_compound_without_a_route_is_a_fault(facts: Facts) -> None:
    with pytest.raises(FactsError, match="escherichia-coli has no route for biotin"):
        RouteBook.of_host(facts, "escherichia-coli").vector("biotin")


def test_a_product_in_the_wrong_compartment_is_a_fault(facts: Facts) -> None:
    with pytest.raises(FactsError, match="no step of its route makes lysine in the mitochondrion"):
        RouteBook.of_host(facts, "saccharomyces-cerevisiae").vector("lysine", "mitochondrion")


def test_a_reaction_in_two_places_needs_its_row(facts: Facts) -> None:
    leucine = facts.routes["leucine-sc"]
    assert leucine.rows == ("saccharomyces-cerevisiae/isopropylmalate-synthase-mitochondrion",)
    unnamed = msgspec.structs.replace(facts, routes={**facts.routes, "leucine-sc": msgspec.structs.replace(leucine, rows=())})
    with pytest.raises(FactsError, match="can't be balanced"):  # the cytosol's row is meant, and there is no way to it
        RouteBook.of_host(unnamed, "saccharomyces-cerevisiae").vector("leucine")


def test_a_carrier_that_the_host_lacks_is_a_fault(facts: Facts) -> None:
    route = Route(
        "x",
        "x",
        "lysine",
        (*facts.routes["lysine-by-diaminopimelate"].uses, "homocitrate-entry"),
        facts.routes["lysine-by-diaminopimelate"].basis,
        ("escherichia-coli",),
        (),
        True,
    )
    with pytest.raises(FactsError, match="uses the carrier homocitrate-entry, which escherichia-coli lacks"):
        given = msgspec.structs.replace(facts, routes={**facts.routes, "x": route})
        RouteBook.of_host(given, "escherichia-coli").vector("lysine", chosen=["x"])


def test_the_carbon_of_a_pool_is_its_own(facts: Facts) -> None:
    """Acetyl-CoA counts two carbons and succinyl-CoA four; the coenzyme only carries them."""
    names = ("acetyl-coa", "succinyl-coa", "palmitoyl-coa", "palmitoyl-acyl-carrier-protein", "coa", "citrate", "methionine")
    assert [own_carbon(facts, name) for name in names] == [2, 4, 16, 16, 21, 6, 5]


def test_every_route_of_the_facts_is_solved_in_every_host_that_may_use_it(facts: Facts) -> None:
    assert not list(prove_routes(facts))


def test_a_route_that_is_not_solved_is_found(facts: Facts) -> None:
    """A step too many, a step too few, and a route for a host whose compartments it does not cross."""
    planted = {
        "asparagine": ("asparagine-synthetase", "glutaminase"),
        "proline": ("glutamate-kinase", "pyrroline-carboxylate-formation", "pyrroline-carboxylate-reductase"),
    }
    for slug, uses in planted.items():
        wrong = msgspec.structs.replace(facts.routes[slug], uses=uses)
        found = list(prove_routes(msgspec.structs.replace(facts, routes={**facts.routes, slug: wrong})))
        assert slug in {fault.route for fault in found}, slug
    everywhere = msgspec.structs.replace(facts.routes["valine"], hosts=())
    found = list(prove_routes(msgspec.structs.replace(facts, routes={**facts.routes, "valine": everywhere})))
    assert {(fault.route, fault.host) for fault in found} == {
        ("valine", "saccharomyces-cerevisiae"),
        ("valine", "yarrowia-lipolytica"),
    }
