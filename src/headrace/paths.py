"""Where things stand on disk: the shipped facts and the user's cache."""

from __future__ import annotations

import os
import sys
from collections.abc import Mapping
from pathlib import Path

from headrace.errors import FactsError

_PACKAGE = Path(__file__).resolve().parent


def facts_folder() -> Path:
    """The shipped graph_data: inside the installed package, or beside src/ in a checkout.

    Raises FactsError when neither is there.
    """
    for folder in (_PACKAGE / "graph_data", _PACKAGE.parents[1] / "graph_data"):
        if folder.is_dir():
            return folder
    raise FactsError("the facts (graph_data) are missing from this installation", hint="install headrace again")


def cache_folder(environ: Mapping[str, str] = os.environ, platform: str = sys.platform) -> Path | None:
    """Where derived data may be kept; deleting it costs only time. None when no cache is wanted or possible.

    HEADRACE_NO_CACHE=1 turns the cache off, HEADRACE_CACHE names a folder; else it is the user's cache folder
    as the platform has it. Without a home folder there is no cache.
    """
    if environ.get("HEADRACE_NO_CACHE", "") not in ("", "0"):
        return None
    if named := environ.get("HEADRACE_CACHE"):
        return Path(named)
    home = environ.get("USERPROFILE" if platform == "win32" else "HOME")
    if platform == "win32" and (local := environ.get("LOCALAPPDATA")):
        return Path(local) / "headrace" / "cache"
    if platform != "darwin" and (shared := environ.get("XDG_CACHE_HOME")):
        return Path(shared) / "headrace"
    if not home:
        return None
    if platform == "win32":
        return Path(home) / "AppData" / "Local" / "headrace" / "cache"
    return Path(home) / ("Library/Caches" if platform == "darwin" else ".cache") / "headrace"
