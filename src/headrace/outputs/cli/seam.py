"""The one place where errors become a message on standard error and an exit code.

0 answered, 1 answered "no", 2 bad input or faulty facts, 3 an optional part is missing, 70 a bug of ours, 130 stopped by
the user. A user's mistake never shows a traceback; a bug shows one when HEADRACE_TRACE=1.
"""

from __future__ import annotations

import os
import sys
import traceback
from collections.abc import Callable
from pathlib import Path

import typer

from headrace.errors import HeadraceError, InputError

NO = 1
BUG = 70
STOPPED = 130
_USAGE: type[Exception] = typer.BadParameter.__mro__[2]  # what all of the option parser's own errors have in common


def call(command: Callable[[], object]) -> int:
    """Run a command and give its exit code; whatever it raises becomes one message."""
    try:
        code = command()
        return code if isinstance(code, int) else 0
    except BrokenPipeError:
        return 0
    except (KeyboardInterrupt, typer.Abort):
        return _say("headrace: stopped", STOPPED)
    except Exception as error:
        return _answer(error)


def translate(error: Exception) -> HeadraceError | None:
    """A foreign exception as one of ours, where the user can act on it; None for a bug."""
    if isinstance(error, HeadraceError):
        return error
    if isinstance(error, _USAGE):
        return _usage(error)
    if isinstance(error, OSError) and error.filename is not None:
        return InputError(f"can't be read or written: {(error.strerror or str(error)).lower()}", file=str(error.filename))
    if isinstance(error, MemoryError):
        return InputError("there is not enough memory for this", hint="try fewer outlets, scenarios or points at once")
    return None


def _answer(error: Exception) -> int:
    known = translate(error)
    if known is not None:
        return _say(f"headrace: {known}", known.exit_code)
    if os.environ.get("HEADRACE_TRACE", "") not in ("", "0"):
        traceback.print_exception(error)
    return _say(_bug(error), BUG)


def _usage(error: Exception) -> InputError:
    """The parser's message with the usage line of the command it is about."""
    context = getattr(error, "ctx", None)
    message = str(getattr(error, "format_message", error.__str__)()).strip().rstrip(".")
    usage = context.get_usage().removeprefix("Usage: ") if context is not None else ""
    hint = f"{context.command_path} --help lists commands and options" if context is not None else ""
    return InputError(f"{message[:1].lower()}{message[1:]}", accepted=usage, hint=hint)


def _bug(error: Exception) -> str:
    frames = traceback.extract_tb(error.__traceback__)
    last = next((frame for frame in reversed(frames) if "headrace" in frame.filename), frames[-1] if frames else None)
    where = f" ({Path(last.filename).name}, line {last.lineno})" if last else ""
    return (
        f"headrace: this is a bug in Headrace, not in your input: {type(error).__name__}: {error}{where}\n"
        "  please report it in the project's issue tracker, with the command, the scenario file and what the\n"
        "  same command prints with HEADRACE_TRACE=1 set"
    )


def _say(message: str, code: int) -> int:
    try:
        sys.stderr.write(message + "\n")
        sys.stderr.flush()
    except OSError:
        pass  # nobody reads standard error; the exit code still tells
    return code
