"""Column widths: as asked, but never less than the longest number of the column, or than its words of usual length."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace

from calc.problems import Unresolved
from calc.publish.faces import small_capitals, width
from calc.report.document import Cite, Document, Number, Own, Parts, Quoted, Soft, Strong, Table, TableColumn

GUTTER, TICK = 12.0, 6.5  # mm
MEASURE = {"A4": 176.0, "Letter": 182.0}
"""Width between the margins, mm."""
TURNED = {"A4": 263.0, "Letter": 247.4}
"""The same on a sheet turned on its side."""
STAR = 24.0  # mm, the least that a column without a width is left
PADDING = 3.2  # mm, at both sides of a cell
POINT = 25.4 / 72  # mm
TEXT, SMALL, HEAD = 9.5 * POINT, 8.0 * POINT, 8.75 * POINT  # mm, the sizes of text in a table
DENSE, CLOSE = 0.91, 1.9  # of the size of text; mm, at both sides of a cell
LONGEST = 26.0  # mm, a word that is longer may be broken
BOLD, BAR = 1.07, 2.5  # how much wider semibold is; mm, the reader's bar
SPACED = 0.05  # em, between small capitals
SLACK = 1.02
_WORD = re.compile(r"[^\s-]+-?|-")


@dataclass(frozen=True, slots=True)
class Widths:
    """The widths of a table's columns, mm.

    Attributes
    ----------
    asked : tuple of (float or None)
        As the document asks; the others share what is left.
    words : tuple of float
        Of what cannot be broken, in the usual size of text.
    tick : float
        Of the column of tick boxes.
    dense : bool
        Whether text is set smaller and closer, as it otherwise would not find room.
    """

    asked: tuple[float | None, ...]
    words: tuple[float, ...]
    tick: float
    dense: bool = False

    @property
    def needed(self) -> tuple[float, ...]:
        """The least width of each column."""
        size, gap = (DENSE, CLOSE) if self.dense else (1.0, PADDING)
        return tuple(wide * size + gap for wide in self.words)

    @property
    def total(self) -> float:
        """The least width of the table."""
        return GUTTER + self.tick + sum(self.needed)

    def fitted(self, paper: str) -> Widths:
        """Return the same, set dense where that makes it fit the paper upright."""
        dense = replace(self, dense=True)
        return dense if dense.total <= MEASURE[paper] < self.total else self

    def turned(self, paper: str) -> bool:
        """Return whether the table needs a sheet turned on its side."""
        return self.total > MEASURE[paper]

    def on(self, whole: float) -> tuple[float, ...]:
        """Return the width of each column: first what is needed, then what is asked, the rest to the others."""
        needed, spare = self.needed, whole - self.total
        if spare < 0:
            share = 1 + spare / sum(needed)
            return tuple(need * share for need in needed)
        wanted = [max(0.0, (ask or STAR) - need) for ask, need in zip(self.asked, needed, strict=True)]
        share = min(1.0, spare / (sum(wanted) or 1.0))
        spare -= share * sum(wanted)
        stars = [float(ask is None) for ask in self.asked] if None in self.asked else [1.0] * len(self.asked)
        rest = spare / sum(stars)
        return tuple(n + share * w + rest * star for n, w, star in zip(needed, wanted, stars, strict=True))


def widths(table: Table, document: Document) -> Widths:
    """Return the widths that a table needs.

    Raises
    ------
    Unresolved
        If a row has neither one cell nor one for each column.
    """
    count = len(table.columns)
    needed = [_head(column) for column in table.columns]
    for row in table.rows:
        if len(row.cells) == 1 < count:
            continue
        if len(row.cells) != count:
            raise Unresolved(f"table {table.key}, {row.address}: {len(row.cells)} cells, {count} columns")
        for k, (column, parts) in enumerate(zip(table.columns, row.cells, strict=True)):
            needed[k] = max(needed[k], _cell(column, parts, document))
    asked = tuple(column.width for column in table.columns)
    return Widths(asked, tuple(needed), TICK * table.tick).fitted(document.paper)


def _head(column: TableColumn) -> float:
    words = [word for part in column.head if isinstance(part, str | Own | Quoted) for word in _words(part)]
    wide = [HEAD * small_capitals(word, SPACED) * SLACK for word in words]
    return max([min(w, LONGEST) for w in wide] + [HEAD * width(column.unit) * SLACK])


def _cell(column: TableColumn, parts: Parts, document: Document) -> float:
    if column.role == "unit":  # a unit is never broken
        return max((TEXT * width(part) for part in parts if isinstance(part, str)), default=0.0) - PADDING / 2
    return max(_pieces(parts, document), default=0.0)


def _pieces(parts: Parts, document: Document) -> Iterator[float]:
    """Yield the width of all that is not to be broken, mm."""
    for part in parts:
        match part:
            case Number():
                tail = f" {part.form.unit}" if part.with_unit else ""
                yield TEXT * width(part.text + tail) * SLACK
            case Strong(parts=inner, bar=bar):
                yield from (BAR * bar + BOLD * wide for wide in _pieces(inner, document))
            case Soft(parts=inner):
                yield from _pieces(inner, document)
            case Cite():
                yield max((SMALL * width(run + ",") * BOLD for run in document.cited(part).split(", ")), default=0.0)
            case str() | Own() | Quoted():
                size = SMALL * BOLD if isinstance(part, Own) and part.sort == "file" else TEXT
                yield from (min(LONGEST, size * width(word) * SLACK) for word in _words(part))
            case _:
                continue


def _words(part: str | Own | Quoted) -> list[str]:
    return _WORD.findall(part if isinstance(part, str) else part.text)
