"""What is printed of large works: the pipes that lose most head, and the junctions at their ends."""

from __future__ import annotations

import numpy as np

from calc.account import Account, CaseAccount

MOST_PIPES = 60
"""Pipes up to which everything is printed; above, the rest is cited from the files of the package."""


def shown_pipes(case: CaseAccount) -> tuple[str, ...]:
    """Return the pipes of a case that are printed, in the order of the project or by head lost where they are many."""
    every = case.network.pipes.rows
    if len(every) <= MOST_PIPES or case.columns is None:
        return every[:MOST_PIPES]
    order = np.argsort(-np.abs(case.columns.results.head_loss.values), kind="stable")[:MOST_PIPES]
    return tuple(case.columns.running[int(k)] for k in order)


def shown_junctions(account: Account, case: CaseAccount) -> tuple[str, ...]:
    """Return the junctions of a case that are printed: all, or those at the ends of the printed pipes."""
    project = account.project
    every = tuple(project.junctions)
    if len(every) <= MOST_PIPES:
        return every
    ends = {project.pipes[pipe].text(end) for pipe in shown_pipes(case) for end in ("from", "to")}
    return tuple(name for name in every if name in ends)[:MOST_PIPES]


def shown_inputs(account: Account) -> set[str] | None:
    """Return the ids of the components whose inputs are printed, or None where all are."""
    project = account.project
    if max(len(project.pipes), len(project.junctions)) <= MOST_PIPES:
        return None
    shown: set[str] = set()
    for case in account.cases.values():
        shown |= {*shown_pipes(case), *shown_junctions(account, case)}
    for judged in account.verdicts:
        if judged.governing is not None:
            shown.add(judged.governing.subject)
    return shown
