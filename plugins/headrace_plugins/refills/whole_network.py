"""Requirements from the host's whole network: least feed carbon, then least total rate, ranges over the optima."""

from __future__ import annotations

from headrace.api import Bench, Case, Draw, Network, RefillAnswer, require

EXAMPLE = """
title = "glutamate on glucose"
host = "escherichia-coli"
growth = "0.2 /h"
[[feed]]
substrate = "glucose"
[[outlet]]
product = "L-glutamate"
rate = "1.0 mmol/gDW/h"
"""


class WholeNetwork:
    """The case LP: S v = demand over all reactions of the host, ledger and requirements read from its optima."""

    name = "whole-network"
    summary = "Requirement of each refill from the host's whole network: least feed carbon, then least total rate."
    example = EXAMPLE

    def refills(self, case: Case, network: Network, draws: tuple[Draw, ...], bench: Bench) -> RefillAnswer:
        return require(network, draws, bench.resolve)
