"""Which compounds act on the refills of a case, which vitamins and metals they need, and whether the case works against them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from headrace.api import (
    AddedTable,
    Case,
    Draw,
    Effect,
    Facts,
    Finding,
    RefillAnswer,
    RuleRow,
    State,
    TableColumn,
    fired,
    leans_on,
    state_of,
)
from headrace_plugins.refills.whole_network import EXAMPLE


class Regulation:
    """Effectors and cofactors of the refills that a case leans on; findings come from the rules of the facts."""

    name = "regulation"
    summary = "Activators, inhibitors, vitamins and metals of the refills, and what the finding rules of the facts say."
    example = EXAMPLE

    def checks(
        self, case: Case, draws: tuple[Draw, ...], answers: Sequence[RefillAnswer], facts: Facts
    ) -> Iterable[Finding | AddedTable]:
        if not answers:
            return
        state = state_of(facts, case, answers[0], draws)
        enzymes = _enzymes(facts, case, answers[0])
        if enzymes:
            yield _effectors(facts, case, state, enzymes)
            yield _cofactors(facts, case, state, enzymes)
        for row in fired(facts, case, answers[0], draws):
            yield _finding(facts, row)


def _finding(facts: Facts, row: RuleRow) -> Finding:
    sources = "; ".join(facts.sources[slug].text for slug in row.sources if slug in facts.sources)
    return Finding(row.level, row.rule.rpartition("/")[2], row.about, row.message, sources)


def _enzymes(facts: Facts, case: Case, answer: RefillAnswer) -> tuple[str, ...]:
    """Enzymes of the refills that the case leans on, and of their steps."""
    rows = [name for row in answer.refills if leans_on(row) for name in (row.refill.removesuffix("-in-reverse"), *row.steps)]
    reactions = (case.rows[row].reaction for row in rows if row in case.rows)
    return tuple(dict.fromkeys(facts.reactions[name].enzyme for name in reactions if facts.reactions[name].enzyme))


def acting(facts: Facts, host: str, enzyme: str) -> tuple[Effect, ...]:
    """What acts on an enzyme in a host: its own facts, else those of most organisms."""
    known = [each for each in facts.effects if each.enzyme == enzyme]
    own = [each for each in known if each.host == host]
    return tuple(own or [each for each in known if not each.host])


def _effectors(facts: Facts, case: Case, state: State, enzymes: Sequence[str]) -> AddedTable:
    columns = (
        TableColumn("enzyme", "enzyme"),
        TableColumn("effector", "effector"),
        TableColumn("effect", "is an"),
        TableColumn("case", "this case"),
        TableColumn("reading", "reading", detail=True),
        TableColumn("source", "source", detail=True),
    )
    rows = []
    for enzyme in enzymes:
        for each in acting(facts, case.host, enzyme):
            source = "; ".join(facts.sources[slug].text for slug in each.basis.sources if slug in facts.sources)
            names = (facts.enzymes[enzyme].label, facts.compounds[each.effector].label)
            rows.append((*names, each.sense, _pushed(state, each), each.basis.reading, source))
    empty = "No effector of these refills is known in this host."
    return AddedTable("effectors", "What acts on the refills", columns, tuple(rows), empty=empty, detail=True)


def _pushed(state: State, effect: Effect) -> str:
    """What the case does with an effector, in words."""
    does = [words for words, names in (("takes it", state.drained), ("makes it on the way", state.made), ("feeds it", state.feed))
            if effect.effector in names]
    return " and ".join(does) or "leaves it alone"


def _cofactors(facts: Facts, case: Case, state: State, enzymes: Sequence[str]) -> AddedTable:
    columns = (
        TableColumn("enzyme", "enzyme"),
        TableColumn("cofactor", "holds"),
        TableColumn("vitamin", "made from"),
        TableColumn("supply", "comes from"),
        TableColumn("source", "source", detail=True),
    )
    rows = [row for enzyme in enzymes for row in _held(facts, case, state, enzyme)]
    empty = "They hold no cofactor that is known."
    return AddedTable("cofactors", "What the refills hold", columns, tuple(rows), empty=empty, detail=True)


def _held(facts: Facts, case: Case, state: State, enzyme: str) -> Iterator[tuple[str, ...]]:
    for cofactor in facts.enzymes[enzyme].cofactors:
        label = facts.compounds[cofactor].label
        vitamins = [vitamin for vitamin in facts.vitamins if cofactor in vitamin.gives]
        if not vitamins:
            yield facts.enzymes[enzyme].label, label, "", "the medium's minerals" if _mineral(facts, cofactor) else "the host", ""
        for vitamin in vitamins:
            basis = vitamin.supplied_basis.get(case.host)
            source = "; ".join(facts.sources[slug].text for slug in basis.sources if slug in facts.sources) if basis else ""
            words = _supply(vitamin.supplied.get(case.host, ""), vitamin.compound in state.supplied)
            yield facts.enzymes[enzyme].label, label, vitamin.label, words, source


def _supply(host: str, present: bool) -> str:
    if present:
        return "the medium"
    return {"made-inside": "the host itself", "from-the-medium": "nowhere: the medium lacks it"}.get(host, "not known")


def _mineral(facts: Facts, compound: str) -> bool:
    return not facts.compounds[compound].formula.get("C", 0)
