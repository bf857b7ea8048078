"""`headrace plugins` lists what is loaded and refused; `headrace new scenario` writes what then resolves."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from headrace.errors import InputError
from headrace.hooks.entry import Entry, Refusal
from headrace.hooks.manager import Manager
from headrace.outputs import template
from headrace.outputs.cli.plugins import page
from headrace.pages import plain
from headrace.run import Desk
from headrace.values.facts import Facts


def test_plugins_are_listed_with_origin_hooks_and_families() -> None:
    manager = Manager(first_party=(Entry("lipids", "m", "C", "Draws of lipids.", ("drains",), ("lipids", "sterols")),))
    manager.refused.append(Refusal("wrong", "some-package", "it has no hook"))
    text = plain.page(page(manager), 100)
    assert "1 plugin is loaded, 1 is refused." in text
    for word in ("lipids", "headrace", "drains", "lipids, sterols", "Draws of lipids.", "some-package", "it has no hook"):
        assert word in text


@pytest.fixture(scope="module")
def desk() -> Desk:
    return Desk()


@pytest.mark.parametrize("number", range(4))
def test_a_new_scenario_resolves_for_every_host(desk: Desk, facts: Facts, number: int) -> None:
    host = sorted(facts.hosts)[number]
    for outlet in sorted(facts.outlets)[number :: len(facts.hosts)]:
        text = template.checked(desk, host, "glucose", outlet)
        document = tomllib.loads(text)
        assert document["host"] == host
        assert document["outlet"][0]["product"] == facts.outlets[outlet].label
        assert ("form" in document["outlet"][0]) == (len(facts.outlets[outlet].forms) > 1)


def test_required_supplements_are_supplied(desk: Desk, facts: Facts) -> None:
    host = next(host for host in facts.hosts.values() if host.required_supplements)
    text = template.checked(desk, host.slug, "glucose", sorted(facts.outlets)[0])
    needed = [facts.compounds[slug].label for slug in host.required_supplements]
    assert tomllib.loads(text)["conditions"]["supplements"] == needed


@pytest.mark.parametrize(
    ("names", "message"),
    [
        (("", "glucose", "x"), "--host is missing"),
        (("escherichia-coli", "", "x"), "--feed is missing"),
        (("escherichia-coli", "glucose", ""), "--outlet is missing"),
        (("esherichia", "glucose", "x"), "unknown host"),
        (("escherichia-coli", "glucose", "nonsense"), "unknown outlet"),
    ],
)
def test_missing_and_unknown_names_are_told(desk: Desk, names: tuple[str, str, str], message: str) -> None:
    with pytest.raises(InputError, match=message):
        template.checked(desk, *names)


def test_labels_with_quotes_stay_toml(tmp_path: Path) -> None:
    assert tomllib.loads(f"a = {template._text('5' + chr(34) + ' end')}")["a"] == '5" end'


def test_an_answer_names_only_the_plugins_of_its_own_scenario(root: Path) -> None:
    desk, scenarios = Desk(), root / "examples" / "scenarios"
    desk.refills(scenarios / "heme-from-glutamate.toml")
    second = desk.refills(scenarios / "lysine-on-glucose.toml")
    assert second.plugins == Desk().refills(scenarios / "lysine-on-glucose.toml").plugins
    assert "porphyrins" not in second.plugins
