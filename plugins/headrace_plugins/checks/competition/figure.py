"""The need of refill against the yield of an outlet, drawn as SVG by hand: a curve, its bends, capacities, what is asked for."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from xml.sax.saxutils import escape

from headrace.api import AddedTable, Result

WIDTH, HEIGHT = 860.0, 500.0
LEFT, RIGHT, TOP, BOTTOM = 74.0, 236.0, 92.0, 78.0
INK, SOFT, PAPER, NEED, SHADE, LINE, MARK = "#22302e", "#8a9794", "#ffffff", "#0f6b62", "#e3f0ec", "#b8651b", "#7a3e8e"
STEPS = 24


@dataclass(frozen=True)
class Point:
    """A row of the table of bends."""

    rate: float
    yields: float
    need: float
    feed: float
    what: str


@dataclass(frozen=True)
class Frame:
    """From data to the page."""

    right: float
    top: float

    def x(self, value: float) -> float:
        return LEFT + (WIDTH - LEFT - RIGHT) * value / self.right

    def y(self, value: float) -> float:
        return HEIGHT - BOTTOM - (HEIGHT - TOP - BOTTOM) * value / self.top


def figure(result: Result, outlet: str, bends: AddedTable, lines: AddedTable) -> str:
    """The figure of one outlet, from the tables of bends and of capacities."""
    keys = [column.key for column in bends.columns]
    rows = [dict(zip(keys, row, strict=True)) for row in bends.rows if row[0] == outlet]
    points = [
        Point(_number(r["rate"]), _number(r["yield"]), _number(r["refill"]), _number(r["feed"]), str(r["is"])) for r in rows
    ]
    asked = next(point for point in points if point.what == "asked for")
    curve = [point for point in points if point.what != "asked for"]
    held = [(str(row[1]), _number(row[2]), row[4]) for row in lines.rows if row[0] == outlet]
    most = max([point.need for point in curve] + [capacity for _, capacity, _ in held])
    frame = Frame(_round_up(max(point.yields for point in points)), _round_up(most * 1.04))
    label = result.facts.hosts[result.case.host].label
    parts = [
        *_head(outlet, label, result),
        *_need(frame, curve),
        *_grid(frame),
        *_curve(frame, curve),
        *_capacities(frame, held),
        *_asked(frame, asked),
        *_dots(frame, curve),
        *_foot(outlet, curve),
    ]
    body = "\n".join(parts)
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {WIDTH:g} {HEIGHT:g}" width="{WIDTH:g}" height="{HEIGHT:g}" '
        f'font-family="Georgia, serif" font-size="13" fill="{INK}" role="img">\n{body}\n</svg>\n'
    )


def _number(cell: object) -> float:
    return float(cell) if isinstance(cell, int | float) else 0.0


def _round_up(value: float) -> float:
    """The next of 1, 1.2, 1.5, 2, 2.5, 3, 4, 5, 6, 8 times a power of ten."""
    if value <= 0:
        return 1.0
    power = 10.0 ** math.floor(math.log10(value))
    return next(step * power for step in (1, 1.2, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10) if step * power >= value * (1 - 1e-9))


def _text(x: float, y: float, words: str, anchor: str = "start", size: float = 13, fill: str = INK) -> str:
    """A label on a white rim, which keeps it legible on lines."""
    place = f'x="{x:.1f}" y="{y:.1f}" text-anchor="{anchor}" font-size="{size:g}"'
    rim = f'<text {place} fill="none" stroke="{PAPER}" stroke-width="4" aria-hidden="true">{escape(words)}</text>'
    return f'{rim}<text {place} fill="{fill}">{escape(words)}</text>'


def _line(x1: float, y1: float, x2: float, y2: float, stroke: str, width: float = 1, dashes: str = "") -> str:
    dashed = f' stroke-dasharray="{dashes}"' if dashes else ""
    return f'<line x1="{x1:.1f}" y1="{y1:.1f}" x2="{x2:.1f}" y2="{y2:.1f}" stroke="{stroke}" stroke-width="{width:g}"{dashed}/>'


def _head(outlet: str, host: str, result: Result) -> Iterator[str]:
    title = f"How much must be put back as {outlet} grows"
    yield f"<title>{escape(title)}</title>"
    yield f'<rect width="{WIDTH:g}" height="{HEIGHT:g}" fill="{PAPER}"/>'
    yield _text(LEFT - 50, 34, title, size=20)
    yield _text(LEFT - 50, 56, f"{host}, {result.case.oxygen}; {result.answer.aim}", size=13, fill=SOFT)  # type: ignore[union-attr]
    yield _text(LEFT - 50, TOP - 14, "all refills together, mmol/gDW/h", size=12, fill=SOFT)


def _grid(frame: Frame) -> Iterator[str]:
    for k in range(6):
        value = frame.top * k / 5
        yield _line(LEFT, frame.y(value), WIDTH - RIGHT, frame.y(value), "#e6eae9" if k else INK)
        yield _text(LEFT - 10, frame.y(value) + 4, f"{value:.3g}", "end", 12, SOFT)
    for k in range(6):
        value = frame.right * k / 5
        yield _line(frame.x(value), frame.y(0), frame.x(value), frame.y(0) + 5, INK)
        yield _text(frame.x(value), frame.y(0) + 20, f"{value:.3g}", "middle", 12, SOFT)
    yield _text((LEFT + WIDTH - RIGHT) / 2, HEIGHT - BOTTOM + 40, "yield, mol per mol of feed", "middle", 12, SOFT)


def _need(frame: Frame, curve: Sequence[Point]) -> Iterator[str]:
    """The area below the curve."""
    spots = _spots(frame, curve)
    path = " ".join(f"{x:.1f},{y:.1f}" for x, y in spots)
    yield f'<polygon points="{spots[0][0]:.1f},{frame.y(0):.1f} {path} {spots[-1][0]:.1f},{frame.y(0):.1f}" fill="{SHADE}"/>'


def _curve(frame: Frame, curve: Sequence[Point]) -> Iterator[str]:
    path = " ".join(f"{x:.1f},{y:.1f}" for x, y in _spots(frame, curve))
    yield f'<polyline points="{path}" fill="none" stroke="{NEED}" stroke-width="2.6" stroke-linejoin="round"/>'


def _spots(frame: Frame, curve: Sequence[Point]) -> list[tuple[float, float]]:
    """The curve on the page: straight in the rate between bends, against the yield that each rate means."""
    spots: list[tuple[float, float]] = []
    for here, there in zip(curve, curve[1:], strict=False):
        for k in range(STEPS + 1):
            share = k / STEPS
            rate, feed = _between(here.rate, there.rate, share), _between(here.feed, there.feed, share)
            spots.append((frame.x(rate / feed if feed else 0.0), frame.y(_between(here.need, there.need, share))))
    return spots


def _between(here: float, there: float, share: float) -> float:
    return here + share * (there - here)


def _capacities(frame: Frame, held: Sequence[tuple[str, float, object]]) -> Iterator[str]:
    """One dashed line per capacity, named at its right end; a small bar where the need reaches it."""
    taken: list[float] = []
    for what, capacity, carries in sorted(held, key=lambda line: -line[1]):
        y = frame.y(capacity)
        label = y + 4
        while any(abs(label - other) < 30 for other in taken):
            label += 6
        taken.append(label)
        yield _line(LEFT, y, WIDTH - RIGHT, y, LINE, 1.4, "7 5")
        yield _text(WIDTH - RIGHT + 10, label, f"{what} {capacity:.3g}", size=12.5, fill=LINE)
        if isinstance(carries, int | float):
            yield _line(frame.x(float(carries)), y - 8, frame.x(float(carries)), y + 8, LINE, 3)
            yield _text(WIDTH - RIGHT + 10, label + 14, f"carries a yield of {float(carries):.3g}", size=11, fill=SOFT)


def _asked(frame: Frame, asked: Point) -> Iterator[str]:
    x = frame.x(asked.yields)
    yield _line(x, frame.y(0), x, TOP - 6, MARK, 1.2, "2 3")
    right = asked.yields < 0.7 * frame.right
    yield _text(
        x + (6 if right else -6),
        TOP - 8,
        f"asked for: {asked.yields:.3g}, needs {asked.need:.3g}",
        "start" if right else "end",
        12.5,
        MARK,
    )
    y = frame.y(asked.need)
    yield f'<path d="M{x:.1f} {y - 7:.1f} l7 7 l-7 7 l-7 -7 z" fill="{MARK}"/>'


def _dots(frame: Frame, curve: Sequence[Point]) -> Iterator[str]:
    for number, point in enumerate(_numbered(curve), 1):
        x, y = frame.x(point.yields), frame.y(point.need)
        yield f'<circle cx="{x:.1f}" cy="{y:.1f}" r="4.5" fill="{PAPER}" stroke="{NEED}" stroke-width="2"/>'
        yield _text(x - 8, y - 8, str(number), "end", 11.5, NEED)


def _numbered(curve: Sequence[Point]) -> list[Point]:
    return [point for point in curve if point.what in ("bend", "largest")]


def _foot(outlet: str, curve: Sequence[Point]) -> Iterator[str]:
    said = [
        f"{number}: {'largest yield' if point.what == 'largest' else 'bend'} at {point.yields:.4g}, {point.need:.4g}"
        for number, point in enumerate(_numbered(curve), 1)
    ]
    shown = "; ".join(said[:5]) + (f"; and {len(said) - 5} more" if len(said) > 5 else "")
    yield _text(LEFT - 50, HEIGHT - 12, shown or "The need grows in one straight piece.", size=11.5, fill=SOFT)
