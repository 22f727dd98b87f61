"""Findings: doubtful or missing things that a reviewer would remark on, found from the data.

A `Check` answers to one comment that reviewers make, and carries its number. Some look at the inputs alone and
serve `inspect` too; some need the solutions. What a check would have to remark on may also be refused when the
inputs are read, as a missing unit is: then the register says so, for a checker wants to know that it was looked
for. A finding never changes the exit status; a criterion not met is a verdict, a wrong input a problem.

Findings stay one a component, so that a machine can follow them; their texts are alike where the same is said,
so that `gathered` can tell them together. A text holds no computed number. Limits are common practice where no
source stands beside them: they choose what is worth a look, and decide nothing. The program may say that no
defect was found by a check, never that a calculation is checked, approved or safe.
"""

from calc.account.findings.documents import WITHOUT_SOURCE
from calc.account.findings.finding import Check, CheckOutcome, Finding, Remark, Solved
from calc.account.findings.register import CHECKS, TITLES, all_findings, gathered, input_findings

__all__ = [
    "CHECKS",
    "TITLES",
    "WITHOUT_SOURCE",
    "Check",
    "CheckOutcome",
    "Finding",
    "Remark",
    "Solved",
    "all_findings",
    "gathered",
    "input_findings",
]
