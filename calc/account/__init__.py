"""The account: a solution becomes ledger columns and verdicts.

`open_books` enters what a project states and the properties of its liquid, before anything is solved; then
`keep_account` enters for each case the history, the solution, everything that the chain of laws gives from it,
the balances, energy along paths, the second opinion, and the verdicts; findings and ``results.json`` come from
here too. The chain is the solver's own, run by the ledger's accountant, so that no formula is stated twice.
Knows project, criteria, solutions and ledger; knows nothing of how they are said or printed.
"""

from calc.account.accounting import Account, keep_account
from calc.account.books import liquid_terms, open_books
from calc.account.case import CaseAccount
from calc.account.findings import CHECKS, TITLES, WITHOUT_SOURCE, CheckOutcome, Finding, gathered, input_findings
from calc.account.following import following
from calc.account.opinion import Agreement
from calc.account.outcome import results
from calc.account.paths import Path
from calc.account.trials import MOST_BRANCHES
from calc.account.verdicts import CriterionVerdict, Verdict

__all__ = [
    "CHECKS",
    "MOST_BRANCHES",
    "TITLES",
    "WITHOUT_SOURCE",
    "Account",
    "Agreement",
    "CaseAccount",
    "CheckOutcome",
    "CriterionVerdict",
    "Finding",
    "Path",
    "Verdict",
    "following",
    "gathered",
    "input_findings",
    "keep_account",
    "liquid_terms",
    "open_books",
    "results",
]
