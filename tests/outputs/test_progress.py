"""The bar shows on a terminal, for work that takes a moment, and nowhere else."""

from __future__ import annotations

import sys
import time
from io import StringIO

import pytest

from headrace.outputs.cli import progress


class Terminal(StringIO):
    def isatty(self) -> bool:
        return True


def shown(monkeypatch: pytest.MonkeyPatch, stream: StringIO, moment: float, seconds: float) -> str:
    monkeypatch.setattr(sys, "stderr", stream)
    monkeypatch.setattr(progress, "_MOMENT", moment)
    with progress.working("first.toml", 2) as bar:
        time.sleep(seconds)
        bar.step("second.toml")
        time.sleep(seconds)
        bar.say("checks")
        bar.step()
    return stream.getvalue()


def test_long_work_on_a_terminal_shows_a_bar(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("TERM", "xterm")
    text = shown(monkeypatch, Terminal(), 0.0, 0.5)
    assert "first.toml" in text and "second.toml" in text and "checks" in text


def test_short_work_shows_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    assert shown(monkeypatch, Terminal(), 30.0, 0.0) == ""


def test_a_pipe_gets_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    assert shown(monkeypatch, StringIO(), 0.0, 0.1) == ""
