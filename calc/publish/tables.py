"""Tables: what a template prints of one, its widths, heads and cells."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from markupsafe import Markup, escape

from calc.problems import Unresolved
from calc.publish.markup import hidden
from calc.publish.parts import Writer
from calc.report.document import Number, Part, Parts, Row, Soft, Strong, Table, TableColumn

GUTTER, TICK = 12.0, 6.5  # mm
MEASURE = {"A4": 176.0, "Letter": 182.0}
"""Width between the margins, mm."""
WIDE = {"A4": 263.0, "Letter": 247.4}
"""The same on a sheet turned on its side."""
STAR = 24.0  # mm, the least that a column without a width is left
PADDING = 3.2  # mm, at both sides of a cell
EM = 9.5 * 25.4 / 72  # mm, the size of text in a table
LETTERS = "abcdefghjkmnopqrstuvwxyz"
ROLES = {"value": "val", "unit": "un", "from": "fr", "into": "to", "statement": "st", "": ""}
ALIGN = {"left": "", "right": "r", "centre": "c"}
UNSEEN = {"unit": "unit", "statement": "statement", "from": "from", "into": "into"}
"""Heads of columns that have none to be seen, for a reader who cannot see the table."""
TONES = {"", "group", "sum", "proved", "flag"}


@dataclass(frozen=True, slots=True)
class Cell:
    """One cell as printed: its classes, its content and how many columns it spans."""

    manner: Markup
    content: Markup
    span: Markup


@dataclass(frozen=True)
class Sheet:
    """A table as it will stand on a sheet that is ``whole`` millimetres wide between its margins."""

    table: Table
    whole: float
    writer: Writer

    @property
    def _stars(self) -> int:
        return sum(column.width is None for column in self.table.columns)

    @property
    def widths(self) -> Markup:
        """The column widths, fixed; the others share what is left."""
        said = [GUTTER, *(self._fit(column.width) for column in self.table.columns), *[TICK] * self.table.tick]
        cols = [Markup("<col>") if w is None else Markup('<col style="width:{}mm">').format(f"{w:.2f}") for w in said]
        return Markup("<colgroup>{}</colgroup>").format(Markup().join(cols))

    def _fit(self, width: float | None) -> float | None:
        """Return the width of a column, narrowed where all together leave the others no room."""
        if width is None:
            return None
        asked = sum(column.width or 0.0 for column in self.table.columns)
        room = self.whole - GUTTER - TICK * self.table.tick - STAR * self._stars
        return width * min(1.0, room / asked)

    @property
    def manner(self) -> Markup:
        """Classes of the table."""
        return escape(f"t ledger {self.table.key}")

    @property
    def letters(self) -> list[Markup]:
        """A letter for each column, so that a cell can be cited; i and l are left out."""
        if len(self.table.columns) > len(LETTERS):
            raise Unresolved(f"table {self.table.key}: more columns than letters")
        return [escape(letter) for letter, _ in zip(LETTERS, self.table.columns, strict=False)]

    @property
    def heads(self) -> Iterator[Cell]:
        """The heads; that of a column without words is heard, not seen."""
        for column in self.table.columns:
            content = self.writer.said(column.head) or hidden(UNSEEN.get(column.role, "value"))
            if column.unit:
                gap = Markup("<br>") if column.head else Markup()
                content += Markup('{}<span class="cs">{}</span>').format(gap, column.unit)
            yield Cell(self._classes(column), content, Markup())

    def cells(self, row: Row) -> Iterator[Cell]:
        """Yield the cells of a row; one cell alone spans all columns.

        Raises
        ------
        Unresolved
            If a row has neither one cell nor one for each column.
        """
        columns = self.table.columns
        if row.tone not in TONES:
            raise Unresolved(f"table {self.table.key}, {row.address}: no tone is called '{row.tone}'")
        if len(row.cells) == 1 and len(columns) > 1:
            span = Markup(' colspan="{}"').format(str(len(columns)))
            content = self.writer.said(row.cells[0], self._em(sum(self._width(c) for c in columns)))
            yield Cell(Markup("st"), content, span)
            return
        if len(row.cells) != len(columns):
            raise Unresolved(f"table {self.table.key}, {row.address}: {len(row.cells)} cells, {len(columns)} columns")
        for column, parts in zip(columns, row.cells, strict=True):
            content = self.writer.said(parts, self._em(self._width(column)), column.unit or None)
            summed = row.tone in ("sum", "proved") and any(_numbers(parts))
            ruled = " dbl" if summed and row.tone == "proved" else " one" if summed else ""
            yield Cell(self._classes(column) + Markup(ruled), content, Markup())

    def _classes(self, column: TableColumn) -> Markup:
        if column.role not in ROLES:
            raise Unresolved(f"table {self.table.key}: a column may not have the role '{column.role}'")
        said = [ROLES[column.role], ALIGN[column.align], "edge" if column.edge else ""]
        return escape(" ".join(word for word in said if word))

    def _width(self, column: TableColumn) -> float:
        """Return the width of a column, mm."""
        fitted = self._fit(column.width)
        if fitted is not None:
            return fitted
        taken = sum(self._fit(other.width) or 0.0 for other in self.table.columns)
        return (self.whole - GUTTER - TICK * self.table.tick - taken) / self._stars

    @staticmethod
    def _em(millimetres: float) -> float:
        return (millimetres - PADDING) / EM


def wide(table: Table, paper: str) -> bool:
    """Return whether a table needs a sheet turned on its side."""
    stars = sum(column.width is None for column in table.columns)
    return _fixed(table) + STAR * stars > MEASURE[paper]


def _fixed(table: Table) -> float:
    return GUTTER + TICK * table.tick + sum(column.width or 0.0 for column in table.columns)


def _numbers(parts: Parts) -> Iterator[Part]:
    """Yield the numbers that stand by themselves in a cell."""
    for part in parts:
        match part:
            case Number():
                yield part
            case Strong(parts=inner) | Soft(parts=inner):
                yield from _numbers(inner)
            case _:
                continue
