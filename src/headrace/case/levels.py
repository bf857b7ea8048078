"""Whether a host's rows may run: expression rules judged under a case's conditions.

A rule is a set of conditions that suffices for a level; filled conditions must all hold, and the highest level
of the rules that hold wins (off < basal < on). A row without rules is off unless a design adds it. A row is removed
when no isozyme keeps all its genes. A level that only rules with an enzyme's deletion as condition give is *fitted*.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from msgspec import Struct

from headrace.values.case import Level
from headrace.values.facts import Expression, Host, HostReaction

_ORDER = {"off": 0, "basal": 1, "on": 2}


class Conditions(Struct, frozen=True):
    """What expression depends on. oxygen: present | absent. fed: substrates; supplied: these and supplements.

    implied: circumstances that a removed enzyme brings about; a rule that needs one is *fitted* in this case.
    removed: gene symbols. unruled: rules whose conditions are switched off, so that they hold always.
    """

    fed: frozenset[str]
    supplied: frozenset[str]
    oxygen: str = "present"
    circumstances: frozenset[str] = frozenset()
    implied: frozenset[str] = frozenset()
    removed: frozenset[str] = frozenset()
    unruled: frozenset[str] = frozenset()


def holds(rule: Expression, under: Conditions) -> bool:
    """Whether all conditions of a rule hold; a rule without conditions always does."""
    return rule.slug in under.unruled or all(
        (
            rule.oxygen in ("", under.oxygen),
            not rule.feed_any or not under.fed.isdisjoint(rule.feed_any),
            not rule.feed_only or (bool(under.fed) and under.fed.issubset(rule.feed_only)),
            under.fed.isdisjoint(rule.feed_without),
            not rule.feed_outside or not under.fed.issubset(rule.feed_outside),
            not rule.supplied_any or not under.supplied.isdisjoint(rule.supplied_any),
            under.supplied.isdisjoint(rule.supplied_without),
            not rule.removed_regulators or not under.removed.isdisjoint(rule.removed_regulators),
            not rule.removed_enzymes or not under.removed.isdisjoint(rule.removed_enzymes),
            not rule.circumstances or not (under.circumstances | under.implied).isdisjoint(rule.circumstances),
        )
    )


def is_fitted(rule: Expression, under: Conditions) -> bool:
    """Whether a rule that holds does so only because an enzyme is gone."""
    return rule.fitted or bool(rule.circumstances) and under.circumstances.isdisjoint(rule.circumstances)


def is_removed(row: HostReaction, genes: frozenset[str]) -> bool:
    """Whether every isozyme of a row lacks a gene; a row without genes can't be removed by one."""
    return bool(row.isozymes) and all(not genes.isdisjoint(isozyme.genes) for isozyme in row.isozymes)


def levels(
    host: Host, rows: Iterable[HostReaction], under: Conditions, removed_rows: frozenset[str] = frozenset()
) -> dict[str, Level]:
    """The level of each row, by slug, as expressed under the conditions."""
    rules = {rule.slug: rule for rule in host.expressions}
    return {row.slug: level(row, rules, under, removed_rows) for row in rows}


def level(
    row: HostReaction, rules: Mapping[str, Expression], under: Conditions, removed_rows: frozenset[str] = frozenset()
) -> Level:
    """The level of one row with its reason in words."""
    if row.slug in removed_rows:
        return Level("off", "removed", "removed by name")
    if is_removed(row, under.removed):
        gone = sorted({gene for isozyme in row.isozymes for gene in isozyme.genes} & under.removed)
        return Level("off", "removed", f"removed with {', '.join(gone)}")
    named = [rules[slug] for slug in row.expression]
    held = [rule for rule in named if holds(rule, under)]
    if not held:
        return Level("off", "not-expressed", _unmet(named), tuple(rule.slug for rule in named))
    best = max((rule.level for rule in held), key=_ORDER.__getitem__)
    deciding = [rule for rule in held if rule.level == best]
    free = [rule for rule in deciding if not is_fitted(rule, under)]
    chosen = free or deciding
    reason = "; or ".join(rule.label for rule in chosen)
    return Level(best, "expressed", reason, tuple(rule.slug for rule in chosen), fitted=not free)


def _unmet(rules: list[Expression]) -> str:
    if not rules:
        return "not made by the host itself; a design can add it"
    return "not expressed here; made when " + "; or ".join(rule.label for rule in rules)
