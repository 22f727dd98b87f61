"""The results as data: what ``results.json`` and ``solve --json`` hold."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from calc.ledger import Ledger

if TYPE_CHECKING:
    from calc.account.accounting import Account
    from calc.account.case import CaseAccount

FORMAT = "headtrace-results/1"


def results(account: Account) -> dict[str, Any]:
    """Return an account as plain data in SI, in the form of ``headtrace-results/1``."""
    project = account.project
    header = project.header
    return {
        "format": FORMAT,
        "project": {
            "number": header.text("number"),
            "title": header.text("title"),
            "revision": header.text("revision"),
        },
        "digest": account.digest,
        "cases": {case: _case(account, held) for case, held in account.cases.items()},
        "verdicts": [
            {
                "criterion": verdict.criterion.id,
                "subject": verdict.path,
                "case": verdict.case,
                "value": verdict.value.value,
                "limit": verdict.limit.value,
                "margin": verdict.margin.value,
                "unit": verdict.limit.column.kind.unit,
                "met": verdict.met,
            }
            for judged in account.verdicts
            for verdict in judged.verdicts
        ],
        "not_judged": [judged.id for judged in account.verdicts if judged.governing is None],
        "findings": [{"id": f.id, "subject": f.subject, "place": f.place, "text": f.text} for f in account.findings],
        "studies": {},
    }


def _case(account: Account, held: CaseAccount) -> dict[str, Any]:
    solution = held.solution
    told: dict[str, Any] = {"converged": solution.converged, "method": solution.method}
    told["iterations"] = solution.iterations
    if not solution.converged:
        return {**told, "reason": solution.reason, "history": held.history}
    ledger, case = account.ledger, held.id
    told["nodes"] = _nodes(account, held)
    told["branches"] = _branches(account, held)
    told["balance"] = {
        "largest_imbalance": _one(ledger, "balance.largest_imbalance", case),
        "largest_energy_error": _one(ledger, "balance.largest_energy_error", case),
    }
    agreement = held.agreement
    if agreement is not None:
        told["second_opinion"] = {
            "method": agreement.method,
            "largest_flow_difference": agreement.flow_difference and agreement.flow_difference.value,
            "largest_head_difference": agreement.head_difference and agreement.head_difference.value,
            "agrees": agreement.agrees,
            "evaluated_only": agreement.evaluated,
        }
    told["history"] = held.history
    return told


def _one(ledger: Ledger, name: str, case: str) -> float:
    columns = [column for column in ledger.find(name, case) if column.case == case]
    return float(columns[0].values[0]) if columns else 0.0


def _values(ledger: Ledger, name: str, case: str) -> dict[str, float]:
    found: dict[str, float] = {}
    for column in ledger.find(name, case):
        for row, value in zip(column.rows, column.values.tolist(), strict=True):
            found.setdefault(row, value)
    return found


def _here(ledger: Ledger, name: str, case: str) -> dict[str, float]:
    return {
        row: value
        for column in ledger.find(name, case)
        if column.case == case
        for row, value in zip(column.rows, column.values.tolist(), strict=True)
    }


def _nodes(account: Account, held: CaseAccount) -> dict[str, Any]:
    ledger, case = account.ledger, held.id
    head = dict(zip(held.network.nodes, held.columns.head.values.tolist(), strict=True)) if held.columns else {}
    outflow = _here(ledger, "reservoirs.outflow", case)
    reported = {
        name: _here(ledger, f"junctions.{name}", case) for name in ("pressure_head", "pressure", "velocity_head")
    }
    withdrawal = _values(ledger, "junctions.withdrawal", case)
    nodes: dict[str, Any] = {}
    for name in held.network.nodes:
        if name in account.project.reservoirs:
            nodes[name] = {"kind": "reservoir", "head": head[name], "outflow": outflow.get(name, 0.0)}
            continue
        nodes[name] = {"kind": "junction", "head": head[name], "withdrawal": withdrawal.get(name, 0.0)}
        nodes[name] |= {what: values[name] for what, values in reported.items() if name in values}
    return nodes


REPORTED = {
    "flow": "flow",
    "velocity": "velocity",
    "head_loss": "head_loss",
    "friction_loss": "friction_loss",
    "fitting_loss": "fitting_loss",
    "reynolds": "reynolds",
    "friction_factor": "darcy_f",
}
"""What is told of a branch, and the ledger's word for it."""


def _branches(account: Account, held: CaseAccount) -> dict[str, Any]:
    ledger, network = account.ledger, held.network
    columns = {told: _here(ledger, f"pipes.{name}", held.id) for told, name in REPORTED.items()}
    branches: dict[str, Any] = {}
    for k, name in enumerate(network.pipes.rows):
        start, end = int(network.start[k]), int(network.end[k])
        told: dict[str, Any] = {"kind": "pipe", "from": network.nodes[start], "to": network.nodes[end]}
        at_rest = {} if network.open[k] else {**dict.fromkeys(REPORTED, 0.0), "friction_factor": None}
        told |= {what: values.get(name, at_rest.get(what)) for what, values in columns.items()}
        branches[name] = {**told, "state": "open" if network.open[k] else "shut"}
    return branches
