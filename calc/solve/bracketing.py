"""Bracketing: one unknown junction head, found between trials of opposite imbalance."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calc.components.network import Network
from calc.solve.branch import ROUNDING, Array, Branches
from calc.solve.height import Height
from calc.solve.search import WITHIN, Balance, Outcome, Point, Search, Trial
from calc.solve.solution import Rows, Settings, Solution, StopTest, Trials

ENERGY = 1e-9
"""Largest closing error of energy along a branch, as a share of the range of heads."""


@dataclass(frozen=True)
class Row:
    """One evaluation: the trial, the bracket in force when it was chosen, and what came of it."""

    trial: Trial
    low: Point | None
    high: Point | None
    flow: Array
    imbalance: float


def solve_by_bracketing(network: Network, settings: Settings, branches: Branches) -> Solution:
    """Return the head of the one junction, with the flows and the trial table.

    Parameters
    ----------
    network : Network
        A case with one unknown head, joined to a reservoir by an open pipe.
    settings : Settings
        Tolerance, narrowing, start and limit.
    branches : Branches
        The pipes of the network.
    """
    junction = int(network.unknown[0])
    search = _search(network, settings, junction)
    rows: list[Row] = []
    trying = search.run()
    try:
        trial = next(trying)
        while len(rows) < settings.limit:
            rows.append(_evaluate(network, branches, junction, trial, search, rows))
            trial = trying.send(_balance(network, junction, rows[-1]))
        reason = f"not found in {settings.limit} trials"
    except StopIteration:
        reason = ""
    outcome = search.outcome()
    tests = _tests(network, branches, junction, outcome, rows, settings)
    reason = reason or _reason(network, junction, tests)
    head, flow = np.full(len(network.nodes), np.nan), np.full(len(network.open), np.nan)
    if not reason:
        head = np.where(np.isnan(network.level), rows[outcome.best.row].trial.height.value, network.level)
        flow = rows[outcome.best.row].flow
    table = _table(network, junction, rows, -1 if reason else outcome.best.row)
    return Solution(not reason, "bracketing", reason, len(rows), head, flow, table, None, tests)


def touching(network: Network, junction: int) -> tuple[Rows, Array]:
    """Return the pipes at a junction, and +1 where a positive flow runs toward it, else -1."""
    pipes = np.flatnonzero((network.start == junction) | (network.end == junction))
    return pipes, np.where(network.end[pipes] == junction, 1.0, -1.0)


def _search(network: Network, settings: Settings, junction: int) -> Search:
    pipes, _ = touching(network, junction)
    pipes = pipes[network.open[pipes]]
    nodes = np.where(network.end[pipes] == junction, network.start[pipes], network.end[pipes])
    levels = [(float(network.level[node]), int(node)) for node in nodes]
    start = settings.start.get(network.nodes[junction])
    return Search(levels, start, settings.narrowing, settings.tolerance)


def differences(network: Network, junction: int, height: Height) -> Array:
    """Return head at ``from`` less head at ``to`` of each pipe, m, when the junction stands at a height."""
    head = np.where(np.isnan(network.level), height.value, network.level)
    rest = np.zeros_like(head)
    rest[junction] = height.rest
    return (head[network.start] - head[network.end]) + (rest[network.start] - rest[network.end])


def _evaluate(
    network: Network, branches: Branches, junction: int, trial: Trial, search: Search, rows: list[Row]
) -> Row:
    flow = branches.flows(differences(network, junction, trial.height), rows[-1].flow if rows else None)
    pipes, sign = touching(network, junction)
    imbalance = float(np.sum(sign * flow[pipes]) - network.withdrawal[junction])
    return Row(trial, search.low, search.high, flow, imbalance)


def _balance(network: Network, junction: int, row: Row) -> Balance:
    pipes, _ = touching(network, junction)
    all_flows = np.abs(np.append(row.flow[pipes], network.withdrawal[junction]))
    return Balance(row.imbalance, float(np.max(all_flows)), float(np.sum(all_flows)))


def _tests(
    network: Network, branches: Branches, junction: int, outcome: Outcome, rows: list[Row], settings: Settings
) -> tuple[StopTest, ...]:
    row = rows[outcome.best.row]
    difference = differences(network, junction, row.trial.height)
    loss, _ = branches.losses(row.flow)
    error = np.where(network.open, np.abs(difference - loss), 0.0)
    heads = np.append(network.level[~np.isnan(network.level)], row.trial.height.value)
    limit = ENERGY * float(np.ptp(heads)) + 8 * ROUNDING * float(np.max(np.abs(heads)))
    return (
        StopTest("imbalance at the junction", abs(outcome.best.imbalance), settings.tolerance, "m³/s"),
        StopTest("width of the bracket, signs opposite at its ends", outcome.width, WITHIN, "m"),
        StopTest("largest closing error of energy", float(np.max(error)), limit, "m"),
    )


def _reason(network: Network, junction: int, tests: tuple[StopTest, ...]) -> str:
    failed = [
        f"{test.words} {test.value:.3g} {test.unit} against {test.limit:.3g} {test.unit}"
        for test in tests
        if not test.met
    ]
    return f"junction {network.nodes[junction]}: {'; '.join(failed)}" if failed else ""


def _table(network: Network, junction: int, rows: list[Row], accepted: int) -> Trials:
    pipes, sign = touching(network, junction)
    nan = float("nan")
    return Trials(
        junction=junction,
        branches=pipes,
        head=np.array([row.trial.height.value for row in rows]),
        low_end=np.array([nan if row.low is None else row.low.height.value for row in rows]),
        high_end=np.array([nan if row.high is None else row.high.height.value for row in rows]),
        imbalance_low=np.array([nan if row.low is None else row.low.imbalance for row in rows]),
        imbalance_high=np.array([nan if row.high is None else row.high.imbalance for row in rows]),
        flows=np.array([sign * row.flow[pipes] for row in rows]) + 0.0,
        imbalance=np.array([row.imbalance for row in rows]),
        rule=tuple(row.trial.rule for row in rows),
        uses=tuple(row.trial.uses for row in rows),
        step=np.array([row.trial.step for row in rows]),
        reservoir=np.array([row.trial.reservoir for row in rows], dtype=np.int64),
        accepted=accepted,
    )
