"""Solving a case: arrays in, heads and flows with their whole history out.

Takes a `Network` and `Settings`; gives a `Solution`, also where there is no answer (``converged`` is False,
the reason is in words, the history is kept, heads and flows are NaN). Runs the chain of the components on
arrays, so that the laws solved are the laws printed. Must not know ledger, units or the second opinion.

*One unknown head: bracketing.* The imbalance F(H), flow toward the junction less its withdrawal, falls
strictly with the trial head H, so that its sign tells on which side the answer lies. Trials are made at the
levels (only those needed), beyond them with doubling steps, then inside by Chandrupatla's method (1997)
opened by one false position; every rule is an equation in `calc.solve.rules` on earlier rows, for a pocket
calculator. Near a level dF/dH is unbounded and a small step proves nothing, so two tests must both be met:
the imbalance, and a bracket of 10⁻⁹ m whose ends have opposite signs (an imbalance that is the rounding of
its own sum meets both). Heads are kept to twice the digits of a float, for at a level a wide short pipe turns
the last digit into more than the tolerance. Inverse interpolation suits the curve: where one branch governs,
H is a parabola in F.
Measured on the 5,000 random stars each of three and of five reservoirs that the tests draw (levels spread by
1 to 300 m, pipes 30 mm to 1.2 m, every law, withdrawal or inflow in three of five), all trials counted: opened
by false position mean 8.6 and 9.1, median 9, largest 20 and 15; opened by halving mean 9.0 and 9.4; bisection
39.5 and 38.0, largest 67.

*Any number of heads: Newton's method*, the gradient method of Todini & Pilati (1988), in `calc.solve.newton`.

*Small networks by hand: loop correction*, after Hardy Cross (1936), in `calc.solve.loop_correction`: flows that satisfy
continuity are corrected loop by loop, by equations in `calc.solve.loop_rules`, for a pocket calculator.

*Branches.* The flow for a head difference is found in `calc.solve.branch` to the last bits. Pipes between two
reservoirs need nothing more. A junction that no open path joins to a reservoir has no answer, and is named.
"""

from __future__ import annotations

import numpy as np

from calc.components.network import Network
from calc.problems import CalcError
from calc.solve.bracketing import solve_by_bracketing
from calc.solve.branch import Branches
from calc.solve.connection import sentence, unreached
from calc.solve.loop_correction import MOST_LOOPS, MOST_PIPES, solve_by_loop_correction
from calc.solve.loop_rules import LOOP_RULES
from calc.solve.newton import solve_by_newton
from calc.solve.rules import RULES, Rule, inputs_of
from calc.solve.solution import (
    METHODS,
    NARROWINGS,
    Corrections,
    Loop,
    Settings,
    Solution,
    Steps,
    StopTest,
    Trials,
)

__all__ = [
    "LOOP_RULES",
    "METHODS",
    "MOST_LOOPS",
    "MOST_PIPES",
    "NARROWINGS",
    "RULES",
    "Corrections",
    "Loop",
    "Rule",
    "Settings",
    "Solution",
    "Steps",
    "StopTest",
    "Trials",
    "inputs_of",
    "solve",
]

DEFAULTS = Settings()


def solve(network: Network, settings: Settings = DEFAULTS) -> Solution:
    """Return the heads and flows of a case, or why there are none.

    Parameters
    ----------
    network : Network
        The case, in SI.
    settings : Settings
        Method, tolerance, start and limit.

    Returns
    -------
    Solution
        Never raises for a case without an answer.

    Raises
    ------
    CalcError
        If the settings name no method, bracketing where not exactly one head is unknown, or loop correction
        of more than a hand takes on; the caller checks first.
    """
    method = settings.method or ("bracketing" if len(network.unknown) == 1 else "newton")
    _check(method, network, settings)
    if reason := sentence(network, unreached(network)):
        heads, flows = np.full(len(network.nodes), np.nan), np.full(len(network.open), np.nan)
        return Solution(False, method, reason, 0, heads, flows)  # noqa: FBT003 - the first field of a result
    return BY[method](network, settings, Branches(network))


BY = {
    "bracketing": solve_by_bracketing,
    "newton": solve_by_newton,
    "loop-correction": solve_by_loop_correction,
}


def _check(method: str, network: Network, settings: Settings) -> None:
    unknown, pipes = len(network.unknown), len(network.open)
    if method not in METHODS:
        raise CalcError(f"no method '{method}'; expected one of {', '.join(METHODS)}")
    if settings.narrowing not in NARROWINGS:
        raise CalcError(f"no narrowing '{settings.narrowing}'; expected one of {', '.join(NARROWINGS)}")
    if method == "bracketing" and unknown != 1:
        raise CalcError(f"bracketing finds exactly one unknown head; this case has {unknown}")
    if method == "loop-correction" and (pipes > MOST_PIPES or pipes - unknown > MOST_LOOPS):
        raise CalcError(
            f"loop correction takes on {MOST_PIPES} pipes and {MOST_LOOPS} loops; this case has {pipes} and "
            f"{pipes - unknown}"
        )
    if not (settings.tolerance > 0 and settings.limit >= 1):
        raise CalcError("the tolerance must be above zero and the limit at least 1")
