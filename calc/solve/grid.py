"""The pattern of a network: sums at junctions, drops along pipes, and the sparse system for the heads."""

from __future__ import annotations

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.linalg import splu

from calc.components.network import Network
from calc.problems import CalcError
from calc.solve.branch import Array


class SingularGrid(CalcError):
    """The system for the heads cannot be solved."""


class Grid:
    """How the pipes of a network join its nodes.

    Parameters
    ----------
    network : Network
        The case.
    """

    def __init__(self, network: Network) -> None:
        self.start, self.end = network.start, network.end
        self.count = len(network.nodes)
        self.unknown = network.unknown
        self.withdrawal = network.withdrawal[self.unknown]
        place = np.full(self.count, -1, dtype=np.int64)
        place[self.unknown] = np.arange(len(self.unknown))
        a, b = place[self.start], place[self.end]
        self.between_reservoirs = (a < 0) & (b < 0)
        inner = np.flatnonzero((a >= 0) & (b >= 0))
        at_a, at_b = np.flatnonzero(a >= 0), np.flatnonzero(b >= 0)
        self._rows = np.concatenate([a[inner], b[inner], a[at_a], b[at_b]])
        self._columns = np.concatenate([b[inner], a[inner], a[at_a], b[at_b]])
        self._pipe = np.concatenate([inner, inner, at_a, at_b])
        self._sign = np.where(np.arange(len(self._pipe)) < 2 * len(inner), -1.0, 1.0)

    def gathered(self, flow: Array) -> Array:
        """Return the sum of flows toward each junction, shape (junctions,), from flows of shape (m,)."""
        toward = np.bincount(self.end, flow, self.count) - np.bincount(self.start, flow, self.count)
        return np.asarray(toward[self.unknown], dtype=np.float64)

    def imbalance(self, flow: Array) -> Array:
        """Return the sum of flows toward each junction less its withdrawal, m³/s."""
        return self.gathered(flow) - self.withdrawal

    def drop(self, head: Array, rest: Array) -> Array:
        """Return head at ``from`` less head at ``to``, m, shape (m,); ``rest`` is what the heads lack."""
        return (head[self.start] - head[self.end]) + (rest[self.start] - rest[self.end])

    def solve(self, conductance: Array, imbalance: Array) -> Array:
        """Return the change of head, shape (n,), that would cancel the imbalances of linear pipes.

        Raises
        ------
        SingularGrid
            If the system has no single finite solution.
        """
        change = np.zeros(self.count)
        if len(self.unknown) == 0:
            return change
        size = len(self.unknown)
        entries = self._sign * conductance[self._pipe]
        if not (np.all(np.isfinite(entries)) and np.all(np.isfinite(imbalance))):
            raise SingularGrid("not finite")
        matrix = coo_array((entries, (self._rows, self._columns)), shape=(size, size)).tocsc()
        try:
            factor = splu(
                matrix,
                permc_spec="MMD_AT_PLUS_A",
                diag_pivot_thresh=0.0,
                options={"SymmetricMode": True},
            )
        except RuntimeError as error:
            raise SingularGrid(str(error)) from error
        change[self.unknown] = factor.solve(imbalance)
        return change
