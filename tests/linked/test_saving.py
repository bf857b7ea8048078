"""Saving survives being killed at any moment; two processes may save and read at once."""

from __future__ import annotations

import json
import os
import random
import subprocess
import sys
import time
from datetime import UTC, datetime
from pathlib import Path

import pytest

from headrace.outputs.query.dataset import Dataset
from headrace.outputs.rdf import folder, run
from headrace.values.facts import Facts

from . import freeze, sample

pytestmark = pytest.mark.xdist_group("linked-files")  # one worker shares what is started for these tests

KILLS = 200


@pytest.fixture(scope="module")
def frozen(facts: Facts, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """One result's TriG file, to be saved again and again."""
    return folder.save(tmp_path_factory.mktemp("frozen"), run.make(sample.refills(facts), datetime.now(UTC), rates=True))


def child(frozen: Path, where: Path, times: int = 1000) -> subprocess.Popen[bytes]:
    return subprocess.Popen([sys.executable, freeze.__file__, str(frozen), str(where), str(times)], stdout=subprocess.PIPE)


def started(frozen: Path, where: Path, times: int = 1000) -> subprocess.Popen[bytes]:
    process = child(frozen, where, times)
    assert process.stdout is not None
    assert process.stdout.readline() == b"ready\n"
    return process


def test_kill_at_random_moments(frozen: Path, tmp_path: Path) -> None:
    """200 times kill -9: every file parses and is whole. Processes are started ahead, four at a time."""
    moments = random.Random(7)
    processes = [started(frozen, tmp_path) for _ in range(4)]
    size = frozen.stat().st_size
    checked: set[str] = set()
    for kill in range(KILLS):
        process = processes.pop(0)
        if kill < KILLS - 4:
            processes.append(child(frozen, tmp_path))
        time.sleep(moments.uniform(0, 0.02))
        process.kill()
        process.wait()
        assert process.stdout is not None
        process.stdout.close()
        for name in set(folder.stamps(tmp_path)) - checked:
            path = tmp_path / (name + folder.ENDING)
            assert path.stat().st_size > size  # the new name is longer than the old one
            checked.add(name)
    for process in processes:
        process.kill()
        process.wait()
    names = sorted(folder.stamps(tmp_path))
    wanted = len(folder.read(frozen.parent, frozen.stem))
    for name in [*names[:40], *moments.sample(names, min(60, len(names)))]:
        assert len(folder.read(tmp_path, name)) == wanted
    parts = list(tmp_path.glob("*.part")) + list(tmp_path.glob(".*.part"))
    print(f"\n{KILLS} kills: {len(names)} whole runs, {len(parts)} abandoned temporary files, no broken run")
    assert len(names) > KILLS / 4


def test_abandoned_files_are_no_runs_and_go_in_time(frozen: Path, tmp_path: Path, facts: Facts) -> None:
    old, new = tmp_path / ".a.part", tmp_path / ".b.part"
    for path in (old, new):
        path.write_text("half")
    os.utime(old, (1, 1))
    folder.save(tmp_path, run.make(sample.drains(facts), datetime.now(UTC)))
    assert (old.exists(), new.exists()) == (False, True)
    assert len(folder.stamps(tmp_path)) == 1


def test_two_processes_save_while_one_reads(frozen: Path, tmp_path: Path) -> None:
    each = 40
    writers = [started(frozen, tmp_path, each) for _ in range(2)]
    data, seen, deadline = Dataset(tmp_path), [0], time.monotonic() + 60
    while seen[-1] < 2 * each and time.monotonic() < deadline:
        data.sync()
        assert not data.faults
        seen.append(len(data.known))
    for writer in writers:
        writer.kill()
        writer.wait()
        assert writer.stdout is not None
        writer.stdout.close()
    assert seen[-1] == 2 * each and seen == sorted(seen)


def test_a_save_that_fails_leaves_nothing(facts: Facts, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(handle: int) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(OSError, match="No space"):
        folder.save(tmp_path, run.make(sample.drains(facts), datetime.now(UTC)))
    assert list(tmp_path.iterdir()) == []


SCENARIO = """
title = "saved by a command"
host = "corynebacterium-glutamicum"
growth = "0.1 /h"
[[feed]]
substrate = "glucose"
uptake = "6.0 mmol/gDW/h"
[conditions]
supplements = ["biotin"]
[[outlet]]
product = "L-lysine"
rate = "0.5 mmol/gDW/h"
"""


def command(*words: str, here: Path) -> subprocess.CompletedProcess[str]:
    done = subprocess.run([sys.executable, "-m", "headrace", *words], cwd=here, capture_output=True, text=True)
    assert done.returncode in (0, 1), done.stderr
    return done


def test_commands_save_where_they_are_told(tmp_path: Path) -> None:
    (tmp_path / "design.toml").write_text(SCENARIO)
    plain = command("grows", "design.toml", "--format", "json", here=tmp_path)
    assert not (tmp_path / ".headrace").exists() and plain.stderr == ""
    saved = command("grows", "design.toml", "--format", "json", "--save", here=tmp_path)
    assert saved.stdout == plain.stdout
    assert saved.stderr.startswith("saved: ")
    assert len(folder.stamps(tmp_path / ".headrace")) == 1
    command("refills", "design.toml", "--results", "elsewhere", "--agent", "the group", here=tmp_path)
    rows = command("query", "made-from", "--results", "elsewhere", "--format", "json", here=tmp_path).stdout
    (row,) = json.loads(rows)["results"]["bindings"]
    assert (row["design"]["value"], row["agent"]["value"]) == ("saved by a command", "the group")


def test_a_review_saves_all_that_it_asked(tmp_path: Path) -> None:
    (tmp_path / "design.toml").write_text(SCENARIO)
    command("review", "design.toml", "-o", "out", "--save", here=tmp_path)
    kinds = sorted(name.split("-")[2] for name in folder.stamps(tmp_path / ".headrace"))
    assert kinds == ["ceiling", "refills"]
