"""The history of a solution: every trial or iteration as ledger columns, and as data."""

from __future__ import annotations

from typing import Any

import numpy as np

from calc.account.corrections import correction_rows, enter_corrections
from calc.account.trials import enter_trials
from calc.components import Network
from calc.kinds import FLOW, HEAD, NUMBER
from calc.ledger import Ledger, Program, Solved
from calc.solve import Solution, Steps, Trials


def enter_history(ledger: Ledger, network: Network, solution: Solution, case: str) -> None:
    """Enter every evaluation of a solution, converged or not."""
    if solution.trials is not None:
        enter_trials(ledger, network, solution.trials, case)
    if solution.steps is not None:
        _enter_steps(ledger, network, solution.steps, case)
    if solution.corrections is not None:
        enter_corrections(ledger, network, solution.corrections, case)


def _enter_steps(ledger: Ledger, network: Network, steps: Steps, case: str) -> None:
    rows = [str(k) for k in steps.iteration.tolist()]
    norms = (
        ("steps.imbalance", FLOW, steps.imbalance, "largest imbalance at a junction in this iteration"),
        (
            "steps.energy_error",
            HEAD,
            steps.energy_error,
            "largest closing error of a branch in this iteration",
        ),
        ("steps.flow_change", FLOW, steps.flow_change, "largest change of a flow in the step that led here"),
        ("steps.share", NUMBER, steps.share, "part of the full step that was taken"),
    )
    for name, kind, values, words in norms:
        known = np.flatnonzero(np.isfinite(values))
        if len(known):
            said = Program(f"{words}, as recorded by the solver")
            kept = [rows[int(k)] for k in known]
            ledger.enter(name, kind, kept, values[known], said, case=case, of="newton")
    if steps.head is not None:
        for k in network.unknown.tolist():
            origin = Solved("head after this iteration", "newton", len(rows) - 1, ())
            ledger.enter("junctions.head", HEAD, rows, steps.head[:, k], origin, case=case, of=network.nodes[k])


def history_rows(network: Network, solution: Solution) -> list[dict[str, Any]]:
    """Return the history as plain data, one mapping an evaluation; in SI, null where not known."""
    if solution.trials is not None:
        return _trial_rows(network, solution.trials)
    if solution.corrections is not None:
        return correction_rows(network, solution.corrections)
    return [] if solution.steps is None else _step_rows(network, solution.steps)


def _trial_rows(network: Network, trials: Trials) -> list[dict[str, Any]]:
    names = [network.pipes.rows[k] for k in trials.branches.tolist()]
    return [
        {
            "iteration": t + 1,
            "head": _number(trials.head[t]),
            "low_end": _number(trials.low_end[t]),
            "high_end": _number(trials.high_end[t]),
            "imbalance": _number(trials.imbalance[t]),
            "flows_toward": dict(zip(names, map(_number, trials.flows[t]), strict=True)),
            "rule": trials.rule[t],
            "from_trials": [use + 1 for use in trials.uses[t]],
        }
        for t in range(len(trials.head))
    ]


def _step_rows(network: Network, steps: Steps) -> list[dict[str, Any]]:
    return [
        {
            "iteration": int(steps.iteration[k]),
            "largest_imbalance": _number(steps.imbalance[k]),
            "node": _named(network.nodes, steps.node[k]),
            "largest_energy_error": _number(steps.energy_error[k]),
            "branch": _named(network.pipes.rows, steps.branch[k]),
            "largest_flow_change": _number(steps.flow_change[k]),
        }
        for k in range(len(steps.iteration))
    ]


def _number(value: Any) -> float | None:  # noqa: ANN401
    return float(value) if np.isfinite(value) else None


def _named(names: tuple[str, ...], index: Any) -> str | None:  # noqa: ANN401
    return None if index < 0 else names[int(index)]
