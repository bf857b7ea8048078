"""What passes between a service and its workers: frames of msgpack with their length in front."""

from __future__ import annotations

import socket
import time

import msgspec
from msgspec import Struct

from headrace.errors import HeadraceError

OK, BAD, SLOW, LARGE, BROKEN, BUSY = "ok", "bad", "slow", "large", "broken", "busy"
_LARGEST_FRAME = 1 << 31


class Request(Struct, frozen=True, omit_defaults=True):
    """A query. default, named: graphs that a protocol asks for (None = not said). solutions, graph: formats by name.
    largest: bytes that the result may have. trusted: one of ours, whose text needs no guard."""

    text: str
    solutions: str = "json"
    graph: str = "turtle"
    default: tuple[str, ...] | None = None
    named: tuple[str, ...] | None = None
    largest: int = 50_000_000
    trusted: bool = False


class Reply(Struct, frozen=True, omit_defaults=True):
    """status: ok; bad (the query is no query or may not run); slow (stopped at its deadline); large (the result is larger
    than allowed); broken (the worker died, such as for want of memory); busy (no worker came free). kind: solutions or graph.
    faults: files of the results folder that could not be read."""

    status: str
    body: bytes = b""
    kind: str = ""
    format: str = ""
    message: str = ""
    faults: tuple[str, ...] = ()


class Settings(Struct, frozen=True):
    """What a nursery is to load. work: query, or ask. results: folder of runs. extra: fact folders of plugins.
    memory: bytes that a worker may take beyond what is loaded."""

    work: str = "query"
    results: str = ""
    extra: tuple[tuple[str, str], ...] = ()
    memory: int = 1 << 30


class GoneError(HeadraceError):
    """The other end is gone."""


class LateError(HeadraceError):
    """The deadline has passed."""


def send(link: socket.socket, data: bytes) -> None:
    """Send one frame. Raises GoneError."""
    try:
        link.sendall(len(data).to_bytes(4, "big") + data)
    except OSError as error:
        raise GoneError("the other end is gone") from error


def receive(link: socket.socket, deadline: float | None = None) -> bytes:
    """Receive one frame. deadline: of time.monotonic(). Raises LateError after it, GoneError when the other end is gone."""
    size = int.from_bytes(_exactly(link, 4, deadline), "big")
    if size > _LARGEST_FRAME:
        raise GoneError("a frame that is no frame")
    return _exactly(link, size, deadline)


def _exactly(link: socket.socket, size: int, deadline: float | None) -> bytes:
    parts: list[bytes] = []
    left = size
    while left:
        if deadline is not None:
            remaining = deadline - time.monotonic()
            if remaining <= 0:
                raise LateError("the deadline has passed")
            link.settimeout(remaining)
        try:
            part = link.recv(min(left, 1 << 20))
        except TimeoutError as error:
            raise LateError("the deadline has passed") from error
        except OSError as error:
            raise GoneError("the other end is gone") from error
        if not part:
            raise GoneError("the other end is gone")
        parts.append(part)
        left -= len(part)
    return b"".join(parts)


def encode(value: Struct) -> bytes:
    """A value as bytes."""
    return msgspec.msgpack.encode(value)
