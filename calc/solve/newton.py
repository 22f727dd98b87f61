"""Newton's method for any number of junctions and loops: the gradient method of Todini & Pilati (1988).

Each step solves for the *change* of the heads from the residuals, so that rounding of the heads themselves
does not enter; heads are kept to twice the digits of a float. The start is the answer for pipes whose loss is
linear in flow, which satisfies continuity; from there the steps descend on a convex function (the content
of the pipes, Collins et al. 1978), along which a step that overshoots is shortened.
"""

from __future__ import annotations

import numpy as np

from calc.components.network import Network
from calc.solve.branch import Branches, closing_limit
from calc.solve.grid import SingularGrid
from calc.solve.iteration import Iteration, State
from calc.solve.record import History
from calc.solve.solution import Settings, Solution, StopTest, unmet


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
    history = History(network)
    with np.errstate(all="ignore"):
        state, reason = _iterate(Iteration(network, branches), settings, history)
    tests = () if state is None else _tests(state, settings.tolerance)
    reason = "; ".join(part for part in (reason, unmet(tests)) if part)
    if reason or state is None:
        head, flow = np.full(len(network.nodes), np.nan), np.full(len(network.open), np.nan)
    else:
        head, flow = state.head, np.where(network.open, state.flow, 0.0)
    steps = history.steps()
    return Solution(not reason, "newton", reason, max(0, len(history) - 1), head, flow, None, steps, tests)


def _iterate(iteration: Iteration, settings: Settings, history: History) -> tuple[State | None, str]:
    state: State | None = None
    try:
        state = iteration.begin(settings)
        history.add(state)
        while not iteration.settled(state, settings.tolerance):
            if not np.all(np.isfinite(state.flow)):
                return state, "the flows are no longer finite numbers"
            if len(history) > settings.limit:
                return state, f"not settled in {settings.limit} iterations"
            state, share = iteration.step(state)
            history.add(state, share)
    except SingularGrid as error:
        return state, f"the equations of the heads have no single answer ({error})"
    return state, ""


def _tests(state: State, tolerance: float) -> tuple[StopTest, ...]:
    limit = closing_limit(state.head)
    return (
        StopTest("largest imbalance at a junction", state.largest_imbalance, tolerance, "m³/s"),
        StopTest("largest closing error of energy", state.largest_error, limit, "m"),
    )
