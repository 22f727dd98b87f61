"""Verification: published and exact cases run each time a package is issued.

For
    the software record: evidence that this installation, on this machine, computes what is known to be right.
Takes
    nothing but ``calc/data/verification.yaml`` and the small project folders beside it, which ship with the
    program, each value with its source; and the words for what a project uses, from `in_use`.
Gives
    a `Check` for each value, with what was expected, what was got and what difference is allowed; `enter_checks`
    puts them into a ledger, where the verdict follows from the difference like any other.
Must not know
    reports, pages; of the project being issued no more than which laws and methods it uses.
Why this way
    The cases are project folders, read and solved like any other, so that a reader can solve them too; a check
    that only called the solver would leave reading and units unproved. Each says what it concerns, so that a
    package shows the evidence for what it rests on and not for all else. Failing is a result and not an error:
    who issues decides what it means.
"""

from __future__ import annotations

from calc.verification.check import Check
from calc.verification.entry import enter_checks
from calc.verification.running import run
from calc.verification.use import TITLES, in_use

__all__ = ["TITLES", "Check", "enter_checks", "in_use", "run"]
