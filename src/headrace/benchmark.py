"""Times of whole commands, as ratios to a yardstick of the same run, so that any machine can repeat them.

    python -m headrace.benchmark start SCENARIO [--runs N] [--at-most RATIO]
    python -m headrace.benchmark serve RESULTS

`start` compares `headrace refills SCENARIO`, with the facts already read once, with a Python that only imports three
general libraries. Runs alternate; ratio = median over the runs of (command / yardstick of the same round).
`serve` compares answers per second over HTTP with the bare engine on the same facts and results folder, for six queries,
and prints the time from start to first answer.
"""

from __future__ import annotations

import argparse
import os
import subprocess
import sys
import time
from collections.abc import Sequence
from pathlib import Path
from statistics import median
from typing import NamedTuple

from headrace.outputs.service import bench

YARDSTICK = "import rdflib, pandas, networkx"


class Timing(NamedTuple):
    """Seconds of each round, for the command and the yardstick."""

    command: tuple[float, ...]
    yardstick: tuple[float, ...]

    @property
    def ratio(self) -> float:
        """Median over rounds of command / yardstick."""
        return median(one / other for one, other in zip(self.command, self.yardstick, strict=True))


def start(scenario: str, runs: int = 7) -> Timing:
    """Time `headrace refills SCENARIO` against the yardstick. Raises CalledProcessError when a process fails."""
    command = [sys.executable, "-m", "headrace", "refills", scenario, "--format", "json"]
    yardstick = [sys.executable, "-c", YARDSTICK]
    for warm in (command, yardstick):  # facts into the cache, byte code and libraries into memory
        seconds(warm)
    rounds: list[tuple[float, float]] = []
    for number in range(runs):
        if number % 2:
            other = seconds(yardstick)
            rounds.append((seconds(command), other))
        else:
            rounds.append((seconds(command), seconds(yardstick)))
    return Timing(tuple(one for one, _ in rounds), tuple(other for _, other in rounds))


def seconds(command: Sequence[str]) -> float:
    """Wall seconds of one process. "No" (exit 1) is an answer; any other failure is raised."""
    environment = {key: value for key, value in os.environ.items() if key != "PYTHONDONTWRITEBYTECODE"}
    started = time.perf_counter()
    done = subprocess.run(command, env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE, text=True)
    taken = time.perf_counter() - started
    if done.returncode not in (0, 1) or (done.returncode and "Traceback" in done.stderr):
        raise subprocess.CalledProcessError(done.returncode, list(command), stderr=done.stderr)
    return taken


def main(arguments: Sequence[str] | None = None) -> int:
    """The command. 0: measured; 1: the ratio is above --at-most; 2: a process failed."""
    parser = argparse.ArgumentParser(prog="python -m headrace.benchmark", description="Times as ratios to a yardstick.")
    parser.add_argument("what", choices=["start", "serve"], help="start: a whole refills command; serve: queries over HTTP")
    parser.add_argument("scenario", help="start: a scenario file; serve: a results folder")
    parser.add_argument("--runs", type=int, default=7, help="rounds after one warm-up (default 7)")
    parser.add_argument("--at-most", type=float, help="exit 1 when the ratio is above this")
    given = parser.parse_args(arguments)
    if given.runs < 1:
        parser.error("--runs: at least 1")
    if given.what == "serve":
        print(bench.text(bench.measure(Path(given.scenario))), end="")
        return 0
    try:
        timing = start(given.scenario, given.runs)
    except subprocess.CalledProcessError as error:
        print(f"{' '.join(error.cmd)}\nended with {error.returncode}:\n{error.stderr}", file=sys.stderr)
        return 2
    for name, rounds in ((f"headrace refills {given.scenario}", timing.command), (f'python -c "{YARDSTICK}"', timing.yardstick)):
        print(f"{median(rounds) * 1000:8.0f} ms median, {min(rounds) * 1000:.0f} least  {name}")
    print(f"{timing.ratio:8.2f} ratio (median of {given.runs} rounds)")
    return int(given.at_most is not None and timing.ratio > given.at_most)


if __name__ == "__main__":
    sys.exit(main())
