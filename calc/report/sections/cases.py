"""One section for each case: how it was solved, one derivation worked, tables of the rest, and its checks."""

from __future__ import annotations

from calc.account import CaseAccount
from calc.report.composer import Composer
from calc.report.document import Paragraph, Quoted, Strong
from calc.report.sections.balances import add_balances
from calc.report.sections.convergence import add_convergence
from calc.report.sections.results import add_derivation, add_tables


def compose_cases(composer: Composer) -> None:
    """Compose the sections of all cases."""
    for case in composer.account.cases.values():
        _compose_case(composer, case)


def _compose_case(composer: Composer, case: CaseAccount) -> None:
    sheet = composer.begin(f"case-{case.id}", f"Case {case.id}", Quoted(case.title))
    if not case.solution.converged:
        reason = (Strong(("No solution: ", Quoted(case.solution.reason), "."), bar=True),)
        sheet.add(Paragraph((*reason, " The history of the attempt follows; there are no results.")))
    add_convergence(sheet, case)
    if case.columns is not None:
        add_derivation(sheet, case)
        add_tables(sheet, case)
        add_balances(sheet, case)
    sheet.close()
