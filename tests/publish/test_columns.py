"""Column widths: what is asked, unless a number or a word would not fit."""

from __future__ import annotations

import pytest
import sample

from calc.publish.columns import GUTTER, LONG, LONGEST, MEASURE, PADDING, TICK, TURNED, widths
from calc.publish.faces import small_capitals, width
from calc.report.document import Number, Quoted, Row, Table, TableColumn
from calc.report.numbers import Format

DOCUMENT = sample.document()


def table(*columns: TableColumn, cells: tuple[object, ...], rows: int = 1) -> Table:
    line = tuple((cell,) for cell in cells)
    return Table("t", columns, tuple(Row(f"1.{k}", line) for k in range(1, rows + 1)))  # type: ignore[arg-type]


def number(text: str) -> Number:
    return Number("a.b.c", Format("m", decimals=2), text, with_unit=True)


@pytest.mark.parametrize("paper", sorted(MEASURE))
def test_columns_fill_the_sheet(paper: str) -> None:
    columns = (TableColumn(("what",)), TableColumn(("value",), width=30))
    found = widths(table(*columns, cells=("word", number("1.00"))), DOCUMENT)
    got = found.on(MEASURE[paper])
    assert sum(got) == pytest.approx(MEASURE[paper] - GUTTER - TICK)
    assert got[1] == pytest.approx(30)
    assert not found.turned(paper)


def test_a_long_number_widens_its_column() -> None:
    text = "−123 456 789.123456"
    columns = (TableColumn(("what",)), TableColumn(("value",), width=10))
    got = widths(table(*columns, cells=("word", number(text))), DOCUMENT).on(176.0)
    # text of 9.5 pt, one point being 25.4/72 mm
    assert got[1] >= width(text + " m") * 9.5 * 25.4 / 72 + PADDING - 0.5


def test_a_word_of_usual_length_is_not_broken_and_a_longer_one_may_be() -> None:
    columns = (TableColumn(("what",)), TableColumn(("grade",), width=5))
    usual = widths(table(*columns, cells=("word", Quoted("manufacturer"))), DOCUMENT).on(176.0)[1]
    longer = widths(table(*columns, cells=("word", Quoted("m" * 200))), DOCUMENT).needed[1]
    assert usual >= width("manufacturer") * 9.5 * 25.4 / 72 + PADDING - 0.01
    assert longer == pytest.approx(LONGEST + PADDING)


def test_room_goes_to_what_would_be_broken_before_it_goes_to_what_is_asked() -> None:
    columns = (TableColumn(("what",)), TableColumn(("note",), width=20), TableColumn(("value",), width=90))
    note = "a note of several words that fills one line"
    got = widths(table(*columns, cells=("word", Quoted(note), number("1.00"))), DOCUMENT).on(176.0)
    assert got[1] >= width(note) * 9.5 * 25.4 / 72
    assert got[2] < 90


def test_a_quantity_as_written_is_not_broken() -> None:
    columns = (TableColumn(("what",)), TableColumn(("as written",), width=5))
    needed = widths(table(*columns, cells=("word", Quoted("9.80665 m/s²"))), DOCUMENT).needed[1]
    assert needed >= width("9.80665 m/s²") * 9.5 * 25.4 / 72 + PADDING - 0.01


def test_a_long_table_is_set_dense_rather_than_with_broken_cells() -> None:
    columns = tuple(TableColumn(("words",)) for _ in range(6))
    cells = (Quoted("some words that take a line"),) * 6
    assert not widths(table(*columns, cells=cells), DOCUMENT).dense
    assert widths(table(*columns, cells=cells, rows=LONG + 1), DOCUMENT).dense
    assert widths(table(*columns, cells=cells), DOCUMENT, close=True).dense


def test_heads_in_small_capitals_are_measured_as_such() -> None:
    assert width("imbalance") < small_capitals("imbalance") < width("IMBALANCE")


def test_a_table_becomes_dense_before_its_sheet_is_turned() -> None:
    def of(count: int) -> object:
        columns = tuple(TableColumn(("value",), width=5) for _ in range(count))
        return widths(table(*columns, cells=(number("1234.567"),) * count), DOCUMENT)

    seen = [(found.dense, found.turned("A4")) for count in range(2, 15) if (found := of(count))]  # type: ignore[attr-defined]
    assert seen == sorted(seen, key=lambda pair: (pair[1], pair[0]))
    assert set(seen) == {(False, False), (True, False), (False, True)}


def test_what_fits_no_sheet_gives_way_alike() -> None:
    columns = tuple(TableColumn(("value",), width=40) for _ in range(40))
    got = widths(table(*columns, cells=(number("1234.567"),) * 40), DOCUMENT).on(TURNED["A4"])
    assert sum(got) == pytest.approx(TURNED["A4"] - GUTTER - TICK)
    assert max(got) == pytest.approx(min(got))
