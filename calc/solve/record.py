"""The record of Newton's iterations, nothing left out."""

from __future__ import annotations

import numpy as np

from calc.components.network import Network
from calc.solve.branch import Array
from calc.solve.iteration import State
from calc.solve.solution import Steps

FULL_PIPES = 12
"""Pipes up to which the heads and flows of every iteration are kept."""
FULL_ITERATIONS = 60
"""Iterations up to which they are."""


class History:
    """Collects the states that the iterations pass through."""

    def __init__(self, network: Network) -> None:
        self._unknown = network.unknown
        self._full = len(network.open) <= FULL_PIPES
        self._rows: list[tuple[float, int, float, int, float, float]] = []
        self._heads: list[Array] = []
        self._flows: list[Array] = []
        self._last: Array | None = None

    def __len__(self) -> int:
        """Return the number of states, the start included."""
        return len(self._rows)

    def add(self, state: State, share: float = np.nan) -> None:
        """Record a state and the share of the step that led there; NaN for the start."""
        worst, where = _largest(state.imbalance)
        energy, pipe = _largest(state.error)
        change = np.nan if self._last is None else _largest(state.flow - self._last)[0]
        self._rows.append((worst, int(self._unknown[where]) if where >= 0 else -1, energy, pipe, change, share))
        self._last = state.flow
        if self._full and len(self._heads) <= FULL_ITERATIONS:
            self._heads.append(state.head)
            self._flows.append(state.flow)

    def steps(self) -> Steps:
        """Return the record as columns."""
        columns = list(zip(*self._rows, strict=True)) or [()] * 6
        full = self._full and 0 < len(self._rows) <= FULL_ITERATIONS + 1
        return Steps(
            iteration=np.arange(len(self._rows)),
            imbalance=np.array(columns[0], dtype=np.float64),
            node=np.array(columns[1], dtype=np.int64),
            energy_error=np.array(columns[2], dtype=np.float64),
            branch=np.array(columns[3], dtype=np.int64),
            flow_change=np.array(columns[4], dtype=np.float64),
            share=np.array(columns[5], dtype=np.float64),
            head=np.array(self._heads) if full else None,
            flow=np.array(self._flows) if full else None,
        )


def _largest(values: Array) -> tuple[float, int]:
    if len(values) == 0:
        return 0.0, -1
    where = int(np.argmax(np.abs(values)))
    return float(np.abs(values[where])), where
