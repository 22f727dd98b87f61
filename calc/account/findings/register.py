"""The register of checks, and running them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from calc.account.findings import coefficients, documents, fittings, geometry, laws, numerical, units
from calc.account.findings.finding import Check, CheckOutcome, Finding, Remark, Solved
from calc.project import Project

CHECKS: tuple[Check, ...] = tuple(
    sorted(
        (
            *documents.CHECKS,
            *units.CHECKS,
            *geometry.CHECKS,
            *coefficients.CHECKS,
            *laws.CHECKS,
            *fittings.CHECKS,
            *numerical.CHECKS,
        ),
        key=lambda check: check.id,
    )
)
"""Every comment that is looked for. A new check is a `Check` in the module of its theme."""

TITLES: dict[str, str] = {check.id: check.title for check in CHECKS}


def input_findings(project: Project) -> tuple[Finding, ...]:
    """Return what the inputs alone give rise to, in the order of the comments."""
    return tuple(
        finding for check in CHECKS if check.inputs is not None for finding in _named(check, check.inputs(project))
    )


def all_findings(solved: Solved) -> tuple[tuple[Finding, ...], tuple[CheckOutcome, ...]]:
    """Return every finding of a project and its solutions in the order of the comments, and what came of each check."""
    found: list[Finding] = list(input_findings(solved.project))
    unmade: dict[str, str] = {}
    for check in CHECKS:
        if check.results is None:
            continue
        unmade[check.id] = check.unmade(solved)
        if not unmade[check.id]:
            found += _named(check, check.results(solved))
    counts = Counter(finding.id for finding in found)
    outcomes = tuple(CheckOutcome(check, counts[check.id], unmade.get(check.id, "")) for check in CHECKS)
    return tuple(sorted(found, key=lambda finding: finding.id)), outcomes


def _named(check: Check, remarks: Iterator[Remark]) -> Iterator[Finding]:
    return (Finding(check.id, one.subject, one.mark.place, one.text, one.mark) for one in remarks)


def gathered(findings: tuple[Finding, ...]) -> tuple[tuple[Finding, ...], ...]:
    """Return the findings of which the same is said together, in the order of the first of each."""
    held: dict[tuple[str, str], list[Finding]] = {}
    for finding in findings:
        held.setdefault((finding.id, finding.text), []).append(finding)
    return tuple(tuple(alike) for alike in held.values())
