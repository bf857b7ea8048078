"""The plugins that ship with Headrace, written by `python -m headrace.hooks`; a test compares both."""

from __future__ import annotations

from headrace.hooks.entry import Entry

FIRST_PARTY: tuple[Entry, ...] = (
)
