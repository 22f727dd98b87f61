"""Loop correction, the hand method of Hardy Cross (1936), for small networks.

Flows satisfy continuity from the start and ever after, for a correction adds the same flow all round a loop. Each loop
in its turn is corrected by what it fails to close over the sum of n h/Q of its pipes, with the flows just corrected.
No correction is damped: n is 2 for turbulent flow with Darcy f, where the true power is a little less, so that
corrections fall short rather than overshoot.
"""

from __future__ import annotations

import numpy as np

from calc.components.network import Network
from calc.solve.branch import Array, Branches, closing_limit
from calc.solve.grid import SingularGrid
from calc.solve.loop_method import LoopMethod
from calc.solve.loop_rules import loop_correction
from calc.solve.solution import Corrections, Settings, Solution, StopTest, unmet

MOST_LOOPS = 12
"""Loops and paths up to which a hand would take the method on."""
MOST_PIPES = 40
"""Pipes up to which it would."""
SHARE = 1e-9
"""Corrections are brought below this share of the largest flow, or the tolerance where it is less,"""
CLOSING = 0.1
"""and closing errors below this share of what is accepted of any method, for they pass to the heads whole."""


class Table:
    """The corrections made so far."""

    def __init__(self, method: LoopMethod, start: Array) -> None:
        self.method, self.start, self.flow = method, start, start
        self.error: list[float] = []
        self.rows: list[tuple[int, int, float, float, float, float]] = []
        self.flows: list[Array] = []
        self.largest_change = 0.0

    def sweep(self) -> None:
        """Correct every loop once."""
        method, number = self.method, len(self.error) + 1
        self.largest_change = 0.0
        for k in range(len(method.loops)):
            lost, rate = method.evaluate(self.flow)
            loss, excess = method.loss_around(k, lost)
            rates = float(np.abs(method.around[k]) @ rate)
            change = float(loop_correction.body(excess=excess, rate_sum=rates)) if rates != 0 else 0.0
            self.rows.append((number, k, loss, excess, rates, change))
            self.flows.append(self.flow)
            self.flow = self.flow + change * method.around[k]
            self.largest_change = max(self.largest_change, abs(change))
        self.error.append(method.largest_excess(method.evaluate(self.flow)[0]))

    def tests(self, tolerance: float) -> tuple[StopTest, ...]:
        """Return the tests by which the sweeps end."""
        method, grid = self.method, self.method.iteration.grid
        lost, _ = method.evaluate(self.flow)
        running = np.where(method.network.open, self.flow, 0.0)
        largest = max(float(np.max(np.abs(q), initial=0.0)) for q in (running, method.network.withdrawal))
        least = min(tolerance, SHARE * largest + float(np.max(method.iteration.trickle)))
        left = float(np.max(np.abs(grid.imbalance(running)), initial=0.0))
        closing = CLOSING * closing_limit(method.heads(lost))
        return (
            StopTest("largest correction in the last sweep", self.largest_change, least, "m³/s"),
            StopTest("largest closing error of energy round a loop or path", method.largest_excess(lost), closing, "m"),
            StopTest("largest imbalance at a junction", left, tolerance, "m³/s"),
        )

    def corrections(self) -> Corrections:
        """Return the table as columns."""
        sweep, loop, loss, excess, rate, change = zip(*self.rows, strict=True) if self.rows else [()] * 6
        method, count = self.method, len(self.method.network.open)
        return Corrections(
            loops=method.loops,
            trails=method.along,
            start=self.start,
            sweep=np.array(sweep, dtype=np.int64),
            loop=np.array(loop, dtype=np.int64),
            flow=np.array(self.flows, dtype=np.float64).reshape(-1, count),
            loss=np.array(loss, dtype=np.float64),
            excess=np.array(excess, dtype=np.float64),
            rate=np.array(rate, dtype=np.float64),
            change=np.array(change, dtype=np.float64),
            error=np.array(self.error, dtype=np.float64),
        )


def solve_by_loop_correction(network: Network, settings: Settings, branches: Branches) -> Solution:
    """Return the heads and flows of a small network, with the table of corrections.

    Parameters
    ----------
    network : Network
        A case whose junctions are all joined to reservoirs by open pipes; it may have none.
    settings : Settings
        Tolerance, start and limit.
    branches : Branches
        The pipes of the network.
    """
    heads, flows = np.full(len(network.nodes), np.nan), np.full(len(network.open), np.nan)
    with np.errstate(all="ignore"):
        method = LoopMethod(network, branches)
        try:
            table = Table(method, method.begin(settings))
        except SingularGrid as error:
            reason = f"the rough heads to begin from have no single answer ({error})"
            return Solution(False, "loop-correction", reason, 0, heads, flows)  # noqa: FBT003 - the first field of a result
        reason = _sweep(table, settings)
        tests = table.tests(settings.tolerance)
        reason = "; ".join(part for part in (reason, unmet(tests)) if part)
        if not reason:
            lost, _ = method.evaluate(table.flow)
            heads, flows = method.heads(lost), np.where(network.open, table.flow, 0.0) + 0.0  # no negative zeros
    kept = table.corrections()
    return Solution(
        not reason, "loop-correction", reason, len(kept.error), heads, flows, None, None, tests, corrections=kept
    )


def _sweep(table: Table, settings: Settings) -> str:
    """Correct until settled; return why not, in words, if so."""
    if not table.method.loops:
        return ""
    while len(table.error) < settings.limit:
        table.sweep()
        if not np.all(np.isfinite(table.flow)):
            return "the flows are no longer finite numbers"
        if not unmet(table.tests(settings.tolerance)):
            return ""
    return f"not settled in {settings.limit} sweep{'s' * (settings.limit != 1)}"
