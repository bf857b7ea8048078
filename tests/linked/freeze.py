"""A child process that does nothing but save one frozen result again and again, until it is killed.

`python freeze.py RESULT FOLDER TIMES`: RESULT is a TriG file; its run is saved under ever new names, at most TIMES times.
"""

from __future__ import annotations

import os
import sys
from pathlib import Path

from headrace.outputs.rdf import folder
from headrace.outputs.rdf.run import Run
from headrace.outputs.rdf.terms import RUN_BASE


def main(result: Path, where: Path, times: int) -> None:
    """Save until killed; say when the first save begins."""
    trig = result.read_bytes()
    old = RUN_BASE + result.stem
    print("ready", flush=True)
    for number in range(times):
        name = f"{result.stem}-{number}-{os.getpid()}"
        folder.save(where, Run(name, RUN_BASE + name, trig.replace(old.encode(), (RUN_BASE + name).encode())))


if __name__ == "__main__":
    main(Path(sys.argv[1]), Path(sys.argv[2]), int(sys.argv[3]))
