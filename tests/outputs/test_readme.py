"""The README's tables come from the facts and its output from real runs; HEADRACE_WRITE_DOCS=1 brings them up to date."""

from __future__ import annotations

import os
import re
import shlex
import subprocess
import sys
from pathlib import Path

from headrace.outputs.facts import listing
from headrace.pages import markdown
from headrace.values.facts import Facts

PART = re.compile(r"<!-- (facts|run): (.+?) -->\n(.*?)<!-- end -->", re.S)


def table(facts: Facts, plural: str) -> str:
    return "\n".join(markdown.table(listing.page(facts, plural).main)) + "\n"


def output(command: str, root: Path) -> str:
    """What a command prints, 100 columns wide."""
    arguments = shlex.split(command)
    assert arguments[0] == "headrace"
    call = [sys.executable, "-m", "headrace", *arguments[1:]]
    found = subprocess.run(
        call, capture_output=True, cwd=root, env={**os.environ, "COLUMNS": "100"}, encoding="utf-8", timeout=120
    )
    assert found.returncode in (0, 1), found.stderr
    return f"```text\n{found.stdout}```\n"


def renewed(text: str, facts: Facts, root: Path) -> str:
    def part(found: re.Match[str]) -> str:
        made = table(facts, found[2]) if found[1] == "facts" else output(found[2], root)
        return f"<!-- {found[1]}: {found[2]} -->\n{made}<!-- end -->"

    return PART.sub(part, text)


def without_versions(text: str) -> str:
    """The facts' hash changes with each changed comment; the numbers are what must not be stale."""
    return re.sub(r"facts [0-9a-f]{12,}", "facts ...", text)


def test_the_readme_is_not_stale(facts: Facts, root: Path) -> None:
    path = root / "README.md"
    text = path.read_text(encoding="utf-8")
    assert {"hosts", "families", "refills"} <= {found[2] for found in PART.finditer(text) if found[1] == "facts"}
    assert any(found[1] == "run" for found in PART.finditer(text))
    fresh = renewed(text, facts, root)
    if os.environ.get("HEADRACE_WRITE_DOCS"):
        path.write_text(fresh, encoding="utf-8")
        return
    assert without_versions(fresh) == without_versions(text), "HEADRACE_WRITE_DOCS=1 brings it up to date"


def test_a_stale_table_is_seen(facts: Facts, root: Path) -> None:
    stale = "<!-- facts: hosts -->\n| old |\n<!-- end -->"
    assert renewed(stale, facts, root) != stale
