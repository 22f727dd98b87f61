"""Tables: comma-separated rows that read like a mapping of ids to fields."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, NamedTuple

from calc.marks import Mark
from calc.problems import Problem
from calc.yamlfile.collector import without_collector
from calc.yamlfile.node import Entry, Mapping, Scalar
from calc.yamlfile.source import MOST_PROBLEMS, SourceFile, decode, fetch, too_many
from calc.yamlfile.wording import shown

if TYPE_CHECKING:
    from pathlib import Path

_HEADING = re.compile(r"([^\[\]]+)(?:\[([^\[\]]*)\])?")
MOST_COLUMNS = 100
_NUMBER = re.compile(r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?", re.ASCII)
_GAPPED = re.compile(r"[+-]?[0-9]+(?:[ ,'_][0-9]+)+(?:\.[0-9]+)?", re.ASCII)
_GAPS = "write the digits of a number without gaps, and a point before its decimals"
_CELL = re.compile(r'([ \t]*+)(?:"([^"]*+(?:""[^"]*+)*+)"[ \t]*+|([^",]*+))(,|\Z)')


class _Cell(NamedTuple):
    """One cell: its text without surrounding blanks and the column of its first character."""

    text: str
    column: int
    quoted: bool


class _Column(NamedTuple):
    """One column: its field name as a key, and the unit of its numbers."""

    key: Scalar
    unit: str


@dataclass(frozen=True, slots=True)
class Table:
    """A table that was read.

    Attributes
    ----------
    rows : Mapping
        Ids with mappings of fields. A cell under a header with a unit reads ``384.4 mm``; its mark is the
        cell's. An empty cell is a field left out; one that is no number stands as written.
    problems : list of Problem
        Sorted by place.
    file : SourceFile or None
        The bytes read; None when there are none.
    text : str
        The decoded text, so that a line at fault can be shown.
    """

    rows: Mapping
    problems: list[Problem]
    file: SourceFile | None
    text: str


def read_table(folder: Path, name: Scalar, path: str = "") -> Table:
    """Read a table of components.

    Parameters
    ----------
    folder : Path
        The project folder, which the file may not leave.
    name : Scalar
        File name as the project gives it; not trusted.
    path : str
        What the table stands for, such as ``pipes``; begins the path of each problem.

    Returns
    -------
    Table
        With every problem of the file; never an exception.
    """
    file = fetch(folder, name.text, name.mark, path)
    if isinstance(file, Problem):
        return Table(Mapping((), name.mark), [file], None, "")
    text, problems = decode(name.text, file.content)
    reading = _Reading(name.text, path, problems)
    with without_collector():
        rows = Mapping((), Mark(name.text, 1, 1)) if problems else reading.read(text.splitlines())
    return Table(rows, sorted(reading.problems), file, text)


def _split(line: str) -> list[_Cell] | None:
    """Return the cells of a line, or None when a quote is not closed."""
    cells: list[_Cell] = []
    if '"' not in line:
        column = 1
        for raw in line.split(","):
            text = raw.lstrip(" \t")
            cells.append(_Cell(text.rstrip(" \t"), column + len(raw) - len(text), quoted=False))
            column += len(raw) + 1
        return cells
    place, more = 0, True
    while more:
        match = _CELL.match(line, place)
        if match is None:
            return None
        blanks, inside, plain, end = match.groups()
        text = plain.rstrip(" \t") if inside is None else inside.replace('""', '"')
        cells.append(_Cell(text, place + len(blanks) + 1, inside is not None))
        place, more = match.end(), end == ","
    return cells


class _Reading:
    """The reading of one table: its problems, its columns and the ids seen."""

    def __init__(self, name: str, path: str, problems: list[Problem]) -> None:
        self.name = name
        self.path = path
        self.problems = problems
        self.columns: list[_Column] = []
        self.id_at = -1

    def report(self, mark: Mark, code: str, words: tuple[str, str, str], *names: str) -> None:
        """Add a problem; ``words`` are found, expected and hint."""
        path = ".".join(shown(part) for part in (self.path, *names) if part)
        self.problems.append(Problem(mark, code, path, *words))

    def read(self, lines: list[str]) -> Mapping:
        """Return the rows of a table whose first line with content is the header."""
        numbered = [(number, line) for number, line in enumerate(lines, 1) if line.strip(" \t")]
        if not numbered:
            words = ("the table is empty", "a header row of field names", "")
            self.report(Mark(self.name, 1, 1), "empty-table", words)
            return Mapping((), Mark(self.name, 1, 1))
        number, header = numbered[0]
        mark = Mark(self.name, number, 1, len(header))
        entries: dict[str, Entry] = {}
        if self.read_header(header, number):
            for number, line in numbered[1:]:
                self.read_row(line, number, entries)
                if len(self.problems) >= MOST_PROBLEMS:
                    self.problems.append(too_many(Mark(self.name, number, 1)))
                    break
        return Mapping(tuple(entries.values()), mark)

    def read_header(self, line: str, number: int) -> bool:
        """Read the field names; return whether rows can be read under them."""
        cells = _split(line)
        whole = Mark(self.name, number, 1, len(line))
        if cells is None:
            self.report(whole, "open-quote", ("a quote is not closed in this line", "closed quotes", ""))
            return False
        if len(cells) == 1 and (";" in line or "\t" in line):
            words = ("the columns are not divided by commas", "commas", "save the table with ',' as divider")
            self.report(whole, "table-divider", words)
            return False
        if len(cells) > MOST_COLUMNS:
            words = (f"{len(cells)} columns", f"at most {MOST_COLUMNS}", "")
            self.report(Mark(self.name, number, 1), "too-large", words)
            return False
        sound = all([self.read_heading(cell, number) for cell in cells])  # noqa: C419 - every problem, not the first
        if sound and self.id_at < 0:
            self.report(whole, "no-id-column", ("no column is headed 'id'", "a column 'id'", ""))
        return sound and self.id_at >= 0

    def read_heading(self, cell: _Cell, number: int) -> bool:
        """Read one field name with its unit; return whether it is sound."""
        mark = Mark(self.name, number, cell.column, len(cell.text) or 1)
        match = _HEADING.fullmatch(cell.text)
        if match is None or not match[1].strip():
            words = (
                f"the heading '{shown(cell.text)}'",
                "a field name, alone or with its unit: 'bore [mm]'",
                "",
            )
            self.report(mark, "bad-heading", words)
            return False
        field, unit = match[1].strip(), (match[2] or "").strip()
        if field == "id" and unit not in ("", "-"):
            self.report(mark, "bad-heading", (f"the heading '{shown(cell.text)}'", "'id' alone: it has no unit", ""))
            return False
        for column in self.columns:
            if column.key.text == field:
                words = (
                    f"a second column '{shown(field)}', first at {column.key.mark}",
                    "each field once",
                    "",
                )
                self.report(mark, "duplicate-heading", words)
                return False
        if field == "id":
            self.id_at = len(self.columns)
        self.columns.append(_Column(Scalar(field, mark), "" if unit == "-" else unit))
        return True

    def read_row(self, line: str, number: int, entries: dict[str, Entry]) -> None:
        """Read one component."""
        cells = _split(line)
        whole = Mark(self.name, number, 1, len(line))
        if cells is None:
            self.report(whole, "open-quote", ("a quote is not closed in this line", "closed quotes", ""))
            return
        if len(cells) != len(self.columns):
            words = (f"{len(cells)} cells in this row", f"{len(self.columns)}, as the header has", "")
            self.report(whole, "ragged-row", words)
            return
        id_cell = cells[self.id_at]
        key = Scalar(id_cell.text, Mark(self.name, number, id_cell.column, len(id_cell.text) or 1), id_cell.quoted)
        if not key.text:
            self.report(key.mark, "missing-id", ("no id in this row", "an id", ""))
        elif key.text in entries:
            words = (
                f"the id '{shown(key.text)}' stands twice, first at {entries[key.text].key.mark}",
                "each id once",
                "",
            )
            self.report(key.mark, "duplicate-id", words, key.text)
        else:
            entries[key.text] = Entry(key, self.read_fields(cells, number, key))

    def read_fields(self, cells: list[_Cell], number: int, key: Scalar) -> Mapping:
        """Return the fields of one row, without its id and its empty cells."""
        fields: list[Entry] = []
        for column, cell in zip(self.columns, cells, strict=True):
            if not cell.text or column.key.text == "id":
                continue
            mark = Mark(self.name, number, cell.column, len(cell.text) + 2 * cell.quoted)
            text = cell.text
            if column.unit:
                if _NUMBER.fullmatch(text) is None:
                    heading = f"'{shown(column.key.text)} [{shown(column.unit)}]'"
                    words = (
                        f"'{shown(text)}' stands under {heading}",
                        "a number alone",
                        _GAPS if _GAPPED.fullmatch(text) else "the unit stands in the header",
                    )
                    self.report(mark, "not-a-number", words, key.text, column.key.text)
                else:
                    text = f"{text} {column.unit}"
            fields.append(Entry(column.key, Scalar(text, mark, cell.quoted)))
        return Mapping(tuple(fields), Mark(self.name, number, 1))
