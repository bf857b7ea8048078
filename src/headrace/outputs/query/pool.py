"""Workers that answer one request at a time, are killed at its deadline, and replaced."""

from __future__ import annotations

import contextlib
import os
import queue
import signal
import socket
import subprocess
import sys
import threading
import time
from typing import Any

import msgspec
from msgspec import Struct

from headrace.errors import HeadraceError, MissingPartError
from headrace.outputs.query import wire

_START = 60.0  # seconds that loading the data may take
_FORK = 10.0


class Worker(Struct, frozen=True):
    """A process and the link to it."""

    process: int
    link: Any


class Pool:
    """workers: how many answer at once. reserve: how many more are kept for our own short queries, so that pages answer
    while strangers' queries run. patience: seconds that a request waits for one. Safe for threads; close it."""

    def __init__(self, settings: wire.Settings, workers: int = 2, patience: float = 30.0, reserve: int = 0) -> None:
        if not hasattr(os, "fork"):
            raise MissingPartError("a system that can fork", "stopping queries at their time limit")
        self.settings, self.patience = settings, patience
        self._lock = threading.Lock()
        self._open = True
        self._nursery: subprocess.Popen[bytes] | None = None
        self._control: socket.socket | None = None
        self._free = _idle(workers)
        self._reserved = _idle(reserve)
        self.replaced = 0
        self._start()

    def ask(self, request: bytes, seconds: float, *, reserved: bool = False) -> bytes:
        """The reply to a request. Raises wire.LateError when it was stopped at its deadline, queue.Empty when no worker came
        free, wire.GoneError when the worker died of it. reserved: by a worker that is kept for our own queries."""
        free = self._reserved if reserved else self._free
        worker = free.get(timeout=self.patience)
        try:
            if worker is None:
                worker = self._fork()
            wire.send(worker.link, request)
            reply = wire.receive(worker.link, time.monotonic() + seconds)
        except BaseException:
            self._discard(worker)
            free.put(None)
            raise
        free.put(worker)
        return reply

    def close(self) -> None:
        """End the nursery and all workers."""
        with self._lock:
            self._open = False
            self._stop()

    def __enter__(self) -> Pool:
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    # -- the nursery ---------------------------------------------------------------------------------------------

    def _start(self) -> None:
        ours, theirs = socket.socketpair()
        command = [sys.executable, "-m", "headrace.outputs.query.nursery", str(theirs.fileno())]
        self._nursery = subprocess.Popen(
            command,
            pass_fds=[theirs.fileno()],
            stdin=subprocess.DEVNULL,
            stdout=subprocess.DEVNULL,
            stderr=subprocess.PIPE,
            start_new_session=True,
        )
        theirs.close()
        self._control = ours
        try:
            wire.send(ours, wire.encode(self.settings))
            wire.receive(ours, time.monotonic() + _START)
        except (wire.GoneError, wire.LateError) as error:
            self._nursery.kill()
            _, said = self._nursery.communicate()
            self._stop()
            lines = said.decode(errors="replace").strip().splitlines() or ["it said nothing"]
            raise HeadraceError(f"the worker process did not start: {lines[-1]}") from error

    def _stop(self) -> None:
        if self._control is not None:
            self._control.close()
            self._control = None
        if self._nursery is not None:
            try:
                self._nursery.wait(5)
            except subprocess.TimeoutExpired:
                self._nursery.kill()
                self._nursery.wait()
            if self._nursery.stderr is not None:
                self._nursery.stderr.close()
            self._nursery = None
        for free in (self._free, self._reserved):
            with contextlib.suppress(queue.Empty):
                while True:
                    worker = free.get_nowait()
                    if worker is not None:
                        worker.link.close()

    def _fork(self) -> Worker:
        with self._lock:
            if not self._open:
                raise wire.GoneError("the service is closing")
            try:
                return self._forked()
            except (wire.GoneError, wire.LateError, OSError):
                self._stop_nursery_only()
                self._start()
                return self._forked()

    def _stop_nursery_only(self) -> None:
        if self._nursery is not None:
            self._nursery.kill()
            self._nursery.wait()
            if self._nursery.stderr is not None:
                self._nursery.stderr.close()
        if self._control is not None:
            self._control.close()

    def _forked(self) -> Worker:
        assert self._control is not None
        ours, theirs = socket.socketpair()
        try:
            socket.send_fds(self._control, [b"fork"], [theirs.fileno()])
            process = int(wire.receive(self._control, time.monotonic() + _FORK))
        except BaseException:
            ours.close()
            raise
        finally:
            theirs.close()
        return Worker(process, ours)

    def _discard(self, worker: Worker | None) -> None:
        """Kill a worker. Its process number stays its own until the nursery has reaped it."""
        if worker is None:
            return
        self.replaced += 1
        with contextlib.suppress(ProcessLookupError, PermissionError):
            os.kill(worker.process, signal.SIGKILL)
        worker.link.close()
        with self._lock, contextlib.suppress(wire.GoneError, wire.LateError, OSError):
            if self._control is not None:
                self._control.sendall(b"reap%d" % worker.process)
                wire.receive(self._control, time.monotonic() + _FORK)


def _idle(workers: int) -> queue.LifoQueue[Worker | None]:
    """Places for workers that are still to be forked."""
    free: queue.LifoQueue[Worker | None] = queue.LifoQueue()
    for _ in range(workers):
        free.put(None)
    return free


class Queries:
    """Queries through a pool, with their limits; every outcome is a reply."""

    def __init__(self, pool: Pool, seconds: float = 10.0, largest: int = 50_000_000) -> None:
        self.pool, self.seconds, self.largest = pool, seconds, largest

    @property
    def store(self) -> None:
        """Files are the truth here; there is no store elsewhere."""
        return None

    def ask(self, request: wire.Request) -> wire.Reply:
        """The reply, whatever became of the query."""
        asked = msgspec.structs.replace(request, largest=self.largest)
        try:
            reply = self.pool.ask(wire.encode(asked), self.seconds, reserved=request.trusted)
            return msgspec.msgpack.decode(reply, type=wire.Reply)
        except wire.LateError:
            return wire.Reply(wire.SLOW, message=f"the query was stopped after {self.seconds:g} seconds")
        except queue.Empty:
            return wire.Reply(wire.BUSY, message="all workers are busy; try again in a moment")
        except wire.GoneError:
            return wire.Reply(wire.BROKEN, message="the query broke its worker: it needs too much memory or depth")
