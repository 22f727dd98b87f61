"""Column widths, by what stands in the columns.

Never less than the longest number of a column or its words of usual length; then room to those columns whose text would
otherwise be broken into lines; then as asked.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace

from calc.problems import Unresolved
from calc.publish.faces import small_capitals, width
from calc.publish.markup import is_quantity
from calc.report.document import Cite, Document, Formula, Number, Own, Parts, Quoted, Soft, Strong, Table, TableColumn
from calc.report.numbers import THIN

GUTTER, TICK = 12.0, 6.5  # mm
MEASURE = {"A4": 176.0, "Letter": 182.0}
"""Width between the margins, mm."""
TURNED = {"A4": 263.0, "Letter": 247.4}
"""The same on a sheet turned on its side."""
STAR = 24.0  # mm, the least that a column without a width is left
PADDING = 3.2  # mm, at both sides of a cell
POINT = 25.4 / 72  # mm
DENSE, CLOSE = 0.91, 1.9  # of the size of text; mm, at both sides of a cell
TEXT, SMALL, HEAD = (
    9.5 * POINT,
    8.0 * POINT / DENSE,
    8.75 * POINT,
)  # mm; the small size is never denser
LONGEST, LONGEST_PLACE, LONGEST_ID = 26.0, 31.0, 36.0  # mm, a word that is longer may be broken; a place; an id
LONG, CROWDED = 24, 9  # rows, and columns, from which a table is set dense rather than with broken cells
BOLD, BAR = 1.07, 2.5  # how much wider semibold is; mm, the reader's bar
SPACED = 0.05  # em, between small capitals
SLACK = 1.02
LINE = 110.0  # mm, the most that a cell asks for to stand on one line; a formula asks for as much
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
    lines : tuple of float
        Of the longest cell set on one line, likewise, with the gap at both sides not counted.
    tick : float
        Of the column of tick boxes.
    formulas : bool
        Whether formulas stand in it: then all room is theirs.
    dense : bool
        Whether text is set smaller and closer, as it otherwise would not find room.
    """

    asked: tuple[float | None, ...]
    words: tuple[float, ...]
    lines: tuple[float, ...]
    tick: float
    formulas: bool = False
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

    @property
    def whole(self) -> tuple[float, ...]:
        """The width at which no cell of a column is broken into lines."""
        size, gap = (DENSE, CLOSE) if self.dense else (1.0, PADDING)
        return tuple(max(n, wide * size + gap) for n, wide in zip(self.needed, self.lines, strict=True))

    def fitted(self, paper: str, *, close: bool = False) -> Widths:
        """Return the same, set dense where that makes it fit the paper upright; if ``close``, without broken cells."""
        dense = replace(self, dense=True)
        if dense.total <= MEASURE[paper] < self.total:
            return dense
        return dense if close and GUTTER + self.tick + sum(self.whole) > MEASURE[paper] >= dense.total else self

    def turned(self, paper: str) -> bool:
        """Return whether the table needs a sheet turned on its side."""
        return self.total > MEASURE[paper]

    def on(self, whole: float) -> tuple[float, ...]:
        """Return the width of each column.

        First what is needed; then up to what is asked where the text can use it; without formulas, up to the whole of
        the text and up to what is asked in any case; the rest goes to the columns that ask for no width.
        """
        widths, spare = self.needed, whole - self.total
        if spare < 0:
            share = 1 + spare / sum(widths)
            return tuple(need * share for need in widths)
        asked = tuple(ask or STAR for ask in self.asked)
        usable = tuple(map(min, asked, self.whole))
        for goal in (usable,) if self.formulas else (usable, self.whole, asked):
            lack = [max(0.0, aim - have) for aim, have in zip(goal, widths, strict=True)]
            share = min(1.0, spare / (sum(lack) or 1.0))
            widths = tuple(have + share * more for have, more in zip(widths, lack, strict=True))
            spare -= share * sum(lack)
        stars = [float(ask is None) for ask in self.asked] if None in self.asked else [1.0] * len(self.asked)
        return tuple(have + spare / sum(stars) * star for have, star in zip(widths, stars, strict=True))


def widths(table: Table, document: Document, *, close: bool = False) -> Widths:
    """Return the widths that a table needs.

    Parameters
    ----------
    table : Table
    document : Document
    close : bool
        Whether to set it dense rather than break cells into lines.

    Raises
    ------
    Unresolved
        If a row has neither one cell nor one for each column.
    """
    count = len(table.columns)
    needed = [_head(column) for column in table.columns]
    lines = list(needed)
    for row in table.rows:
        if len(row.cells) == 1 < count:
            continue
        if len(row.cells) != count:
            raise Unresolved(f"table {table.key}, {row.address}: {len(row.cells)} cells, {count} columns")
        for k, (column, parts) in enumerate(zip(table.columns, row.placed[0], strict=True)):
            needed[k] = max(needed[k], _cell(column, parts, document))
            lines[k] = max(lines[k], min(LINE, _line(parts, document)))
    asked = tuple(column.width for column in table.columns)
    formulas = any(isinstance(part, Formula) for row in table.rows for cell in row.cells for part in cell)
    made = Widths(asked, tuple(needed), tuple(lines), TICK * table.tick, formulas)
    crowded = len(table.rows) > LONG or count >= CROWDED
    return made.fitted(document.paper, close=close or (crowded and not formulas))


def _line(parts: Parts, document: Document) -> float:
    """Return the width of parts on one line, mm."""
    wide = 0.0
    for part in parts:
        match part:
            case Number():
                wide += TEXT * width(f"{part.text} {part.form.unit}" if part.with_unit else part.text) * SLACK
            case Strong(parts=inner, bar=bar):
                wide += BAR * bar + BOLD * _line(inner, document)
            case Soft(parts=inner):
                wide += _line(inner, document)
            case Cite():
                wide += SMALL * width(document.cited(part)) * BOLD
            case Formula():
                return LINE
            case Own(text=text, sort="file"):
                wide += SMALL * width(text) * BOLD
            case str(text) | Own(text=text) | Quoted(text=text):
                wide += TEXT * width(text) * SLACK
            case _:
                continue
    return wide


def _head(column: TableColumn) -> float:
    words = [word for part in column.head if isinstance(part, str | Own | Quoted) for word in _words(part)]
    wide = [HEAD * small_capitals(word, SPACED) * SLACK for word in words]
    return max([min(w, LONGEST) for w in wide] + [HEAD * width(column.unit) * SLACK])


def _cell(column: TableColumn, parts: Parts, document: Document) -> float:
    if column.role == "unit":  # a unit is never broken
        texts = [part if isinstance(part, str) else part.text for part in parts if isinstance(part, str | Own)]
        return max((TEXT * width(text) for text in texts), default=0.0) - PADDING / 2
    return max(_pieces(parts, document), default=0.0)


def _pieces(parts: Parts, document: Document) -> Iterator[float]:
    """Yield the width of all that is not to be broken, mm."""
    for before, part in zip((None, *parts), parts, strict=False):
        match part:
            case Number():
                head = before if isinstance(before, str) and before.endswith(THIN) else ""
                tail = f" {part.form.unit}" if part.with_unit else ""
                yield TEXT * width(head + part.text + tail) * SLACK
            case Strong(parts=inner, bar=bar):
                yield from (BAR * bar + BOLD * wide for wide in _pieces(inner, document))
            case Soft(parts=inner):
                yield from _pieces(inner, document)
            case Cite():
                yield max((SMALL * width(run + ",") * BOLD for run in document.cited(part).split(", ")), default=0.0)
            case str() | Own() | Quoted():
                sort = part.sort if isinstance(part, Own) else ""
                size = SMALL * BOLD if sort == "file" else TEXT
                most = {"id": LONGEST_ID, "file": LONGEST_PLACE}.get(sort, LONGEST)
                yield from (min(most, size * width(word) * SLACK) for word in _words(part))
            case _:
                continue


def _words(part: str | Own | Quoted) -> list[str]:
    text = part if isinstance(part, str) else part.text
    return [text] if isinstance(part, Quoted) and is_quantity(text) else _WORD.findall(text)
