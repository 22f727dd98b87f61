"""Entering checks in a ledger: expected, got, difference, what is allowed, and the verdict that follows."""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from typing import Any

import numpy as np

from calc.account.books import enter_stated
from calc.equation import Equation, Reference, Symbol, equation
from calc.kinds import NUMBER, Kind
from calc.ledger import Accountant, Judged, Ledger, Program, View
from calc.verification.check import Check

VERIFICATION = Reference("verification", "Comparison with a published or exact value")


@cache
def laws(kind: Kind) -> tuple[Equation, Equation, Equation]:
    """Return for a kind of quantity the laws of a check: difference, difference allowed by a share, margin."""
    expected = Symbol("v_e", kind, "expected value")
    difference = Symbol("d", kind, "value got less value expected")
    allowed = Symbol("d_max", kind, "difference allowed, either way")

    @equation(
        gives=difference,
        source=VERIFICATION,
        valid="every case",
        got=Symbol("v", kind, "value got"),
        expected=expected,
    )
    def verification_difference(*, got: Any, expected: Any) -> Any:  # noqa: ANN401
        """Difference from the expected value."""
        return got - expected

    @equation(
        gives=allowed,
        source=VERIFICATION,
        valid="every case",
        share=Symbol("r", NUMBER, "share of the expected value allowed as difference"),
        expected=expected,
    )
    def allowed_share(*, share: Any, expected: Any) -> Any:  # noqa: ANN401
        """Difference allowed, as a share of the expected value."""
        return share * np.abs(expected)

    @equation(
        gives=Symbol("u", kind, "what is left of the difference allowed"),
        source=VERIFICATION,
        valid="every case",
        allowed=allowed,
        difference=difference,
    )
    def verification_margin(*, allowed: Any, difference: Any) -> Any:  # noqa: ANN401
        """Room left in the difference allowed."""
        return allowed - np.abs(difference)

    return verification_difference, allowed_share, verification_margin


def enter_checks(ledger: Ledger, checks: Sequence[Check]) -> None:
    """Enter checks under the ids of their rows: ``verification.<id>.expected`` and so on.

    Parameters
    ----------
    ledger : Ledger
        Where they are entered, under no case: ``expected``, ``got``, ``difference``, ``allowed`` (with ``share``
        where it is relative), ``margin`` and ``passed``.
    checks : sequence of Check
        From `run`. One without a number, whose case has no solution, is left out.
    """
    numbered = [check for check in checks if np.isfinite(check.got)]
    for kind in dict.fromkeys(check.kind for check in numbered):
        _enter(ledger, kind, [check for check in numbered if check.kind is kind])


def _enter(ledger: Ledger, kind: Kind, checks: Sequence[Check]) -> None:
    books = Accountant(ledger, "")
    rows = [check.id for check in checks]
    difference_law, share_law, margin_law = laws(kind)
    enter_stated(ledger, "verification.expected", kind, rows, [check.stated for check in checks])
    said = Program("computed by this program when the package was issued")
    got = ledger.enter("verification.got", kind, rows, [check.got for check in checks], said)
    expected = ledger.view("verification.expected", "", rows)
    difference = books.apply("verification.difference", difference_law, got=View.whole(got), expected=expected)
    shares = {check.id: check.limit for check in checks if check.relative}
    limits = {check.id: check.limit for check in checks if not check.relative}
    if limits:
        enter_stated(ledger, "verification.allowed", kind, list(limits), list(limits.values()))
    if shares:
        enter_stated(ledger, "verification.share", NUMBER, list(shares), list(shares.values()))
        share = ledger.view("verification.share", "", list(shares))
        relative = ledger.view("verification.expected", "", list(shares))
        books.apply("verification.allowed", share_law, share=share, expected=relative)
    allowed = ledger.view("verification.allowed", "", rows)
    margin = books.apply("verification.margin", margin_law, allowed=allowed, difference=difference)
    ledger.enter("verification.passed", NUMBER, rows, margin.values >= 0, Judged(margin))
