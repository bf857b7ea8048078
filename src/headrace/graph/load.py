"""Facts from Turtle or from the cache. The path from the cache imports no RDF library."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from headrace import paths
from headrace.graph import cache as stored
from headrace.graph.files import fact_files, version
from headrace.graph.ruletexts import digest, rule_texts
from headrace.values.facts import Facts


def load(folders: Sequence[Path] | None = None, extra: Sequence[tuple[str, Path]] = (), *, cache: bool = True) -> Facts:
    """All facts of the folders (default: the shipped graph_data) and of plugins' folders (name, folder).

    cache: whether built facts may be read from and kept in `paths.cache_folder()`; the answer is the same.
    Raises FactsError, which names file and node, for the first fault and says how many more there are.
    """
    homes = [paths.facts_folder()] if folders is None else folders
    files, rules = fact_files(homes, extra), rule_texts(homes, extra)
    current, ruled = version(files), digest(rules)
    folder = paths.cache_folder() if cache else None
    if folder is not None and (facts := stored.read(folder, current, ruled)) is not None:
        return facts
    from headrace.graph.build import build  # reading Turtle takes libraries that the cached path does without
    from headrace.graph.findings import completed  # so does running rules

    facts = completed(build(files, current), rules, files)
    if folder is not None:
        stored.write(folder, facts, ruled)
    return facts
