"""Newton's method for any number of junctions and loops: the gradient method of Todini & Pilati (1988).

Each step solves for the *change* of the heads from the residuals, so that rounding of the heads themselves does
not enter; heads are summed to twice the digits of a float. The start is the answer for pipes whose loss is
linear in flow, which satisfies continuity; from there the steps descend on a convex function (the content of
the pipes, Collins et al. 1978), along which a step that overshoots is shortened.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calc.components.network import Network
from calc.solve.branch import ROUNDING, Array, Branches
from calc.solve.grid import Grid, SingularGrid
from calc.solve.record import ENERGY, History
from calc.solve.solution import Settings, Solution, StopTest

RELATIVE = 1e-10
"""A flow counts as found when its next correction is below this share of it,"""
SHARE = 1e-11
"""or below this share of the largest flow; slopes at rest are those at this flow."""
CLOSING = 1e-11
"""Closing errors of energy are brought below this share of the range of heads."""
OVERSHOT = 0.9
"""A step is shortened when the slope along it has turned to more than this share of what it was."""
SHORTENINGS = 12
"""Times one step may be shortened."""


@dataclass(frozen=True)
class State:
    """Heads (value and rest), flows, and how far they are from the laws.

    Attributes
    ----------
    error : ndarray, shape (m,)
        Head at ``from`` less head at ``to`` less head lost, m; 0 where shut.
    imbalance : ndarray, shape (junctions,)
        Flow toward each junction less its withdrawal, m³/s.
    correction : ndarray, shape (m,)
        |error| over slope: what the energy error alone would change in the flow, m³/s.
    conductance : ndarray, shape (m,)
        1/slope, m²/s; 0 where shut.
    """

    head: Array
    rest: Array
    flow: Array
    loss: Array
    error: Array
    imbalance: Array
    correction: Array
    conductance: Array


class Iteration:
    """The parts of a case that stay the same from step to step.

    Parameters
    ----------
    network : Network
        A case whose junctions are all joined to reservoirs.
    branches : Branches
        Its pipes.
    """

    def __init__(self, network: Network, branches: Branches) -> None:
        self.network, self.branches, self.grid = network, branches, Grid(network)
        flow = branches.flow_at_unit_velocity
        loss, _ = branches.losses(flow)
        self.linear = np.where(network.open, flow / loss, 0.0)
        self.quadratic = loss / flow**2
        self.trickle = 1e-15 * flow

    def begin(self, settings: Settings) -> State:
        """Return the start: linear pipes, or the flows at the heads given."""
        network = self.network
        fixed = network.level[~np.isnan(network.level)]
        head = np.where(np.isnan(network.level), float(np.mean(fixed)), network.level)
        given = [(i, settings.start[n]) for i, n in enumerate(network.nodes) if n in settings.start]
        flow = self.linear * self.grid.drop(head, np.zeros_like(head))
        change = self.grid.solve(self.linear, self.grid.imbalance(flow))
        head = head + change
        for node, start in given:
            if np.isnan(network.level[node]):
                head[node] = start
        flow = self.linear * self.grid.drop(head, np.zeros_like(head))
        between = self.grid.between_reservoirs
        if given or np.any(between):
            drop = np.where(between | bool(given), self.grid.drop(head, np.zeros_like(head)), 0.0)
            known = self.branches.flows(drop)
            flow = np.where((between | bool(given)) & (known != 0.0), known, np.where(between, 0.0, flow))
        return self.state(head, np.zeros_like(head), flow)

    def state(self, head: Array, rest: Array, flow: Array) -> State:
        """Return the residuals at given heads and flows: the one evaluation of all pipes in a step."""
        loss, slope = self.branches.losses(flow)
        drop = self.grid.drop(head, rest)
        still = np.maximum(SHARE * self._scale(flow), self.trickle)
        with np.errstate(all="ignore"):
            conductance = 1.0 / np.maximum(slope, 2 * self.quadratic * still)
        closed = ~self.network.open
        error = np.where(closed, 0.0, drop - loss)
        conductance = np.where(closed, 0.0, conductance)
        return State(
            head, rest, flow, loss, error, self.grid.imbalance(flow), np.abs(error) * conductance, conductance
        )

    def step(self, state: State) -> tuple[State, float]:
        """Return the next state, and the share of the full step that led there."""
        between = self.grid.between_reservoirs
        pushed = np.where(between, 0.0, state.conductance * state.error)
        change = self.grid.solve(state.conductance, state.imbalance + self.grid.gathered(pushed))
        turn = pushed + np.where(
            between, 0.0, state.conductance * self.grid.drop(change, np.zeros_like(change))
        )
        before = float(np.sum(state.error * turn))
        share = 1.0
        for _ in range(SHORTENINGS):
            head, rest = _raise(state.head, state.rest, share * change)
            new = self.state(head, rest, state.flow + share * turn)
            small = np.max(np.abs(turn), initial=0.0) <= 1e-6 * self._scale(state.flow)
            after = float(np.sum(new.error * turn))
            if small or (np.isfinite(after) and after >= -OVERSHOT * abs(before)):
                break
            share *= max(0.1, min(0.5, before / (before - after))) if np.isfinite(after) else 0.1
        return new, share

    def settled(self, state: State, tolerance: float) -> bool:
        """Return whether every flow is found as closely as rounding and the stated shares allow."""
        scale = self._scale(state.flow)
        noise = 8 * ROUNDING * state.conductance * (np.abs(state.loss) + np.abs(state.loss + state.error))
        allowed = RELATIVE * np.abs(state.flow) + min(SHARE * scale, tolerance) + noise
        balanced = np.max(np.abs(state.imbalance), initial=0.0) <= min(tolerance, RELATIVE * scale)
        closing = CLOSING * float(np.ptp(state.head)) + 8 * ROUNDING * (
            np.abs(state.loss) + np.abs(state.loss + state.error)
        )
        return bool(
            balanced and np.all(state.correction <= allowed) and np.all(np.abs(state.error) <= closing)
        )

    def _scale(self, flow: Array) -> float:
        return float(max(np.max(np.abs(flow), initial=0.0), np.max(np.abs(self.network.withdrawal))))


def solve_by_newton(network: Network, settings: Settings, branches: Branches) -> Solution:
    """Return the heads and flows of a network, with the iterations.

    Parameters
    ----------
    network : Network
        A case whose junctions are all joined to reservoirs by open pipes; it may have none.
    settings : Settings
        Tolerance, start and limit.
    branches : Branches
        The pipes of the network.
    """
    iteration = Iteration(network, branches)
    history = History(network)
    reason = ""
    state: State | None = None
    try:
        state = iteration.begin(settings)
        history.add(state.head, state.flow, state.error, state.imbalance)
        while not iteration.settled(state, settings.tolerance):
            if len(history) > settings.limit:
                reason = f"not settled in {settings.limit} iterations"
                break
            state, share = iteration.step(state)
            history.add(state.head, state.flow, state.error, state.imbalance, share)
            if not np.all(np.isfinite(state.flow)):
                reason = "the flows are no longer finite numbers"
                break
    except SingularGrid:
        reason = "the equations of the heads have no single answer"
    tests = _tests(network, settings, state)
    failed = [f"{t.words} {t.value:.3g} {t.unit} against {t.limit:.3g} {t.unit}" for t in tests if not t.met]
    reason = "; ".join([*([reason] if reason else []), *failed])
    head, flow = np.full(len(network.nodes), np.nan), np.full(len(network.open), np.nan)
    if not reason and state is not None:
        head, flow = state.head, np.where(network.open, state.flow, 0.0)
    steps = history.steps()
    return Solution(not reason, "newton", reason, max(0, len(history) - 1), head, flow, None, steps, tests)


def _tests(network: Network, settings: Settings, state: State | None) -> tuple[StopTest, ...]:
    if state is None:
        return ()
    limit = ENERGY * float(np.ptp(state.head)) + 8 * ROUNDING * float(np.max(np.abs(state.head)))
    return (
        StopTest(
            "largest imbalance at a junction",
            float(np.max(np.abs(state.imbalance), initial=0.0)),
            settings.tolerance,
            "m³/s",
        ),
        StopTest(
            "largest closing error of energy", float(np.max(np.abs(state.error), initial=0.0)), limit, "m"
        ),
    )


def _raise(head: Array, rest: Array, change: Array) -> tuple[Array, Array]:
    total = head + change
    back = total - head
    rest = (head - (total - back)) + (change - back) + rest
    value = total + rest
    return value, rest - (value - total)
