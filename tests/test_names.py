"""Names: slugs, near names, rounds of look-up, ambiguity."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from headrace import names
from headrace.errors import InputError
from headrace.names import Entity, Name, NameIndex, nearest, slugify
from headrace.values.facts import Basis, Enzyme, Facts, Host, HostReaction, Isozyme, Reaction

SEEN = Basis("seen", ("s",))


@pytest.mark.parametrize(
    ("text", "slug"),
    [
        ("L-Lysine", "l-lysine"),
        ("2-oxoglutarate", "2-oxoglutarate"),
        ("β-alanine", "beta-alanine"),
        ("Protoporphyrin IX", "protoporphyrin-ix"),
        ("  NAD(P)+ transhydrogenase ", "nad-p-transhydrogenase"),
        ("crème", "creme"),
        ("日本", ""),
    ],
)
def test_slugify(text: str, slug: str) -> None:
    assert slugify(text) == slug


@given(st.text())
def test_a_slug_is_its_own_slug(text: str) -> None:
    assert slugify(slugify(text)) == slugify(text)


def test_nearest_ignores_case_and_returns_the_written_form() -> None:
    assert nearest("L LYSIN", ["L-lysine", "glycine", "heme b"]) == ("L-lysine",)
    assert nearest("zzz", ["L-lysine"]) == ()


def _index(*entries: tuple[str, str, str], order: tuple[str, ...] = ()) -> NameIndex:
    return NameIndex("thing", [Name(text, Entity(kind, slug)) for text, kind, slug in entries], "list things", order)


def test_exact_slug_goes_before_other_peoples_alias() -> None:
    index = _index(("malate", "compound", "malate"), ("malate", "compound", "d-malate"))
    assert index.find("malate") == Entity("compound", "malate")


def test_case_spaces_and_hyphens_do_not_matter_in_the_last_round() -> None:
    index = _index(("L-lysine", "outlet", "l-lysine"))
    for text in ("l lysine", "L-LYSINE", "l-lysine", " Llysine "):
        assert index.find(text) == Entity("outlet", "l-lysine")


def test_digits_do_not_run_together() -> None:
    index = _index(("EC 1.1.1.11", "ec", "1.1.1.11"))
    assert index.find("ec 1.1.1.11").slug == "1.1.1.11"
    with pytest.raises(InputError, match="unknown thing"):
        index.find("EC 1.1.11.1")


def test_unknown_name_lists_near_ones_and_the_command() -> None:
    with pytest.raises(InputError) as caught:
        _index(("glucose", "compound", "glucose"), ("glycine", "compound", "glycine")).find("glucos")
    assert caught.value.near == ("glucose",)
    assert caught.value.read == "glucos"
    assert "list things lists all" in str(caught.value)


def test_ambiguous_name_names_both() -> None:
    index = _index(("aconitase", "enzyme", "aconitase-a"), ("aconitase", "enzyme", "aconitase-b"))
    with pytest.raises(InputError, match="aconitase-a .enzyme., aconitase-b .enzyme."):
        index.find("aconitase")
    assert len(index.find_all("Aconitase")) == 2


def test_kinds_in_order_are_not_ambiguous() -> None:
    entries = [("fumarase", "reaction", "fumarase"), ("fumarase", "enzyme", "fumarase")]
    assert _index(*entries, order=("enzyme", "reaction")).find("fumarase").kind == "enzyme"
    with pytest.raises(InputError, match="can mean"):
        _index(*entries).find("fumarase")


def test_an_empty_name_is_unknown() -> None:
    with pytest.raises(InputError, match="unknown thing '  '"):
        _index(("日本", "compound", "japan")).find("  ")


def _facts() -> tuple[Facts, Host]:
    row = HostReaction(
        "aconitase-mitochondrion",
        "aconitase",
        "citrate-dehydratase",
        "both",
        SEEN,
        "cytosol",
        isozymes=(Isozyme(("ACO1",)), Isozyme(("ACO2", "ISU1"))),
    )
    host = Host("paper-yeast", "paper yeast", "1", (), (row,), (), (), (), (), (), "motive-balanced", SEEN)
    reaction = Reaction("citrate-dehydratase", "citrate dehydratase", (), SEEN, ec=("4.2.1.3",), enzyme="aconitase")
    enzymes = {"aconitase": Enzyme("aconitase", "aconitase", ec=("4.2.1.3",), aliases=("aconitate hydratase",))}
    return Facts("v", {}, {reaction.slug: reaction}, enzymes, {host.slug: host}, {}, {}, {}, {}, {}), host


@pytest.mark.parametrize(
    ("name", "entity"),
    [
        ("ACO1", Entity("gene", "ACO1")),
        ("isu1", Entity("gene", "ISU1")),
        ("aconitase", Entity("enzyme", "aconitase")),
        ("Aconitate hydratase", Entity("enzyme", "aconitase")),
        ("4.2.1.3", Entity("ec", "4.2.1.3")),
        ("EC 4.2.1.3", Entity("ec", "4.2.1.3")),
        ("citrate-dehydratase", Entity("reaction", "citrate-dehydratase")),
        ("aconitase-mitochondrion", Entity("row", "aconitase-mitochondrion")),
    ],
)
def test_catalysts_of_a_host(name: str, entity: Entity) -> None:
    assert names.catalysts(*_facts()).find(name) == entity


def test_hosts_by_label() -> None:
    facts, host = _facts()
    assert names.hosts(facts).find("Paper Yeast").slug == host.slug
    with pytest.raises(InputError, match="unknown host"):
        names.hosts(facts).find("paper")
