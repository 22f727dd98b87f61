"""Composing a document: every section in order, then the citations resolved from the ledger."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping

from calc.account import Account
from calc.ledger import Solved
from calc.report.composer import Composer, inputs_of
from calc.report.document import Cite, Document, Table
from calc.report.sections import SECTIONS
from calc.report.sections.decision import STATUS
from calc.verification import Check


def compose(account: Account, purpose: str, checks: tuple[Check, ...] = ()) -> Document:
    """Return what the package of an account says.

    Parameters
    ----------
    account : Account
        From `calc.account.keep_account`.
    purpose : str
        checking, approval or record.
    checks : tuple of Check
        The verification run for this issue, entered in the ledger of the account.
    """
    composer = Composer(account, purpose, checks)
    for section in SECTIONS:
        section(composer)
    behind = _behind(composer)
    header = account.project.header
    revision = next((r for r in account.project.revisions if r.text("revision") == header.text("revision")), None)
    return Document(
        title=header.text("title"),
        number=header.text("number"),
        revision=header.text("revision"),
        date=revision.text("date") if revision else "",
        status=STATUS[purpose],
        paper=composer.paper,
        digest=account.digest,
        sections=tuple(composer.sections),
        addresses=composer.addresses,
        used_by=_users(composer, behind),
        behind=behind,
        coherent=composer.display.coherent_units(),
        files=composer.files,
    )


def _behind(composer: Composer) -> dict[str, tuple[str, ...]]:
    """Return for each number that is cited and stands on no line the numbers with lines on which it rests."""
    ledger, addresses = composer.ledger, composer.addresses
    cited = (ref for user in addresses for ref in inputs_of(ledger, ledger.spot(user)))
    found: dict[str, tuple[str, ...]] = {}
    for ref in dict.fromkeys((*cited, *_cited(composer))):
        if ref not in addresses:
            found[ref] = tuple(_lines_behind(composer, ref))
    return found


def _cited(composer: Composer) -> Iterator[str]:
    """Yield the ids that rows cite."""
    for section in composer.sections:
        for block in section.blocks:
            for row in block.rows if isinstance(block, Table) else ():
                yield from (ref for cell in row.cells for part in cell if isinstance(part, Cite) for ref in part.refs)


def _lines_behind(composer: Composer, ref: str) -> Iterator[str]:
    """Yield the nearest numbers with lines on which a number rests; what proves a solved number is not behind it."""
    waiting, seen = [ref], {ref}
    while waiting:
        spot = composer.ledger.spot(waiting.pop())
        if spot.id != ref and isinstance(spot.column.origin, Solved) and not spot.column.of:
            continue
        for used in inputs_of(composer.ledger, spot):
            if used in seen:
                continue
            seen.add(used)
            if used in composer.addresses:
                yield used
            else:
                waiting.append(used)


def _users(composer: Composer, behind: Mapping[str, tuple[str, ...]]) -> dict[str, tuple[str, ...]]:
    """Return for each printed number the printed numbers that rest on it."""
    users: dict[str, dict[str, None]] = defaultdict(dict)
    for user in composer.addresses:
        for ref in inputs_of(composer.ledger, composer.ledger.spot(user)):
            for used in behind.get(ref, (ref,)):
                if used != user:
                    users[used][user] = None
    return {used: tuple(found) for used, found in users.items()}
