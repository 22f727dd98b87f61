"""The schedule of pipes: ends, sizes and friction of each, in the units of the tables."""

from __future__ import annotations

from collections.abc import Iterable

from calc.account import CaseAccount
from calc.components.pipe import LAW_INPUT
from calc.ledger import Spot
from calc.report.composer import NOTHING, Sheet, column, figure_column, name
from calc.report.document import Heading, Paragraph, Parts, Row
from calc.report.formats import shortest
from calc.report.selection import shown_inputs

FIGURES = 6
SIZES, ROUGHNESS = ("length", "bore"), "roughness"


def add_schedule(sheet: Sheet, case: CaseAccount) -> None:
    """Add the pipes as they stand in a case, those whose inputs are printed."""
    composer = sheet.composer
    shown = shown_inputs(composer.account)
    names = [pipe for pipe in composer.account.project.pipes if shown is None or pipe in shown]
    laws = {pipe: case.network.pipes.law.word(case.network.pipes.rows.index(pipe)) for pipe in names}
    rough = [LAW_INPUT[law] == ROUGHNESS for law in laws.values()]
    columns = [
        column("pipe", role="statement"),
        column("from", 26, edge=True),
        column("to", 26),
        figure_column("length", composer.unit("length"), 22, edge=True),
        figure_column("bore", composer.unit("bore"), 18),
        *([figure_column(ROUGHNESS, composer.unit(ROUGHNESS), 22)] if any(rough) else []),
        *([figure_column(_factor_words(laws.values()), width=18)] if not all(rough) else []),
        column("law", 32, edge=True),
    ]
    kinds = [sort for sort in (True, False) if sort in rough]
    sheet.add(Heading(("Schedule of pipes",)))
    sheet.results("schedule", columns, [_row(sheet, case, pipe, law, kinds) for pipe, law in laws.items()])
    sheet.add(Paragraph(("What a case changes stands among the inputs.",), "small"))


def _row(sheet: Sheet, case: CaseAccount, pipe: str, law: str, kinds: list[bool]) -> Row:
    """Return the row of a pipe; ``kinds`` says which columns of friction there are: of roughness, of coefficients."""
    composer, wanted = sheet.composer, LAW_INPUT[law]
    record = composer.account.project.pipes[pipe]
    fields = (*SIZES, *(wanted if (wanted == ROUGHNESS) is sort else "" for sort in kinds))
    cells: list[Parts] = [(name(pipe),), (name(record.text("from")),), (name(record.text("to")),)]
    for field in fields:
        spot = _stated(sheet, case, pipe, field) if field else None
        form = shortest(spot.value, "", FIGURES) if spot and not spot.column.kind.unit else None
        cells.append((composer.number(spot, form),) if spot else (NOTHING,))
    return sheet.row(*cells, (law_words(law),))


FACTORS = {"friction_factor": "Darcy f", "hazen_williams_c": "C", "manning_n": "n"}
"""The heads of the fields of friction that are no roughness."""


def _factor_words(laws: Iterable[str]) -> str:
    """Return the head of a column of factors and coefficients of friction."""
    needed = {LAW_INPUT[law] for law in laws}
    return " or ".join(words for field, words in FACTORS.items() if field in needed)


def laws_of_pipes(case: CaseAccount) -> list[str]:
    """Return the friction law of each pipe in a case."""
    pipes = case.network.pipes
    return [pipes.law.word(k) for k in range(len(pipes.rows))]


def law_words(law: str) -> str:
    """Return the name of a friction law as it is written in text: ``Hazen–Williams``."""
    return "fixed Darcy f" if law == "fixed" else law.title().replace("-", "–")


def _stated(sheet: Sheet, case: CaseAccount, pipe: str, field: str) -> Spot | None:
    """Return an input of a pipe in a case, from the nearest case that states it."""
    for one in sheet.composer.ledger.find(f"pipes.{field}", case.id):
        if pipe in one.index:
            return Spot(one, one.index[pipe])
    return None
