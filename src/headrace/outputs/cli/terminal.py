"""Writing to standard output: all at once, in an encoding that can say it, and quietly when nobody reads on."""

from __future__ import annotations

import os
import shutil
import sys
from io import TextIOWrapper

_WIDEST = 120
_USUAL = 100


def width() -> int:
    """Columns to use: the terminal's or COLUMNS, at most 120; 100 where neither says."""
    return min(shutil.get_terminal_size((_USUAL, 24)).columns, _WIDEST)


def emit(text: str, exact: bool = False) -> None:
    """Write text to standard output. exact: for machines, always UTF-8; else characters it can't say become "?".

    A reader that stops early (`| head`) is no error.
    """
    stream = sys.stdout
    if isinstance(stream, TextIOWrapper):
        stream.reconfigure(encoding="utf-8") if exact else stream.reconfigure(errors="replace")
    try:
        stream.write(text)
        stream.flush()
    except BrokenPipeError:
        # what is left in the buffer must not raise again when Python closes standard output
        os.dup2(os.open(os.devnull, os.O_WRONLY), stream.fileno())
