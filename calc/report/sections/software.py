"""The software record, and the blank record of checking."""

from __future__ import annotations

from importlib import metadata

import calc
from calc.report.composer import Composer, Sheet, column, figure_column
from calc.report.document import Heading, Own, Paragraph, Parts, Row, Soft, Strong
from calc.report.numbers import Format
from calc.verification import TITLES, Check

LIBRARIES = ("numpy", "scipy", "pint", "PyYAML", "Jinja2", "weasyprint", "matplotlib", "pikepdf")


def compose_software(composer: Composer) -> None:
    """Compose what ran: versions, digests, verification."""
    sheet = composer.begin("software", "Software record", "What ran, on what, and what it was held to.")
    account = composer.account
    facts = [
        ("program", f"Headtrace {calc.__version__}"),
        ("digest of the inputs", account.project.digest),
        ("digest of inputs and solution", account.digest),
        *((library.lower(), metadata.version(library)) for library in LIBRARIES),
    ]
    columns = (column("fact", 50), column("value", role="statement"))
    sheet.table(
        "software",
        columns,
        [sheet.row((Own(fact, "name"),), (Own(value, "name"),)) for fact, value in facts],
        tick=False,
    )
    _verification(sheet)
    sheet.close()


FIGURES = 6


def _verification(sheet: Sheet) -> None:
    """Add the cases run for this issue: expected, got, difference."""
    composer = sheet.composer
    if not composer.checks:
        return
    sheet.add(Heading(("Verification run for this issue",)))
    sheet.add(Paragraph((_why(composer.checks),)))
    columns = (
        column("case and quantity", role="statement"),
        figure_column("expected", width=24, edge=True),
        figure_column("got", width=24),
        column("", 12, role="unit"),
        figure_column("difference", width=26, edge=True),
        figure_column("allowed", width=24),
        column("", 16),
    )
    rows: list[Row] = []
    standing = ""
    for check in composer.checks:
        if check.title != standing:
            words = f"{check.source_class.replace('-', ' ')}; run for {_titles(check.concerns) or 'every issue'}"
            source = Soft((" – ", Own(check.source, "source"), "; ", words))
            rows.append(sheet.group(Own(check.title, "source"), source))
        standing = check.title
        rows.append(_check(sheet, check))
    sheet.table("verification", columns, rows, tick=False)


def _titles(concerns: tuple[str, ...]) -> str:
    return ", ".join(TITLES[word] for word in concerns)


def _why(checks: tuple[Check, ...]) -> str:
    """Return the sentence that says which of the shipped cases were run, and why these."""
    held = {word for check in checks for word in check.concerns}
    titles = _titles(tuple(word for word in TITLES if word in held))
    return (
        "Of the cases that ship with the program, those that concern what this calculation uses were run again, by "
        f"the same reader, laws and solvers: {titles}. A value outside the difference allowed would have stopped "
        "this issue."
    )


def _check(sheet: Sheet, check: Check) -> Row:
    ledger, unit = sheet.composer.ledger, check.stated.unit  # as published, so that the figure is known again
    spots = {q: ledger.spot(f"verification.{check.id}.{q}") for q in ("expected", "got", "difference", "allowed")}
    cells: list[Parts] = [(Own(check.quantity, "id"),)]
    cells += [(sheet.composer.number(spots[q], Format(unit, significant=FIGURES)),) for q in ("expected", "got")]
    cells.append((unit,))
    cells += [(sheet.composer.number(spots[q], Format(unit, significant=2)),) for q in ("difference", "allowed")]
    verdict: Parts = ("within",) if check.passed else (Strong(("outside",), bar=True),)
    return sheet.row(*cells, verdict, refs=[spot.id for spot in spots.values()])


def compose_record(composer: Composer) -> None:
    """Compose the blank record of checking, for comments by hand."""
    sheet = composer.begin(
        "record", "Checking record", "For the checker’s hand. Blank lines mean that no check is recorded."
    )
    columns = (
        column("line or sheet", 26),
        column("comment", role="statement", edge=True),
        column("response", 46, edge=True),
        column("back-check, date", 32, edge=True),
    )
    sheet.table("record", columns, [sheet.row(("",), ("",), ("",), ("",)) for _ in range(12)], tick=False)
    sheet.close()
