"""A case's answer proven in exact fractions, beside the floats that are printed."""

from __future__ import annotations

from dataclasses import dataclass

from headrace.network import aim
from headrace.network.build import build
from headrace.network.exactly import prove
from headrace.network.requirement import in_force
from headrace.solve.certificate import Proof
from headrace.values.case import Case
from headrace.values.facts import Facts


@dataclass(frozen=True)
class Certified:
    """answer: optimal | infeasible. objectives: what each proven value is ("feed carbon", "total rate"), in order.

    printed: the same values as printed; gap: the largest difference, relative to values above 1 (None if infeasible).
    rows, columns: the size of the programme.
    """

    answer: str
    objectives: tuple[str, ...]
    proof: Proof
    printed: tuple[float, ...]
    gap: float | None
    rows: int
    columns: int


def certified(facts: Facts, case: Case) -> Certified:
    """Prove the aim of a case, or that it can't be met, on the network that its answer rests on."""
    net, solved = in_force(build(facts, case))
    names, proof = prove(net)
    rows, columns = len(net.pools) + len(net.bounds), len(net.columns) + len(net.coupled)
    if names == ("infeasible",) or not isinstance(solved, aim.Aimed):
        return Certified("infeasible", (), proof, (), None, rows, columns)
    values = {"feed carbon": solved.carbon, "total rate": solved.total}
    printed = tuple(values[name] for name in names)
    gaps = [abs(float(exact) - value) / max(1.0, abs(value)) for exact, value in zip(proof.objectives, printed, strict=False)]
    return Certified("optimal", names, proof, printed, max(gaps, default=None), rows, columns)
