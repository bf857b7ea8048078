"""HTML as values: every text is escaped unless it is `Html` already."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from html import escape

from headrace.graph import terms
from headrace.pages.model import Cell
from headrace.pages.numbers import show

_VOID = ("input", "meta", "link", "br")


class Html(str):
    """Text that is markup already."""


Child = str | Html | None | Iterable["Child"]


def text(child: Child) -> Html:
    """A child as markup."""
    if child is None:
        return Html("")
    if isinstance(child, Html):
        return child
    if isinstance(child, str):
        return Html(escape(child, quote=True))
    return Html("".join(text(each) for each in child))


def tag(name: str, /, *children: Child, **attributes: str | bool | None) -> Html:
    """An element. Attribute names: class_ is class, for_ is for, data_x is data-x; None and False leave one out."""
    said = ""
    for key, value in attributes.items():
        if value is None or value is False:
            continue
        plain = key.rstrip("_").replace("_", "-")
        said += f" {plain}" if value is True else f' {plain}="{escape(str(value), quote=True)}"'
    if name in _VOID:
        return Html(f"<{name}{said}>")
    return Html(f"<{name}{said}>{text(children)}</{name}>")


def local(iri: str) -> str:
    """The link to an address: on this service for addresses of ours, else the address itself; "" for what is no web address."""
    if iri.startswith(terms.ID):
        return "/id/" + iri.removeprefix(terms.ID)
    if iri.startswith(terms.HR) or iri == terms.HR.rstrip("#"):
        return "/ns" + (f"#{iri.removeprefix(terms.HR)}" if iri.startswith(terms.HR) else "")
    return iri if iri.startswith(("http://", "https://")) else ""


def link(iri: str, label: str) -> Html:
    """A link to an address; text alone where it can't be followed."""
    target = local(iri)
    if not target:
        return text(label)
    return tag("a", label, href=target, rel=None if target.startswith("/") else "external noreferrer")


def table(caption: str, heads: Sequence[str], rows: Sequence[Sequence[Cell | Html]], numeric: Sequence[bool] = ()) -> Html:
    """A table with a caption; scrolls sideways by itself on a narrow screen, and can be reached by keyboard there."""
    right = list(numeric) or [False] * len(heads)
    top = [tag("th", head, scope="col", class_="number" if at else None) for head, at in zip(heads, right, strict=True)]
    body = [
        tag("tr", *(tag("td", _cell(cell), class_="number" if at else None) for cell, at in zip(row, right, strict=True)))
        for row in rows
    ]
    inner = tag("table", tag("caption", caption), tag("thead", tag("tr", *top)), tag("tbody", *body))
    return tag("div", inner, class_="scroll", tabindex="0", role="region", aria_label=caption)


def _cell(cell: Cell | Html) -> Html:
    return cell if isinstance(cell, Html) else text(show(cell))


def facts(pairs: Iterable[tuple[Child, Child]]) -> Html:
    """Names and what is said of them."""
    return tag("dl", *((tag("dt", name), tag("dd", said)) for name, said in pairs))
