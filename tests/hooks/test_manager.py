"""Loading, dispatch, isolation and the trace."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

import pytest
from msgspec import Struct

from headrace.errors import InputError, PluginError
from headrace.hooks.__main__ import TABLE, written
from headrace.hooks.entry import Entry
from headrace.hooks.manager import Manager, survey
from headrace.hooks.strangers import Pointer
from headrace.hooks.table import FIRST_PARTY
from headrace.values.case import Case, Demand, Finding
from headrace.values.facts import Facts, Outlet

FACTS = Facts(
    version="none",
    compounds={},
    reactions={},
    enzymes={},
    hosts={},
    outlets={},
    routes={},
    sources={},
    circumstances={},
    units={},
)
MODULE = '''
from pathlib import Path
from msgspec import Struct


class Wide(Struct, frozen=True, forbid_unknown_fields=True):
    depth: int = 3


class Cadaverine:
    name = "cadaverine"
    summary = "Drains lysine for cadaverine."
    families = ("diamines",)
    options = Wide

    def drains(self, outlet):
        return ()


class Twin(Cadaverine):
    summary = "Has a name that is taken."


class Rival(Cadaverine):
    name = "rival"


class Misspelt:
    name = "misspelt"
    summary = "Means checks."

    def check(self, case):
        return ()


class Careful:
    name = "careful"
    summary = "Notes something."

    def checks(self, case, rows):
        from headrace.values.case import Finding

        yield Finding("note", "careful", case.title, "looked at")


class Failing:
    name = "failing"
    summary = "Fails in a check."

    def checks(self, case):
        yield 1 / 0
'''


@pytest.fixture
def strangers(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, request: pytest.FixtureRequest) -> str:
    """A module of strangers' plugins on the import path."""
    name = f"strangers_{abs(hash(request.node.name))}"
    (tmp_path / f"{name}.py").write_text(MODULE)
    monkeypatch.syspath_prepend(tmp_path)
    return name


def manager(module: str, *classes: str, first_party: tuple[Entry, ...] = (), trace: bool = False) -> Manager:
    pointers = [Pointer(name.lower(), module, name, "far-away") for name in classes]
    return Manager(first_party=first_party, pointers=pointers, trace=trace)


def case(**changes: Any) -> Case:
    given: dict[str, Any] = dict(
        title="a case", host="a-host", feeds=(), demands=(), growth=0.1, oxygen="aerobic", rows={}, levels={}
    )
    return Case(**(given | changes))


def outlet(family: str) -> Demand:
    return Demand("cadaverine", "cadaverine", family, {}, "cytosol", rate=1.0)


def test_the_table_agrees_with_the_classes() -> None:
    assert FIRST_PARTY == survey(), "python -m headrace.hooks writes the table"
    assert TABLE.read_text() == written(FIRST_PARTY)


def test_every_shipped_plugin_loads() -> None:
    loaded = Manager(trace=False)
    for entry in FIRST_PARTY:
        assert loaded.plugin(entry.name).summary == entry.summary
    assert not loaded.refused


def test_shipped_plugins_are_imported_only_when_asked_for(strangers: str) -> None:
    entry = Entry("careful", strangers, "Careful", "Notes something.", ("checks",))
    loaded = Manager(first_party=[entry], trace=False)
    assert strangers not in sys.modules
    assert loaded.checks(case(), (), (), (), FACTS).findings[0].message == "looked at"
    assert strangers in sys.modules


def test_a_table_that_is_stale_refuses_the_plugin(strangers: str) -> None:
    entry = Entry("careful", strangers, "Careful", "An older summary.", ("checks",))
    loaded = Manager(first_party=[entry], trace=False)
    found = loaded.checks(case(), (), (), (), FACTS).findings
    assert "table.py differ" in found[0].message
    assert [refusal.name for refusal in loaded.refused] == ["careful"]


def test_a_wrong_plugin_is_refused_and_the_rest_go_on(strangers: str) -> None:
    loaded = manager(strangers, "Cadaverine", "Misspelt", "Missing", "Careful")
    assert set(loaded.entries) == {"cadaverine", "careful"}
    reasons = {refusal.name: refusal.reason for refusal in loaded.refused}
    assert "the hook is 'checks'" in reasons["misspelt"]
    assert "AttributeError" in reasons["missing"]
    found = loaded.checks(case(), (), (), (), FACTS).findings
    assert [finding.level for finding in found] == ["caution", "caution", "note"]
    assert "misspelt of far-away is not used" in found[0].message


def test_a_module_that_fails_to_import_is_a_refusal(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "breaks_at_import.py").write_text("raise RuntimeError('no luck')")
    monkeypatch.syspath_prepend(tmp_path)
    loaded = manager("breaks_at_import", "Anything")
    assert loaded.refused[0].reason == "importing it failed: RuntimeError: no luck"


def test_two_plugins_of_one_name_are_both_refused(strangers: str) -> None:
    loaded = manager(strangers, "Cadaverine", "Twin")
    assert not loaded.entries
    assert {refusal.reason for refusal in loaded.refused} == {"far-away has a plugin of the same name"}


def test_a_shipped_name_or_family_is_not_for_strangers(strangers: str) -> None:
    mine = (Entry("cadaverine", strangers, "Cadaverine", "Drains lysine for cadaverine.", ("drains",), ("diamines",)),)
    loaded = manager(strangers, "Twin", "Rival", first_party=mine)
    assert set(loaded.entries) == {"cadaverine"}
    assert loaded.entries["cadaverine"].origin == "headrace"
    assert [refusal.reason for refusal in loaded.refused] == [
        "headrace has a plugin of the same name",
        "the family 'diamines' is claimed by plugin cadaverine of headrace as well",
    ]


def test_two_claimants_of_a_family_are_both_refused(strangers: str) -> None:
    loaded = manager(strangers, "Cadaverine", "Rival")
    assert not loaded.entries
    assert all("the family 'diamines' is claimed by" in refusal.reason for refusal in loaded.refused)
    with pytest.raises(PluginError, match="claimed by plugin rival"):
        loaded.drains(case(), [outlet("diamines")], routes=None)  # type: ignore[arg-type]


def test_shipped_plugins_never_clash(strangers: str) -> None:
    twice = [Entry(name, strangers, "Cadaverine", "Drains.", ("drains",), ("diamines",)) for name in ("one", "two")]
    with pytest.raises(PluginError, match="plugin two: the family 'diamines' is claimed by plugin one of headrace as well"):
        Manager(first_party=twice, trace=False)


def test_an_outlet_without_a_claimant_is_an_error_that_names_it(strangers: str) -> None:
    loaded = manager(strangers, "Cadaverine")
    loaded.check_families([Outlet("cadaverine", "cadaverine", "diamines", {})])
    orphans = [Outlet("a", "a", "diamine", {}), Outlet("b", "b", "terpenes", {})]
    with pytest.raises(PluginError, match="no plugin claims the family 'diamine' of outlet 'a' .and 1 more.") as error:
        loaded.check_families(orphans)
    assert "nearest: diamines" in str(error.value)
    with pytest.raises(PluginError, match="no plugin claims the family 'terpenes'"):
        loaded.drains(case(), [outlet("terpenes")], routes=None)  # type: ignore[arg-type]


def test_a_check_that_fails_is_a_caution_and_the_others_still_speak(strangers: str) -> None:
    found = manager(strangers, "Failing", "Careful").checks(case(), (), (), (), FACTS).findings
    assert [finding.level for finding in found] == ["caution", "note"]
    assert "plugin failing: failed in checks: ZeroDivisionError: division by zero" in found[0].message


def test_a_drain_that_fails_is_an_error_with_the_plugins_name(strangers: str) -> None:
    with pytest.raises(PluginError, match="plugin cadaverine: drains of cadaverine gave tuple, not a tuple of draws"):
        manager(strangers, "Cadaverine").drains(case(), [outlet("diamines")], routes=None)  # type: ignore[arg-type]


def test_the_trace_shows_each_call(strangers: str, capsys: pytest.CaptureFixture[str]) -> None:
    manager(strangers, "Careful", "Failing", trace=True).checks(case(), (), (), (), FACTS)
    shown = capsys.readouterr().err
    assert "headrace: checks of careful: 1 given, " in shown
    assert "ZeroDivisionError" in shown


def test_the_trace_is_switched_by_the_environment(
    strangers: str, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    pointers = [Pointer("careful", strangers, "Careful", "far-away")]
    for value, lines in (("1", 1), ("0", 0), ("", 0)):
        monkeypatch.setenv("HEADRACE_TRACE", value)
        Manager(first_party=(), pointers=pointers).checks(case(), (), (), (), FACTS)
        assert len(capsys.readouterr().err.splitlines()) == lines


@pytest.mark.parametrize(
    ("given", "key"),
    [
        ({"cadaverine": {"dept": 2}}, "plugin.cadaverine.dept"),
        ({"cadaverine": {"depth": "two"}}, "plugin.cadaverine.depth"),
        ({"careful": {"depth": 2}}, "plugin.careful"),
    ],
)
def test_options_are_validated_by_the_plugins_own_schema(strangers: str, given: dict[str, Any], key: str) -> None:
    with pytest.raises(InputError) as error:
        manager(strangers, "Cadaverine", "Careful").validated(case(plugin_options=given))
    assert error.value.key == key


def test_options_for_a_plugin_that_is_not_there_name_the_nearest(strangers: str) -> None:
    with pytest.raises(InputError) as error:
        manager(strangers, "Cadaverine").validated(case(plugin_options={"cadaverin": {}}))
    assert error.value.key == "plugin.cadaverin"
    assert error.value.near == ("cadaverine",)


class Reporter:
    name = "reporter"
    summary = "Writes what it was given."

    class options(Struct, frozen=True, forbid_unknown_fields=True):  # noqa: N801
        title: str = "untitled"

    def report(self, result: Any, options: Any) -> list[Any]:
        from headrace.values.answers import Document

        return [Document("a.md", "text/markdown", options.title)]


def test_a_report_gets_its_options_and_their_defaults() -> None:
    loaded = Manager(first_party=(), classes=[Reporter], trace=False)

    class Result:
        case = case()

    assert loaded.report(Result())[0].text == "untitled"  # type: ignore[arg-type]
    Result.case = case(plugin_options={"reporter": {"title": "HR-12"}})
    assert loaded.report(Result())[0].text == "HR-12"  # type: ignore[arg-type]
    with pytest.raises(PluginError, match="plugin nobody: is not loaded"):
        loaded.report(Result(), only=["nobody"])  # type: ignore[arg-type]


def test_a_facts_folder_that_is_not_there_refuses_the_plugin(tmp_path: Path) -> None:
    class Brings:
        name = "brings"
        summary = "Brings facts."

        def facts(self) -> Path:
            return tmp_path / "facts"

    loaded = Manager(first_party=(), classes=[Brings], trace=False)
    assert loaded.fact_folders() == ()
    assert loaded.refused[0].reason == "its facts folder is not there: facts"
    (tmp_path / "facts").mkdir()
    assert Manager(first_party=(), classes=[Brings], trace=False).fact_folders() == (("brings", tmp_path / "facts"),)


def test_findings_of_refused_plugins_are_cautions(strangers: str) -> None:
    assert manager(strangers, "Misspelt").findings()[0] == Finding(
        "caution",
        "plugins",
        "misspelt",
        "plugin misspelt of far-away is not used: it has a method 'check', which is no hook; "
        "the hook is 'checks' (a helper may start with _)",
    )
