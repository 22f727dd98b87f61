"""The software record, and the blank record of checking."""

from __future__ import annotations

from importlib import metadata

import calc
from calc.report.composer import Composer, column
from calc.report.document import Own

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
    sheet.close()


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
