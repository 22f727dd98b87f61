"""Tables: what a template prints of one, its widths, heads and cells."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from markupsafe import Markup, escape

from calc.problems import Unresolved
from calc.publish.columns import GUTTER, PADDING, TEXT, TICK
from calc.publish.markup import hidden
from calc.publish.parts import Writer
from calc.report.document import Formula, Number, Part, Parts, Row, Soft, Strong, Table, TableColumn

LETTERS = "abcdefghjkmnopqrstuvwxyz"
ROLES = {"value": "val", "unit": "un", "from": "fr", "into": "to", "statement": "st", "": ""}
ALIGN = {"left": "", "right": "r", "centre": "c"}
UNSEEN = {"unit": "unit", "statement": "statement", "from": "from", "into": "into"}
"""Heads of columns that have none to be seen, for a reader who cannot see the table."""
FEW = 9
"""Rows up to which a table is never divided between sheets."""
TONES = {"", "group", "sum", "proved", "flag"}


@dataclass(frozen=True, slots=True)
class Cell:
    """One cell as printed: its classes, its content and how many columns it spans."""

    manner: Markup
    content: Markup
    span: Markup


@dataclass(frozen=True)
class Sheet:
    """A table as it will stand on a sheet, with the width of each column in mm."""

    table: Table
    widths: tuple[float, ...]
    writer: Writer
    dense: bool = False

    @property
    def columns(self) -> Markup:
        """The column widths as elements."""
        said = [GUTTER, *self.widths, *[TICK] * self.table.tick]
        cols = [Markup('<col style="width:{}mm">').format(f"{wide:.2f}") for wide in said]
        return Markup("<colgroup>{}</colgroup>").format(Markup().join(cols))

    @property
    def manner(self) -> Markup:
        """Classes of the table."""
        sort = "worked" if self.formulas else "rows"
        return escape(f"t ledger {self.table.key} {sort}{' dense' if self.dense else ''}")

    @property
    def formulas(self) -> bool:
        """Whether formulas stand in it, whose rows are tall."""
        parts = (part for row in self.table.rows for cell in row.cells for part in cell)
        return any(isinstance(part, Formula) for part in parts)

    @property
    def short(self) -> bool:
        """Whether the table is kept on one sheet."""
        return len(self.table.rows) <= FEW and not self.formulas

    @property
    def letters(self) -> list[Markup]:
        """A letter for each column, so that a cell can be cited; i and l are left out."""
        if len(self.table.columns) > len(LETTERS):
            raise Unresolved(f"table {self.table.key}: more columns than letters")
        return [escape(letter) for letter, _ in zip(LETTERS, self.table.columns, strict=False)]

    @property
    def span(self) -> Markup:
        """The count of its columns."""
        return escape(str(len(self.table.columns)))

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
            If no such tone exists.
        """
        columns = self.table.columns
        if row.tone not in TONES:
            raise Unresolved(f"table {self.table.key}, {row.address}: no tone is called '{row.tone}'")
        if len(row.cells) == 1 and len(columns) > 1:
            span = Markup(' colspan="{}"').format(str(len(columns)))
            content = self.writer.said(row.cells[0], self._em(sum(self.widths)))
            yield Cell(Markup("st"), content, span)
            return
        for column, parts, wide in zip(columns, row.placed[0], self.widths, strict=True):
            content = self.writer.said(parts, self._em(wide), column.unit or None)
            summed = row.tone in ("sum", "proved") and any(_numbers(parts))
            ruled = " dbl" if summed and row.tone == "proved" else " one" if summed else ""
            yield Cell(self._classes(column) + Markup(ruled), content, Markup())

    def below(self, row: Row) -> Markup:
        """Return the formulas of a row that stand beneath its cells, across all columns."""
        return self.writer.said(row.placed[1], self._em(sum(self.widths)))

    def _classes(self, column: TableColumn) -> Markup:
        if column.role not in ROLES:
            raise Unresolved(f"table {self.table.key}: a column may not have the role '{column.role}'")
        said = [ROLES[column.role], ALIGN[column.align], "edge" if column.edge else ""]
        return escape(" ".join(word for word in said if word))

    @staticmethod
    def _em(millimetres: float) -> float:
        return (millimetres - PADDING) / TEXT


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
