"""One step of Newton's method on heads and flows together, and what must hold before it may stop."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calc.components.network import Network
from calc.solve.branch import ROUNDING, Array, Branches
from calc.solve.grid import Grid, SingularGrid
from calc.solve.height import sum_with_rest
from calc.solve.solution import Settings

RELATIVE = 1e-10
"""A flow counts as found when the correction its energy error calls for is below this share of it,"""
SHARE = 1e-11
"""or below this share of the largest flow; slopes at rest are those at this flow."""
CLOSING = 1e-11
"""Closing errors of energy are brought below this share of the range of heads."""
TRICKLE = 1e-12
"""Velocity (m/s) that counts as rest; the least at which slopes are taken when nothing flows at all."""
OVERSHOT = 0.9
"""A step is shortened when the slope along it has turned to more than this share of what it was."""
SHORTENINGS = 12
"""Times one step may be shortened."""
DECIDED = 1e-6
"""Steps that change flows by less than this share of the largest are too short to be judged."""
RANGES = (np.inf, 1e12, 1e9, 1e6)
"""Largest ratios of conductances kept, in turn, until the system for the heads is solved well enough."""
KEPT = 1e-3
"""It is when the step leaves imbalances below this share of the largest flow or a tenth of what they were."""


@dataclass(frozen=True)
class State:
    """Heads (value and rest), flows, and how far they are from the laws.

    Attributes
    ----------
    error : ndarray, shape (m,)
        Head at ``from`` less head at ``to`` less head lost, m; 0 where shut.
    imbalance : ndarray, shape (junctions,)
        Flow toward each junction less its withdrawal, m³/s.
    conductance : ndarray, shape (m,)
        1/slope, m²/s; 0 where shut.
    largest : float
        Largest flow or withdrawal, m³/s.
    """

    head: Array
    rest: Array
    flow: Array
    loss: Array
    error: Array
    imbalance: Array
    conductance: Array
    largest: float

    @property
    def largest_imbalance(self) -> float:
        """Largest magnitude of an imbalance, m³/s; 0 without junctions."""
        return float(np.max(np.abs(self.imbalance), initial=0.0))

    @property
    def largest_error(self) -> float:
        """Largest magnitude of a closing error of energy, m; 0 without pipes."""
        return float(np.max(np.abs(self.error), initial=0.0))


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
        self.between = self.grid.between_reservoirs
        unit = branches.flow_at_unit_velocity
        loss, _ = branches.losses(unit)
        self.linear = _capped(np.where(network.open, unit / loss, 0.0), RANGES[1])
        self.quadratic = loss / unit**2
        self.trickle = TRICKLE * unit

    def begin(self, settings: Settings) -> State:
        """Return the start: the answer for linear pipes, or the flows at the heads given."""
        network, none = self.network, np.zeros(len(self.network.nodes))
        level = network.level[~np.isnan(network.level)]
        head = np.where(np.isnan(network.level), float(np.mean(level)), network.level)
        imbalance = self.grid.imbalance(self.linear * self.grid.drop(head, none))
        head = head + self.grid.solve(self.linear, imbalance)
        given = [node for node in network.unknown if network.nodes[node] in settings.start]
        for node in given:
            head[node] = settings.start[network.nodes[node]]
        drop = self.grid.drop(head, none)
        flow = self.linear * drop
        if given or np.any(self.between):
            exact = self.between | (len(given) > 0)
            flow = np.where(exact, self.branches.flows(np.where(exact, drop, 0.0)), flow)
        return self.state(head, none, flow)

    def state(self, head: Array, rest: Array, flow: Array) -> State:
        """Return the residuals at given heads and flows: the one evaluation of all pipes in a step."""
        loss, slope = self.branches.losses(flow)
        withdrawn = np.max(np.abs(self.network.withdrawal))
        largest = float(max(np.max(np.abs(flow), initial=0.0), withdrawn))
        least = 2 * self.quadratic * np.maximum(SHARE * largest, self.trickle)
        conductance = np.where(self.network.open, 1.0 / np.maximum(slope, least), 0.0)
        error = np.where(self.network.open, self.grid.drop(head, rest) - loss, 0.0)
        return State(head, rest, flow, loss, error, self.grid.imbalance(flow), conductance, largest)

    def step(self, state: State) -> tuple[State, float]:
        """Return the next state, and the share of the full step that led there.

        Along a step that keeps continuity, Σ error · change is the slope of the pipes' content: it begins
        positive and falls. Where it comes out far below zero the step went too far.
        """
        change, turn = self._turn(state)
        before = float(np.sum(state.error * turn))
        judged = (
            before > self._doubt(state, change, turn)
            and np.max(np.abs(turn), initial=0.0) > DECIDED * state.largest
            and state.largest_imbalance <= DECIDED * state.largest
        )
        share = 1.0
        new = self._moved(state, change, turn, share)
        for _ in range(SHORTENINGS):
            after = float(np.sum(new.error * turn))
            finite = np.isfinite(after)
            if finite and not (judged and after < -OVERSHOT * before):
                break
            share *= min(0.5, max(0.1, before / (before - after))) if finite else 0.1
            new = self._moved(state, change, turn, share)
        return new, share

    def _doubt(self, state: State, change: Array, turn: Array) -> float:
        """Return the most by which imbalances, before a step and left by it, can falsify the slope along it, m·m³/s."""
        left = state.imbalance + self.grid.gathered(turn)
        return float(np.sum(np.abs(change[self.network.unknown]) * (np.abs(state.imbalance) + np.abs(left))))

    def _turn(self, state: State) -> tuple[Array, Array]:
        """Return the changes of head, shape (n,), and of flow, shape (m,), that a full step makes.

        Where wide short pipes hang on narrow long ones the system may be singular to rounding; the widest are
        then taken as less wide, which changes the way to the answer and not the answer.
        """
        held = state.largest_imbalance
        enough = max(KEPT * state.largest + float(np.max(self.trickle)), 0.1 * held)
        told = held > RELATIVE * state.largest  # then a step that leaves the imbalance is no step
        fair: tuple[Array, Array] | None = None
        for largest in RANGES:
            conductance = _capped(state.conductance, largest)
            pushed = np.where(self.between, 0.0, conductance * state.error)
            try:
                change = self.grid.solve(conductance, state.imbalance + self.grid.gathered(pushed))
            except SingularGrid:
                continue
            drawn = conductance * self.grid.drop(change, np.zeros_like(change))
            turn = pushed + np.where(self.between, 0.0, drawn)
            left = float(np.max(np.abs(state.imbalance + self.grid.gathered(turn)), initial=0.0))
            if left <= enough and (left <= max(0.5 * held, KEPT * float(np.max(np.abs(turn)))) or not told):
                return change, turn
            fair = fair or ((change, turn) if left <= enough else None)
        if fair is not None:
            return fair
        raise SingularGrid("the conductances of the pipes differ too much")

    def _moved(self, state: State, change: Array, turn: Array, share: float) -> State:
        head, rest = sum_with_rest(state.head, state.rest, share * change)
        return self.state(head, rest, state.flow + share * turn)

    def settled(self, state: State, tolerance: float) -> bool:
        """Return whether every flow is found as closely as rounding and the stated shares allow."""
        drop = np.abs(state.loss + state.error)
        noise = 8 * ROUNDING * (np.abs(state.loss) + drop)
        error = np.abs(state.error)
        flows = RELATIVE * np.abs(state.flow) + min(SHARE * state.largest, tolerance) + self.trickle
        rest = float(np.max(self.trickle))
        balanced = state.largest_imbalance <= min(tolerance, RELATIVE * state.largest + rest)
        found = np.all(state.conductance * error <= flows + state.conductance * noise)
        closed = np.all(error <= CLOSING * float(np.ptp(state.head)) + noise)
        return bool(balanced and found and closed)


def _capped(conductance: Array, largest: float) -> Array:
    carrying = conductance[conductance > 0]
    return np.minimum(conductance, largest * np.min(carrying, initial=np.inf))
