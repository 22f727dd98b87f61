"""Values that ship with the program and are in use: equal ones on one line, and each source told once."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field, replace
from string import ascii_lowercase

from calc.components import SCHEMAS
from calc.ledger import Column, Library, Spot
from calc.report.composer import Composer, Sheet, column, place
from calc.report.conversion import WORTH
from calc.report.derivation import operand
from calc.report.document import Cite, Heading, Number, Own, Part, Parts, Quoted, Row, Soft, TableColumn
from calc.report.formats import quantity_words
from calc.report.sections.results import kind_of_fitting
from calc.report.selection import shown_inputs

FIGURES = 8
MOST_NAMED = 8
"""Components named on a line; the index of ledger ids names all."""
DEFAULTS = "calc/data/defaults.yaml"
FITTINGS, UNITS = "fittings", "units"
INTO_WIDTH = 25.0
GROUPS = (*(schema.group for schema in SCHEMAS), FITTINGS)
"""Groups whose rows are components, of which many may hold one value."""

_TAKEN = re.compile(r"(.+?),? at (\S+):(\d+):\d+; (.+)", re.DOTALL)
_RANGE = re.compile(r"(.+); (range .+)", re.DOTALL)


@dataclass
class Shared:
    """Equal values from one place of a shipped table: the numbers that have it by quantity, and where it was chosen."""

    chosen: str
    source: str
    within: str
    kind: str
    by_quantity: dict[str, list[Spot]] = field(default_factory=dict)
    places: dict[str, list[str]] = field(default_factory=dict)

    def join(self, other: Shared) -> None:
        """Take in the numbers and places of another line."""
        for quantity, spots in other.by_quantity.items():
            standing = self.by_quantity.setdefault(quantity, [])
            standing += [spot for spot in spots if spot not in standing]
        for file, lines in other.places.items():
            self.places[file] = list(dict.fromkeys([*self.places.get(file, []), *lines]))

    @property
    def spots(self) -> list[Spot]:
        """All numbers of the line."""
        return [spot for spots in self.by_quantity.values() for spot in spots]

    @property
    def first(self) -> Spot:
        """The number that is printed for all."""
        return self.spots[0]

    @property
    def mark(self) -> str:
        """The place of the shipped table."""
        origin = self.first.column.origin
        return origin.marks[self.first.row].place if isinstance(origin, Library) else ""

    @property
    def written(self) -> str:
        """The value as it stands in the shipped table."""
        origin = self.first.column.origin
        return origin.written[self.first.row] if isinstance(origin, Library) else ""


def add_shipped(sheet: Sheet, columns: Iterable[Column], units: str) -> None:
    """Add the shipped values in use, and their sources.

    Parameters
    ----------
    sheet : Sheet
    columns : iterable of Column
        Of origin Library.
    units : str
        What the units of worked lines are called.
    """
    groups = gathered(sheet.composer, columns)
    if not groups:
        return
    worths = groups.pop(UNITS, [])
    keys = _keys(dict.fromkeys(shared.source for lines in groups.values() for shared in lines))
    rows: list[Row] = []
    for group, lines in groups.items():
        rows.append(sheet.group(group))
        rows += [_row(sheet, shared, (Own(keys[shared.source], "source"), *_within(shared))) for shared in lines]
    if rows:
        sheet.add(Heading(("Defaults and shipped tables in use",)))
        sheet.table("inputs-shipped", (column("taken", 80, role="statement"), *_columns(units, "source")), rows)
        told = [sheet.row((Own(key, "source"),), (Quoted(source),)) for source, key in keys.items()]
        sheet.table("sources-shipped", (column("source", 14), column("what it is", role="statement")), told)
    if worths:
        sheet.add(Heading(("Units in use",)))
        rows = [_row(sheet, shared, (Quoted(shared.source),)) for shared in worths]
        rows = [replace(row, cells=row.cells[:-1]) for row in rows]  # nothing in the ledger rests on a unit
        sheet.table("inputs-units", (column("one", 18), *_columns(units, "source", 80)[:-1]), rows)


def _columns(units: str, source: str, wide: float = 25) -> tuple[TableColumn, ...]:
    return (
        column("as written", 14, edge=True, align="right"),
        column(units, 12, align="right", role="value"),
        column("", 4, role="unit"),
        column(source, wide, edge=True),
        column("file and line", 30),
        TableColumn(("into",), width=INTO_WIDTH, role="into"),
    )


def _within(shared: Shared) -> Parts:
    """Return the range that the source has for the value, where it has one."""
    return (", ", Quoted(shared.within)) if shared.within else ()


def gathered(composer: Composer, columns: Iterable[Column]) -> dict[str, list[Shared]]:
    """Return the lines of shipped values by group, in the order of the ledger."""
    shown = shown_inputs(composer.account)
    lines: dict[tuple[object, ...], Shared] = {}
    groups: dict[str, list[Shared]] = {}
    for one in columns:
        for row, name in enumerate(one.rows):
            if shown is not None and one.group in GROUPS and name.partition("/")[0] not in shown:
                continue
            key, made = _shared(composer, Spot(one, row))
            if key not in lines:
                lines[key] = made
                groups.setdefault(one.group, []).append(made)
            lines[key].join(made)
    return groups


def _shared(composer: Composer, spot: Spot) -> tuple[tuple[object, ...], Shared]:
    """Return a value as a line of its own, and what it has in common with those that may stand on one line with it."""
    one, origin = spot.column, spot.column.origin
    if not isinstance(origin, Library):
        raise TypeError(f"{spot.id} does not ship with the program")
    name, mark = one.rows[spot.row], origin.marks[spot.row].place
    chosen, file, line, source = divided(origin.bases[spot.row])
    found = _RANGE.fullmatch(source)
    told, within = (found[1], found[2]) if found else (source, "")
    kind = kind_of_fitting(composer, name) if one.group == FITTINGS and not by_default(mark) else ""
    alone = () if one.group in GROUPS else (name, one.quantity)
    key = (one.group, one.case, mark, origin.written[spot.row], spot.value, chosen, kind, *alone)
    return key, Shared(chosen, told, within, kind, {one.quantity: [spot]}, {file: [line]} if file else {})


def by_default(mark: str) -> bool:
    """Return whether a value stands because the inputs are silent."""
    return mark.startswith(DEFAULTS)


def divided(basis: str) -> tuple[str, str, str, str]:
    """Return what a project took by a name, the file and line where it did, and the source; else the source alone."""
    found = _TAKEN.fullmatch(basis)
    return (found[1], found[2], found[3], found[4]) if found else ("", "", "", basis)


def _keys(sources: Iterable[str]) -> dict[str, str]:
    """Return a short key for each source: a letter, or more."""
    keys: dict[str, str] = {}
    for count, source in enumerate(sources):
        more, last = divmod(count, len(ascii_lowercase))
        keys[source] = (ascii_lowercase[more - 1] if more else "") + ascii_lowercase[last]
    return keys


def _row(sheet: Sheet, shared: Shared, source: Parts) -> Row:
    refs = tuple(spot.id for spot in shared.spots)
    number = _number(sheet, shared)
    return sheet.row(
        (*_taken(shared), *_chosen(shared)),
        (Quoted(shared.written),),
        (number,),
        (number.form.unit,),
        source,
        (place(shared.mark.removeprefix("calc/")),),
        (Cite(refs, into=True),),
        refs=refs,
    )


def _number(sheet: Sheet, shared: Shared) -> Number:
    """Return the value in the units of worked lines; what a coherent unit is worth, in SI."""
    spot, kind = shared.first, shared.first.column.kind
    unit = sheet.composer.display.coherent(kind)
    if spot.column.name == WORTH and spot.column.rows[spot.row] == unit:
        unit = kind.unit
    made = operand(spot, unit, FIGURES)
    return Number(made.ref, made.form, made.text)


def _taken(shared: Shared) -> Parts:
    """Say which quantities of which components have the value."""
    spot = shared.first
    row, group = spot.column.rows[spot.row], spot.column.group
    case: tuple[Part, ...] = (", case ", Quoted(spot.column.case)) if spot.column.case not in ("", "base") else ()
    if group == UNITS:
        return (Quoted(row),)
    if group not in GROUPS:
        return (*((Quoted(row), ", ") if row else ()), quantity_words(spot.column.quantity), *case)
    by_rows: dict[tuple[str, ...], list[str]] = {}
    for quantity, spots in shared.by_quantity.items():
        by_rows.setdefault(tuple(one.column.rows[one.row] for one in spots), []).append(quantity_words(quantity))
    if by_default(shared.mark):
        every = ", of all that state none"
        return (" and ".join(word for words in by_rows.values() for word in words), every, *case)
    parts: list[Part] = [Quoted(shared.kind), ", "] if shared.kind else []
    for rows, words in by_rows.items():
        parts += ["; " if rows is not next(iter(by_rows)) else "", " and ".join(words), ": "]
        parts += [part for name in rows[:MOST_NAMED] for part in (Quoted(name), ", ")][:-1]
        parts += [" and others"] if len(rows) > MOST_NAMED else []
    return tuple(part for part in (*parts, *case) if part)


def _chosen(shared: Shared) -> Parts:
    """Say what the project named, and where."""
    if not shared.chosen:
        return ()
    parts: list[Part] = ["; ", Quoted(shared.chosen)]
    for file, lines in shared.places.items():
        parts += [", ", place(f"{file}:{', '.join(lines)}")]
    return (Soft(tuple(parts)),)
