"""The history of a solution: every trial or iteration as ledger columns, and as data."""

from __future__ import annotations

from typing import Any

import numpy as np

from calc.account.flows import joined
from calc.components import Network
from calc.equation.law import takes
from calc.kinds import FLOW, HEAD, LENGTH, NUMBER
from calc.ledger import Column, Derived, Ledger, Program, Solved, View
from calc.ledger.accountant import Accountant
from calc.ledger.column import ABSENT
from calc.solve import Solution, Steps, Trials
from calc.solve.rules import RULES

MOST_BRANCHES = 12
"""Branches above which tables print norms and the worst node instead of every branch."""


def enter_history(ledger: Ledger, network: Network, solution: Solution, case: str) -> None:
    """Enter every evaluation of a solution, converged or not."""
    if solution.trials is not None:
        _enter_trials(ledger, network, solution.trials, case)
    if solution.steps is not None:
        _enter_steps(ledger, network, solution.steps, case)


def _labels(count: int, first: int = 1) -> list[str]:
    return [str(first + k) for k in range(count)]


def _enter_trials(ledger: Ledger, network: Network, trials: Trials, case: str) -> None:
    junction = network.nodes[trials.junction]
    rows = _labels(len(trials.head))
    imbalance = _enter_trial_flows(ledger, network, trials, case, junction)
    heads: list[Column] = []
    for t, row in enumerate(rows):
        inputs = {
            name: _rule_input(ledger, network, trials, (case, junction), t, (column, place), heads, imbalance)
            for name, column, place in RULES[trials.rule[t]].places
        }
        equation = RULES[trials.rule[t]].equation
        origin = Derived(
            equation,
            (equation,),
            np.zeros(1, dtype=np.int64),
            (trials.rule[t],),
            {name: inputs[name] for name in takes(equation)},
        )
        heads.append(ledger.enter("junctions.head", HEAD, [row], [trials.head[t]], origin, case=case, of=junction))


def _rule_input(  # noqa: PLR0917 - the parts of one citation
    ledger: Ledger,
    network: Network,
    trials: Trials,
    where: tuple[str, str],
    t: int,
    cited: tuple[str, int | None],
    heads: list[Column],
    imbalance: View,
) -> View:
    case, junction = where
    column, place = cited
    if place is not None:
        at = trials.uses[t][place]
        return View.whole(heads[at]) if column == "head" else imbalance.take(np.array([at]))
    if column == "level":
        return ledger.view("reservoirs.level", case, [network.nodes[int(trials.reservoir[t])]])
    if column == "start":
        return ledger.view("solver.start", "", [junction])
    said = Program("step of the search: the range of levels (at least 1 m), doubled each time the head lies outside")
    entered = ledger.enter("junctions.step", LENGTH, [str(t + 1)], [trials.step[t]], said, case=case, of=junction)
    return View.whole(entered)


def _enter_trial_flows(ledger: Ledger, network: Network, trials: Trials, case: str, junction: str) -> View:
    count = len(trials.head)
    rows = _labels(count)
    if len(trials.branches) > MOST_BRANCHES:
        said = Program("sum of the flows toward the junction less its withdrawal, as evaluated at this trial head")
        held = ledger.enter("junctions.imbalance", FLOW, rows, trials.imbalance, said, case=case, of=junction)
        return View.whole(held)
    terms: View | None = None
    for k, pipe in enumerate(trials.branches.tolist()):
        origin = Solved("head at the far end less trial head = head lost at this flow", "branch by branch", count, ())
        name = network.pipes.rows[pipe]
        column = ledger.enter("pipes.flow_toward", FLOW, rows, trials.flows[:, k], origin, case=case, of=name)
        view = View.whole(column)
        terms = view if terms is None else joined(terms, view)
    withdrawal = ledger.view("junctions.withdrawal", case, [junction])
    into = [np.arange(count)] * len(trials.branches)
    signs = [np.ones(count)] * len(trials.branches)
    if withdrawal.which[0] != ABSENT:
        drawn = withdrawal.take(np.zeros(count, dtype=np.int64))
        terms = drawn if terms is None else joined(terms, drawn)
        into.append(np.arange(count))
        signs.append(-np.ones(count))
    if terms is None:
        return View((), np.full(count, ABSENT), np.zeros(count, dtype=np.int64), tuple(rows))
    column = Accountant(ledger, case, junction).combine(
        "junctions.imbalance",
        "sum",
        terms,
        np.concatenate(into),
        rows,
        words="flow toward the junction less its withdrawal, at this trial head",
        signs=np.concatenate(signs),
    )
    return View.whole(column)


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
