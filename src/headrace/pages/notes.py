"""Findings as lists, stops first."""

from __future__ import annotations

from headrace.pages.context import Context
from headrace.pages.model import Notes
from headrace.values.answers import Result
from headrace.values.case import Finding

_ORDER = ("stop", "caution", "note")


def findings(context: Context) -> tuple[Notes, ...]:
    """One list of all findings of the case, the result and the answer, each once, stops first; nothing if there are none."""
    found = collected(context.result)
    if not found:
        return ()
    return (Notes("Findings", tuple(sentence(context, finding) for finding in found)),)


def collected(result: Result) -> tuple[Finding, ...]:
    """All findings, each once, stops first."""
    own = result.answer.findings if result.answer is not None else ()
    each = dict.fromkeys((*result.findings, *own, *result.case.findings))
    return tuple(sorted(each, key=lambda finding: _ORDER.index(finding.level) if finding.level in _ORDER else len(_ORDER)))


def sentence(context: Context, finding: Finding) -> str:
    """A finding in one line: level, what it is about, what it says, citation numbers."""
    name = context.name(finding.about)
    about = f"{name}: " if name and not finding.message.startswith((name, f"the {name}")) else ""
    return " ".join(part for part in (f"{finding.level}: {about}{finding.message}", context.cite(finding.source)) if part)
