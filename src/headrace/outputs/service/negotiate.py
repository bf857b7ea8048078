"""Which of some formats an Accept header asks for (RFC 9110, section 12.5.1)."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from headrace.outputs.query.formats import Format

HTML = Format("html", "text/html; charset=utf-8", "html", ("application/xhtml+xml",))
_MOST = 100
_EXACTLY = 3


class Range(NamedTuple):
    """A media range with its weight."""

    kind: str
    subkind: str
    weight: float

    def fits(self, media: str) -> int:
        """How exactly the range fits a media type: 0 not at all, 1 */*, 2 kind/*, 3 the type itself."""
        kind, _, subkind = media.partition(";")[0].strip().partition("/")
        if (self.kind, self.subkind) == (kind, subkind):
            return 3
        if self.kind == kind and self.subkind == "*":
            return 2
        return 1 if (self.kind, self.subkind) == ("*", "*") else 0


def ranges(accept: str) -> list[Range]:
    """The ranges of a header; what is no media range is passed over."""
    found = []
    for part in accept.split(",")[:_MOST]:
        media, *parameters = [piece.strip() for piece in part.split(";")]
        kind, slash, subkind = media.lower().partition("/")
        if slash and kind and subkind:
            found.append(Range(kind, subkind, _weight(parameters)))
    return found


def _weight(parameters: Sequence[str]) -> float:
    for parameter in parameters:
        name, _, value = parameter.partition("=")
        if name.strip().lower() == "q":
            try:
                return min(max(float(value), 0.0), 1.0)
            except ValueError:
                return 0.0
    return 1.0


def weight(wanted: Sequence[Range], media: str) -> float:
    """The weight of a media type: that of the range that fits it most exactly; 0 when none does."""
    fitting = [(each.fits(media), each.weight) for each in wanted if each.fits(media)]
    return max(fitting)[1] if fitting else 0.0


def choose(accept: str, offers: Sequence[Format]) -> Format | None:
    """The offer that the header likes most, the earlier of equals; the first without a header; None when none will do.

    An offer's other types count only where they are named as they are.
    """
    wanted = ranges(accept)
    if not accept.strip():
        return offers[0]
    best, most = None, 0.0
    for offer in offers:
        aliases = [each.weight for each in wanted for media in offer.accepts if each.fits(media) == _EXACTLY]
        own = max(weight(wanted, offer.media), *aliases, 0.0)
        if own > most:
            best, most = offer, own
    return best
