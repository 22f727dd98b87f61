"""Inputs: one line a value, with its source, grade and place."""

from __future__ import annotations

from calc.account import WITHOUT_SOURCE, following
from calc.ledger import Column, Converted, Given, Library, Spot
from calc.report.composer import Composer, Sheet, column, place
from calc.report.derivation import COLUMNS as WORKED
from calc.report.derivation import lines
from calc.report.document import Cite, Heading, Number, Paragraph, Part, Parts, Quoted, Row, Soft, Strong, TableColumn
from calc.report.formats import quantity_words, shortest
from calc.report.numbers import shown, written
from calc.report.sections.results import kind_of_fitting
from calc.report.sections.shipped import INTO_WIDTH, MOST_NAMED, add_shipped
from calc.report.selection import shown_inputs

GRADES = ("surveyed", "drawing", "manufacturer", "measured", "standard", "assumed")
FIGURES, CONVERTED_FIGURES = 10, 8


def compose_inputs(composer: Composer) -> None:
    """Compose the list of inputs."""
    units = UNITS[composer.display.system]
    lead = f"Each given number as written and {units}: who gave it, how far it is trusted, and where it stands."
    sheet = composer.begin("inputs", "Inputs", lead)
    columns = _columns(units)
    given = [
        c
        for c in composer.ledger.columns
        if isinstance(c.origin, Given | Converted | Library) and c.group != "verification"
    ]
    users = [c for c in given if not isinstance(c.origin, Library)]
    for case in composer.account.project.cases:
        rows = _rows(sheet, [c for c in users if c.case == case or (case == "base" and not c.case)])
        if rows:
            sheet.add(Heading(("As stated",) if case == "base" else ("Changed by case ", Quoted(case))))
            sheet.table("inputs", columns, rows)
        followed = [
            row
            for spot in _followed(sheet, case)
            for row in lines(sheet, spot, Quoted(spot.column.rows[spot.row]), ": ")
        ]
        sheet.table(f"followed-{case}", WORKED, followed)
    add_shipped(sheet, [c for c in given if isinstance(c.origin, Library)], units)
    if shown_inputs(composer.account) is not None:
        said = "Of pipes and junctions, those are listed whose results are printed; the rest stand in the input files "
        sheet.add(Paragraph((said + "with their lines, and in the ledger file of this package.",), "small"))
    sheet.add(
        Paragraph(
            ("Grades: surveyed, drawing, manufacturer, measured, standard, assumed; – where none is given.",),
            "small",
        )
    )
    sheet.close()


UNITS = {"SI": "in SI", "US": "in US units"}
"""What the coherent units of a system are called."""


def _columns(units: str) -> tuple[TableColumn, ...]:
    return (
        column("given", 26, role="statement"),
        column("as written", 14, edge=True, align="right"),
        column(units, 12, align="right", role="value"),
        column("", 4, role="unit"),
        column("source, page, grade, note", 34, edge=True),
        column("file and line", 30),
        TableColumn(("into",), width=INTO_WIDTH, role="into"),
    )


def _rows(sheet: Sheet, columns: list[Column]) -> list[Row]:
    """Return rows gathered by component, in the order of the groups; what one line sets for several is one row."""
    together = _together(sheet, columns)
    by_component: dict[tuple[str, str], list[list[Spot]]] = {}
    for spots in together:
        column, name = spots[0].column, spots[0].column.rows[spots[0].row]
        by_component.setdefault((column.group, name if len(spots) == 1 else ""), []).append(spots)
    ordered = sorted(by_component, key=lambda key: ORDER.index(key[0]) if key[0] in ORDER else len(ORDER))
    rows: list[Row] = []
    standing = ""
    for group, name in ordered:
        gathered = group in GATHERED
        if not gathered or group != standing:
            rows.append(sheet.group(group, *((" ", Quoted(name)) if name and not gathered else ())))
        standing = group
        rows += [_row(sheet, spots, named=gathered) for spots in by_component[group, name]]
    return rows


def _together(sheet: Sheet, columns: list[Column]) -> list[list[Spot]]:
    """Return the numbers of inputs, those together that one place of a file gives to several components."""
    shown = shown_inputs(sheet.composer.account)
    found: dict[tuple[object, ...], list[Spot]] = {}
    for one in columns:
        origin = one.origin
        if not isinstance(origin, Given | Converted):
            continue
        for row, name in enumerate(one.rows):
            if shown is not None and one.group in LARGE and name.partition("/")[0] not in shown:
                continue
            alone = (name,) if one.group in GATHERED else ()
            key = (one.name, origin.marks[row].place, float(one.values[row]), *alone)
            found.setdefault(key, []).append(Spot(one, row))
    return list(found.values())


def _followed(sheet: Sheet, case: str) -> list[Spot]:
    """Return what follows from the inputs of components in a case: factors, withdrawals, bores, coefficients."""
    shown = shown_inputs(sheet.composer.account)
    return [
        Spot(one, row)
        for one in following(sheet.composer.ledger.columns, case)
        for row, name in enumerate(one.rows)
        if (shown is None or name.partition("/")[0] in shown)
    ]


LARGE = ("pipes", "junctions", "fittings")
"""Groups of which only a part is printed where they are large."""

GATHERED = ("fittings", "criteria")
"""Groups whose components are small, listed under one heading."""

ORDER = ("reservoirs", "junctions", "pipes", "fittings", "fluid", "site", "constants", "solver", "criteria")


def _row(sheet: Sheet, spots: list[Spot], *, named: bool) -> Row:
    spot, refs = spots[0], tuple(one.id for one in spots)
    origin = spot.column.origin
    if not isinstance(origin, Given | Converted):
        raise TypeError(f"{spot.id} is no input")
    kind = spot.column.kind
    unit = sheet.composer.display.coherent(kind)
    figures = FIGURES if isinstance(origin, Given) and unit == kind.unit else CONVERTED_FIGURES
    form = shortest(shown(spot.value, kind, unit), unit, figures)
    number = Number(spot.id, form, written(spot.value, kind, form))
    basis = origin.bases[spot.row]
    said: Parts = (Quoted(basis),) if basis else (Strong(("no source",), bar=True),)
    if not basis and spot.column.quantity in WITHOUT_SOURCE:
        said = ("–",)
    if basis in GRADES:
        said = (Strong(("no source",), bar=True), Soft((", ", Quoted(basis))))
    return sheet.row(
        (*_named(sheet, spot, named=named), quantity_words(spot.column.quantity), *_all(sheet, spots)),
        (Quoted(origin.written[spot.row]),),
        (number,),
        (unit,),
        said,
        (place(origin.marks[spot.row].place.removeprefix("calc/")),),
        (Cite(refs, into=True),),
        refs=refs,
    )


def _all(sheet: Sheet, spots: list[Spot]) -> Parts:
    """Say which components a row stands for, where there are several."""
    if len(spots) == 1:
        return ()
    names = [one.column.rows[one.row] for one in spots]
    if set(names) >= set(sheet.composer.account.project.group(spots[0].column.group)):
        return (" of each",)
    parts: list[Part] = [": "]
    for name in names[:MOST_NAMED]:
        parts += [Quoted(name), ", "]
    return (*parts[:-1], *((" and others",) if len(names) > MOST_NAMED else ()))


def _named(sheet: Sheet, spot: Spot, *, named: bool) -> Parts:
    """Return the id of a small component before its quantity, with the kind of a fitting."""
    if not named:
        return ()
    row = spot.column.rows[spot.row]
    kind = kind_of_fitting(sheet.composer, row) if spot.column.group == "fittings" else ""
    return (Quoted(row), *((" ", Quoted(kind)) if kind else ()), ", ")
