"""What a package may be issued for, and the name of its folder."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterator

from calc.account import Account
from calc.cli.call import NAME
from calc.cli.outcome import Outcome, Status, together
from calc.components import Record
from calc.problems import Problem, ProblemsFound

LONGEST = 60
"""Bytes of a number or revision in a folder's name."""
_PLAIN = "-_."


def hindrances(account: Account, purpose: str) -> Outcome:
    """Return what forbids an issue for a purpose; the status is 0 where nothing does.

    A case without a solution is shown for checking only. The record takes no open assumption, and no solution that
    the second opinion does not confirm.
    """
    if purpose == "checking":
        return Outcome()
    told = [Outcome(Status.NO_SOLUTION, remarks=line) for line in _unsolved(account, purpose)]
    if purpose == "record":
        told += [Outcome(Status.NOT_PROVED, remarks=line) for line in _unconfirmed(account)]
        problems = list(_open_assumptions(account))
        if problems:
            shown = str(ProblemsFound(problems, account.project.texts))
            told.append(Outcome(Status.WRONG_CALL, remarks=shown))
    if told:
        told.append(Outcome(remarks=f"{NAME} issue: nothing was written; it can be issued for checking"))
    return together(told)


def _unsolved(account: Account, purpose: str) -> Iterator[str]:
    for case in account.cases.values():
        if not case.solution.converged:
            reason = case.solution.reason
            yield f"cases.{case.id}: no solution, so no issue for {purpose}: {reason}"


def _unconfirmed(account: Account) -> Iterator[str]:
    for case in account.cases.values():
        if case.agreement is not None and not case.agreement.agrees:
            reason = case.agreement.reason
            yield f"cases.{case.id}: the second opinion disagrees, so no issue for record: {reason}"


def _open_assumptions(account: Account) -> Iterator[Problem]:
    for record in account.project.assumptions.values():
        state = record.stated["state"]
        if state.text != "verified":
            mark = record.mark if state.shipped else state.mark
            path = f"assumptions.{record.id}.state"
            expected = "'verified' before an issue for record"
            yield Problem(mark, "open-assumption", path, "the assumption is open", expected)


def package_name(header: Record, purpose: str) -> str:
    """Return ``<number>_<revision>_<purpose>``, safe as the name of a folder."""
    return f"{_plain(header.text('number'))}_{_plain(header.text('revision'))}_{purpose}"


def _plain(text: str) -> str:
    """Return text in which all but letters, digits and ``- _ .`` is a hyphen; never empty, hidden or too long."""
    composed = unicodedata.normalize("NFC", text)
    plain = "".join(c if c.isalnum() or c in _PLAIN else "-" for c in composed)
    cut = plain.encode("utf-8")[:LONGEST].decode("utf-8", "ignore")
    return cut.strip("-.") or "unnamed"
