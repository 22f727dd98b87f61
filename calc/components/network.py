"""One case as arrays: what the solvers take."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from calc.components.pipe import PipeTerms

Array = npt.NDArray[np.float64]


@dataclass(frozen=True)
class Network:
    """A case in SI arrays; nodes are the reservoirs, then the junctions, each in the order of the files.

    Attributes
    ----------
    nodes : tuple of str
        Ids, shape (n,).
    level : ndarray
        Level of a reservoir, m; NaN at a junction. Shape (n,).
    withdrawal : ndarray
        Flow leaving the works at a junction, m³/s (an inflow is negative); 0 at a reservoir. Shape (n,).
    start, end : ndarray of int
        Node at ``from`` and at ``to`` of each pipe. Shape (m,).
    open : ndarray of bool
        Whether water may pass. Shape (m,).
    pipes : PipeTerms
        Inputs of the chain, arrays of shape (m,) or (1,).
    """

    nodes: tuple[str, ...]
    level: Array
    withdrawal: Array
    start: npt.NDArray[np.int64]
    end: npt.NDArray[np.int64]
    open: npt.NDArray[np.bool_]
    pipes: PipeTerms[Array]

    @property
    def unknown(self) -> npt.NDArray[np.int64]:
        """Indices of the junctions: the nodes whose head is sought."""
        return np.flatnonzero(np.isnan(self.level))
