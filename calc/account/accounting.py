"""Keeping the account of a project: from solutions to ledger, verdicts and findings."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from calc.account.case import CaseAccount
from calc.account.findings import CheckOutcome, Finding, Solved, all_findings
from calc.account.flows import CaseColumns, enter_flows
from calc.account.history import enter_history, history_rows
from calc.account.opinion import enter_opinion
from calc.account.paths import Path, enter_paths
from calc.account.verdicts import CriterionVerdict, enter_verdicts
from calc.components import Network
from calc.kinds import FLOW, HEAD, NUMBER
from calc.ledger import Accountant, Ledger, Program, View
from calc.project import Project, changes_in
from calc.solve import Solution


@dataclass(frozen=True)
class Account:
    """A project accounted for: what the report says and ``results.json`` holds comes from here."""

    project: Project
    ledger: Ledger
    cases: Mapping[str, CaseAccount]
    verdicts: tuple[CriterionVerdict, ...]
    findings: tuple[Finding, ...]
    checks: tuple[CheckOutcome, ...]
    digest: str

    @property
    def solved(self) -> bool:
        """Whether every case has a solution."""
        return all(case.solution.converged for case in self.cases.values())

    @property
    def met(self) -> bool:
        """Whether every criterion is met in every solved case."""
        return all(judged.met for judged in self.verdicts)

    @property
    def confirmed(self) -> bool:
        """Whether the second opinion agrees with every solution."""
        return all(case.agreement is None or case.agreement.agrees for case in self.cases.values())


def keep_account(project: Project, ledger: Ledger, solved: Mapping[str, tuple[Network, Solution]]) -> Account:
    """Return the account of a project.

    Parameters
    ----------
    project : Project
        As read.
    ledger : Ledger
        The open books of the project; everything is entered into it.
    solved : mapping
        For each case its network and solution, in the order of the project.
    """
    cases: dict[str, CaseAccount] = {}
    for name, (network, solution) in solved.items():
        enter_history(ledger, network, solution, name)
        columns: CaseColumns | None = None
        paths: tuple[Path, ...] = ()
        agreement = None
        if solution.converged:
            _enter_shut(ledger, project, network, name)
            columns = enter_flows(ledger, network, solution, name)
            paths = enter_paths(ledger, network, columns, name)
            agreement = enter_opinion(ledger, network, solution, name)
        _enter_tests(ledger, solution, name)
        stated = project.cases[name].title
        title = stated.text if stated else "Inputs as stated"
        history = history_rows(network, solution)
        cases[name] = CaseAccount(name, title, network, solution, columns, paths, agreement, history)
    held = {name: case.columns for name, case in cases.items() if case.columns is not None}
    verdicts = enter_verdicts(ledger, project, held)
    findings, checks = all_findings(Solved(project, ledger, cases, verdicts))
    _enter_counts(ledger, project, findings, checks)
    return Account(project, ledger, cases, verdicts, findings, checks, _digest(project, cases))


def _enter_shut(ledger: Ledger, project: Project, network: Network, case: str) -> None:
    """Enter that nothing flows in shut pipes, with the place where each is said to be shut."""
    changes = changes_in(project, case)
    places: dict[str, list[str]] = {}
    for k in np.flatnonzero(~network.open).tolist():
        name = network.pipes.rows[k]
        standing = changes.get(("pipes", name, "open"))
        stated = standing[-1].stated if standing else project.pipes[name].stated["open"]
        places.setdefault(str(stated.mark), []).append(name)
    for place, names in places.items():
        said = Program(f"shut at {place}: nothing flows")
        ledger.enter("pipes.flow", FLOW, names, np.zeros(len(names)), said, case=case)


def _enter_tests(ledger: Ledger, solution: Solution, case: str) -> None:
    kinds = {"m³/s": FLOW, "m": HEAD}
    tolerance = ledger.find("solver.tolerance")
    for k, test in enumerate(solution.tests):
        if not np.isfinite(test.value):
            continue  # an attempt that came to nothing measured nothing
        kind = kinds.get(test.unit, NUMBER)
        measured = Program(f"measured when the search ended: {test.words}")
        ledger.enter(f"solver.test_{k + 1}", kind, [""], [test.value], measured, case=case)
        name = f"solver.test_{k + 1}_limit"
        if tolerance and kind is FLOW and test.limit == float(tolerance[0].values[0]):
            at, words = np.zeros(1, dtype=np.int64), "the tolerance stated"
            Accountant(ledger, case).combine(name, "sum", View.whole(tolerance[0]), at, [""], words=words)
        else:
            ledger.enter(name, kind, [""], [test.limit], Program("limit of the test"), case=case)
    said = Program("evaluations in the history of this case")
    ledger.enter("solver.iterations", NUMBER, [""], [solution.iterations], said, case=case)


def _enter_counts(
    ledger: Ledger, project: Project, findings: tuple[Finding, ...], checks: tuple[CheckOutcome, ...]
) -> None:
    counts = {
        "open_assumptions": sum(a.text("state") == "open" for a in project.assumptions.values()),
        "unsourced": sum(finding.id == "D03" for finding in findings),
        "findings": len(findings),
    }
    for name, count in counts.items():
        said = Program(f"counted by the program: {name.replace('_', ' ')}")
        ledger.enter(f"record.{name}", NUMBER, [""], [count], said)
    said = Program("counted by the program: findings of each check")
    ledger.enter("checks.found", NUMBER, [one.check.id for one in checks], [one.found for one in checks], said)


def _digest(project: Project, cases: Mapping[str, CaseAccount]) -> str:
    """Return the digest of inputs and solution; numbers enter with ten figures, which every processor gives alike."""
    digest = hashlib.sha256(project.digest.encode())
    for name, case in cases.items():
        digest.update(f"\n{name} {case.solution.converged}".encode())
        for value in (*case.solution.head.tolist(), *case.solution.flow.tolist()):
            digest.update(f" {value + 0.0:.9e}".encode())  # a zero has no sign
    return f"sha256:{digest.hexdigest()}"
