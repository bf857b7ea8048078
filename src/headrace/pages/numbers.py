"""Numbers as people read them: four significant digits on screens and in documents, all digits in files for machines."""

from __future__ import annotations

import math
from fractions import Fraction

from headrace.pages.model import Cell

UNKNOWN = "–"
_DIGITS = 4
_NOISE = 1e-9


def show(value: Cell) -> str:
    """A cell as text: numbers with four significant digits and no trailing zeros, below 1e-9 as 0, None as a dash.

    >>> [show(x) for x in (1.4, 2 / 3, 12345.6, 0.00001234, 1e-13, None, True)]
    ['1.4', '0.6667', '12346', '1.234e-05', '0', '–', 'yes']
    """
    if value is None:
        return UNKNOWN
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, str):
        return value
    number = float(value)
    if math.isnan(number):
        return UNKNOWN
    if math.isinf(number):
        return "no limit"
    if abs(number) < _NOISE:
        return "0"
    if abs(number) < 1e-4 or abs(number) >= 1e7:
        return f"{number:.{_DIGITS - 1}e}"
    decimals = max(0, _DIGITS - 1 - math.floor(math.log10(abs(number))))
    text = f"{number:.{decimals}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def full(value: Cell) -> str:
    """A cell with all its digits, for CSV; None as an empty cell. (A fraction as "3/2" would be a date to spreadsheets.)

    >>> [full(x) for x in (0.1, Fraction(3, 2), None, False, -0.0)]
    ['0.1', '1.5', '', 'no', '0.0']
    """
    if value is None:
        return ""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float | Fraction):
        return repr(float(value) + 0.0)
    return str(value)


def counted(number: int, one: str, many: str = "") -> str:
    """A number with its noun.

    >>> counted(1, "outlet"), counted(3, "carboxylase"), counted(2, "is", "are")
    ('1 outlet', '3 carboxylases', '2 are')
    """
    return f"{number} {one if number == 1 else many or one + 's'}"


def joined(items: list[str] | tuple[str, ...], last: str = "and") -> str:
    """Items as a phrase.

    >>> joined(["a", "b", "c"]), joined(["a"]), joined([])
    ('a, b and c', 'a', '')
    """
    if len(items) < 2:
        return "".join(items)
    return f"{', '.join(items[:-1])} {last} {items[-1]}"
