"""The schedule of pipes: ends, sizes and friction of each, in the units of the tables."""

from __future__ import annotations

from calc.account import CaseAccount
from calc.components.pipe import LAW_INPUT
from calc.ledger import Spot
from calc.report.composer import NOTHING, Sheet, column, figure_column, name
from calc.report.document import Heading, Paragraph, Parts, Row
from calc.report.selection import shown_inputs

SIZES = ("length", "bore")


def add_schedule(sheet: Sheet, case: CaseAccount) -> None:
    """Add the pipes as they stand in a case, those whose inputs are printed."""
    composer = sheet.composer
    shown = shown_inputs(composer.account)
    names = [pipe for pipe in composer.account.project.pipes if shown is None or pipe in shown]
    columns = (
        column("pipe", role="statement"),
        column("from", 26, edge=True),
        column("to", 26),
        figure_column("length", composer.unit("length"), 22, edge=True),
        figure_column("bore", composer.unit("bore"), 18),
        figure_column("roughness", composer.unit("roughness"), 22),
        figure_column("f, C or n", width=18),
        column("law", 32, edge=True),
    )
    sheet.add(Heading(("Schedule of pipes",)))
    sheet.results("schedule", columns, [_row(sheet, case, pipe) for pipe in names])
    sheet.add(Paragraph(("What a case changes stands among the inputs.",), "small"))


def _row(sheet: Sheet, case: CaseAccount, pipe: str) -> Row:
    composer = sheet.composer
    record, pipes = composer.account.project.pipes[pipe], case.network.pipes
    law = pipes.law.word(pipes.rows.index(pipe))
    wanted = LAW_INPUT[law]
    fields = (*SIZES, *((wanted, "") if wanted == "roughness" else ("", wanted)))
    cells: list[Parts] = [(name(pipe),), (name(record.text("from")),), (name(record.text("to")),)]
    for field in fields:
        spot = _stated(sheet, case, pipe, field) if field else None
        cells.append((composer.number(spot),) if spot else (NOTHING,))
    return sheet.row(*cells, (law,))


def _stated(sheet: Sheet, case: CaseAccount, pipe: str, field: str) -> Spot | None:
    """Return an input of a pipe in a case, from the nearest case that states it."""
    for one in sheet.composer.ledger.find(f"pipes.{field}", case.id):
        if pipe in one.index:
            return Spot(one, one.index[pipe])
    return None
