"""Changes that repairs and alternatives propose, each applied to the invented host."""

from __future__ import annotations

from fractions import Fraction

import pytest

from headrace.errors import InputError
from headrace.values.changes import Add, Change, Close, LetOut, Raise, Reopen, Scale, Supply, Unrule

from .world import resolve, stated

LIMITED = stated('[strain]\nremove = ["milS"]\nlimit = { loomase = "0.5 mmol/gDW/h", "fruit pressase" = "0 mmol/gDW/h" }')
OUTLETS = stated('[[outlet]]\nproduct = "acid"\nrate = "2 mmol/gDW/h"\n[[outlet]]\nproduct = "tile"\nyield = "0.5 mol/mol"')


def test_reopen_and_close() -> None:
    case = resolve(LIMITED, changes=[Reopen("mill-small"), Close("carry-sugar")])
    assert (case.levels["mill-small"].level, case.levels["mill-small"].reason) == ("on", "reopened (removed with milS)")
    assert (case.levels["carry-sugar"].level, case.levels["carry-sugar"].reason) == ("off", "closed")


def test_reopen_lifts_a_limit_of_zero_but_no_other() -> None:
    assert resolve(LIMITED).levels["press"].kind == "no-capacity"
    case = resolve(LIMITED, changes=[Reopen("press"), Reopen("weave")])
    assert case.levels["press"].level == "on"
    assert [limit.label for limit in case.limits] == ["loomase"]


def test_the_last_change_counts() -> None:
    assert resolve(changes=[Close("press"), Reopen("press")]).levels["press"].level == "on"
    assert resolve(changes=[Reopen("press"), Close("press")]).levels["press"].level == "off"


def test_add() -> None:
    case = resolve(changes=[Add("fire", "barn", "both")])
    row = case.rows["fire-brought-into-barn-both"]
    assert (row.place, row.direction, case.levels[row.slug].kind) == ("barn", "both", "added")
    assert resolve(changes=[Add("fire")]).rows["fire-brought-into-cell"].place == "cell"


def test_supply_and_let_out() -> None:
    case = resolve(changes=[Supply("acid", 0.5), LetOut("tile")])
    assert [(extra.compound, extra.rate) for extra in case.supplements] == [("acid", 0.5)]
    assert case.releases == ("acid", "tile")


def test_supply_counts_for_expression() -> None:
    from .world import RULES, tuned

    rules = tuple(tuned(rule, feed_only=(), supplied_any=("oil",)) if rule.slug == "oil-only" else rule for rule in RULES)
    host = {"expressions": rules}
    assert resolve(host=host).levels["mill-large"].level == "off"
    assert resolve(host=host, changes=[Supply("oil")]).levels["mill-large"].level == "on"


def test_raise() -> None:
    [zero, raised] = sorted(resolve(LIMITED, changes=[Raise("loomase", 3.0)]).limits, key=lambda limit: limit.rate)
    assert (raised.label, raised.rate, raised.origin) == ("loomase", 3.0, "raised")
    assert [limit.label for limit in resolve(LIMITED, changes=[Raise("loomase")]).limits] == [zero.label]
    assert resolve(LIMITED, changes=[Raise("fruit pressase", 1.0)]).levels["press"].kind == "expressed"


def test_scale() -> None:
    case = resolve(OUTLETS, changes=[Scale("acid", Fraction(1, 2)), Scale("tile", Fraction(2)), Scale("growth", Fraction(3))])
    assert (case.demands[0].rate, case.demands[1].yield_per_feed) == (1.0, 1.0)
    assert case.growth == pytest.approx(0.3)


def test_unrule() -> None:
    case = resolve(changes=[Unrule("oil-only")])
    assert (case.levels["mill-large"].level, case.levels["mill-large"].rules) == ("on", ("oil-only",))


@pytest.mark.parametrize(
    ("change", "says"),
    [
        (Reopen("nothing"), "no row 'nothing'"),
        (Close("nothing"), "no row 'nothing'"),
        (Add("nothing"), "no reaction 'nothing'"),
        (Add("fire", "attic"), "can't stand in 'attic'"),
        (Supply("nothing"), "unknown compound"),
        (LetOut("nothing"), "unknown compound"),
        (Raise("nothing"), "no limit 'nothing'"),
        (Scale("nothing", Fraction(1)), "no outlet 'nothing'"),
        (Unrule("nothing"), "no expression rule 'nothing'"),
    ],
)
def test_a_change_that_does_not_fit_is_refused(change: Change, says: str) -> None:
    with pytest.raises(InputError, match=says):
        resolve(changes=[change])
