"""The cache: exact, atomic, rebuilt when broken, harmless when it can't be written, safe for two processes."""

import os
import subprocess
import sys
import time
from pathlib import Path

import pytest

from headrace import paths
from headrace.graph import cache, load
from headrace.graph import load as load_facts
from headrace.values.facts import Facts

WORLD = Path(__file__).parent / "world"


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.setenv("HEADRACE_CACHE", str(tmp_path / "deep" / "cache"))
    monkeypatch.delenv("HEADRACE_NO_CACHE", raising=False)
    return tmp_path / "deep" / "cache"


@pytest.fixture(scope="module")
def built() -> Facts:
    return load([WORLD], cache=False)


def only(folder: Path) -> Path:
    (path,) = folder.iterdir()
    return path


def test_what_comes_back_is_what_was_built(folder: Path, built: Facts) -> None:
    assert load_facts([WORLD]) == built
    assert only(folder).name.startswith(f"facts-{built.version}-")
    assert load_facts([WORLD]) == built == cache.read(folder, built.version)


@pytest.mark.parametrize("harm", ["empty", "short", "altered", "other shape", "other version"])
def test_a_broken_file_is_built_again(folder: Path, built: Facts, harm: str) -> None:
    load_facts([WORLD])
    path = only(folder)
    whole = path.read_bytes()
    if harm == "other shape":
        body = b"\x81\xa1a\x01"
        path.write_bytes(cache.hashlib.sha256(body).digest() + body)
    elif harm == "other version":
        other = Facts("0" * 12, *([{}] * 9))
        assert cache.write(folder, other)
        (folder / path.name.replace(built.version, other.version)).replace(path)
    else:
        middle = len(whole) // 2
        changed = whole[:middle] + bytes([whole[middle] ^ 1]) + whole[middle + 1 :]
        path.write_bytes({"empty": b"", "short": whole[:-9], "altered": changed}[harm])
    assert cache.read(folder, built.version) is None
    assert load_facts([WORLD]) == built
    assert path.read_bytes() == whole


def test_a_folder_that_cant_be_written_costs_only_time(tmp_path: Path, built: Facts, monkeypatch: pytest.MonkeyPatch) -> None:
    blocked = tmp_path / "file"
    blocked.write_text("no folder")
    monkeypatch.setenv("HEADRACE_CACHE", str(blocked))
    assert load_facts([WORLD]) == built
    assert cache.write(blocked, built) is False


def test_no_cache(folder: Path, built: Facts, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HEADRACE_NO_CACHE", "1")
    assert load_facts([WORLD]) == built
    assert load([WORLD], cache=False) == built
    assert not folder.exists()


def test_old_files_are_forgotten_but_not_strangers(folder: Path, built: Facts) -> None:
    load_facts([WORLD])
    (folder / "notes.txt").write_text("mine")
    newest = only_facts(folder)[0]
    for age in range(1, 10):
        old = folder / f"facts-{age:012d}-x.msgpack"
        old.write_bytes(b"")
        os.utime(old, (time.time() - 1000 * age,) * 2)
    left = folder / "facts-1-1.part"
    left.write_bytes(b"half")
    os.utime(left, (time.time() - 2 * cache.STALE,) * 2)
    being_written = folder / "facts-2-2.part"
    being_written.write_bytes(b"half")
    assert cache.write(folder, built)
    assert not left.exists() and being_written.exists()
    kept = only_facts(folder)
    assert len(kept) == cache.KEPT and newest in kept and (folder / "facts-000000000001-x.msgpack") in kept
    assert (folder / "notes.txt").read_text() == "mine"


def only_facts(folder: Path) -> list[Path]:
    return sorted(folder.glob("facts-*.msgpack"))


def test_a_failed_write_leaves_nothing_behind(folder: Path, built: Facts, monkeypatch: pytest.MonkeyPatch) -> None:
    def no_room(*_: object) -> None:
        raise OSError("no space left")

    monkeypatch.setattr(cache.os, "replace", no_room)
    assert cache.write(folder, built) is False
    assert list(folder.iterdir()) == []


def test_two_processes_may_build_at_once(folder: Path, built: Facts) -> None:
    code = (
        "import pathlib, sys\n"
        "from headrace.graph import cache, load\n"
        f"world = [pathlib.Path({str(WORLD)!r})]\n"
        "print('ready', flush=True)\n"
        "sys.stdin.readline()\n"
        "for turn in range(20):\n"
        "    facts = load(world)\n"
        "    [path.unlink(missing_ok=True) for path in cache.Path(sys.argv[1]).glob('*.msgpack')]\n"
        "load(world)\n"
        "print(facts.version, len(facts.reactions))\n"
    )
    environment = {**os.environ, "PYTHONPATH": os.pathsep.join(filter(None, sys.path))}
    runs = [
        subprocess.Popen(
            [sys.executable, "-c", code, str(folder)],
            env=environment,
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
        )
        for _ in range(2)
    ]
    for run in runs:
        assert run.stdout is not None and run.stdout.readline() == "ready\n"
    for run in runs:
        assert run.stdin is not None
        run.stdin.write("go\n")
        run.stdin.flush()
    for run in runs:
        out, err = run.communicate(timeout=60)
        assert (run.returncode, err) == (0, "")
        assert out == f"{built.version} {len(built.reactions)}\n"
    assert [path.suffix for path in folder.iterdir()] in ([".msgpack"], [])
    assert load_facts([WORLD]) == built


@pytest.mark.parametrize(
    ("environ", "platform", "folder"),
    [
        ({"HEADRACE_CACHE": "/c", "HOME": "/h"}, "linux", "/c"),
        ({"HEADRACE_CACHE": "/c", "HEADRACE_NO_CACHE": "1"}, "linux", None),
        ({"HEADRACE_NO_CACHE": "0", "HOME": "/h"}, "linux", "/h/.cache/headrace"),
        ({"XDG_CACHE_HOME": "/x", "HOME": "/h"}, "linux", "/x/headrace"),
        ({"XDG_CACHE_HOME": "/x", "HOME": "/h"}, "darwin", "/h/Library/Caches/headrace"),
        ({"LOCALAPPDATA": "/l"}, "win32", "/l/headrace/cache"),
        ({"USERPROFILE": "/u"}, "win32", "/u/AppData/Local/headrace/cache"),
        ({}, "linux", None),
    ],
)
def test_where_the_cache_stands(environ: dict[str, str], platform: str, folder: str | None) -> None:
    assert paths.cache_folder(environ, platform) == (Path(folder) if folder else None)


def test_the_shipped_facts_are_found() -> None:
    assert (paths.facts_folder() / "ontology").is_dir()
