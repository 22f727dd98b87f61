"""Newton's method on the convex content of the loops.

Among all flows that satisfy continuity the true ones make Σ∫h dq − Σ level · outflow least. Its slope by
the flow round a loop is that loop's energy error, its second derivative Cᵀ diag(dh/dq) C. The content is
convex, so a Newton step shortened by the sign of the directional derivative reaches the least from any
start.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from scipy.sparse import csc_array, diags_array
from scipy.sparse.linalg import splu

from calc.second.friction import Pipes, head_loss, resistance
from calc.second.works import Floats

LIMIT = 200
HEAD_TOLERANCE = 1e-10  # m, or rounding where that is more
HEAD_LIMIT = 1e-7  # m, the most that rounding may excuse
FLOW_TOLERANCE = (1e-10, 1e-13)  # of the largest flow, and m³/s
STILL_LOSS = 1e-13  # m, that of a pipe as good as at rest
ROUNDING = 16 * float(np.finfo(np.float64).eps)
TRIES = 60
BEYOND = "the numbers grew beyond what can be computed"


@dataclass(frozen=True, slots=True, eq=False)
class Content:
    """The content of one works as a function of its loop flows.

    Attributes
    ----------
    pipes : Pipes
        Their laws.
    loops : csc_array, shape (m, k)
        From `close_loops`.
    carried : ndarray, shape (m,)
        Flows that satisfy continuity with every loop flow zero.
    given : ndarray, shape (m,)
        Level at start − level at end, counting reservoirs only, in m: what drives a loop.
    scale : ndarray, shape (m,)
        Sum of those levels' magnitudes, in m.
    """

    pipes: Pipes
    loops: csc_array
    carried: Floats
    given: Floats
    scale: Floats

    def rounding(self, loops: Floats, loss: Floats, slope: Floats) -> Floats:
        """Return the energy error of each loop that rounding alone may leave, in m."""
        size = np.abs(self.carried) + abs(self.loops) @ np.abs(loops)
        each: Floats = np.abs(loss) + self.scale + slope * size
        most: Floats = abs(self.loops).T @ (ROUNDING * each)
        return np.minimum(most, HEAD_LIMIT)


def minimise(content: Content) -> tuple[Floats, int, str]:
    """Return the flows of least content, the Newton steps taken, and why they are not it, or empty."""
    loops, pipes = content.loops, content.pipes
    if loops.shape[1] == 0:
        return content.carried, 0, ""
    state = start_flows(content)
    best = math.inf
    for iteration in range(LIMIT):
        flow, slope, error, rounding = look(content, state)
        if not np.all(np.isfinite(error)):
            return flow, iteration, BEYOND
        step = solve_loops(content, curvature(pipes, flow, slope), -error)
        change = loops @ step
        settled = bool(np.all(np.abs(error) <= np.maximum(HEAD_TOLERANCE, rounding)))
        largest = float(np.max(np.abs(change)))
        # Below rounding a step need not shrink any more; it has then done what arithmetic can do.
        spent = bool(np.all(np.abs(error) <= rounding)) and largest >= 0.9 * best
        if settled and (largest <= still_flow(flow) or spent):
            return flow, iteration, ""
        best = min(best, largest) if settled else math.inf
        state = state + shorten(content, flow, change) * step
    flow, _, error, _ = look(content, state)
    worst = float(np.max(np.abs(error)))
    return flow, LIMIT, f"a loop still lacks {worst:.3g} m after {LIMIT} steps"


def look(content: Content, state: Floats) -> tuple[Floats, Floats, Floats, Floats]:
    """Return what loop flows come to.

    Flow and slope of each pipe, shape (m,), in m³/s and s/m²; energy error of each loop and what of it
    rounding alone may leave, shape (k,), in m.
    """
    flow = content.carried + content.loops @ state
    loss, slope = head_loss(content.pipes, flow)
    error = content.loops.T @ (loss - content.given)
    return flow, slope, error, content.rounding(state, loss, slope)


def start_flows(content: Content) -> Floats:
    """Return loop flows to begin with: every pipe as if linear, with its loss at 1 m/s."""
    works = content.pipes.works
    flow = works.parallel * math.pi / 4.0 * works.bore**2
    linear = head_loss(content.pipes, flow)[0] / flow
    driven = content.loops.T @ (content.given - linear * content.carried)
    return solve_loops(content, linear, driven)


def curvature(pipes: Pipes, flow: Floats, slope: Floats) -> Floats:
    """Return slopes for the second derivative alone, kept above zero where a fixed f is at rest.

    They are kept at what they are in a flow too small to matter, by itself and by its loss.
    """
    least = np.minimum(still_flow(flow), np.sqrt(STILL_LOSS / resistance(pipes.works)))
    resting = np.abs(flow) < least
    return np.where(resting, np.maximum(slope, head_loss(pipes, least)[1]), slope)


def still_flow(flow: Floats) -> float:
    """Return the change of flow that no longer counts, in m³/s."""
    return FLOW_TOLERANCE[0] * float(np.max(np.abs(flow))) + FLOW_TOLERANCE[1]


def solve_loops(content: Content, slope: Floats, right: Floats) -> Floats:
    """Return the loop flows that Cᵀ diag(slope) C takes to the right-hand side, shape (k,).

    NaN where there are none: a loop whose pipes resist nothing, or numbers beyond range.
    """
    loops = content.loops
    matrix = csc_array(loops.T @ diags_array(slope) @ loops)
    root = 1.0 / np.sqrt(matrix.diagonal())
    if not np.all(np.isfinite(root)):
        return np.full(len(right), np.nan)
    scaled = csc_array(diags_array(root) @ matrix @ diags_array(root))
    symmetric = {"SymmetricMode": True}
    try:
        factors = splu(scaled, permc_spec="MMD_AT_PLUS_A", diag_pivot_thresh=0.0, options=symmetric)
    except RuntimeError:  # singular
        return np.full(len(right), np.nan)
    answer: Floats = root * factors.solve(root * right)
    return answer


def shorten(content: Content, flow: Floats, change: Floats) -> float:
    """Return the part of a Newton step to take, in (0, 1].

    Along the step the slope of the content only rises. The whole step is taken unless it ends well beyond
    the least; then a point where the slope is small is looked for between.
    """

    def rise(part: float) -> float:
        return float(change @ (head_loss(content.pipes, flow + part * change)[0] - content.given))

    low, high, part = 0.0, 1.0, 1.0
    at_low, at_high = rise(low), rise(high)
    enough = 0.3 * abs(at_low)
    if at_high <= enough or at_low >= 0.0:
        return 1.0
    for turn in range(TRIES):
        secant = low - at_low * (high - low) / (at_high - at_low)
        part = secant if turn % 2 == 0 else 0.5 * (low + high)
        at_part = rise(part)
        if abs(at_part) <= enough:
            break
        if at_part > 0.0:
            high, at_high = part, at_part
        else:
            low, at_low = part, at_part
    return part
