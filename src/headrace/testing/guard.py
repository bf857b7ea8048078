"""No files, network, processes or clock while a plugin's hook runs.

Files, sockets and processes are seen through Python's audit events, whatever call leads to them; what the import
machinery opens is let through. Clocks give no event, so their functions are replaced for the time of the call, in
`time` and `datetime` and where the plugin's own module holds them by name.
"""

from __future__ import annotations

import datetime
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from types import FrameType, ModuleType
from typing import Any

_EVENTS = ("open", "socket.", "subprocess.", "os.", "shutil.", "urllib.", "sqlite3.", "ctypes.", "time.sleep", "tempfile.")
_HARMLESS = ("os.putenv", "os.unsetenv")
_CLOCKS = ("time", "monotonic", "perf_counter", "process_time", "thread_time")
_seen: list[str] | None = None
_installed = False


class Forbidden(RuntimeError):
    """What a guarded call did that no hook may do."""


@contextmanager
def guarded(module: ModuleType | None = None) -> Iterator[list[str]]:
    """Forbid files, network, processes and clocks inside the block; what was tried is in the list, even if it was caught.

    module: the plugin's own, whose names for clocks are replaced too. Raises Forbidden at the place of the attempt.
    """
    global _seen, _installed
    if not _installed:
        sys.addaudithook(_audit)
        _installed = True
    tried: list[str] = []
    restore = _without_clocks(tried, module)
    _seen = tried
    try:
        yield tried
    finally:
        _seen = None
        restore()


def _audit(event: str, arguments: tuple[Any, ...]) -> None:
    if _seen is None or not event.startswith(_EVENTS) or event in _HARMLESS or _importing(sys._getframe()):
        return
    what = f"{event} {arguments[0]!r}" if arguments else event
    _seen.append(what)
    raise Forbidden(what)


def _importing(frame: FrameType | None) -> bool:
    while frame is not None:
        if frame.f_code.co_filename.startswith("<frozen importlib"):
            return True
        frame = frame.f_back
    return False


def _without_clocks(tried: list[str], module: ModuleType | None) -> Callable[[], None]:
    """Replace clocks; the answer puts them back."""
    stand_ins = _stand_ins(tried)
    places: list[tuple[ModuleType, str, Any]] = []
    for holder in filter(None, (time, datetime, module)):
        for name, value in list(vars(holder).items()):
            if (stand_in := next((new for old, new in stand_ins if value is old), None)) is not None:
                places.append((holder, name, value))
                setattr(holder, name, stand_in)

    def restore() -> None:
        for holder, name, value in places:
            setattr(holder, name, value)

    return restore


def _stand_ins(tried: list[str]) -> list[tuple[Any, Any]]:
    """(clock, what takes its place) for functions of `time` and the two classes of `datetime` that know today."""

    def refuse(name: str) -> Callable[..., Any]:
        def call(*arguments: Any, **named: Any) -> Any:
            tried.append(name)
            raise Forbidden(name)

        return call

    functions = [name for clock in _CLOCKS for name in (clock, f"{clock}_ns")] + ["localtime", "gmtime", "ctime", "sleep"]
    found: list[tuple[Any, Any]] = [(getattr(time, name), refuse(f"time.{name}")) for name in functions if hasattr(time, name)]
    methods = {"now": datetime.datetime, "utcnow": datetime.datetime, "today": datetime.date}
    for base in (datetime.datetime, datetime.date):
        refused = {name: staticmethod(refuse(f"{base.__name__}.{name}")) for name in methods if hasattr(base, name)}
        found.append((base, type(base.__name__, (base,), refused)))
    return found
