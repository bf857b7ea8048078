"""The skeleton ledger as a figure: two channels of one length, what goes out above what comes in."""

from __future__ import annotations

from headrace.outputs.service.entity import Value
from headrace.outputs.service.pages.markup import Html, tag, text
from headrace.pages.numbers import show

_OUT = (("netDrain", "drained by outlets"), ("released", "released"), ("removed", "removed"))
_IN = (("refilled", "refilled"), ("suppliedSkeletons", "supplied by feeds"))
_WIDTH, _HIGH, _GAP = 1000.0, 46.0, 78.0
_SMALL = 1e-9


def figure(book: dict[str, list[Value]]) -> Html | None:
    """The figure of a ledger's sums; None without one."""
    sums = {name: float(values[0].text) for name, values in book.items() if values and _is_number(values[0].text)}
    total = max(sum(max(sums.get(name, 0.0), 0.0) for name, _ in side) for side in (_OUT, _IN))
    if total < _SMALL or "refilled" not in sums:
        return None
    words = "; ".join(f"{label} {show(sums.get(name, 0.0))}" for name, label in (*_OUT, *_IN))
    drawn = [*_channel(sums, _OUT, total, 0.0, "out"), *_channel(sums, _IN, total, _GAP, "in")]
    picture = tag("svg", *drawn, viewBox=f"0 0 {_WIDTH:.0f} {_GAP + _HIGH:.0f}", role="img", aria_label=words, class_="ledger")
    keys = [_key(sums, side, name) for side, name in ((_OUT, "out"), (_IN, "in"))]
    caption = tag("figcaption", tag("p", "Taken out, above; put back, below (mmol skeletons/gDW/h)."), *keys)
    return tag("section", tag("h2", "Ledger of skeletons"), tag("figure", picture, caption))


def _is_number(text_: str) -> bool:
    try:
        float(text_)
    except ValueError:
        return False
    return True


def _channel(sums: dict[str, float], side: tuple[tuple[str, str], ...], total: float, top: float, way: str) -> list[Html]:
    at, found = 0.0, []
    for number, (name, label) in enumerate(side):
        width = max(sums.get(name, 0.0), 0.0) / total * _WIDTH
        if width < 0.5:
            continue
        title = tag("title", f"{label} {show(sums[name])}")
        shape = tag(
            "rect", title, x=f"{at:.1f}", y=f"{top:.0f}", width=f"{width:.1f}", height=f"{_HIGH:.0f}", class_=f"{way}{number}"
        )
        found.append(shape)
        if width > 180:
            where = {"x": f"{at + 14:.1f}", "y": f"{top + 30:.0f}"}
            found.append(tag("text", f"{label} {show(sums[name])}", class_=f"on-{way}{number}", **where))
        at += width
    return found


def _key(sums: dict[str, float], side: tuple[tuple[str, str], ...], way: str) -> Html:
    items = [
        tag("li", tag("span", Html(""), class_=f"key {way}{number}"), text(f"{label} {show(sums.get(name, 0.0))}"))
        for number, (name, label) in enumerate(side)
    ]
    return tag("ul", *items, class_="keys")
