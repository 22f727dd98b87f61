"""Bracketing: one unknown junction head, found between trials of opposite imbalance."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calc.components.network import Network
from calc.solve.branch import Array, Branches, closing_limit
from calc.solve.height import Height
from calc.solve.search import WITHIN, Balance, Outcome, Point, Search, Trial
from calc.solve.solution import Settings, Solution, StopTest, Trials, unmet


class Junction:
    """The one junction of a network and the pipes that touch it.

    Attributes
    ----------
    node : int
        The junction.
    pipes : ndarray of int
        Those that touch it, shape (k,).
    toward : ndarray
        +1 where a positive flow runs toward the junction, else -1. Shape (k,).
    """

    def __init__(self, network: Network) -> None:
        self.network = network
        self.node = int(network.unknown[0])
        self.pipes = np.flatnonzero((network.start == self.node) | (network.end == self.node))
        self.toward: Array = np.where(network.end[self.pipes] == self.node, 1.0, -1.0)

    def search(self, settings: Settings) -> Search:
        """Return the search among the levels that open pipes join to the junction."""
        network, pipes = self.network, self.pipes[self.network.open[self.pipes]]
        nodes = np.where(network.end[pipes] == self.node, network.start[pipes], network.end[pipes])
        levels = [(float(network.level[node]), int(node)) for node in nodes]
        start = settings.start.get(network.nodes[self.node])
        return Search(levels, start, settings.narrowing, settings.tolerance)

    def heads(self, height: Height) -> Array:
        """Return the heads of all nodes, m, shape (n,)."""
        return np.where(np.isnan(self.network.level), height.value, self.network.level)

    def drops(self, height: Height) -> Array:
        """Return head at ``from`` less head at ``to`` of each pipe, m, to the last digit; shape (m,)."""
        network, head = self.network, self.heads(height)
        side = np.zeros(len(network.open))
        side[self.pipes] = -self.toward * height.rest
        drop: Array = (head[network.start] - head[network.end]) + side
        return drop

    def balance(self, flow: Array) -> Balance:
        """Return the imbalance that flows of shape (m,) leave at the junction, with their size."""
        parts = np.append(self.toward * flow[self.pipes], -self.network.withdrawal[self.node])
        sizes = np.abs(parts)
        return Balance(float(np.sum(parts)), float(np.max(sizes)), float(np.sum(sizes)))


@dataclass(frozen=True)
class Row:
    """One evaluation: the trial, the bracket in force when it was chosen, and what came of it."""

    trial: Trial
    low: Point | None
    high: Point | None
    flow: Array
    balance: Balance


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
    junction = Junction(network)
    search = junction.search(settings)
    rows, reason = _try_heads(junction, search, branches, settings.limit)
    outcome = search.outcome()
    best = rows[outcome.best.row]
    tests = _tests(junction, branches, outcome, best, settings.tolerance)
    failed = unmet(tests)
    if reason or failed:
        named = f"junction {network.nodes[junction.node]}: "
        reason = named + "; ".join(part for part in (reason, failed) if part)
    head, flow = junction.heads(best.trial.height), best.flow
    if reason:
        head, flow = np.full_like(head, np.nan), np.full_like(flow, np.nan)
    table = _table(junction, rows, -1 if reason else outcome.best.row)
    return Solution(not reason, "bracketing", reason, len(rows), head, flow, table, None, tests)


def _try_heads(junction: Junction, search: Search, branches: Branches, limit: int) -> tuple[list[Row], str]:
    rows: list[Row] = []
    trying = search.run()
    try:
        trial = next(trying)
        while len(rows) < limit:
            guess = rows[-1].flow if rows else None
            flow = branches.flows(junction.drops(trial.height), guess)
            rows.append(Row(trial, search.low, search.high, flow, junction.balance(flow)))
            trial = trying.send(rows[-1].balance)
            if not np.isfinite(rows[-1].balance.imbalance):
                return rows, "the flows are no longer finite numbers"
    except StopIteration:
        return rows, ""
    return rows, f"not found in {limit} trials"


def _tests(
    junction: Junction, branches: Branches, outcome: Outcome, best: Row, tolerance: float
) -> tuple[StopTest, ...]:
    loss, _ = branches.losses(best.flow)
    error = np.where(branches.open, np.abs(junction.drops(best.trial.height) - loss), 0.0)
    limit = closing_limit(junction.heads(best.trial.height))
    return (
        StopTest("imbalance at the junction", abs(outcome.best.imbalance), tolerance, "m³/s"),
        StopTest("width of the bracket, signs opposite at its ends", outcome.width, WITHIN, "m"),
        StopTest("largest closing error of energy", float(np.max(error)), limit, "m"),
    )


def _table(junction: Junction, rows: list[Row], accepted: int) -> Trials:
    nan = float("nan")
    flows = np.array([junction.toward * row.flow[junction.pipes] for row in rows])
    return Trials(
        junction=junction.node,
        branches=junction.pipes,
        head=np.array([row.trial.height.value for row in rows]),
        low_end=np.array([nan if row.low is None else row.low.height.value for row in rows]),
        high_end=np.array([nan if row.high is None else row.high.height.value for row in rows]),
        imbalance_low=np.array([nan if row.low is None else row.low.imbalance for row in rows]),
        imbalance_high=np.array([nan if row.high is None else row.high.imbalance for row in rows]),
        flows=flows + 0.0,  # no negative zeros
        imbalance=np.array([row.balance.imbalance for row in rows]),
        rule=tuple(row.trial.rule for row in rows),
        uses=tuple(row.trial.uses for row in rows),
        step=np.array([row.trial.step for row in rows]),
        reservoir=np.array([row.trial.reservoir for row in rows], dtype=np.int64),
        accepted=accepted,
    )
