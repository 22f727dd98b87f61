"""What the solvers are told, and what they answer with its whole history."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]
Rows = npt.NDArray[np.int64]

METHODS = ("bracketing", "newton", "loop-correction")
"""Ways to solve a case; an empty word lets `solve` choose."""

NARROWINGS = ("chandrupatla", "bisection")
"""Ways to narrow a bracket."""


@dataclass(frozen=True)
class Settings:
    """How a case is to be solved.

    Attributes
    ----------
    method : str
        One of `METHODS`, or empty: bracketing when exactly one junction head is unknown, else newton.
    narrowing : str
        One of `NARROWINGS`; what bracketing does once the head lies between two trials.
    tolerance : float
        Largest imbalance accepted at a junction, m³/s.
    start : mapping of str to float
        Heads to begin from, by junction, m.
    limit : int
        Trials or iterations after which the search is given up.
    """

    method: str = ""
    narrowing: str = "chandrupatla"
    tolerance: float = 1e-9
    start: Mapping[str, float] = field(default_factory=dict)
    limit: int = 200


@dataclass(frozen=True)
class StopTest:
    """A test that ended the search: what was measured, its value and limit, in the SI unit named."""

    words: str
    value: float
    limit: float
    unit: str

    @property
    def met(self) -> bool:
        """Whether the value is within the limit; a NaN is not."""
        return self.value <= self.limit


@dataclass(frozen=True)
class Trials:
    """The trial table of bracketing: one row for each evaluation, in order, all of them.

    Attributes
    ----------
    junction : int
        Node whose head is sought.
    branches : ndarray of int
        Pipes that touch the junction, shape (k,).
    head : ndarray
        Trial head, m. Shape (t,), as all below unless stated.
    low_end, high_end : ndarray
        Bracket in force when this head was chosen, m; NaN where an end was not yet known.
    imbalance_low, imbalance_high : ndarray
        Imbalances found at those ends, m³/s.
    flows : ndarray
        Flow of each branch toward the junction, m³/s; 0 where shut. Shape (t, k).
    imbalance : ndarray
        Sum of the flows toward the junction less the withdrawal, m³/s.
    rule : tuple of str
        How the head was chosen: a key of `calc.solve.rules.RULES`.
    uses : tuple of tuple of int
        Earlier rows that the rule used, in the order in which it names them.
    step : ndarray
        Step of a widening or closing rule, m; NaN for the others.
    reservoir : ndarray of int
        Reservoir (node) whose level was tried; -1 for the other rules.
    accepted : int
        Row whose head and flows are the answer; -1 when there is none.
    """

    junction: int
    branches: Rows
    head: Array
    low_end: Array
    high_end: Array
    imbalance_low: Array
    imbalance_high: Array
    flows: Array
    imbalance: Array
    rule: tuple[str, ...]
    uses: tuple[tuple[int, ...], ...]
    step: Array
    reservoir: Rows
    accepted: int


@dataclass(frozen=True)
class Steps:
    """The iterations of Newton's method: row 0 is the start, row i the state after step i.

    Attributes
    ----------
    iteration : ndarray of int
        0, 1, 2 … Shape (t,), as all below unless stated.
    imbalance : ndarray
        Largest magnitude of flow toward a junction less its withdrawal, m³/s.
    node : ndarray of int
        The junction where it stands; -1 when no head is unknown.
    energy_error : ndarray
        Largest magnitude of head at ``from`` less head at ``to`` less head lost, m.
    branch : ndarray of int
        The pipe where it stands; -1 when none is open.
    flow_change : ndarray
        Largest change of a flow in the step that led here, m³/s; NaN at the start.
    share : ndarray
        Part of the full step that was taken; 1 unless the full step overshot. NaN at the start.
    head : ndarray or None
        Heads, m, shape (t, n); None above 12 pipes or 60 iterations.
    flow : ndarray or None
        Flows, m³/s, shape (t, m); None likewise.
    """

    iteration: Rows
    imbalance: Array
    node: Rows
    energy_error: Array
    branch: Rows
    flow_change: Array
    share: Array
    head: Array | None
    flow: Array | None


@dataclass(frozen=True)
class Loop:
    """A way round along open pipes, or a path from one reservoir to another, closed by their levels.

    Attributes
    ----------
    closing : int
        The pipe outside the forest of pipes that closes it; no loop before has it.
    pipes, signs : tuple of int
        The pipes in the order of the walk; +1 where one is walked from its ``from`` to its ``to``, else -1.
    nodes : tuple of int
        Where the walk begins, passes and ends: the same node twice for a loop, two reservoirs for a path.
    """

    closing: int
    pipes: tuple[int, ...]
    signs: tuple[int, ...]
    nodes: tuple[int, ...]

    @property
    def path(self) -> bool:
        """Whether this is a path between two reservoirs."""
        return self.nodes[0] != self.nodes[-1]


@dataclass(frozen=True)
class Corrections:
    """The table of loop correction: one row for each correction of a loop, in order, all of them.

    Attributes
    ----------
    loops : tuple of Loop
        As many as there are open pipes beyond the junctions. They are corrected in this order, sweep after sweep.
    trails : tuple of tuple
        For each node the steps (pipe, sign) along the forest from its reservoir; empty for a reservoir.
    start : ndarray
        Flow of each pipe from which the corrections begin, m³/s; satisfies continuity. Shape (m,).
    sweep, loop : ndarray of int
        Sweep (1, 2 …) and loop corrected. Shape (c,), as all below unless stated.
    flow : ndarray
        Flows that the correction found, m³/s. Shape (c, m).
    loss : ndarray
        Head lost round the loop in its sense, m.
    excess : ndarray
        The same, of a path less the fall of level along it, m.
    rate : ndarray
        Sum of n h/Q of its pipes in motion, s/m².
    change : ndarray
        The correction, m³/s; 0 where all pipes of the loop are at rest.
    error : ndarray
        Largest excess of any loop after each sweep, m, without sign. Shape (sweeps,).
    """

    loops: tuple[Loop, ...]
    trails: tuple[tuple[tuple[int, int], ...], ...]
    start: Array
    sweep: Rows
    loop: Rows
    flow: Array
    loss: Array
    excess: Array
    rate: Array
    change: Array
    error: Array


@dataclass(frozen=True)
class Solution:
    """Heads and flows of a case, and how they were found.

    Attributes
    ----------
    converged : bool
        Whether head and flow are an answer; where False both are NaN throughout and ``reason`` says why.
    method : str
        One of `METHODS`.
    reason : str
        Why there is no answer; empty when there is.
    iterations : int
        Trials of bracketing (rows of the table); steps of Newton's method; sweeps of loop correction.
    head : ndarray
        Total head at each node, m, shape (n,).
    flow : ndarray
        Flow of each pipe, total of its parallels, positive from ``from`` to ``to``, m³/s, shape (m,).
    trials : Trials or None
        The table of bracketing.
    steps : Steps or None
        The iterations of Newton's method.
    corrections : Corrections or None
        The table of loop correction.
    tests : tuple of StopTest
        The tests by which the search ended; all are met when converged.
    """

    converged: bool
    method: str
    reason: str
    iterations: int
    head: Array
    flow: Array
    trials: Trials | None = None
    steps: Steps | None = None
    tests: tuple[StopTest, ...] = ()
    corrections: Corrections | None = None


def unmet(tests: Iterable[StopTest]) -> str:
    """Return the tests not met in words, empty when all are."""
    return "; ".join(
        f"{test.words} {test.value:.3g} {test.unit} against {test.limit:.3g} {test.unit}"
        for test in tests
        if not test.met
    )
