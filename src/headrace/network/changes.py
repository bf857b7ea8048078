"""Every change that might open a case, each as columns of one wide programme in which it stands shut.

Rows that are off, refills that the host runs only the other way or lacks, limits and basal levels, supplements, by-products,
stated uptakes, and the rates asked for. What has an amount (a limit to raise, an uptake, a rate to lower) is a column that
gives way in its row, as far as needed.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from fractions import Fraction

import msgspec

from headrace.network.build import Network, build, cytosol_of, medium_of, programme
from headrace.network.refills import Refill, closed_refills, steps
from headrace.solve.linear import INFINITY, Programme
from headrace.values.case import Case, Level, Supplement
from headrace.values.changes import Add, Change, LetOut, Raise, Reopen, Scale, Supply, Uptake
from headrace.values.facts import Basis, Facts, HostReaction

ORDER = ("reopen", "express", "regulator", "reverse", "add", "raise", "supplement", "release", "uptake", "lower")
STRAIN = frozenset(ORDER[:6])
SURROUNDINGS = frozenset(ORDER[6:9])


@dataclass(frozen=True)
class Option:
    """One change. kind: one of ORDER. reason: why it is shut now. columns: in the wide programme.

    refills: the refills that it opens. changes: for `headrace.case.resolve`. present: the stated value that an amount
    changes (mmol/gDW/h or 1/h); changes and words then wait for `measured`.
    """

    words: str
    kind: str
    reason: str
    columns: tuple[int, ...]
    changes: tuple[Change, ...]
    refills: tuple[str, ...] = ()
    about: str = ""
    present: float | None = None


@dataclass(frozen=True)
class Wide:
    """The case with every option present. programme: its columns, then those that give way; options: most wanted first."""

    net: Network
    programme: Programme
    options: tuple[Option, ...]


def widen(net: Network) -> Wide:
    """All options of a case, and the programme that holds them."""
    case, refills = net.case, closed_refills(net)
    rows, levels, found = _rows(net, refills)
    extra = [c for c in _supplements(net, rows) if c not in {s.compound for s in case.supplements}]
    out = [c for c in _releasable(net, rows) if c not in case.releases]
    wide = build(net.facts, msgspec.structs.replace(
        case, rows=rows, levels=levels, supplements=case.supplements + tuple(Supplement(c) for c in extra),
        releases=case.releases + tuple(out), limits=tuple(limit for limit in case.limits if limit.rate > 0)))
    options = [replace(option, columns=tuple(wide.columns_of(names))) for option, names in found]
    options += _chains(wide, case, refills) + _regulators(wide, case, refills) + _crossings(wide, extra, out)
    giving, columns = _giving(wide)
    options = [o for o in options + giving if o.columns]
    unique = {(o.words, o.columns): o for o in options}
    return Wide(wide, programme(wide, extra=columns), tuple(sorted(unique.values(), key=_wanted)))


def _wanted(option: Option) -> tuple[bool, int, str]:
    return not option.refills, ORDER.index(option.kind), option.words


def _rows(net: Network, refills: tuple[Refill, ...]) -> tuple[dict[str, HostReaction], dict[str, Level],
                                                              list[tuple[Option, tuple[str, ...]]]]:
    """(rows and levels with everything on, options with the rows that each turns on)."""
    case, facts = net.case, net.facts
    rows, levels = dict(case.rows), dict(case.levels)
    found: list[tuple[Option, tuple[str, ...]]] = []
    opens: dict[str, list[str]] = {}
    for refill in refills:
        if refill.kind != "direction":
            opens.setdefault(refill.row, []).append(refill.slug)
    for slug, level in case.levels.items():
        if level.level == "off":
            levels[slug] = Level("on", "open", "tried as a change")
            words, kind = _reopen_words(case, slug, level)
            found.append((Option(words, kind, level.reason, (), (Reopen(slug),), tuple(opens.get(slug, ()))), (slug,)))
    for refill in refills:
        about = facts.reactions[refill.reaction]
        direction = "forward" if refill.sign > 0 else "reverse"
        if refill.kind == "absent":
            place = cytosol_of(net.host)
            new = HostReaction(refill.row, about.label, refill.reaction, direction, Basis("recalled"), place=place)
            option = Option(f"add {about.label}", "add", refill.reason, (), (Add(refill.reaction, place, direction),),
                            (refill.slug,))
        elif refill.kind == "direction":
            own = case.rows[refill.row]
            new = msgspec.structs.replace(own, slug=f"{own.slug}-turned", direction=direction, expression=())
            option = Option(f"run {own.label} in reverse", "reverse", refill.reason, (),
                            (Add(refill.reaction, own.place, direction),), (refill.slug,))
        else:
            continue
        rows[new.slug], levels[new.slug] = new, Level("on", "added", "tried as a change")
        found.append((option, (new.slug,)))
    return rows, levels, found


def _reopen_words(case: Case, slug: str, level: Level) -> tuple[str, str]:
    label = case.rows[slug].label
    if level.kind == "removed":
        return f"keep {label}", "reopen"
    if level.kind == "no-capacity":
        return f"lift the limit of 0 on {label}", "raise"
    return f"express {label} ({level.reason})", "express"


def _chains(wide: Network, case: Case, refills: tuple[Refill, ...]) -> list[Option]:
    """A closed refill together with the closed steps that alone feed it (malate synthase with isocitrate lyase)."""
    found = []
    for refill in refills:
        if refill.row not in case.rows or refill.kind == "direction":
            continue
        closed = [s for s in steps(wide, refill) if s in case.levels and case.levels[s].level == "off"]
        if closed:
            rows = [refill.row, *closed]
            text = " with ".join(case.rows[r].label for r in rows)
            reasons = "; ".join(dict.fromkeys(case.levels[r].reason for r in rows))
            found.append(Option(f"express {text}", "express", reasons, tuple(wide.columns_of(rows)),
                                tuple(Reopen(r) for r in rows), (refill.slug,)))
    return found


def _regulators(wide: Network, case: Case, refills: tuple[Refill, ...]) -> list[Option]:
    """Regulators whose removal alone turns closed rows on."""
    rules = {rule.slug: rule for rule in wide.host.expressions if rule.removed_regulators and rule.level == "on"}
    opened: dict[str, list[str]] = {}
    for slug, row in case.rows.items():
        if case.levels[slug].level != "off" or case.levels[slug].kind == "removed":
            continue
        for rule in (rules[name] for name in row.expression if name in rules):
            for gene in rule.removed_regulators:
                opened.setdefault(gene, []).append(slug)
    return [Option(f"remove the regulator {gene} (turns on {', '.join(case.rows[r].label for r in rows)})", "regulator",
                   f"repressed by {gene}", tuple(wide.columns_of(rows)), tuple(Reopen(r) for r in rows),
                   tuple(r.slug for r in refills if r.row in rows and r.kind != "direction"))
            for gene, rows in sorted(opened.items())]


def _crossings(wide: Network, extra: list[str], out: list[str]) -> list[Option]:
    """Supplements and by-products."""
    found = []
    for kind, verb, names in (("enter", "supplement", extra), ("leave", "release", out)):
        for name in names:
            columns = tuple(j for j, c in enumerate(wide.columns) if c.kind == kind and c.name == name)
            change: Change = Supply(name) if kind == "enter" else LetOut(name)
            reason = "not in the medium" if kind == "enter" else "not among what may leave"
            found.append(Option(f"{verb} {wide.facts.compounds[name].label}", verb, reason, columns, (change,)))
    return found


def _giving(wide: Network) -> tuple[list[Option], list[tuple[dict[int, float], float, float]]]:
    """Options with an amount, and the columns that give way: limits, basal levels, uptakes, rates asked for."""
    case, n_pools = wide.case, len(wide.pools)
    start = len(wide.columns) + len(wide.coupled)
    options: list[Option] = []
    columns: list[tuple[dict[int, float], float, float]] = []

    def give(entry: dict[int, float], most: float, option: Option) -> None:
        columns.append((entry, 0.0, most))
        options.append(replace(option, columns=(start + len(columns) - 1,)))

    limits = {f"limit of {limit.label}": limit for limit in case.limits}
    basal = {f"basal level of {slug}": slug for slug, level in case.levels.items() if level.level == "basal"}
    for number, bound in enumerate(wide.bounds):
        row = {n_pools + number: -1.0}
        if bound.label in limits:
            limit = limits[bound.label]
            give(row, INFINITY, Option(f"raise the limit of {limit.label}", "raise", limit.origin, (), (), about=limit.label,
                                       present=limit.rate))
        elif bound.label in basal:
            slug = basal[bound.label]
            level, label = case.levels[slug], case.rows[slug].label
            give(row, INFINITY, Option(f"express {label} fully (now at basal level: {level.reason})", "express", level.reason,
                                       (), (Reopen(slug),)))
    for feed in case.feeds:
        if feed.uptake is not None:
            entry = _column(wide, "enter", feed.compound)
            label = wide.facts.compounds[feed.compound].label
            for sign, most in ((1.0, INFINITY), (-1.0, feed.uptake)):
                words = f"{'raise' if sign > 0 else 'lower'} the uptake of {label}"
                give({k: sign * v for k, v in entry.items()}, most,
                     Option(words, "uptake", "stated", (), (), about=feed.compound, present=feed.uptake))
    for scalar, rate in wide.rates.items():
        if scalar != "maintenance" and rate > 0:
            give(_lowering(wide, scalar), rate, Option(f"lower {_asked(case, scalar)}", "lower", "asked for", (), (),
                                                       about=_outlet(case, scalar), present=rate))
    return options, columns


def _column(wide: Network, kind: str, name: str) -> dict[int, float]:
    """The entries of a crossing in the programme: its pool, and the bounds that count it."""
    j = next(j for j, c in enumerate(wide.columns) if c.kind == kind and c.name == name)
    bounds = {len(wide.pools) + i: b.coefficients[j] for i, b in enumerate(wide.bounds) if j in b.coefficients}
    return {**wide.entries[j], **bounds}


def _lowering(wide: Network, scalar: str) -> dict[int, float]:
    """What one unit less of a scalar gives back to pools and bounds."""
    bounds = {len(wide.pools) + i: -b.scalars[scalar] for i, b in enumerate(wide.bounds) if scalar in b.scalars}
    return {**wide.demands.get(scalar, {}), **bounds}


def _outlet(case: Case, scalar: str) -> str:
    return "growth" if scalar == "growth" else case.demands[int(scalar.partition(".")[2])].outlet


def _asked(case: Case, scalar: str) -> str:
    return "growth" if scalar == "growth" else case.demands[int(scalar.partition(".")[2])].label


def measured(option: Option, amount: float) -> Option:
    """The option with its amount in words and as a change: the new value, rounded so that it still suffices."""
    if option.present is None:
        return option
    if option.kind == "lower":
        factor = Fraction(repr(_down((option.present - amount) / option.present)))
        words = f"{option.words} from {option.present:.4g} to {option.present * float(factor):.4g}"
        share = f"{float(factor):.4g} of what is asked"
        return replace(option, words=f"{words} ({share})", changes=(Scale(option.about, factor),))
    up = option.words.startswith("raise")
    value = _up(option.present + amount) if up else _down(option.present - amount)
    change: Change = Raise(option.about, value) if option.kind == "raise" else Uptake(option.about, value)
    return replace(option, words=f"{option.words} from {option.present:.4g} to {value:.6g} mmol/gDW/h", changes=(change,))


def _up(value: float) -> float:
    """To six digits, not below the value."""
    return -_down(-value)


def _down(value: float) -> float:
    """To six digits, not above the value (but for the solver's tolerance)."""
    if abs(value) < 1e-9:
        return 0.0
    step = 10.0 ** (math.floor(math.log10(abs(value))) - 5)
    return float(f"{math.floor(value / step - 1e-4) * step:.12g}") if abs(value / step - round(value / step)) > 1e-4 \
        else float(f"{round(value / step) * step:.12g}")


def _crossing(net: Network, rows: dict[str, HostReaction], sign: int) -> Iterator[str]:
    """Compounds that some row can bring across from (sign -1) or to (sign +1) the medium."""
    medium, seen = medium_of(net.host), set()
    for row in rows.values():
        if medium not in (row.outer, row.inner):
            continue
        side = "outer" if row.outer == medium else "inner"
        ways = {"forward": (1,), "reverse": (-1,), "both": (1, -1)}[row.direction]
        for term in net.facts.reactions[row.reaction].terms:
            if term.side == side and any(term.count * w * sign > 0 for w in ways):
                seen.add(term.compound)
    yield from sorted(seen)


def _supplements(net: Network, rows: dict[str, HostReaction]) -> list[str]:
    feeds, known = {f.compound for f in net.case.feeds}, set(net.host.nutrients)
    return [c for c in _crossing(net, rows, -1) if c not in feeds | known | _roles(net.facts)
            and net.facts.compounds[c].formula.get("C", 0) > 0]


def _releasable(net: Network, rows: dict[str, HostReaction]) -> list[str]:
    feeds: Iterable[str] = (f.compound for f in net.case.feeds)
    known = set(net.host.nutrients) | _roles(net.facts) | set(feeds)
    return [c for c in _crossing(net, rows, 1) if c not in known]


def _roles(facts: Facts) -> set[str]:
    return {name for members in facts.roles.values() for name in members}
