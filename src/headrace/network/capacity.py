"""How much enzyme a requirement takes, what a stated capacity covers, and the fold change that a design needs.

    m = 1000 v M / (3600 k s)      v: rate, mmol/gDW/h; M: g/mmol of active sites (kDa); k: turnover, 1/s; s: saturation
    m = 1000 v / (60 a s)          a: activity of the pure enzyme, U/mg
    k s <= (k/Km) c                where only the specificity constant is known: an upper bound of the turnover
    s = product of c / (Km + c)    over the substrates with a known Km; 1 for the others
    share = m / (1000 p)           p: g protein/gDW;     fold = v / capacity;     cover = capacity / v

m in mg enzyme/gDW. Ranges come from differing sources, from concentrations and from the protein fraction; low and high
are the best and the worst corner. What is not known is said to be missing and never filled in.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from math import prod

from headrace.network.concentrations import concentration
from headrace.network.segment import row_of
from headrace.network.triggers import RUNS, leans_on
from headrace.values.answers import GroupRow, RefillAnswer, RefillRow
from headrace.values.case import Case, Limit
from headrace.values.depth import Constant
from headrace.values.facts import Facts

Span = tuple[float, float]
USUAL = (1e-6, 1e-2)  # mol/L; only measured concentrations are used, so this never enters a number


@dataclass(frozen=True)
class Sized:
    """One enzyme of a refill, or a whole group. needed: mmol/gDW/h. mass: mg/gDW; share: of the cell's protein.

    capacity, cover, fold: None where no capacity is stated; each with low and high. origin: what capacity comes from.
    saturation: span of s, () when no Km is known. basis: the constants used, in words; missing: what is not known.
    bound: "" or "at least", where only an upper bound of the turnover is known. recalled: a constant is only recalled.
    """

    about: str
    label: str
    needed: float
    capacity: float | None = None
    capacity_span: tuple[float | None, float | None] = (None, None)
    cover: float | None = None
    fold: float | None = None
    mass: Span | None = None
    share: Span | None = None
    saturation: Span | None = None
    bound: str = ""
    origin: str = ""
    basis: str = ""
    missing: tuple[str, ...] = ()
    recalled: bool = False
    sources: tuple[str, ...] = ()


def sized(facts: Facts, case: Case, answer: RefillAnswer, saturation: float | None = None) -> tuple[Sized, ...]:
    """Each refill that the case uses, and its steps, as enzymes. saturation: stated, instead of Km and concentrations."""
    found: dict[str, Sized] = {}
    for refill in answer.refills:
        if leans_on(refill):
            row, sign = row_of(refill, case)
            found[row] = _enzyme(facts, case, row, sign, needed(refill), refill.label, saturation)
            rates = {each.reaction: each.rate for each in answer.rates}
            for step in refill.steps:
                rate = rates.get(step, 0.0)
                sign, label = (1 if rate >= 0 else -1), case.rows[step].label
                found.setdefault(step, _enzyme(facts, case, step, sign, abs(rate), label, saturation))
    return tuple(found.values())


def groups(answer: RefillAnswer, case: Case) -> tuple[Sized, ...]:
    """Each group that the case uses, with what its stated capacities cover."""
    return tuple(_group(group, case) for group in answer.groups if (group.nominal or group.most or 0.0) > RUNS)


def needed(refill: RefillRow) -> float:
    """The rate to size for: nominal, or the largest where the split of the group is open."""
    return (refill.most if refill.nominal is None else refill.nominal) or 0.0


def enzyme_mass(facts: Facts, case: Case, row: str, sign: int, rate: float) -> Span | None:
    """(low, high) mg of enzyme per gDW that a row takes at a rate in mmol/gDW/h; sign: +1 forward. None if not known."""
    return _enzyme(facts, case, row, sign, rate, "", None).mass


def _group(group: GroupRow, case: Case) -> Sized:
    need = (group.most if group.nominal is None else group.nominal) or 0.0
    rows = {member.removesuffix("-in-reverse") for member in group.members}
    limits = [limit for limit in case.limits if rows & set(limit.rows)]
    return _covered(Sized(group.group, group.label, need), group.capacity, limits)


def _enzyme(facts: Facts, case: Case, row: str, sign: int, need: float, label: str, stated: float | None) -> Sized:
    limits = [limit for limit in case.limits if row in limit.rows]
    base = _covered(Sized(row, label, need), min((limit.rate for limit in limits), default=None), limits)
    known = _constants(facts, case, row)
    saturation, affinities = _saturation(facts, case, row, sign, known, stated)
    speed = _speed(facts, case, row, sign, known, saturation or (1.0, 1.0))
    masses = [each for each in known if each.kind == "enzyme-mass"]
    missing = speed.missing if masses or speed.per_mass else (*speed.missing, "mass")
    used = [*speed.used, *([] if speed.per_mass else masses), *(affinities if speed.saturable else [])]
    mass = None if missing else _mass(need, speed, masses)
    return replace(
        base, mass=mass, share=_share(facts, case, mass), saturation=saturation, bound=speed.bound if mass else "",
        basis=_words(facts, used), missing=missing, recalled=any(each.basis.reading == "recalled" for each in used),
        sources=tuple(dict.fromkeys(slug for each in used for slug in each.basis.sources)))


@dataclass(frozen=True)
class _Speed:
    """How fast an enzyme works in the cell. span: 1/s, or U/mg if per_mass. bound: "at least" for the mass that follows."""

    span: Span = (0.0, 0.0)
    per_mass: bool = False
    saturable: bool = True
    bound: str = ""
    used: tuple[Constant, ...] = ()
    missing: tuple[str, ...] = ()


def _constants(facts: Facts, case: Case, row: str) -> list[Constant]:
    """The constants of a row's enzyme in this host, for its genes where the facts name some."""
    enzyme = facts.reactions[case.rows[row].reaction].enzyme
    genes = {gene for isozyme in case.rows[row].isozymes for gene in isozyme.genes}
    return [each for each in facts.kinetics if each.host == case.host and each.enzyme == enzyme
            and (not each.genes or not genes or genes & set(each.genes))]


def _speed(facts: Facts, case: Case, row: str, sign: int, known: Sequence[Constant], saturation: Span) -> _Speed:
    """From the turnover number, else the activity of the pure enzyme, else the specificity constant and a concentration."""
    for kind in ("turnover-number", "specific-activity"):
        if each := tuple(one for one in known if one.kind == kind):
            least, most = _span(each)
            return _Speed((least * saturation[0], most * saturation[1]), kind == "specific-activity", used=each)
    for one in known:
        if one.kind == "specificity-constant" and one.compound in _taken(facts, case, row, sign):
            level = concentration(facts, case, one.compound, case.rows[row].place, USUAL)
            if level.origin != "measured":
                return _Speed(missing=(f"concentration of {facts.compounds[one.compound].label}",))
            least, most = _span([one])
            span = (least * level.low * 1000, most * level.high * 1000)
            return _Speed(span, saturable=False, bound="at least", used=(one,))
    return _Speed(missing=("turnover number",))


def _saturation(
    facts: Facts, case: Case, row: str, sign: int, known: Sequence[Constant], stated: float | None
) -> tuple[Span | None, list[Constant]]:
    """(span of s, affinities it comes from): stated, else from affinities and measured concentrations; None if neither."""
    if stated is not None:
        return (stated, stated), []
    spans: list[Span] = []
    used: list[Constant] = []
    for compound in sorted(_taken(facts, case, row, sign)):
        affinities = [each for each in known if each.kind == "michaelis-constant" and each.compound == compound]
        level = concentration(facts, case, compound, case.rows[row].place, USUAL)
        if affinities and level.origin == "measured":
            least, most = _span(affinities)
            low, high = level.low * 1000, level.high * 1000
            spans.append((low / (most + low), high / (least + high)))
            used += affinities
    return ((prod(low for low, _ in spans), prod(high for _, high in spans)), used) if spans else (None, used)


def _taken(facts: Facts, case: Case, row: str, sign: int) -> set[str]:
    return {term.compound for term in facts.reactions[case.rows[row].reaction].terms if term.count * sign < 0}


def _span(constants: Iterable[Constant]) -> Span:
    """From the lowest to the highest that any source gives."""
    each = tuple(constants)
    return (min(float(one.value if one.low is None else one.low) for one in each),
            max(float(one.value if one.high is None else one.high) for one in each))


def _mass(need: float, speed: _Speed, masses: Sequence[Constant]) -> Span:
    slow, fast = speed.span
    if speed.per_mass:
        return 1000 * need / (60 * fast), 1000 * need / (60 * slow)
    light, heavy = _span(masses)
    return 1000 * need * light / (3600 * fast), 1000 * need * heavy / (3600 * slow)


def _share(facts: Facts, case: Case, mass: Span | None) -> Span | None:
    """Share of the cell's protein; None without a protein fraction."""
    known = [q for q in facts.hosts[case.host].quantities if q.kind == "protein-fraction" and q.about == case.host]
    if mass is None or not known:
        return None
    low, high = (float(known[0].value if bound is None else bound) for bound in (known[0].low, known[0].high))
    return mass[0] / (1000 * high), mass[1] / (1000 * low)


def _covered(base: Sized, capacity: float | None, limits: Sequence[Limit]) -> Sized:
    if capacity is None or base.needed <= 0:
        return base
    spans = [(limit.low, limit.high) for limit in limits]
    ranged = all(low is not None for low, _ in spans)
    low = sum(low or 0.0 for low, _ in spans) if ranged else None
    high = sum(high or 0.0 for _, high in spans) if ranged else None
    return replace(base, capacity=capacity, capacity_span=(low, high), cover=capacity / base.needed,
                   fold=base.needed / capacity if capacity else None, origin="; ".join(limit.origin for limit in limits))


def _words(facts: Facts, constants: Sequence[Constant]) -> str:
    parts = []
    for each in constants:
        name = facts.kinds.get(each.kind, each.kind) + (f" of {facts.compounds[each.compound].label}" if each.compound else "")
        parts.append(f"{name} {float(each.value):g} {facts.units.get(each.unit, each.unit)}")
    return "; ".join(parts)
