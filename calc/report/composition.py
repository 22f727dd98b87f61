"""Composing a document: every section in order, then the citations resolved from the ledger."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator

from calc.account import Account
from calc.report.composer import Composer, inputs_of
from calc.report.document import Document
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
        used_by=_users(composer),
    )


def _users(composer: Composer) -> dict[str, tuple[str, ...]]:
    """Return for each printed number the printed numbers that rest on it."""
    users: dict[str, list[str]] = defaultdict(list)
    for user, used in _uses(composer):
        users[used].append(user)
    return {used: tuple(found) for used, found in users.items()}


def _uses(composer: Composer) -> Iterator[tuple[str, str]]:
    for user in composer.addresses:
        for used in inputs_of(composer.ledger, composer.ledger.spot(user)):
            if used in composer.addresses:
                yield user, used
