"""Every shipped plugin keeps the contract; plugins that are wrong on purpose are caught, each by the right check."""

from __future__ import annotations

import socket
import time
from collections.abc import Iterable
from datetime import datetime
from fractions import Fraction
from itertools import count
from pathlib import Path
from typing import Any

import msgspec
import pytest

from headrace.api import Case, Demand, Draw, Finding, PoolTerm, RefillAnswer, RouteBook, require
from headrace.hooks.manager import Manager
from headrace.hooks.table import FIRST_PARTY
from headrace.testing import conformance

ROOT = Path(__file__).resolve().parents[2]
TICKS = count()


@pytest.mark.parametrize("name", [entry.name for entry in FIRST_PARTY])
def test_shipped_plugins_conform(name: str) -> None:
    assert "no name matters" in conformance(type(Manager().plugin(name)))


@pytest.fixture
def right(monkeypatch: pytest.MonkeyPatch) -> type:
    """The example plugin, as its own folder has it."""
    monkeypatch.syspath_prepend(ROOT / "examples" / "plugin" / "src")
    from hydroxyglutarate import Hydroxyglutarate

    return Hydroxyglutarate


def test_the_example_plugin_conforms(right: type) -> None:
    assert len(conformance(right)) == 7


def complaint(plugin: type) -> str:
    with pytest.raises(AssertionError) as error:
        conformance(plugin)
    return str(error.value)


def spoilt(right: Any, spoil: Any) -> type:
    """The right plugin, whose draw is passed through `spoil(draw, case, outlet, routes)`."""

    class Spoilt(right):  # type: ignore[misc]
        def drains(self, case: Case, outlet: Demand, routes: RouteBook) -> tuple[Draw, ...]:
            (draw,) = super().drains(case, outlet, routes)
            return (spoil(draw, case, outlet, routes),)

    return Spoilt


def replace(draw: Draw, **changes: Any) -> Draw:
    return msgspec.structs.replace(draw, **changes)


def reads_a_file(draw: Draw, *_: Any) -> Draw:
    Path(__file__).read_text()
    return draw


def reads_a_file_and_hides_it(draw: Draw, *_: Any) -> Draw:
    try:
        Path(__file__).read_text()
    except RuntimeError:
        pass
    return draw


def opens_a_socket(draw: Draw, *_: Any) -> Draw:
    socket.create_connection(("127.0.0.1", 9))
    return draw


def asks_the_time(draw: Draw, *_: Any) -> Draw:
    return replace(draw, origin=f"at {time.time() > 0}")


def asks_the_date(draw: Draw, *_: Any) -> Draw:
    return replace(draw, origin=f"in {datetime.now().year}")


def counts_calls(draw: Draw, *_: Any) -> Draw:
    return replace(draw, label=f"{draw.label} {next(TICKS)}")


def changes_the_case(draw: Draw, case: Case, *_: Any) -> Draw:
    case.energy["maintenance"] = 0.0
    return draw


def loses_a_pool(draw: Draw, *_: Any) -> Draw:
    return replace(draw, pools=())


def takes_half(draw: Draw, *_: Any) -> Draw:
    pools = tuple(PoolTerm(term.compound, term.place, term.taken / 2, term.returned) for term in draw.pools)
    return replace(draw, pools=pools, skeletons=draw.skeletons / 2)


def miscounts_skeletons(draw: Draw, *_: Any) -> Draw:
    return replace(draw, skeletons=draw.skeletons + 1)


def multiplies_by_the_rate(draw: Draw, case: Case, outlet: Demand, *_: Any) -> Draw:
    return replace(draw, needs={name: need * Fraction(outlet.rate or 0) for name, need in draw.needs.items()})


def knows_a_name(draw: Draw, *_: Any) -> Draw:
    known = any(term.compound == "oxoglutarate" for term in draw.pools)
    return replace(draw, label=f"{draw.label} from {'2-oxoglutarate' if known else 'elsewhere'}")


def takes_the_first_pool(draw: Draw, case: Case, outlet: Demand, routes: RouteBook) -> Draw:
    first = min(routes.facts.compounds)
    return replace(draw, label=f"{draw.label} beside {routes.facts.compounds[first].label}")


WRONG = [
    (reads_a_file, "failed in drains: Forbidden: open"),
    (reads_a_file_and_hides_it, "frozen input, no files, network or clock: drains reaches outside: open"),
    (opens_a_socket, "failed in drains: Forbidden: socket."),
    (asks_the_time, "failed in drains: Forbidden: time.time"),
    (asks_the_date, "failed in drains: Forbidden: datetime.now"),
    (counts_calls, "same input, same output: drains[0].label"),
    (changes_the_case, "frozen input, no files, network or clock: drains changes its case"),
    (loses_a_pool, "draws and ledgers close: oxoglutarate: the steps make -1, the outlet draws 0, pools give 0"),
    (takes_half, "draws and ledgers close: oxoglutarate: the steps make -1, the outlet draws 0, pools give 1/2"),
    (miscounts_skeletons, "draws and ledgers close: (R)-2-hydroxyglutarate: 2 skeletons, but its pools carry 1"),
    (multiplies_by_the_rate, "linear: draws are per mole, but change with the rate: draws[0].needs"),
    (knows_a_name, "no name matters: under other names: drains[0].label"),
    (takes_the_first_pool, "no name matters: under other names: drains[0].label"),
]


@pytest.mark.parametrize(("spoil", "words"), WRONG, ids=[spoil.__name__ for spoil, _ in WRONG])
def test_a_wrong_draw_is_caught(right: type, spoil: Any, words: str) -> None:
    assert words in complaint(spoilt(right, spoil))


def test_a_wrong_declaration_is_caught(right: Any) -> None:
    class Nameless(right):  # type: ignore[misc]
        name = "Not a slug"

    assert "declaration and facts: plugin Not a slug: its name must be" in complaint(Nameless)


def test_a_missing_example_is_caught(right: Any) -> None:
    class Unshown(right):  # type: ignore[misc]
        example = ""

    assert "it has no example scenario" in complaint(Unshown)


def test_an_unclaimed_family_is_caught(right: Any) -> None:
    class Elsewhere(right):  # type: ignore[misc]
        families = ("terpenes",)

    assert "no plugin claims the family 'hydroxy-acids'" in complaint(Elsewhere)


def test_facts_that_do_not_balance_are_caught(right: Any, tmp_path: Path) -> None:
    text = (Path(right.facts(right())) / "hydroxyglutarate.ttl").read_text()
    (tmp_path / "hydroxyglutarate.ttl").write_text(text.replace('"C5H6O5"', '"C5H8O5"'))

    class Unbalanced(right):  # type: ignore[misc]
        def facts(self) -> Path:
            return tmp_path

    assert "its facts can't be used" in complaint(Unbalanced)


def test_facts_that_are_not_in_canonical_form_are_caught(right: Any, tmp_path: Path) -> None:
    text = (Path(right.facts(right())) / "hydroxyglutarate.ttl").read_text()
    (tmp_path / "hydroxyglutarate.ttl").write_text(text.replace(" ;\n", ";\n", 1))

    class Untidy(right):  # type: ignore[misc]
        def facts(self) -> Path:
            return tmp_path

    assert "declaration and facts: plugin/hydroxyglutarate/hydroxyglutarate.ttl" in complaint(Untidy)


def test_an_unmet_need_is_caught(right: Any) -> None:
    class Needy(right):  # type: ignore[misc]
        facts_needed = ("reactions/unobtainable",)

    assert "it needs reactions/unobtainable, which the facts do not have" in complaint(Needy)


def test_an_example_that_never_calls_the_hook_is_caught(right: Any) -> None:
    class Elsewhere(right):  # type: ignore[misc]
        example = right.example.read_text().split("[strain]")[0]

    assert "its example never calls drains" in complaint(Elsewhere)


def test_a_check_of_no_known_level_is_caught(right: Any) -> None:
    class Shouts:
        name = "shouts"
        summary = "Says things at a level that there is not."
        example = EXAMPLE

        def checks(self, case: Case) -> Iterable[Finding]:
            yield Finding("alarm", "shouts", case.host, "!")

    assert "is no finding of level stop, caution, note" in complaint(Shouts)


def test_a_refill_method_that_is_not_linear_is_caught() -> None:
    class Padded:
        name = "padded"
        summary = "Adds a margin that no rate explains."
        example = EXAMPLE

        def refills(self, network: Any, draws: tuple[Draw, ...]) -> RefillAnswer:
            answer = require(network, draws)
            rows = tuple(msgspec.structs.replace(row, most=(row.most or 0.0) + 0.1) for row in answer.refills)
            return msgspec.structs.replace(answer, refills=rows)

    assert "linear: 3 times all rates do not give 3 times the answer" in complaint(Padded)


EXAMPLE = """
title = "growth alone"
host = "escherichia-coli"
growth = "0.2 /h"
[[feed]]
substrate = "glucose"
"""
