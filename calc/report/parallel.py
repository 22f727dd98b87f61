"""Parallel columns: the numbers of a table once more, in the other system of units.

A column of values gets a column beside it; where their unit stands in a column of its own, the values before it are
repeated behind it with theirs. Numbers without a unit, or with the same unit in both, are not repeated.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace

from calc.ledger import Ledger
from calc.report.display import FIELD_OF, FINE, FULL, Display
from calc.report.document import Number, Part, Parts, Row, Soft, Strong, TableColumn, named_unit
from calc.report.numbers import Format, written

NONE: Parts = ("",)


class Parallel:
    """Widens tables by columns in another display."""

    def __init__(self, ledger: Ledger, display: Display, other: Display) -> None:
        self.ledger, self.display, self.other = ledger, display, other

    def widened(
        self, columns: Sequence[TableColumn], rows: Sequence[Row], without: Iterable[str] = ()
    ) -> tuple[tuple[TableColumn, ...], tuple[Row, ...]]:
        """Return a table with its parallel columns; heads ``without`` are not repeated."""
        kept = [k for k, one in enumerate(columns) if one.role == "value" and not {*one.head} & {*without}]
        after: dict[int, list[int]] = {}
        alone = all(one.role != "unit" for one in columns)
        waiting: list[int] = []
        for k, one in enumerate(columns):
            if k in kept and self._changes(rows, k):
                if one.unit or alone:
                    after[k] = [k]
                else:
                    waiting.append(k)
            elif one.role == "unit" and waiting:
                after[k], waiting = [*waiting, k], []
        heads = [head for k, one in enumerate(columns) for head in (one, *self._heads(columns, rows, after.get(k, ())))]
        wide = [row if len(row.cells) == 1 < len(columns) else self._row(row, after) for row in rows]
        return tuple(heads), tuple(wide)

    def _changes(self, rows: Iterable[Row], k: int) -> bool:
        return any(self._beside(number) for row in rows if len(row.cells) > 1 for number in _numbers(row.cells[k]))

    def _heads(self, columns: Sequence[TableColumn], rows: Sequence[Row], repeated: Sequence[int]) -> list[TableColumn]:
        heads = []
        for k in repeated:
            units = [number.form.unit for row in rows for number in self._all_beside(row, k)]
            edge = columns[k].edge if len(repeated) == 1 else k == repeated[0]
            unit = units[0] if columns[k].unit and units else ""
            heads.append(replace(columns[k], unit=unit, edge=edge))
        return heads

    def _all_beside(self, row: Row, k: int) -> list[Number]:
        numbers = _numbers(row.cells[k]) if len(row.cells) > 1 else []
        return [found for number in numbers if (found := self._beside(number))]

    def _row(self, row: Row, after: dict[int, list[int]]) -> Row:
        cells: list[Parts] = []
        for k, cell in enumerate(row.cells):
            cells.append(cell)
            repeated = after.get(k, [])
            units = {number.form.unit for j in repeated for number in self._all_beside(row, j)}
            for j in repeated:
                if j == k and len(repeated) > 1:
                    cells.append((named_unit(units.pop()),) if units else NONE)
                else:
                    cells.append(self._cell(row.cells[j]))
        return replace(row, cells=tuple(cells))

    def _cell(self, cell: Parts) -> Parts:
        if not _numbers(cell):
            return cell if cell == ("–",) else NONE
        held = [self._part(part) for part in cell]
        return tuple(part for part in held if part is not None) or NONE

    def _part(self, part: Part) -> Part | None:
        match part:
            case Number():
                return self._beside(part)
            case Strong(parts=inner) | Soft(parts=inner):
                held = tuple(found for one in inner if (found := self._part(one)) is not None)
                return replace(part, parts=held) if held else None
            case _:
                return part

    def _beside(self, number: Number) -> Number | None:
        """Return a number in the other display; None where it would not differ."""
        spot = self.ledger.spot(number.ref)
        field = FIELD_OF.get(spot.column.kind)
        if field is None or self.other.unit(field) == number.form.unit:
            return None
        form = self._form(number.form, field)
        return Number(number.ref, form, written(spot.value, spot.column.kind, form), number.with_unit)

    def _form(self, form: Format, field: str) -> Format:
        fine = FULL if field == "flow" else FINE
        bound = self.other.form(field, fine, residual=True).bound if form.bound is not None else None
        usual = self.display.form(field)
        if form.decimals is None or usual.decimals is None:
            return replace(form, unit=self.other.unit(field), bound=bound)
        return replace(self.other.form(field, form.decimals - usual.decimals, form.sign), bound=bound)


def _numbers(cell: Parts) -> list[Number]:
    found: list[Number] = []
    for part in cell:
        match part:
            case Number():
                found.append(part)
            case Strong(parts=inner) | Soft(parts=inner):
                found += _numbers(inner)
            case _:
                continue
    return found
