"""Pipes by empirical laws beside Darcy–Weisbach: the factor that would give the same loss."""

from __future__ import annotations

from calc.account import CaseAccount
from calc.components.pipe import LAW_CONSTANTS, LAW_INPUT
from calc.components.pipe import SCHEMA as PIPE
from calc.ledger import Spot
from calc.report.composer import NOTHING, Sheet, column, figure_column, name
from calc.report.document import Heading, Paragraph, Parts, Row
from calc.report.selection import shown_pipes

QUANTITIES = ("velocity", "reynolds", "friction_loss", "equivalent_f")


def add_empirical(sheet: Sheet, case: CaseAccount) -> None:
    """Add a table of the pipes that follow an empirical law, where there are any."""
    composer = sheet.composer
    rows = [row for pipe in shown_pipes(case) if (row := _row(sheet, case, pipe)) is not None]
    if not rows:
        return
    columns = (
        column("pipe", role="statement"),
        column("by", 30, edge=True),
        figure_column("of the pipe", width=19.5),
        figure_column("velocity", composer.unit("velocity"), 19.5, edge=True),
        figure_column("Reynolds", width=20),
        figure_column("friction", composer.unit("head"), 19.5),
        figure_column("Darcy f, same loss", width=26, edge=True),
    )
    sheet.add(Heading(("Empirical laws beside Darcy–Weisbach",)))
    sheet.results(f"empirical-{case.id}", columns, rows)
    said = (
        "These laws know neither viscosity nor Darcy f, and are applied at every Reynolds number. The last column is "
        "the factor by which Darcy–Weisbach would give the same loss."
    )
    sheet.add(Paragraph((said,), "small"))


def _row(sheet: Sheet, case: CaseAccount, pipe: str) -> Row | None:
    """Return the row of a pipe; None where it is shut or its law knows Darcy f."""
    if case.columns is None or pipe not in case.columns.running:
        return None
    terms, at = case.columns.terms, case.columns.running.index(pipe)
    law = terms.law.word(at)
    if law not in LAW_CONSTANTS:
        return None
    needed = LAW_INPUT[law]
    words = next(field.words for field in PIPE.fields if field.name == needed)
    held = getattr(terms, needed).spot(at)
    results = (_here(sheet, case, pipe, quantity) for quantity in QUANTITIES)
    cells: list[Parts] = [(name(pipe),), (words,)]
    refs = []
    for spot in (Spot(*held), *results):
        cells.append((sheet.composer.number(spot) if spot else NOTHING,))
        refs += [spot.id] if spot else []
    return sheet.row(*cells, refs=refs)


def _here(sheet: Sheet, case: CaseAccount, pipe: str, quantity: str) -> Spot | None:
    """Return a result of the pipe in the case, None where its law defines none."""
    for one in sheet.composer.ledger.find(f"pipes.{quantity}", case.id):
        if one.case == case.id and pipe in one.index:
            return Spot(one, one.index[pipe])
    return None
