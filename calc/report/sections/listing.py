"""The listing of the input files, and the index of ledger ids."""

from __future__ import annotations

import hashlib

from calc.report.composer import Composer
from calc.report.document import Index, Listing, Paragraph


def compose_listing(composer: Composer) -> None:
    """Compose the listing: every file as it was read, with line numbers."""
    sheet = composer.begin("listing", "Input files", "Whole and unaltered, as they were read.")
    for file in composer.account.project.files:
        text = file.content.decode("utf-8-sig", errors="replace")
        digest = hashlib.sha256(file.content).hexdigest()
        lines = text.splitlines()
        sheet.add(Listing(file.name, tuple(lines[:MOST_LINES]), digest))
        if len(lines) > MOST_LINES:
            said = "The listing of this file ends here, being long; the file itself is embedded whole."
            sheet.add(Paragraph((said,), "small"))
    sheet.close()


MOST_ENTRIES = 4000
MOST_LINES = 5000


def compose_index(composer: Composer) -> None:
    """Compose the index of every ledger id that stands on a line."""
    sheet = composer.begin("index", "Index of ledger ids", "Every number that has a line of its own, by its id.")
    entries = sorted(composer.addresses.items())
    sheet.add(Index(tuple(entries[:MOST_ENTRIES])))
    if len(entries) > MOST_ENTRIES:
        sheet.add(Paragraph(("The rest stand in the ledger file of this package.",), "small"))
    sheet.close()
