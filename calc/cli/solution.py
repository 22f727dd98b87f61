"""``headtrace solve``: every case solved, said in words or as data."""

from __future__ import annotations

import argparse
import json
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

from calc import pipeline
from calc.account import Account, CaseAccount, results
from calc.cli.amounts import NONE, amount, display_of, flow_text
from calc.cli.call import WrongCall
from calc.cli.judgement import verdict_lines
from calc.cli.layout import columns
from calc.cli.outcome import Outcome, Status
from calc.cli.progress import Progress
from calc.kinds import HEAD, VELOCITY
from calc.ledger import Spot
from calc.problems import nearest
from calc.report.display import FINE, FULL, Display
from calc.report.numbers import Format, written


def run(asked: argparse.Namespace) -> Outcome:
    """Solve the cases of a folder and say what came out."""
    progress = Progress()
    try:
        account = pipeline.account(Path(asked.folder), progress.say)
    finally:
        progress.wipe()
    if asked.case is not None:
        account = _only(account, asked.case)
    found = results(account)
    said = json.dumps(found, indent=2, allow_nan=False) if asked.json else "\n".join(_lines(account, found))
    return Outcome(status_of(account), said, "\n".join(doubts(account)))


def status_of(account: Account) -> Status:
    """Return the highest status that an account calls for."""
    if not account.confirmed:
        return Status.NOT_PROVED
    if not account.solved:
        return Status.NO_SOLUTION
    return Status.DONE if account.met else Status.NOT_MET


def _only(account: Account, case: str) -> Account:
    """Return the account of one case alone."""
    if case not in account.cases:
        known = list(account.cases)
        raise WrongCall(f"there is no case '{case}'", f"one of {', '.join(known)}", nearest(case[:100], known))
    judged = []
    for criterion in account.verdicts:
        kept = tuple(verdict for verdict in criterion.verdicts if verdict.case == case)
        governing = min(kept, key=lambda verdict: verdict.margin.value, default=None)
        least = None if governing is None else governing.margin
        judged.append(replace(criterion, verdicts=kept, governing=governing, least_margin=least))
    return replace(account, cases={case: account.cases[case]}, verdicts=tuple(judged))


def doubts(account: Account) -> Iterator[str]:
    """Yield what stands against an account: cases without a solution, solutions not confirmed."""
    for case in account.cases.values():
        if not case.solution.converged:
            yield f"cases.{case.id}: no solution: {case.solution.reason}"
        elif case.agreement is not None and not case.agreement.agrees:
            yield f"cases.{case.id}: the second opinion does not confirm the solution: {case.agreement.reason}"


def _lines(account: Account, found: dict[str, Any]) -> Iterator[str]:
    header = account.project.header
    yield f"{header.text('title')} ({header.text('number')}, revision {header.text('revision')})"
    display = display_of(account.project)
    for case in account.cases.values():
        yield ""
        yield f"Case {case.id}: {case.title}"
        yield from _case_lines(case, found["cases"][case.id], display)
    yield ""
    yield "Head loss and velocity are positive from 'from' to 'to'."
    yield from verdict_lines(account)
    count = len(account.findings)
    if count:
        yield ""
        yield f"{count} finding{'s' * (count != 1)}; 'headtrace inspect' lists those of the inputs"


def _case_lines(case: CaseAccount, found: dict[str, Any], display: Display) -> Iterator[str]:
    solution = case.solution
    work = {"bracketing": "trial", "loop-correction": "sweep"}.get(solution.method, "iteration")
    counted = f"{solution.iterations} {work}{'s' * (solution.iterations != 1)}"
    if not solution.converged:
        yield f"  no solution by {solution.method} after {counted}: {solution.reason}"
        return
    yield f"  {solution.method}, {counted}; {_opinion(case, display)}"
    yield ""
    yield from columns(_node_rows(found["nodes"], display), "<<>><")
    yield ""
    yield from columns(_branch_rows(found["branches"], display), "<<<>><")


def _opinion(case: CaseAccount, display: Display) -> str:
    agreement = case.agreement
    if agreement is None:
        return "no second opinion"
    if agreement.flow_difference is None or agreement.head_difference is None:
        return f"the second opinion DISAGREES: {agreement.reason}"
    flow = _difference(agreement.flow_difference, display.form("flow", FULL, residual=True))
    head = _difference(agreement.head_difference, display.form("head", FINE, residual=True))
    said = "agrees" if agreement.agrees else "DISAGREES"
    what = "errors found" if agreement.evaluated else "differences"
    return f"the second opinion ({agreement.method}) {said}: largest {what} {flow} and {head}"


def _difference(spot: Spot, form: Format) -> str:
    """Return the size of a difference with its unit, of two figures, or less than its bound."""
    return f"{written(abs(spot.value), spot.column.kind, replace(form, decimals=None, significant=2))} {form.unit}"


def _node_rows(nodes: dict[str, Any], display: Display) -> list[list[str]]:
    unit = display.unit("head")
    rows = [["node", "", "head", "pressure head", ""], ["", "", unit, unit, ""]]
    for name, node in nodes.items():
        given = node["outflow"] if node["kind"] == "reservoir" else node["withdrawal"]
        rows.append(
            [
                name,
                node["kind"],
                amount(node["head"], HEAD, display),
                amount(node.get("pressure_head"), HEAD, display),
                _exchange(node["kind"], given, display),
            ]
        )
    return rows


def _exchange(kind: str, given: float, display: Display) -> str:
    """Return in words what a reservoir gives to the pipes, or what a junction gives to users."""
    size = flow_text(given, display)
    if kind == "reservoir":
        return "at rest" if given == 0 else f"{'gives' if given > 0 else 'takes'} {size}"
    return "" if given == 0 else f"{size} {'withdrawn' if given > 0 else 'brought in'}"


def _branch_rows(branches: dict[str, Any], display: Display) -> list[list[str]]:
    units = ["", "", "", display.unit("head"), display.unit("velocity"), ""]
    rows = [["branch", "from", "to", "head loss", "velocity", "flow"], units]
    for name, branch in branches.items():
        shut = branch["state"] != "open"
        velocity = NONE if shut else amount(branch["velocity"], VELOCITY, display, plus=True)
        loss = amount(branch["head_loss"], HEAD, display, plus=True)
        rows.append([name, branch["from"], branch["to"], loss, velocity, _direction(branch, display)])
    return rows


def _direction(branch: dict[str, Any], display: Display) -> str:
    flow = branch["flow"]
    if branch["state"] != "open":
        return "shut"
    if flow == 0:
        return "at rest"
    giver, taker = (branch["from"], branch["to"]) if flow > 0 else (branch["to"], branch["from"])
    return f"{giver} gives {flow_text(flow, display)} to {taker}"
