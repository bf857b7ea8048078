"""A process that has the data loaded and forks workers from it, so that a worker is there within milliseconds.

It has one thread and answers three things on its control link: fork (a socket comes along, which the worker will serve),
reap (a worker was killed), and the end of the link (everything ends). Started as `python -m headrace.outputs.query.nursery FD`.
"""

from __future__ import annotations

import contextlib
import os
import signal
import socket
import sys
from pathlib import Path
from typing import Protocol

import msgspec

from headrace.outputs.query import wire

try:
    import resource
except ImportError:  # a system without limits per process
    resource = None  # type: ignore[assignment]

_POLITE = 5


class Work(Protocol):
    """What workers do."""

    def refresh(self) -> None:
        """Take in what is new."""

    def handle(self, data: bytes) -> bytes:
        """A request's bytes to a reply's bytes."""


def prepared(settings: wire.Settings) -> Work:
    """The work with its data loaded."""
    extra = [(name, Path(folder)) for name, folder in settings.extra]
    if settings.work == "ask":
        from headrace.outputs.service.asking import AskWork  # queries need no solver

        return AskWork()
    from headrace.outputs.query.dataset import Dataset  # answers to scenarios need no store
    from headrace.outputs.query.work import QueryWork  # as above

    dataset = Dataset(Path(settings.results) if settings.results else None, extra)
    dataset.sync()
    return QueryWork(dataset)


def serve(link: socket.socket, work: Work, memory: int) -> None:
    """A worker's life: requests in, replies out, until the link ends."""
    os.nice(_POLITE)
    _limit_memory(memory)
    with contextlib.suppress(wire.GoneError):
        while True:
            wire.send(link, work.handle(wire.receive(link)))


def _limit_memory(more: int) -> None:
    if resource is None or not more:
        return
    try:
        pages = int(Path("/proc/self/statm").read_text().split()[0])
    except OSError:
        return  # a system that does not say what is taken; its own limits hold
    _, hard = resource.getrlimit(resource.RLIMIT_AS)
    limit = pages * resource.getpagesize() + more
    resource.setrlimit(resource.RLIMIT_AS, (limit if hard < 0 else min(limit, hard), hard))


class Nursery:
    """control: the link to the service."""

    def __init__(self, control: socket.socket) -> None:
        self.control = control
        self.children: set[int] = set()
        self.settings = msgspec.msgpack.decode(wire.receive(control), type=wire.Settings)
        self.work = prepared(self.settings)
        wire.send(control, b"ready")

    def run(self) -> None:
        """Fork and reap until the service is gone; then kill what is left."""
        try:
            while True:
                data, handles, _, _ = socket.recv_fds(self.control, 64, 1)
                if not data:
                    return
                if data.startswith(b"fork") and handles:
                    self._fork(handles[0])
                elif data.startswith(b"reap"):
                    self._reap(int(data[4:]))
        except OSError:
            return
        finally:
            for child in self.children:
                with contextlib.suppress(ProcessLookupError, ChildProcessError):
                    os.kill(child, signal.SIGKILL)
                    os.waitpid(child, 0)

    def _fork(self, handle: int) -> None:
        self.work.refresh()
        child = os.fork()
        if child == 0:
            self._be_worker(handle)
        os.close(handle)
        self.children.add(child)
        wire.send(self.control, str(child).encode())

    def _be_worker(self, handle: int) -> None:
        """The worker's side of the fork; never returns."""
        code = 1
        try:
            self.control.close()
            with socket.socket(fileno=handle) as link:
                serve(link, self.work, self.settings.memory)
            code = 0
        finally:
            os._exit(code)

    def _reap(self, child: int) -> None:
        if child in self.children:
            os.waitpid(child, 0)
            self.children.discard(child)
        wire.send(self.control, b"reaped")


def main() -> None:
    """Serve the control link whose file descriptor is the first argument."""
    with socket.socket(fileno=int(sys.argv[1])) as control, contextlib.suppress(wire.GoneError):
        Nursery(control).run()


if __name__ == "__main__":
    main()
