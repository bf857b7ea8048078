"""A progress bar on standard error, on a terminal only, and only once work has taken a moment."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from contextlib import contextmanager
from threading import Timer
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from rich.progress import Progress

_MOMENT = 0.7


class Bar:
    """total: how many steps there are (None = not known). Short work shows nothing."""

    def __init__(self, what: str, total: int | None = None) -> None:
        self.what, self.total, self.done = what, total, 0
        self._progress: Progress | None = None
        self._timer = Timer(_MOMENT, self._show)
        self._timer.daemon = True

    def start(self) -> None:
        """Begin to wait; the bar shows after a moment, if standard error is a terminal."""
        if sys.stderr.isatty():
            self._timer.start()

    def step(self, what: str = "") -> None:
        """One step is done; what: what comes next."""
        self.done += 1
        self.what = what or self.what
        if self._progress is not None:
            self._progress.update(self._progress.task_ids[0], completed=self.done, description=self.what)

    def say(self, what: str, done: int | None = None, total: int | None = None) -> None:
        """What is being done now, and how far it is where that is known."""
        self.what, self.total = what, self.total if done is None else total
        self.done = self.done if done is None else done
        if self._progress is not None:
            self._progress.update(self._progress.task_ids[0], description=what, total=self.total, completed=self.done)

    def stop(self) -> None:
        """Take the bar away."""
        self._timer.cancel()
        if self._timer.is_alive():
            self._timer.join()
        if self._progress is not None:
            self._progress.stop()

    def _show(self) -> None:
        from rich.console import Console  # 75 ms that short work and pipes should not pay
        from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

        columns = (TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn())
        progress = Progress(*columns, console=Console(stderr=True), transient=True)
        progress.add_task(self.what, total=self.total, completed=self.done)
        progress.start()
        self._progress = progress


@contextmanager
def working(what: str, total: int | None = None) -> Iterator[Bar]:
    """A bar for as long as the block runs."""
    bar = Bar(what, total)
    bar.start()
    try:
        yield bar
    finally:
        bar.stop()
