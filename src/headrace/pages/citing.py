"""Citations with numbers, and the mark of recalled facts."""

from __future__ import annotations

from collections.abc import Mapping

from headrace.values.facts import Basis, Source

DAGGER = "†"
RECALLED_NOTE = f"{DAGGER} rests on a recalled fact: not confirmed in the cited source."


class Citations:
    """The sources of one page, numbered in the order in which the page first uses them."""

    def __init__(self, known: Mapping[str, Source]) -> None:
        self.used: list[str] = []
        self.recalled = False
        self._known = known
        self._slugs = {source.text: slug for slug, source in known.items()}

    def mark(self, text: str, recalled: bool) -> str:
        """The text, with a dagger when it rests on a recalled fact."""
        if not recalled:
            return text
        self.recalled = True
        return f"{text} {DAGGER}"

    def cite(self, sources: str) -> str:
        """Numbers such as "[1, 3]" for citations or source slugs that are separated by "; "."""
        return self.cite_all(tuple(self.split(sources)))

    def cite_all(self, sources: tuple[str, ...]) -> str:
        """The same for several sources."""
        numbers = set()
        for source in sources:
            text = self.text(source)
            if text not in self.used:
                self.used.append(text)
            numbers.add(self.used.index(text) + 1)
        return f"[{', '.join(str(number) for number in sorted(numbers))}]" if numbers else ""

    def basis(self, basis: Basis) -> tuple[str, str]:
        """Reading (marked when recalled) and citation numbers of a fact."""
        return self.mark(basis.reading, basis.reading == "recalled"), self.cite_all(basis.sources)

    def text(self, source: str) -> str:
        """A citation with its DOI, from a source's slug or its text; other text stands as it is."""
        known = self._known.get(self._slugs.get(source, source))
        if known is None:
            return source
        return f"{known.text} doi:{known.doi}" if known.doi else known.text

    def footnotes(self) -> tuple[str, ...]:
        """What the marks that were used mean."""
        return (RECALLED_NOTE,) if self.recalled else ()

    def split(self, sources: str) -> list[str]:
        """The citations of a text; one that holds a "; " itself is known by its whole text."""
        parts, found = [part for part in sources.split("; ") if part.strip()], []
        while parts:
            sizes = range(len(parts), 0, -1)
            size = next((size for size in sizes if "; ".join(parts[:size]) in self._slugs), 1)
            found.append("; ".join(parts[:size]))
            parts = parts[size:]
        return found
