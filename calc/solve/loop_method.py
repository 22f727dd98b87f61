"""The loops of one case: what the pipes lose round them, how fast that rises, and the flows to begin from."""

from __future__ import annotations

import numpy as np

from calc.components.network import Network
from calc.components.pipe import losses
from calc.equation import ARRAYS, value_of
from calc.solve.branch import Array, Branches
from calc.solve.iteration import Iteration
from calc.solve.loop_rules import QUADRATIC, loss_exponent, loss_rate, path_excess
from calc.solve.loops import Trail, around, brought, direction, find_loops, trails
from calc.solve.solution import Loop, Settings

REST = 1e-9
"""A closing pipe begins at rest where the rough heads at its ends differ by less than this share of their range."""
FIGURES = 2
"""Figures to which the flows assumed are rounded."""


class LoopMethod:
    """The loops of a case, and what one correction takes.

    Parameters
    ----------
    network : Network
        A case whose junctions are all joined to reservoirs by open pipes; it may have none.
    branches : Branches
        Its pipes.
    """

    def __init__(self, network: Network, branches: Branches) -> None:
        self.network, self.branches = network, branches
        self.iteration = Iteration(network, branches)
        self.along: tuple[Trail, ...] = trails(network, self.iteration.quadratic)
        self.loops: tuple[Loop, ...] = find_loops(network, self.along, self.iteration.quadratic)
        self.around = around(self.loops, len(network.open))
        level = network.level
        ends = [(loop.nodes[0], loop.nodes[-1]) for loop in self.loops]
        self.levels = [(float(level[a]), float(level[b])) if a != b else (0.0, 0.0) for a, b in ends]

    def evaluate(self, flow: Array) -> tuple[Array, Array]:
        """Return the head that each pipe loses, m, and its n h/Q, s/m², which is 0 at rest."""
        pipes, limits = self.branches.pipes, self.branches.limits
        found = losses(ARRAYS, pipes, limits, flow)
        lost = value_of(found.head_loss)
        exponent = value_of(loss_exponent(ARRAYS, pipes, limits, found))
        known = np.where(np.isnan(exponent), QUADRATIC, exponent)
        rate = loss_rate.body(exponent=known, head_loss=lost, flow=flow)
        return lost, np.where(self.network.open & (lost != 0), rate, 0.0)

    def loss_around(self, k: int, lost: Array) -> tuple[float, float]:
        """Return the head lost round a loop in its sense, and its excess, m."""
        loss = float(self.around[k] @ np.where(self.network.open, lost, 0.0))
        higher, lower = self.levels[k]
        return loss, float(path_excess.body(loss=loss, higher=higher, lower=lower)) if self.loops[k].path else loss

    def largest_excess(self, lost: Array) -> float:
        """Return the largest excess of any loop, m, without sign; 0 without loops."""
        return max((abs(self.loss_around(k, lost)[1]) for k in range(len(self.loops))), default=0.0)

    def begin(self, settings: Settings) -> Array:
        """Return the flows to begin from, which satisfy continuity, m³/s.

        Rough heads, those of pipes whose loss is linear in flow, put a flow in each closing pipe by its own law; it is
        rounded to two figures. The others follow.

        Raises
        ------
        SingularGrid
            If the rough heads have no single answer.
        """
        network, none = self.network, np.zeros(len(self.network.nodes))
        head = self.iteration.begin(settings).head
        drop = self.iteration.grid.drop(head, none)
        moving = network.open & (np.abs(drop) > REST * float(np.ptp(head)))
        rough = self.branches.flows(np.where(moving, drop, 0.0))
        closing = np.array([_rounded(float(rough[loop.closing])) for loop in self.loops])
        of_closing, of_withdrawals = brought(network, self.along, self.loops)
        flow = closing @ of_closing + network.withdrawal @ of_withdrawals
        lost, rate = self.evaluate(flow)
        for k, loop in enumerate(self.loops):
            if not np.abs(self.around[k]) @ rate and (excess := self.loss_around(k, lost)[1]):
                driven = np.where(np.arange(len(flow)) == loop.closing, -direction(loop) * excess, 0.0)
                closing[k] = _rounded(float(self.branches.flows(driven)[loop.closing]))
        return np.asarray(closing @ of_closing + network.withdrawal @ of_withdrawals, dtype=np.float64)

    def heads(self, lost: Array) -> Array:
        """Return the heads that the losses along the forest leave, m."""
        head = self.network.level.copy()
        for node in self.network.unknown.tolist():
            trail = self.along[node]
            root = (self.network.start if trail[0][1] > 0 else self.network.end)[trail[0][0]]
            head[node] = self.network.level[root] - sum(sign * float(lost[pipe]) for pipe, sign in trail)
        return head


def _rounded(flow: float) -> float:
    return float(f"{flow:.{FIGURES - 1}e}")
