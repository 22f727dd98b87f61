"""One section for each case: how it was solved, one derivation worked, tables of the rest, and its checks."""

from __future__ import annotations

from calc.account import CaseAccount
from calc.report.composer import Composer, Sheet, column, place
from calc.report.document import Heading, Paragraph, Parts, Quoted, Strong
from calc.report.sections.balances import add_balances
from calc.report.sections.convergence import add_convergence
from calc.report.sections.results import add_derivation, add_tables


def compose_cases(composer: Composer) -> None:
    """Compose the sections of all cases."""
    for case in composer.account.cases.values():
        _compose_case(composer, case)


def _changes(sheet: Sheet, case: CaseAccount) -> None:
    """Say in what a case differs from the inputs as stated, or from the case it builds upon."""
    stated = sheet.composer.account.project.cases[case.id]
    if not stated.lines:
        return
    before: Parts = ("the inputs as stated",) if stated.after in ("", "base") else ("case ", Quoted(stated.after))
    sheet.add(Heading(("What differs from ", *before)))
    columns = (
        column("input", role="statement"),
        column("", 26, edge=True),
        column("as written", 34, align="right"),
        column("file and line", 34, edge=True),
    )
    rows = [
        sheet.row(
            (Quoted(line.path),),
            ("multiplied by" if line.how == "times" else "set to",),
            (Quoted(line.stated.written),),
            (place(line.mark.place),),
        )
        for line in stated.lines
    ]
    sheet.table(f"changes-{case.id}", columns, rows)


def _compose_case(composer: Composer, case: CaseAccount) -> None:
    sheet = composer.begin(f"case-{case.id}", f"Case {case.id}", Quoted(case.title))
    if not case.solution.converged:
        reason = (Strong(("No solution: ", Quoted(case.solution.reason), "."), bar=True),)
        sheet.add(Paragraph((*reason, " The history of the attempt follows; there are no results.")))
    _changes(sheet, case)
    add_convergence(sheet, case)
    if case.columns is not None:
        add_derivation(sheet, case)
        add_tables(sheet, case)
        add_balances(sheet, case)
    sheet.close()
