"""What a page is made of. Frozen values; a cell is text, a number, yes or no, or None for "not known or not defined"."""

from __future__ import annotations

from fractions import Fraction

from msgspec import Struct

Cell = str | int | float | Fraction | bool | None
Row = tuple[Cell, ...]


class Column(Struct, frozen=True):
    """unit: what every number of the column is in ("" = a plain ratio or text). detail: left out on a terminal.

    alike: a place that goes to the title on a terminal when it is the same in all rows.
    """

    title: str
    unit: str = ""
    number: bool = False
    detail: bool = False
    alike: bool = False

    @property
    def heading(self) -> str:
        """Title with unit, for files: "net (mmol/gDW/h)"."""
        return f"{self.title} ({self.unit})" if self.unit else self.title


class Table(Struct, frozen=True):
    """name: usable in a file name. grouped: the first column heads groups of rows. empty: said when there are no rows.

    detail: left out on a terminal, which names it instead.
    """

    name: str
    title: str
    columns: tuple[Column, ...]
    rows: tuple[Row, ...]
    grouped: bool = False
    empty: str = ""
    note: str = ""
    detail: bool = False


class Notes(Struct, frozen=True):
    """Sentences under a heading. listed: each one is an item of a list."""

    title: str
    lines: tuple[str, ...]
    listed: bool = True


class Verbatim(Struct, frozen=True):
    """Text that is shown as it stands."""

    title: str
    text: str


Block = Table | Notes | Verbatim


class Page(Struct, frozen=True):
    """One answer as shown. verdict: the answer in a sentence or two. subject: what was asked about, in a line or two.

    main: the one table that csv gives, in full. footnotes: what marks such as the dagger mean. cautions: what the
    reader must not forget. sources: numbered citations that cells refer to as [1]; list_sources: on a terminal too.
    """

    title: str
    subject: tuple[str, ...]
    verdict: str
    blocks: tuple[Block, ...]
    main: Table
    footnotes: tuple[str, ...] = ()
    cautions: tuple[str, ...] = ()
    sources: tuple[str, ...] = ()
    list_sources: bool = False
    versions: str = ""
