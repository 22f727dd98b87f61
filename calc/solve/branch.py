"""One branch at a time: the flow that loses a given head, for all pipes at once."""

from __future__ import annotations

from typing import cast

import numpy as np
import numpy.typing as npt

from calc.components.network import Network
from calc.components.pipe import PipeTerms, TransitionLimits, losses, transition_limits
from calc.equation import ARRAYS, Slope, Value

Array = npt.NDArray[np.float64]

ROUNDING = float(np.finfo(np.float64).eps)
SMALLEST_DIFFERENCE = 1e-250
"""Heads nearer than this (m) are taken as equal: the flow would be below 10⁻¹²⁰ m³/s."""
STEPS = 200
"""Steps allowed; four or five are usual, and halving alone would need about 60."""
ENERGY = 1e-9
"""Largest closing error of energy accepted along a branch, as a share of the range of heads."""


def closing_limit(heads: Array) -> float:
    """Return the largest closing error of energy accepted among such heads, m, rounding allowed."""
    return ENERGY * float(np.ptp(heads)) + 8 * ROUNDING * float(np.max(np.abs(heads)))


class Branches:
    """The pipes of a network, each as a relation between its flow and the head it loses.

    Parameters
    ----------
    network : Network
        The case.
    """

    def __init__(self, network: Network) -> None:
        self.pipes = cast("PipeTerms[Value]", network.pipes)
        self.open = network.open
        self.limits: TransitionLimits[Value] = transition_limits(ARRAYS, self.pipes)
        bore, parallel = network.pipes.bore, network.pipes.parallel
        self.flow_at_unit_velocity: Array = np.broadcast_to(np.pi / 4 * bore**2 * parallel, network.open.shape)

    def losses(self, flow: Array) -> tuple[Array, Array]:
        """Return the head lost and its slope by the flow.

        Parameters
        ----------
        flow : ndarray, shape (m,)
            m³/s, positive from ``from`` to ``to``.

        Returns
        -------
        loss : ndarray, shape (m,)
            m, with the sign of the flow.
        slope : ndarray, shape (m,)
            s/m²; 0 for a fixed f at rest.
        """
        with np.errstate(all="ignore"):
            lost = losses(ARRAYS, self.pipes, self.limits, Slope(flow, np.ones_like(flow))).head_loss
        read = cast("Slope", lost)  # every law of the chain depends on the flow
        return read.value, read.slope

    def flows(self, difference: Array, guess: Array | None = None) -> Array:
        """Return the flows at which the pipes lose given heads.

        Newton's method on the logarithms, where every law is nearly a straight line, kept inside a bracket
        that each evaluation narrows; head lost rises strictly with flow, so the root is unique.

        Parameters
        ----------
        difference : ndarray, shape (m,)
            Head at ``from`` less head at ``to``, m; not read where shut.
        guess : ndarray, shape (m,), optional
            Flows to begin from, m³/s; only their magnitudes are used, and zeros are replaced.

        Returns
        -------
        ndarray, shape (m,)
            m³/s, to the last few bits; exactly 0 where shut or where the heads are equal. NaN where the
            difference is.
        """
        moving = self.open & ~(np.abs(difference) < SMALLEST_DIFFERENCE)
        sign = np.where(difference < 0, -1.0, 1.0)
        wanted = np.where(moving, np.abs(difference), 1.0)
        flow = self.flow_at_unit_velocity
        if guess is not None:
            known = np.isfinite(guess) & (guess != 0)
            flow = np.where(known, np.abs(guess), flow)
        low, high = np.zeros_like(flow), np.full_like(flow, np.inf)
        settled = ~moving | ~np.isfinite(wanted)
        with np.errstate(all="ignore"):
            for _ in range(STEPS):
                loss, slope = self.losses(sign * flow)
                loss = np.abs(loss)
                low = np.where(loss < wanted, flow, low)
                high = np.where(loss > wanted, flow, high)
                new = _inside(low, high, _step(flow, loss, slope, wanted))
                closed = (np.abs(new - flow) <= 8 * ROUNDING * flow) | (high <= (1 + 4 * ROUNDING) * low)
                flow = np.where(settled, flow, new)
                settled = settled | closed
                if np.all(settled):
                    break
        flow = np.where(np.isfinite(difference) | ~self.open, flow, np.nan)
        return np.where(moving, sign * flow, 0.0)


def _step(flow: Array, loss: Array, slope: Array, wanted: Array) -> Array:
    """Return Newton's next flow on the logarithms; the same flow where it loses just what is wanted."""
    power = slope * flow / loss
    near = np.abs(wanted - loss) < 0.5 * loss
    ratio = np.where(near, np.log1p(np.where(near, wanted - loss, 0.0) / loss), np.log(wanted / loss))
    new: Array = flow + flow * np.expm1(ratio / power)
    return new


def _inside(low: Array, high: Array, new: Array) -> Array:
    """Return flows kept inside the bracket; its geometric middle where they are not."""
    middle = np.where(np.isinf(high), 1e3 * low, np.where(low > 0, np.sqrt(low) * np.sqrt(high), 1e-3 * high))
    return np.where((new >= low) & (new <= high), new, middle)
