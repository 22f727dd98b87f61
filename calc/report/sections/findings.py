"""What a reviewer would remark on, and every check that was made, with what came of it."""

from __future__ import annotations

from calc.account import TITLES, CheckOutcome, Finding, gathered
from calc.report.composer import Sheet, column, place
from calc.report.document import Heading, Own, Paragraph, Parts, Quoted, Row, Soft, Strong

MOST_FINDINGS = 100
"""Rows of findings that are printed; what is said of several components alike is one row."""
MOST_SUBJECTS = 12
"""Components named in one row."""


def compose_findings(sheet: Sheet) -> None:
    """Compose the findings, and the register of checks."""
    _found(sheet)
    _register(sheet)


def _found(sheet: Sheet) -> None:
    sheet.add(Heading(("Findings",)))
    held = gathered(sheet.composer.account.findings)
    if not held:
        sheet.add(Paragraph(("No check has found anything to remark on.",)))
    rows: list[Row] = [
        sheet.row(
            (Own(alike[0].id, "id"),),
            (Soft((TITLES[alike[0].id],)),),
            (Quoted(subjects(alike)),),
            (Quoted(alike[0].text),),
            (place(alike[0].place),),
        )
        for alike in held[:MOST_FINDINGS]
    ]
    columns = (
        column("check", 14),
        column("remark", 30),
        column("subject", 32, edge=True),
        column("found", 80, role="statement"),
        column("file and line", 27, edge=True),
    )
    sheet.table("findings", columns, rows)
    if len(held) > MOST_FINDINGS or any(len(alike) > MOST_SUBJECTS for alike in held):
        said = "Many findings: the first are printed, the results file of this package holds all, one a component."
        sheet.add(Paragraph((said,), "small"))


def subjects(alike: tuple[Finding, ...]) -> str:
    """Return the subjects of findings that say the same: ``pipes.upper-main``, or ``pipes: upper-main, sedge-link``."""
    paths = [finding.subject for finding in alike]
    if len(paths) == 1:
        return paths[0]
    groups: dict[str, list[str]] = {}
    for path in paths[:MOST_SUBJECTS]:
        group, _, rest = path.partition(".")
        groups.setdefault(group, []).append(rest or group)
    told = "; ".join(f"{group}: {', '.join(rows)}" for group, rows in groups.items())
    return f"{told}, …" if len(paths) > MOST_SUBJECTS else told


def _register(sheet: Sheet) -> None:
    sheet.add(Heading(("Checks made by the program",)))
    said = "They look for what a reviewer would remark on. They are not the independent check of this calculation."
    sheet.add(Paragraph((said,), "small"))
    rows = []
    for outcome in sheet.composer.account.checks:
        check = outcome.check
        looked: Parts = (Strong((check.title,)), ": ", check.looks_for)
        if check.refuses:
            looked = (*looked, Soft(("; refused when the inputs are read: ", check.refuses)))
        rows.append(
            sheet.row(
                (Own(check.id, "id"),),
                looked,
                _outcome(sheet, outcome),
                refs=(f"checks.{check.id}.found",) if outcome.found else (),
            )
        )
    columns = (column("check", 14), column("looked for", role="statement"), column("outcome", 50, edge=True))
    sheet.table("checks", columns, rows)


def _outcome(sheet: Sheet, outcome: CheckOutcome) -> Parts:
    check = outcome.check
    made = check.inputs is not None or (check.results is not None and not outcome.unmade)
    told: Parts = ("no defect found by check ", Own(check.id, "id"))
    if outcome.found:
        told = (sheet.composer.number(f"checks.{check.id}.found"), " found")
    elif not made and check.refuses:
        told = ("none: refused when the inputs are read",)
    elif not made:
        return ("not made: ", outcome.unmade)
    return (*told, "; not looked for in results: ", outcome.unmade) if made and outcome.unmade else told
